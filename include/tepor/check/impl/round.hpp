#pragma once
// Verified cases: cylinders and spheres, steady.

#include <tepor/check/impl/rows.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::detail {

/// S1D-04.
inline std::vector<CheckRow> hollow_cylinder() {
    CheckRows rows;
    Body pipe{layers<Segment<2>>({{.region = "wall", .thickness = 0.03, .cells = 40}}, Cylindrical{}, {.start = 0.02})};
    pipe.in("wall", Material{.conductivity = 16.0});
    pipe.in("wall", Generation{.per_volume = 2e6});
    pipe.on("inner", Film{.coefficient = 800.0, .fluid = 90.0});
    pipe.on("outer", FixedTemperature{60.0});
    const Field field = steady(pipe);
    rows.at(field, 0.02, 96.6366399898, 1e-6);
    rows.at(field, 0.03, 93.8391936434, 2e-5);
    rows.at(field, 0.04, 81.065487801, 1e-5);
    const Spotted hottest = field.hottest("wall");
    rows.temperature("hottest place", 97.0425871112, hottest.temperature, 5e-5);
    rows.add("its radius", 0.0224985830629, hottest.place.x, 3e-6, "m");
    rows.add("heat to the inner fluid", 667.187821962, field[heat_out_through("inner")], 2e-5, "W");
    rows.add("heat out of the outer surface", 12527.5013231, field[heat_out_through("outer")], 2e-5, "W");
    rows.balance(field);
    return rows.take();
}

/// S1D-05.
inline std::vector<CheckRow> cold_sphere() {
    CheckRows rows;
    Body vessel{layers<Segment<2>>(
        {{.region = "shell", .thickness = 0.01, .cells = 2}, {.region = "insulation", .thickness = 0.1, .cells = 20}},
        Spherical{}, {.start = 0.25})};
    vessel.in("shell", Material{.conductivity = 16.0});
    vessel.in("insulation", Material{.conductivity = 0.05});
    vessel.on("inner", Film{.coefficient = 150.0, .fluid = -196.0});
    vessel.on("outer", Film{.coefficient = 10.0, .fluid = 25.0});
    const Field field = steady(vessel);
    rows.add("heat inward", 124.786203031, field[heat_out_through("inner")], 3e-6, "W");
    rows.at(field, 0.25, -194.940781811, 1e-7);
    rows.at(field, 0.26, -194.845299402, 1e-7);
    rows.at(field, 0.31, -71.6421912014, 1e-6);
    rows.at(field, 0.36, 17.3378313881, 1e-6);
    rows.balance(field);
    return rows.take();
}

/// S1D-06. One body; the thickness is a Parameter that moves the nodes.
inline std::vector<CheckRow> critical_radius() {
    CheckRows rows;
    const Parameter thickness{"insulation thickness", 0.005};
    Body pipe{layers<Segment<2>>(
        {{.region = "insulation", .thickness = thickness, .cells = 24, .grading = finer_at_start(6)}}, Cylindrical{},
        {.start = 0.010})};
    pipe.in("insulation", Material{.conductivity = 0.2});
    pipe.on("inner", FixedTemperature{100.0});
    pipe.on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    static constexpr double given[5][3] = {{0.005, 57.8163417443, 81.3450438673},
                                           {0.010, 59.3752073471, 67.249288732},
                                           {0.015, 58.5745544434, 57.2897195163},
                                           {0.030, 53.2954808046, 41.2055980363},
                                           {0.060, 45.0483349028, 30.2423788255}};
    for (const auto& [s, loss, surface] : given) {
        pipe.set(thickness, s);
        const Field field = steady(pipe);
        rows.add(text("loss, ", s, " m thick"), loss, field[heat_out_through("outer")], 3e-5, "W");
        rows.temperature(text("surface, ", s, " m thick"), surface, field[mean_on("outer")], 3e-5);
    }
    return rows.take();
}

/// S1D-08.
inline std::vector<CheckRow> generating_cylinder() {
    CheckRows rows;
    constexpr double radius = 0.0041;
    Body pellet{layers<Segment<2>>({{.region = "pellet", .thickness = radius, .cells = 20}}, Cylindrical{})};
    pellet.in("pellet",
              Material{.conductivity = law([](const auto& s) { return 1.0 / (0.11 + 2.5e-4 * s.temperature); })});
    pellet.in("pellet", Generation{.per_volume = 20000.0 / (pi * radius * radius)});
    pellet.on("outer", FixedTemperature{400.0});
    const Field field = steady(pellet);
    rows.at(field, 0.0, 810.488119368, 1e-3);
    rows.at(field, 0.001, 781.23701087, 2e-3);
    rows.at(field, 0.002, 697.525446108, 2e-3);
    rows.at(field, 0.003, 570.562221383, 2e-3);
    rows.add("heat out", 20000.0, field[heat_out_through("outer")], 1e-5, "W");
    rows.balance(field);
    return rows.take();
}

/// S1D-10. The disc is a cylinder as long as the fin is thick.
inline std::vector<CheckRow> annular_fin() {
    CheckRows rows;
    static constexpr double r[4] = {0.03125, 0.0375, 0.04375, 0.05};
    static constexpr double T[2][4] = {{115.026040302, 111.924709802, 110.245650447, 109.725857304},
                                       {114.775026763, 111.465919179, 109.606209274, 108.922918397}};
    static constexpr double heat[2] = {61.7354941381, 64.557150121};
    static constexpr double efficiency[2] = {0.919345876613, 0.912688390289};
    for (int tip = 0; tip < 2; ++tip) {
        Body fin{layers<Segment<2>>({{.region = "fin", .thickness = 0.025, .cells = 16}}, Cylindrical{.length = 0.002},
                                    {.start = 0.025})};
        fin.in("fin", Material{.conductivity = 200.0});
        fin.in("fin", SideFilm{.coefficient = 60.0, .fluid = 25.0, .thickness = 0.002});
        fin.on("inner", FixedTemperature{120.0});
        if (tip == 1) fin.on("outer", Film{.coefficient = 60.0, .fluid = 25.0});
        const Field field = steady(fin);
        const std::string label = tip == 0 ? ", adiabatic tip" : ", convecting tip";
        for (int i = 0; i < 4; ++i) rows.temperature(text("T at ", r[i], " m", label), T[tip][i], field.at(r[i]), 2e-6);
        const double base = field[heat_in_through("inner")];
        rows.add("heat at the base" + label, heat[tip], base, 2e-6, "W");
        double area = 2.0 * pi * (0.05 * 0.05 - 0.025 * 0.025);
        if (tip == 1) area += 2.0 * pi * 0.05 * 0.002;
        rows.add("efficiency" + label, efficiency[tip], base / (60.0 * area * 95.0), 3e-8, "");
        rows.balance(field);
    }
    return rows.take();
}

} // namespace tepor::detail
