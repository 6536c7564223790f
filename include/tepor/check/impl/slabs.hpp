#pragma once
// Verified cases: plane walls and bars, steady.

#include <tepor/check/impl/rows.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::detail {

/// S1D-01. Order 1 is exact at the nodes and interpolates between them; order 2 holds the parabola itself.
inline std::vector<CheckRow> slab_with_generation() {
    CheckRows rows;
    const std::vector<Layer> stack{{.region = "slab", .thickness = 0.1, .cells = 4}};
    const auto describe = [](Body body) {
        body.in("slab", Material{.conductivity = 20.0});
        body.in("slab", Generation{.per_volume = 2e5});
        body.on("inner", FixedTemperature{40.0}).on("outer", FixedTemperature{40.0});
        return body;
    };
    const Field linear = steady(describe(layers<Segment<1>>(stack, Planar{}, {.start = -0.05})));
    rows.at(linear, -0.025, 49.375, 1e-9);
    rows.at(linear, 0.0, 52.5, 1e-9);
    rows.at(linear, 0.025, 49.375, 1e-9);
    rows.temperature("order 1 between nodes, 0.0125 m", 50.9375, linear.at(0.0125), 1e-9);
    rows.temperature("order 1 between nodes, 0.0375 m", 44.6875, linear.at(0.0375), 1e-9);
    rows.add("heat out of the left face", 10000.0, linear[heat_out_through("inner")], 1e-6, "W");
    rows.add("heat out of the right face", 10000.0, linear[heat_out_through("outer")], 1e-6, "W");
    const Field parabola = steady(describe(layers<Segment<2>>(stack, Planar{}, {.start = -0.05})));
    rows.temperature("order 2 between nodes, 0.0125 m", 51.71875, parabola.at(0.0125), 1e-9);
    rows.temperature("order 2 between nodes, 0.0375 m", 45.46875, parabola.at(0.0375), 1e-9);
    rows.temperature("mean of the slab", 48.3333333333, parabola[mean_in("slab")], 1e-9);
    rows.balance(linear);
    return rows.take();
}

/// S1D-02. Order 1 is exact at the nodes when the load integral is; the extra degree sees to that.
inline std::vector<CheckRow> slab_with_exponential_source() {
    CheckRows rows;
    const auto body = [] {
        Body b{layers<Segment<1>>({{.region = "slab", .thickness = 0.008},
                                   {.region = "slab", .thickness = 0.012},
                                   {.region = "slab", .thickness = 0.018},
                                   {.region = "slab", .thickness = 0.024},
                                   {.region = "slab", .thickness = 0.038}}),
               BodyOptions{.extra_degree = 12}};
        b.in("slab", Material{.conductivity = 0.8});
        b.in("slab", Generation{.per_volume = of_place([](const auto& place) { return 5e4 * exp(-place.x / 0.02); })});
        return b;
    };
    static constexpr double x[6] = {0.0, 0.008, 0.02, 0.038, 0.062, 0.1};
    static constexpr double a[6] = {30.0, 35.4554747431, 38.8367037057, 38.0247950159, 32.2782081186, 20.0};
    static constexpr double b[6] = {159.898930795, 158.140929644, 150.701944766,
                                    133.659715314, 106.272700735, 59.73048212};
    Body held = body();
    held.on("inner", FixedTemperature{30.0}).on("outer", FixedTemperature{20.0});
    const Field first = steady(held);
    for (int i = 1; i < 5; ++i) rows.at(first, x[i], a[i], 1e-6);
    rows.add("flux along x at 0 m", -721.3475894, first[heat_in_through("inner")], 1e-5, "W/m2");
    rows.add("flux along x at 0.1 m", 271.914463601, first[heat_out_through("outer")], 1e-5, "W/m2");
    Body cooled = body();
    cooled.on("outer", Film{.coefficient = 25.0, .fluid = 20.0});
    const Field second = steady(cooled);
    for (int i = 0; i < 6; ++i) rows.at(second, x[i], b[i], 1e-5);
    rows.add("flux along x at 0.1 m, film", 993.262053001, second[heat_out_through("outer")], 1e-5, "W/m2");
    rows.balance(first);
    rows.balance(second);
    return rows.take();
}

/// S1D-03.
inline std::vector<CheckRow> wall_with_contact() {
    CheckRows rows;
    Body wall{layers<Segment<1>>({{.region = "1", .thickness = 0.2, .cells = 3},
                                  {.region = "2", .thickness = 0.1, .cells = 2},
                                  {.region = "3", .thickness = 0.006}})};
    wall.in("1", Material{.conductivity = 1.2});
    wall.in("2", Material{.conductivity = 0.15});
    wall.in("3", Material{.conductivity = 45.0});
    wall.between("1", "2", Contact{.resistance = 0.004});
    wall.on("inner", Film{.coefficient = 50.0, .fluid = 900.0});
    wall.on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    const Field field = steady(wall);
    rows.add("flux", 930.05952381, field[heat_out_through("outer")], 1e-6, "W/m2");
    rows.at(field, 0.0, 881.398809524, 1e-6);
    rows.at(field, 0.2, 726.388888889, 1e-6, "1");
    rows.at(field, 0.2, 722.668650794, 1e-6, "2");
    rows.at(field, 0.3, 102.628968254, 1e-6);
    rows.at(field, 0.306, 102.504960317, 1e-6);
    rows.add("heat from 1 to 2", 930.05952381, field[heat_from("1", "2")], 1e-6, "W");
    rows.add("heat from 2 to 3", 930.05952381, field[heat_from("2", "3")], 1e-6, "W");
    rows.balance(field);
    return rows.take();
}

/// S1D-07. With k linear in T and equal cells order 1 is exact at the nodes.
inline std::vector<CheckRow> slab_with_conductivity_of_temperature() {
    CheckRows rows;
    const auto body = [] {
        Body b{layers<Segment<1>>({{.region = "slab", .thickness = 0.1, .cells = 4}})};
        b.in("slab", Material{.conductivity = law([](const auto& s) { return 1.5 * (1.0 + 0.004 * s.temperature); })});
        b.on("inner", FixedTemperature{300.0}).on("outer", FixedTemperature{50.0});
        return b;
    };
    const Field first = steady(body());
    rows.at(first, 0.025, 249.374608886, 1e-6);
    rows.at(first, 0.05, 193.001128667, 1e-6);
    rows.at(first, 0.075, 128.318648761, 1e-6);
    rows.add("flux along x", 6375.0, first[heat_out_through("outer")], 1e-5, "W/m2");
    Body generating = body();
    generating.in("slab", Generation{.per_volume = 6e4});
    const Field second = steady(generating);
    rows.at(second, 0.025, 267.80787943, 1e-6);
    rows.at(second, 0.05, 220.372193056, 1e-6);
    rows.at(second, 0.075, 152.336923486, 1e-6);
    rows.add("flux along x at 0 m, source", 3375.0, second[heat_in_through("inner")], 1e-5, "W/m2");
    rows.add("flux along x at 0.1 m, source", 9375.0, second[heat_out_through("outer")], 1e-5, "W/m2");
    rows.balance(first);
    rows.balance(second);
    return rows.take();
}

/// S1D-09.
inline std::vector<CheckRow> straight_fin() {
    CheckRows rows;
    Body fin{layers<Segment<2>>({{.region = "fin", .thickness = 0.05, .cells = 16}}, Planar{.area = 0.003})};
    fin.in("fin", Material{.conductivity = 180.0});
    fin.in("fin", SideFilm{.coefficient = 100.0, .fluid = 20.0, .perimeter = 2.006});
    fin.on("inner", FixedTemperature{100.0});
    fin.on("outer", Film{.coefficient = 100.0, .fluid = 20.0});
    const Field field = steady(fin);
    rows.at(field, 0.0125, 87.5731821604, 1e-6);
    rows.at(field, 0.025, 79.0875893547, 1e-6);
    rows.at(field, 0.0375, 74.0482969734, 1e-6);
    rows.at(field, 0.05, 72.1613868577, 1e-6);
    const double heat = field[heat_in_through("inner")];
    rows.add("heat at the base", 631.497759515, heat, 1e-5, "W");
    rows.add("efficiency", 0.764155081697, heat / (100.0 * (2.006 * 0.05 + 0.003) * 80.0), 1e-8, "");
    rows.balance(field);
    return rows.take();
}

/// S2D-26 T2. The test states sigma = 5.67e-8; the emissivity carries the ratio to the library's constant.
inline std::vector<CheckRow> nafems_t2() {
    CheckRows rows;
    const auto body = [](double emissivity) {
        Body b{layers<Segment<1>>({{.region = "bar", .thickness = 0.1, .cells = 4}}), TemperatureScale::kelvin};
        b.in("bar", Material{.conductivity = 55.6});
        b.on("inner", FixedTemperature{1000.0});
        b.on("outer", Radiation{.emissivity = emissivity, .surroundings = 300.0});
        return b;
    };
    const Field exact = steady(body(0.98 * (5.67e-8 / stefan_boltzmann)));
    rows.add("T of the end, sigma 5.67e-8", 927.007606246, exact.at(0.1), 1e-5, "K");
    rows.add("flux, sigma 5.67e-8", 40583.7709271, exact[heat_out_through("outer")], 1e-2, "W/m2");
    rows.add("T of the end, published", 927.0, steady(body(0.98)).at(0.1), 0.05, "K");
    rows.balance(exact);
    return rows.take();
}

} // namespace tepor::detail
