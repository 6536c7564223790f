#pragma once
// The validation bodies of EN ISO 10211 and their rows.

#include <tepor/check/impl/rows.hpp>
#include <tepor/check/iso_10211.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor {

TEPOR_INLINE Body iso_10211_case_1() {
    Tiles drawing;
    drawing.add("column", {0.0, 0.0}, {0.4, 0.8});
    for (int i = 1; i < 8; ++i) drawing.line_y(0.1 * i);
    for (int i = 1; i < 4; ++i) drawing.line_x(0.1 * i);
    drawing.finer_x({.at = 0.0, .size = 1e-4}).finer_y({.at = 0.8, .size = 1e-4});
    Body body{tiles<Quadrilateral<2>>(drawing, {.size = 0.04, .growth = 1.6})};
    body.in("column", Material{.conductivity = 1.0});
    body.on("top", FixedTemperature{20.0});
    body.on("left", FixedTemperature{0.0}).on("bottom", FixedTemperature{0.0});
    return body;
}

TEPOR_INLINE std::array<IsoPoint, 28> iso_10211_case_1_points() {
    static constexpr double published[7][4] = {{9.7, 13.4, 14.7, 15.1}, {5.3, 8.6, 10.3, 10.8}, {3.2, 5.6, 7.0, 7.5},
                                               {2.0, 3.6, 4.7, 5.0},    {1.3, 2.3, 3.0, 3.2},   {0.7, 1.4, 1.8, 1.9},
                                               {0.3, 0.6, 0.8, 0.9}};
    std::array<IsoPoint, 28> points{};
    std::size_t n = 0;
    for (int row = 0; row < 7; ++row)
        for (int column = 0; column < 4; ++column)
            points[n++] = {"", {0.1 * (column + 1), 0.1 * (7 - row)}, published[row][column]};
    return points;
}

TEPOR_INLINE Body iso_10211_case_2(double size) {
    Tiles drawing;
    drawing.add("insulation", {0.0, 0.0015}, {0.5, 0.0415});
    drawing.add("facing", {0.0, 0.0415}, {0.5, 0.0475});
    drawing.add("wood", {0.0, 0.0365}, {0.015, 0.0415});
    drawing.add("aluminium", {0.0, 0.0}, {0.5, 0.0015});      // sheet
    drawing.add("aluminium", {0.0, 0.0015}, {0.0015, 0.035}); // web
    drawing.add("aluminium", {0.0, 0.035}, {0.015, 0.0365});  // flange
    drawing.finer_x({.at = 0.0015, .size = 0.0002}).finer_x({.at = 0.015, .size = 0.0002});
    for (const double y : {0.0015, 0.035, 0.0365, 0.0415}) drawing.finer_y({.at = y, .size = 0.0003});
    Body body{tiles<Quadrilateral<2>>(drawing, {.size = size, .growth = 1.6})};
    body.in("insulation", Material{.conductivity = 0.029});
    body.in("facing", Material{.conductivity = 1.15});
    body.in("wood", Material{.conductivity = 0.12});
    body.in("aluminium", Material{.conductivity = 230.0});
    body.on("top", Film{.coefficient = 1.0 / 0.06, .fluid = 0.0});
    body.on("bottom", Film{.coefficient = 1.0 / 0.11, .fluid = 20.0});
    return body;
}

TEPOR_INLINE std::array<IsoPoint, 9> iso_10211_case_2_points() {
    return {{{"A", {0.0, 0.0475}, 7.1},
             {"B", {0.5, 0.0475}, 0.8},
             {"C", {0.0, 0.0415}, 7.9},
             {"D", {0.015, 0.0415}, 6.3},
             {"E", {0.5, 0.0415}, 0.8},
             {"F", {0.0, 0.0365}, 16.4},
             {"G", {0.015, 0.0365}, 16.3},
             {"H", {0.0, 0.0}, 16.8},
             {"I", {0.5, 0.0}, 18.3}}};
}

namespace detail {

/// S2D-25 case 1: the published 28 points, and the exact series.
inline std::vector<CheckRow> iso_10211_column() {
    CheckRows rows;
    const Field field = steady(iso_10211_case_1());
    static constexpr double exact[28] = {
        9.65818776956, 13.3790553228, 14.7289184261, 15.0853799071,  5.25173779679,  8.64056663774,  10.3155484468,
        10.8105843652, 3.18868431773, 5.60899932824, 7.01415296627,  7.46512201259,  2.01415296627,  3.64056663774,
        4.65818776956, 5.0,           1.2624666852,  2.30860341559,  2.98584703373,  3.21850244829,  0.739647314506,
        1.35943336226, 1.76684880941, 1.90828235933, 0.341812230437, 0.629559565933, 0.819930570973, 0.886314160355};
    std::size_t i = 0;
    for (const IsoPoint& p : iso_10211_case_1_points()) {
        const double got = field.at(p.place);
        rows.temperature(text("T at (", p.place.x, ", ", p.place.y, ") m, published"), p.published, got,
                         iso_10211_tolerance);
        rows.temperature(text("T at (", p.place.x, ", ", p.place.y, ") m"), exact[i++], got, 1e-4);
    }
    rows.balance(field);
    return rows.take();
}

/// S2D-25 case 2: the published 9 points and heat flow, and an independent control-volume solution.
inline std::vector<CheckRow> iso_10211_profile() {
    CheckRows rows;
    const Field field = steady(iso_10211_case_2());
    static constexpr double control_volume[9] = {7.0642,  0.7613,  7.8972,  6.2721, 0.8275,
                                                 16.4079, 16.3336, 16.7672, 18.3337};
    std::size_t i = 0;
    for (const IsoPoint& p : iso_10211_case_2_points()) {
        const double got = field.at(p.place);
        rows.temperature(text("T at ", p.name, ", published"), p.published, got, iso_10211_tolerance);
        rows.temperature(text("T at ", p.name, ", control volumes"), control_volume[i++], got, 1e-3);
    }
    const double heat = field[heat_out_through("top")];
    rows.add("heat flow, published", iso_10211_case_2_heat_flow, heat, iso_10211_tolerance, "W/m");
    rows.add("heat flow, control volumes", 9.4915, heat, 2e-3, "W/m");
    const Balance balance = field.balance(); // both sides agree as closely as the balance closes
    rows.add("heat in through the warm side", heat, field[heat_in_through("bottom")],
             1e-10 * balance.gross + balance.floor, "W/m");
    rows.balance(field);
    return rows.take();
}

} // namespace detail
} // namespace tepor
