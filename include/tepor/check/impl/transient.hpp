#pragma once
// Verified cases: bodies through time.

#include <cmath>
#include <tepor/check/impl/rows.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>

namespace tepor::detail {

/// What a run leaves over, against the limit it states itself.
inline void run_balance(CheckRows& rows, const March& march) {
    const Balance total = march.total();
    rows.add("heat left over in the run", 0.0, total.left_over, 1e-10 * total.gross + total.floor, "J");
}

/// k, rho, c of T1D-11 to T1D-14, T2D-27 and T2D-28: alpha = 1e-6 m2/s.
inline Material round_numbers() {
    return {.conductivity = 2.0, .density = 2000.0, .specific_heat = 1000.0};
}

/// T1D-11. At 4 s the step itself is the test: nothing below 20 or above 120.
inline std::vector<CheckRow> stepped_slab() {
    CheckRows rows;
    Body slab{layers<Segment<1>>({{.region = "slab", .thickness = 0.02, .cells = 80}})};
    slab.in("slab", round_numbers()).on("outer", FixedTemperature{120.0});
    March march{slab, initial(20.0), Theta{.step = 0.5}};
    march.advance_to(4.0);
    const Field early = march.field();
    rows.temperature("coldest at 4 s", 20.0, early.coldest().temperature, 1e-6);
    rows.temperature("hottest at 4 s", 120.0, early.hottest().temperature, 1e-9);
    static constexpr double given[4][5] = {{40.0, 25.0694637316, 46.4348684756, 55.6823400452, 17839.6211793},
                                           {80.0, 42.7688393141, 64.682410815, 70.4087820203, 12445.6553301},
                                           {200.0, 82.92225702, 93.7811724425, 96.3950330744, 5824.5599135},
                                           {400.0, 109.202295556, 112.364869952, 113.125967846, 1696.09945396}};
    for (const auto& [t, centre, quarter, mean, flux] : given) {
        march.advance_to(t);
        const Field field = march.field();
        rows.temperature(text("T at 0 m, ", t, " s"), centre, field.at(0.0), 0.01);
        rows.temperature(text("T at 0.01 m, ", t, " s"), quarter, field.at(0.01), 0.01);
        rows.temperature(text("mean, ", t, " s"), mean, field[mean_in("slab")], 0.01);
        rows.add(text("flux in, ", t, " s"), flux, march[heat_in_through("outer")], 1e-3 * flux, "W/m2");
    }
    run_balance(rows, march);
    return rows.take();
}

/// T1D-12 to T1D-14 with Bi = 1: slab, cylinder and sphere.
inline std::vector<CheckRow> cooling_solids() {
    CheckRows rows;
    static constexpr double given[3][3][4] = {{{40.0, 198.759485865, 150.24390296, 0.0804032525006},
                                               {200.0, 159.054749016, 110.813947021, 0.318895434553},
                                               {400.0, 116.094692254, 82.6718332991, 0.529602751135}},
                                              {{40.0, 195.826972409, 143.221618997, 0.156734490436},
                                               {200.0, 118.745516701, 83.5014507561, 0.552615736373},
                                               {400.0, 64.8883484383, 48.86091425, 0.796652954334}},
                                              {{40.0, 190.874965283, 135.771787919, 0.228635067779},
                                               {200.0, 86.7399373639, 62.4889404661, 0.712999483482},
                                               {400.0, 39.4358679999, 32.3732578766, 0.916421791117}}};
    static constexpr const char* name[3] = {"slab", "cylinder", "sphere"};
    const Frame frames[3] = {Planar{}, Cylindrical{}, Spherical{}};
    for (int shape = 0; shape < 3; ++shape) {
        Body body{layers<Segment<2>>({{.region = "solid", .thickness = 0.02, .cells = 20}}, frames[shape])};
        body.in("solid", round_numbers()).on("outer", Film{.coefficient = 100.0, .fluid = 20.0});
        March march{body, initial(200.0), Theta{.step = 0.5}};
        const double at_start = march[stored_in("solid")];
        for (const auto& [t, centre, surface, given_up] : given[shape]) {
            march.advance_to(t);
            const Field field = march.field();
            rows.temperature(text(name[shape], ", centre, ", t, " s"), centre, field.at(0.0), 2e-3);
            rows.temperature(text(name[shape], ", surface, ", t, " s"), surface, field.at(0.02), 2e-3);
            rows.add(text(name[shape], ", heat given up, ", t, " s"), given_up,
                     (at_start - field[stored_in("solid")]) / (at_start * 180.0 / 200.0), 2e-5, "");
        }
        run_balance(rows, march);
    }
    return rows.take();
}

/// T1D-15 a, on 0.5 m with an adiabatic end.
inline std::vector<CheckRow> semi_infinite() {
    CheckRows rows;
    Body solid{layers<Segment<2>>({{.region = "solid", .thickness = 0.5, .cells = 60, .grading = finer_at_start(20)}})};
    solid.in("solid", Material{.conductivity = 1.6, .density = 2000.0, .specific_heat = 1000.0});
    solid.on("inner", FixedTemperature{100.0});
    March march{solid, initial(20.0), Theta{.step = 10.0}};
    const Integral heat = march.integral(heat_in_through("inner"));
    static constexpr double x[4] = {0.01, 0.03, 0.05, 0.1};
    static constexpr double given[3][7] = {
        {600.0, 79.7508506712, 46.6337286452, 28.526653566, 20.099906479, 3296.20652393, 3955447.82872},
        {3600.0, 91.6138307852, 75.4106227234, 60.8015334747, 35.0105863996, 1345.67067841, 9688828.88456},
        {7200.0, 94.0615124149, 82.3883694372, 71.3059732532, 48.1195340837, 951.532861948, 13702073.2121}};
    for (const double* g : given) {
        march.advance_to(g[0]);
        const Field field = march.field();
        for (int i = 0; i < 4; ++i)
            rows.temperature(text("T at ", x[i], " m, ", g[0], " s"), g[i + 1], field.at(x[i]), 5e-3);
        rows.add(text("flux in, ", g[0], " s"), g[5], march[heat_in_through("inner")], 2e-4 * g[5], "W/m2");
        rows.add(text("heat in so far, ", g[0], " s"), g[6], march[heat], 1e-4 * g[6], "J/m2");
    }
    run_balance(rows, march);
    return rows.take();
}

/// T1D-18: so small a Biot number that the lumped exponential is right to 0.03 K.
inline std::vector<CheckRow> thin_slab() {
    CheckRows rows;
    Body slab{layers<Segment<2>>({{.region = "slab", .thickness = 0.002, .cells = 4}})};
    slab.in("slab", Material{.conductivity = 100.0, .density = 5000.0, .specific_heat = 400.0});
    slab.on("outer", Film{.coefficient = 50.0, .fluid = 25.0});
    March march{slab, initial(150.0), Theta{.step = 0.25}};
    static constexpr double given[4][3] = {{40.0, 100.841599942, 100.803694936},
                                           {80.0, 71.00792095, 70.9849265711},
                                           {160.0, 41.9310094737, 41.922547495},
                                           {320.0, 27.2928906397, 27.2917446719}};
    for (const auto& [t, centre, surface] : given) {
        march.advance_to(t);
        const Field field = march.field();
        rows.temperature(text("centre, ", t, " s"), centre, field.at(0.0), 1e-3);
        rows.temperature(text("surface, ", t, " s"), surface, field.at(0.002), 1e-3);
    }
    run_balance(rows, march);
    return rows.take();
}

/// S2D-26 T3.
inline std::vector<CheckRow> nafems_t3() {
    CheckRows rows;
    Body bar{layers<Segment<2>>({{.region = "bar", .thickness = 0.1, .cells = 50}})};
    bar.in("bar", Material{.conductivity = 35.0, .density = 7200.0, .specific_heat = 440.5});
    bar.on("inner", FixedTemperature{0.0});
    bar.on("outer", FixedTemperature{of_time([](double t) { return 100.0 * std::sin(pi * t / 40.0); })});
    March march{bar, initial(0.0), Theta{.step = 0.125}};
    march.advance_to(32.0);
    const Field field = march.field();
    rows.temperature("T at 0.08 m, 32 s, published", 36.6, field.at(0.08), 0.01);
    rows.temperature("T at 0.08 m, 32 s", 36.6031159591, field.at(0.08), 5e-4);
    rows.temperature("T at 0.06 m, 32 s", 8.66776925895, field.at(0.06), 5e-4);
    rows.temperature("T at 0.04 m, 32 s", 1.15028097932, field.at(0.04), 5e-4);
    rows.temperature("T at 0.02 m, 32 s", 0.0909070224586, field.at(0.02), 2e-4);
    run_balance(rows, march);
    return rows.take();
}

/// T2D-27, a quarter of a bar, and T2D-28, half a cylinder: products of one-dimensional solutions.
inline std::vector<CheckRow> cooling_block(bool cylinder) {
    CheckRows rows;
    static constexpr double bar[3][6] = {
        {200.0, 147.416410161, 103.213174694, 92.6157957157, 67.4239612216, 116.364735397},
        {400.0, 91.7520335924, 66.7958363019, 59.5820728541, 45.8149645248, 73.4840146694},
        {800.0, 42.1979199787, 34.4771420942, 32.2125965377, 27.9648676807, 36.5274784394}};
    static constexpr double finite[3][6] = {
        {200.0, 105.994544312, 75.3015316884, 53.0727437276, 41.2684816219, 75.5220647766},
        {400.0, 48.8553190143, 38.5524956186, 30.682135577, 26.8680673186, 38.3517909334},
        {800.0, 23.1709405679, 22.0387525242, 21.171277252, 20.7530713373, 22.0149725175}};
    Tiles drawing;
    drawing.add("block", {0.0, 0.0}, {0.02, 0.03});
    Body block{tiles<Quadrilateral<2>>(drawing, {.size = 0.0025}, cylinder ? Frame(Cylindrical{}) : Frame(Planar{}))};
    block.in("block", round_numbers());
    block.on("right", Film{.coefficient = 100.0, .fluid = 20.0});
    block.on("top", Film{.coefficient = cylinder ? 200.0 : 100.0, .fluid = 20.0});
    March march{block, initial(200.0), Theta{.step = 1.0}};
    for (const auto& [t, centre, side, end, corner, mean] : cylinder ? finite : bar) {
        march.advance_to(t);
        const Field field = march.field();
        rows.temperature(text("centre, ", t, " s"), centre, field.at(Point{0.0, 0.0}), 2e-3);
        rows.temperature(text("T at (0.02, 0) m, ", t, " s"), side, field.at(Point{0.02, 0.0}), 2e-3);
        rows.temperature(text("T at (0, 0.03) m, ", t, " s"), end, field.at(Point{0.0, 0.03}), 2e-3);
        rows.temperature(text("T at (0.02, 0.03) m, ", t, " s"), corner, field.at(Point{0.02, 0.03}), 2e-3);
        rows.temperature(text("mean, ", t, " s"), mean, field[mean_in("block")], 2e-3);
    }
    run_balance(rows, march);
    return rows.take();
}
inline std::vector<CheckRow> cooling_bar() {
    return cooling_block(false);
}
inline std::vector<CheckRow> cooling_finite_cylinder() {
    return cooling_block(true);
}

} // namespace tepor::detail
