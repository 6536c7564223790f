#pragma once
// Verified cases: the one-dimensional cases once more with exact cells, one cell per layer.

#include <cmath>
#include <tepor/assembly/exact_kernels.hpp>
#include <tepor/check/impl/rows.hpp>
#include <tepor/element/exact_segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::detail {

/// S1D-01 to S1D-03 and S1D-07: slabs.
inline std::vector<CheckRow> slabs_by_exact_cells() {
    CheckRows rows;
    Body parabola{layers<ExactSegment>({{.region = "slab", .thickness = 0.1}}, Planar{}, {.start = -0.05})};
    parabola.in("slab", Material{.conductivity = 20.0}).in("slab", Generation{.per_volume = 2e5});
    parabola.on("inner", FixedTemperature{40.0}).on("outer", FixedTemperature{40.0});
    const Field one = steady(parabola);
    rows.temperature("S1D-01, T at 0 m", 52.5, one.at(0.0), 1e-9);
    rows.temperature("S1D-01, T at 0.0375 m", 45.46875, one.at(0.0375), 1e-9);
    rows.temperature("S1D-01, mean", 48.3333333333, one[mean_in("slab")], 1e-9);

    Body falling{layers<ExactSegment>({{.region = "slab", .thickness = 0.1}})};
    falling.in("slab", Material{.conductivity = 0.8});
    falling.in("slab",
               Generation{.per_volume = of_place([](const auto& place) { return 5e4 * exp(-place.x / 0.02); })});
    falling.on("outer", Film{.coefficient = 25.0, .fluid = 20.0});
    const Field two = steady(falling);
    rows.temperature("S1D-02, T at 0 m", 159.898930795, two.at(0.0), 1e-7);
    rows.temperature("S1D-02, T at 0.038 m", 133.659715314, two.at(0.038), 1e-7);
    rows.temperature("S1D-02, T at 0.1 m", 59.73048212, two.at(0.1), 1e-7);

    Body wall{layers<ExactSegment>(
        {{.region = "1", .thickness = 0.2}, {.region = "2", .thickness = 0.1}, {.region = "3", .thickness = 0.006}})};
    wall.in("1", Material{.conductivity = 1.2}).in("2", Material{.conductivity = 0.15});
    wall.in("3", Material{.conductivity = 45.0}).between("1", "2", Contact{.resistance = 0.004});
    wall.on("inner", Film{.coefficient = 50.0, .fluid = 900.0}).on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    const Field three = steady(wall);
    rows.add("S1D-03, flux", 930.05952381, three[heat_out_through("outer")], 1e-6, "W/m2");
    rows.temperature("S1D-03, T at 0.2 m in 2", 722.668650794, three.at(0.2, "2"), 1e-7);

    Body slab{layers<ExactSegment>({{.region = "slab", .thickness = 0.1}})};
    slab.in("slab", Material{.conductivity = law([](const auto& s) { return 1.5 * (1.0 + 0.004 * s.temperature); })});
    slab.on("inner", FixedTemperature{300.0}).on("outer", FixedTemperature{50.0});
    rows.add("S1D-07, flux", 6375.0, steady(slab)[heat_out_through("outer")], 1e-6, "W/m2");
    slab.in("slab", Generation{.per_volume = 6e4});
    const Field four = steady(slab);
    rows.add("S1D-07, flux at 0 m, source", 3375.0, four[heat_in_through("inner")], 1e-6, "W/m2");
    rows.temperature("S1D-07, T at 0.05 m, source", 220.372193056, four.at(0.05), 1e-6);
    for (const Field* field : {&one, &two, &three, &four}) rows.balance(*field);
    return rows.take();
}

/// S1D-04 to S1D-06, S1D-08 and S1D-09: cylinders, a sphere, a fin.
inline std::vector<CheckRow> round_by_exact_cells() {
    CheckRows rows;
    Body pipe{layers<ExactSegment>({{.region = "wall", .thickness = 0.03}}, Cylindrical{}, {.start = 0.02})};
    pipe.in("wall", Material{.conductivity = 16.0}).in("wall", Generation{.per_volume = 2e6});
    pipe.on("inner", Film{.coefficient = 800.0, .fluid = 90.0}).on("outer", FixedTemperature{60.0});
    const Field one = steady(pipe);
    rows.temperature("S1D-04, T at 0.02 m", 96.6366399898, one.at(0.02), 1e-7);
    rows.temperature("S1D-04, T at 0.03 m", 93.8391936434, one.at(0.03), 1e-7);
    rows.temperature("S1D-04, hottest", 97.0425871112, one[hottest_in("wall")], 1e-7);
    rows.add("S1D-04, its radius", 0.0224985830629, one.hottest("wall").place.x, 1e-6, "m");
    rows.add("S1D-04, heat to the inner fluid", 667.187821962, one[heat_out_through("inner")], 1e-6, "W");

    Body vessel{
        layers<ExactSegment>({{.region = "shell", .thickness = 0.01}, {.region = "insulation", .thickness = 0.1}},
                             Spherical{}, {.start = 0.25})};
    vessel.in("shell", Material{.conductivity = 16.0}).in("insulation", Material{.conductivity = 0.05});
    vessel.on("inner", Film{.coefficient = 150.0, .fluid = -196.0});
    vessel.on("outer", Film{.coefficient = 10.0, .fluid = 25.0});
    const Field two = steady(vessel);
    rows.add("S1D-05, heat inward", 124.786203031, two[heat_out_through("inner")], 1e-7, "W");
    rows.temperature("S1D-05, T at 0.31 m", -71.6421912014, two.at(0.31), 1e-7);

    const Parameter thickness{"insulation thickness", 0.005};
    Body pipe_insulation{
        layers<ExactSegment>({{.region = "insulation", .thickness = thickness}}, Cylindrical{}, {.start = 0.010})};
    pipe_insulation.in("insulation", Material{.conductivity = 0.2}).on("inner", FixedTemperature{100.0});
    pipe_insulation.on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    pipe_insulation.set(thickness, 0.060);
    rows.add("S1D-06, loss, 0.06 m thick", 45.0483349028, steady(pipe_insulation)[heat_out_through("outer")], 1e-7,
             "W");

    constexpr double radius = 0.0041;
    Body pellet{layers<ExactSegment>({{.region = "pellet", .thickness = radius}}, Cylindrical{})};
    pellet.in("pellet",
              Material{.conductivity = law([](const auto& s) { return 1.0 / (0.11 + 2.5e-4 * s.temperature); })});
    pellet.in("pellet", Generation{.per_volume = 20000.0 / (pi * radius * radius)});
    pellet.on("outer", FixedTemperature{400.0});
    const Field three = steady(pellet);
    rows.temperature("S1D-08, T at 0 m", 810.488119368, three.at(0.0), 1e-5);
    rows.temperature("S1D-08, T at 0.002 m", 697.525446108, three.at(0.002), 1e-5);

    Body fin{layers<ExactSegment>({{.region = "fin", .thickness = 0.05}}, Planar{.area = 0.003})};
    fin.in("fin", Material{.conductivity = 180.0});
    fin.in("fin", SideFilm{.coefficient = 100.0, .fluid = 20.0, .perimeter = 2.006});
    fin.on("inner", FixedTemperature{100.0}).on("outer", Film{.coefficient = 100.0, .fluid = 20.0});
    const Field four = steady(fin);
    rows.temperature("S1D-09, T at 0.025 m", 79.0875893547, four.at(0.025), 1e-7);
    rows.temperature("S1D-09, T at 0.05 m", 72.1613868577, four.at(0.05), 1e-7);
    rows.add("S1D-09, heat at the base", 631.497759515, four[heat_in_through("inner")], 1e-6, "W");
    for (const Field* field : {&one, &two, &three, &four}) rows.balance(*field);
    return rows.take();
}

} // namespace tepor::detail
