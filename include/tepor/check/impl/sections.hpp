#pragma once
// Verified cases: rectangles, squares and an annulus in the plane, steady. Watts are per metre of depth.

#include <cmath>
#include <tepor/check/impl/rows.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::detail {

/// S2D-19. The two upper corners take the mean; the cells there are small so that no printed point feels it.
inline std::vector<CheckRow> rectangle_with_hot_side() {
    CheckRows rows;
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.4, 0.3});
    for (const double x : {0.1, 0.2, 0.3}) drawing.line_x(x);
    for (const double y : {0.075, 0.15, 0.225}) drawing.line_y(y);
    drawing.finer_x({.at = 0.0, .size = 1e-4}).finer_x({.at = 0.4, .size = 1e-4}).finer_y({.at = 0.3, .size = 1e-4});
    Body plate{tiles<Quadrilateral<2>>(drawing, {.size = 0.02, .growth = 1.6})};
    plate.in("plate", Material{.conductivity = 2.0});
    plate.on("top", FixedTemperature{100.0});
    for (const char* side : {"left", "right", "bottom"}) plate.on(side, FixedTemperature{0.0});
    const Field field = steady(plate);
    static constexpr double T[3][2] = {
        {10.8835354414, 14.988284463}, {26.1399043775, 34.6334898111}, {52.9661161122, 63.0580570009}};
    for (int j = 0; j < 3; ++j)
        for (int i = 0; i < 3; ++i) rows.at(field, Point{0.1 * (i + 1), 0.075 * (j + 1)}, T[j][i == 1 ? 1 : 0], 3e-4);
    rows.add("heat out of the bottom", 97.708131567, field[heat_out_through("bottom")], 1e-3, "W/m");
    rows.balance(field);
    return rows.take();
}

/// S2D-20.
inline std::vector<CheckRow> square_with_generation() {
    CheckRows rows;
    Tiles drawing;
    drawing.add("square", {0.0, 0.0}, {0.2, 0.2});
    Body square{tiles<Quadrilateral<2>>(drawing, {.size = 0.2 / 32})};
    square.in("square", Material{.conductivity = 5.0});
    square.in("square", Generation{.per_volume = 1e5});
    for (const char* side : {"left", "right", "bottom", "top"}) square.on(side, FixedTemperature{25.0});
    const Field field = steady(square);
    rows.at(field, Point{0.1, 0.1}, 83.9370826252, 2e-5);
    rows.at(field, Point{0.05, 0.1}, 70.8679251797, 2e-5);
    rows.at(field, Point{0.05, 0.05}, 61.2289264876, 2e-5);
    rows.temperature("mean", 53.115402991, field[mean_in("square")], 5e-5);
    rows.add("flux out at the middle of a side", 6753.14483314, field.heat_flux(Point{0.2, 0.1}).x, 8.0, "W/m2");
    for (const char* side : {"left", "top"})
        rows.add(text("heat out through ", side), 1000.0, field[heat_out_through(side)], 1e-6, "W/m");
    rows.balance(field);
    return rows.take();
}

/// S2D-21, a quarter; the cells shrink toward the re-entrant corner, where the gradient is unbounded.
inline std::vector<CheckRow> concentric_squares() {
    CheckRows rows;
    static constexpr double given[2][2] = {{2.0, 10.2340925693681}, {4.0, 4.84441954842217}};
    for (const auto& [ratio, shape_factor] : given) {
        const double inner = 0.05;
        const double outer = ratio * inner;
        Tiles drawing;
        drawing.add("insulation", {0.0, 0.0}, {outer, outer}).cut({0.0, 0.0}, {inner, inner}, "duct");
        drawing.face("casing", {outer, 0.0}, {outer, outer}).face("casing", {0.0, outer}, {outer, outer});
        drawing.finer_x({.at = inner, .size = 1e-6}).finer_y({.at = inner, .size = 1e-6});
        Body quarter{tiles<Quadrilateral<2>>(drawing, {.size = 0.01, .growth = 1.8})};
        quarter.in("insulation", Material{.conductivity = 0.04});
        quarter.on("duct", FixedTemperature{80.0});
        quarter.on("casing", FixedTemperature{0.0});
        const Field field = steady(quarter);
        const double heat = field[heat_out_through("casing")];
        rows.add(text("shape factor, sides 1 to ", ratio), shape_factor, 4.0 * heat / (0.04 * 80.0), 1e-4, "");
        rows.add(text("heat, sides 1 to ", ratio), shape_factor * 3.2, 4.0 * heat, 4e-4, "W/m");
        rows.balance(field);
    }
    return rows.take();
}

/// A ring between two eccentric circles, meshed along the lines of bipolar coordinates (Carslaw & Jaeger, ch. XVI), on
/// which a conduction field is linear.
inline Mesh<Quadrilateral<2>> eccentric_ring(double outer_radius, double inner_radius, double eccentricity,
                                             Index through, Index around) {
    const double R = outer_radius;
    const double r = inner_radius;
    const double e = eccentricity;
    const double centre = (R * R - r * r + e * e) / (2.0 * e); // distance of the outer centre from the pole axis
    const double pole = std::sqrt(centre * centre - R * R);
    const double from = std::asinh(pole / R);
    const double to = std::asinh(pole / r);
    MeshArrays mesh;
    const Index lines = 2 * through + 1;
    const Index turns = 2 * around;
    for (Index j = 0; j < turns; ++j)
        for (Index i = 0; i < lines; ++i) {
            const double t = to + (from - to) * as_double(i) / as_double(lines - 1);
            const double s = 2.0 * pi * as_double(j) / as_double(turns);
            const double scale = pole / (std::cosh(t) - std::cos(s));
            // the pole axis lies beyond the side the inner circle is shifted to
            mesh.nodes.push_back({centre - scale * std::sinh(t), scale * std::sin(s)});
        }
    const auto node = [&](Index i, Index j) { return as_id((j % turns) * lines + i); };
    MeshFace inner{"inner", {}};
    MeshFace outer{"outer", {}};
    for (Index j = 0; j < around; ++j)
        for (Index i = 0; i < through; ++i) {
            // vertices in the order that runs counter-clockwise in the plane, side nodes between them, the middle last
            static constexpr int lattice[9][2] = {{0, 0}, {0, 2}, {2, 2}, {2, 0}, {0, 1},
                                                  {1, 2}, {2, 1}, {1, 0}, {1, 1}};
            const Id cell = as_id(j * through + i);
            for (const auto& [a, b] : lattice) mesh.cells.push_back(node(2 * i + a, 2 * j + b));
            if (i == 0) inner.sides.push_back({cell, 0});
            if (i + 1 == through) outer.sides.push_back({cell, 2});
        }
    mesh.faces = {inner, outer};
    return mesh_from_arrays<Quadrilateral<2>>(std::move(mesh));
}

/// S2D-22.
inline std::vector<CheckRow> eccentric_annulus() {
    CheckRows rows;
    Body ring{eccentric_ring(0.1, 0.04, 0.03, 8, 48)};
    ring.in("body", Material{.conductivity = 0.04});
    ring.on("inner", FixedTemperature{150.0}).on("outer", FixedTemperature{30.0});
    const Field field = steady(ring);
    const double heat = field[heat_in_through("inner")];
    rows.add("shape factor", 7.85326261003, heat / (0.04 * 120.0), 3e-5, "");
    rows.add("heat", 37.6956605281, heat, 2e-4, "W/m");
    rows.at(field, Point{0.085, 0.0}, 82.9129056035, 1e-2);
    rows.at(field, Point{-0.055, 0.0}, 70.6936172539, 1e-2);
    rows.at(field, Point{0.03, 0.06}, 92.7141927454, 1e-2);
    rows.at(field, Point{0.0, 0.07}, 70.1570960382, 1e-2);
    rows.at(field, Point{0.03, -0.06}, 92.7141927454, 1e-2);
    rows.add("flux at the thin side", 208.970031063, field.heat_flux(Point{0.07, 0.0}).x, 0.2, "W/m2");
    rows.add("flux at the thick side", 107.651228123, -field.heat_flux(Point{-0.01, 0.0}).x, 0.5, "W/m2");
    rows.balance(field);

    // and with triangles of order 2 whose sides lie on the circles
    Section drawing;
    drawing.add("body", circle({0.0, 0.0}, 0.1));
    drawing.cut(circle({0.03, 0.0}, 0.04), "inner");
    drawing.rest("outer");
    Body drawn{triangulate<Triangle<2>>(drawing, {.size = 0.006, .turn = 10.0})};
    drawn.in("body", Material{.conductivity = 0.04});
    drawn.on("inner", FixedTemperature{150.0}).on("outer", FixedTemperature{30.0});
    const Field curved = steady(drawn);
    rows.add("shape factor, triangles", 7.85326261003, curved[heat_in_through("inner")] / (0.04 * 120.0), 1e-4, "");
    rows.temperature("T at (0.03, 0.06) m, triangles", 92.7141927454, curved.at(Point{0.03, 0.06}), 3e-3);
    rows.balance(curved);
    return rows.take();
}

/// S2D-23: T = r^(2/3) sin(2 angle / 3) on the edges, the angle counted from the edge y = 0, x > 0.
inline std::vector<CheckRow> l_shape() {
    CheckRows rows;
    Tiles drawing;
    drawing.add("body", {-1.0, -1.0}, {1.0, 1.0}).cut({0.0, -1.0}, {1.0, 0.0});
    drawing.face("right of corner", {0.0, 0.0}, {1.0, 0.0}).face("below corner", {0.0, -1.0}, {0.0, 0.0});
    drawing.finer_x({.at = 0.0, .size = 1e-6}).finer_y({.at = 0.0, .size = 1e-6});
    Body body{tiles<Quadrilateral<2>>(drawing, {.size = 0.1, .growth = 1.8})};
    body.in("body", Material{.conductivity = 1.0});
    const auto exact = of_place([](const Point& p) {
        double angle = std::atan2(p.y, p.x);
        if (angle < -1e-12) angle += 2.0 * pi;
        return std::pow(std::hypot(p.x, p.y), 2.0 / 3.0) * std::sin(2.0 * angle / 3.0);
    });
    for (const char* side : {"left", "right", "bottom", "top"}) body.on(side, FixedTemperature{exact});
    for (const char* side : {"right of corner", "below corner"}) body.on(side, FixedTemperature{0.0});
    const Field field = steady(body);
    // integral of k |grad T|^2 is the sum of T r over the unknowns, r the heat each takes in
    double energy = 0.0;
    for (std::size_t u = 0; u < field.temperature().size(); ++u) energy += field.temperature()[u] * field.reaction()[u];
    rows.add("integral of |grad T|^2", 1.8362266618752, energy, 1e-5, "K2");
    rows.at(field, Point{-0.5, 0.5}, 0.793700525984, 1e-4);
    rows.at(field, Point{0.5, 0.5}, 0.396850262992, 1e-4);
    rows.at(field, Point{-0.5, -0.5}, 0.396850262992, 1e-4);
    rows.at(field, Point{-0.1, 0.1}, 0.271441761659, 1e-4);
    rows.at(field, Point{0.1, 0.1}, 0.13572088083, 1e-4);
    rows.at(field, Point{-0.01, 0.01}, 0.0584803547643, 1e-4);
    rows.at(field, Point{0.5, 0.25}, 0.206431388041, 1e-4);
    const Point flux = field.heat_flux(Point{-0.1, 0.1});
    rows.add("|grad T| at (-0.1, 0.1)", 1.27958873578, std::hypot(flux.x, flux.y), 1e-2, "K/m");
    rows.add("heat out of the edge right of the corner", 1.0, field[heat_out_through("right of corner")], 1e-5, "W/m");
    rows.add("heat out of the edge below the corner", 1.0, field[heat_out_through("below corner")], 1e-5, "W/m");
    rows.balance(field);
    return rows.take();
}

/// S2D-24, the half 0 <= x.
inline std::vector<CheckRow> strip_on_slab() {
    CheckRows rows;
    const auto body = [] {
        Tiles drawing;
        drawing.add("slab", {0.0, 0.0}, {0.02, 0.004}).face("strip", {0.0, 0.004}, {0.005, 0.004});
        drawing.finer_x({.at = 0.005, .size = 2e-6}).finer_y({.at = 0.004, .size = 2e-6});
        Body b{tiles<Quadrilateral<2>>(drawing, {.size = 0.0005, .growth = 1.5})};
        b.in("slab", Material{.conductivity = 20.0});
        b.on("strip", Flux{.into = 1e5});
        return b;
    };
    Body held = body();
    held.on("bottom", FixedTemperature{25.0});
    const Field a = steady(held);
    rows.at(a, Point{0.0, 0.004}, 42.7194568905, 3e-5);
    rows.at(a, Point{0.005, 0.004}, 34.8403496115, 2e-5);
    rows.at(a, Point{0.02, 0.004}, 25.0439514033, 3e-5);
    const double mean_a = a[mean_on("strip")];
    rows.temperature("mean of the strip", 40.7393327269, mean_a, 3e-5);
    rows.add("spreading resistance", 0.0107393327269, (mean_a - 25.0) / 1000.0 - 0.005, 3e-8, "m K/W");
    rows.balance(a);
    Body cooled = body();
    cooled.on("bottom", Film{.coefficient = 2000.0, .fluid = 25.0});
    const Field b = steady(cooled);
    rows.at(b, Point{0.0, 0.004}, 64.8191726484, 3e-5);
    rows.at(b, Point{0.005, 0.004}, 53.1144669165, 2e-5);
    rows.at(b, Point{0.02, 0.004}, 30.3464274831, 3e-5);
    rows.at(b, Point{0.0, 0.0}, 50.0876469536, 3e-5);
    rows.at(b, Point{0.02, 0.0}, 29.4328655659, 3e-5);
    const double mean_b = b[mean_on("strip")];
    rows.temperature("mean of the strip, film", 61.4984286642, mean_b, 3e-5);
    rows.add("spreading resistance, film", 0.0189984286642, (mean_b - 25.0) / 1000.0 - 0.0175, 3e-8, "m K/W");
    rows.balance(b);
    return rows.take();
}

/// S2D-26 T4.
inline std::vector<CheckRow> nafems_t4() {
    CheckRows rows;
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.6, 1.0});
    drawing.line_x(0.3).line_y(0.2).line_y(0.5);
    drawing.finer_x({.at = 0.6, .size = 1e-3}).finer_y({.at = 0.0, .size = 1e-3});
    Body plate{tiles<Quadrilateral<2>>(drawing, {.size = 0.03})};
    plate.in("plate", Material{.conductivity = 52.0});
    plate.on("bottom", FixedTemperature{100.0});
    plate.on("right", Film{.coefficient = 750.0, .fluid = 0.0});
    plate.on("top", Film{.coefficient = 750.0, .fluid = 0.0});
    const Field field = steady(plate);
    rows.temperature("T at E (0.6, 0.2) m, published", 18.25, field.at(Point{0.6, 0.2}), 0.01);
    rows.at(field, Point{0.6, 0.2}, 18.2537565371, 2e-4);
    rows.at(field, Point{0.0, 0.2}, 70.0606630882, 2e-4);
    rows.at(field, Point{0.3, 0.2}, 62.5536695677, 2e-4);
    rows.at(field, Point{0.0, 0.5}, 35.4011539898, 2e-4);
    rows.at(field, Point{0.6, 0.5}, 6.38712205521, 2e-4);
    rows.at(field, Point{0.0, 1.0}, 3.36776934692, 2e-4);
    rows.balance(field);
    return rows.take();
}

} // namespace tepor::detail
