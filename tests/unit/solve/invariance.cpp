// What must not matter: where the body lies, how it is turned, in which units it is told, how its mesh is numbered.
#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/dense_system.hpp>
#include <vector>

using namespace tepor;

namespace {

bool close(double a, double b, double relative = 1e-10) {
    return std::abs(a - b) <= relative * (std::abs(a) + std::abs(b));
}

/// The arrays of an L of two regions with all kinds of edges.
template <class E>
MeshArrays arrays() {
    Tiles drawing;
    drawing.add("a", {0.0, 0.0}, {0.1, 0.3}).add("b", {0.1, 0.0}, {0.3, 0.1});
    const Mesh<E> mesh = tiles<E>(drawing, {.size = 0.05});
    MeshArrays out;
    out.nodes = mesh.nodes;
    out.cells = mesh.cells;
    out.region = mesh.region;
    out.region_names = mesh.region_names;
    out.faces = mesh.faces;
    return out;
}

/// What is said of it: lengths in units of 1 / `length` m, temperatures stretched by `kelvins` about 0.
template <class E>
Body said(MeshArrays mesh, Conductivity k = 2.0, double kelvins = 1.0) {
    Body body{mesh_from_arrays<E>(std::move(mesh))};
    body.in("a", Material{.conductivity = std::move(k)}).in("b", Material{.conductivity = 0.7});
    body.in("b", Generation{.per_volume = 2e4 * kelvins});
    body.between("a", "b", Contact{.conductance = 40.0});
    body.on("left", FixedTemperature{100.0 * kelvins});
    body.on("right", Film{.coefficient = 15.0, .fluid = 20.0 * kelvins});
    body.on("top", Flux{.into = 500.0 * kelvins});
    return body;
}

} // namespace

TEST_CASE_TEMPLATE("a body moved and turned in the plane has the same temperatures, heats, and turned fluxes", E,
                   Triangle<1>, Triangle<2>, Quadrilateral<2>) {
    const double turn = 0.6;
    const double c = std::cos(turn);
    const double s = std::sin(turn);
    const auto moved = [&](Point p) { return Point{3.0 + c * p.x - s * p.y, -7.0 + s * p.x + c * p.y}; };
    MeshArrays mesh = arrays<E>();
    for (Point& p : mesh.nodes) p = moved(p);
    const Field there = steady(
        said<E>(std::move(mesh), tensor(2.0 * c * c + 5.0 * s * s, (2.0 - 5.0) * c * s, 2.0 * s * s + 5.0 * c * c)));
    const Field here = steady(said<E>(arrays<E>(), orthotropic(2.0, 5.0)));
    for (const Point p : {Point{0.03, 0.22}, Point{0.07, 0.04}, Point{0.21, 0.06}}) {
        CHECK(close(there.at(moved(p)), here.at(p), 1e-9));
        const Point a = here.heat_flux(p);
        const Point b = there.heat_flux(moved(p));
        CHECK(std::abs(b.x - (c * a.x - s * a.y)) <= 1e-6 * std::hypot(a.x, a.y));
        CHECK(std::abs(b.y - (s * a.x + c * a.y)) <= 1e-6 * std::hypot(a.x, a.y));
    }
    for (const char* face : {"left", "right", "top"})
        CHECK(close(there[heat_out_through(face)], here[heat_out_through(face)], 1e-9));
    CHECK(close(there[heat_from("a", "b")], here[heat_from("a", "b")], 1e-9));
    CHECK(there.balance().balanced());
}

TEST_CASE_TEMPLATE("numbering does not matter: nodes, cells and the first corner of each in any order", E, Triangle<1>,
                   Quadrilateral<1>) {
    test::Random random(7);
    const MeshArrays plain = arrays<E>();
    MeshArrays mixed = plain;
    const auto shuffled = [&random](std::size_t n) {
        std::vector<Id> order(n);
        for (std::size_t i = 0; i < n; ++i) order[i] = detail::as_id(i);
        for (std::size_t i = n - 1; i > 0; --i)
            std::swap(order[i], order[detail::as_size(random.below(static_cast<Index>(i) + 1))]);
        return order;
    };
    const std::vector<Id> node = shuffled(plain.nodes.size()); // new place of each node
    const std::vector<Id> cell = shuffled(plain.region.size());
    std::vector<Id> first(plain.region.size());
    constexpr std::size_t n = E::nodes;
    for (std::size_t i = 0; i < node.size(); ++i) mixed.nodes[detail::as_size(node[i])] = plain.nodes[i];
    for (std::size_t e = 0; e < cell.size(); ++e) {
        first[e] = detail::as_id(random.below(E::nodes));
        mixed.region[detail::as_size(cell[e])] = plain.region[e];
        for (std::size_t i = 0; i < n; ++i)
            mixed.cells[detail::as_size(cell[e]) * n + i] =
                node[detail::as_size(plain.cells[e * n + (i + detail::as_size(first[e])) % n])];
    }
    for (MeshFace& face : mixed.faces)
        for (CellSide& side : face.sides) {
            const auto e = detail::as_size(side.cell);
            side = {cell[e], (side.side - first[e] + E::sides) % E::sides};
        }
    const Field a = steady(said<E>(plain));
    const Field b = steady(said<E>(mixed));
    const std::vector<double> cells_a = a.cell_temperatures();
    const std::vector<double> cells_b = b.cell_temperatures();
    double worst = 0.0;
    for (std::size_t e = 0; e < cell.size(); ++e)
        for (std::size_t i = 0; i < n; ++i)
            worst = std::max(worst, std::abs(cells_b[detail::as_size(cell[e]) * n + i] -
                                             cells_a[e * n + (i + detail::as_size(first[e])) % n]));
    CHECK(worst <= 1e-9);
    for (const char* face : {"left", "right", "top"})
        CHECK(close(a[heat_out_through(face)], b[heat_out_through(face)]));
}

TEST_CASE(
    "lengths in other units: n times the size, n times the conductivity and source / n give the same temperatures") {
    for (const double n : {1e-3, 1e3}) {
        MeshArrays mesh = arrays<Quadrilateral<2>>();
        for (Point& p : mesh.nodes) p = n * p;
        Body body{mesh_from_arrays<Quadrilateral<2>>(std::move(mesh))};
        body.in("a", Material{.conductivity = 2.0 * n}).in("b", Material{.conductivity = 0.7 * n});
        body.in("b", Generation{.per_volume = 2e4 / n});
        body.between("a", "b", Contact{.conductance = 40.0});
        body.on("left", FixedTemperature{100.0});
        body.on("right", Film{.coefficient = 15.0, .fluid = 20.0}).on("top", Flux{.into = 500.0});
        const Field there = steady(body);
        const Field here = steady(said<Quadrilateral<2>>(arrays<Quadrilateral<2>>()));
        CHECK(close(there.at({0.21 * n, 0.06 * n}), here.at({0.21, 0.06}), 1e-9));
        CHECK(close(there[heat_out_through("right")], n * here[heat_out_through("right")], 1e-9));
        CHECK(there.balance().balanced());
    }
}

TEST_CASE("a linear body answers in proportion, and its zero of temperature is nobody's business") {
    const MeshArrays mesh = arrays<Triangle<2>>();
    const Field one = steady(said<Triangle<2>>(mesh));
    const Field three = steady(said<Triangle<2>>(mesh, 2.0, 3.0));
    CHECK(close(three.at({0.21, 0.06}), 3.0 * one.at({0.21, 0.06})));
    CHECK(close(three[heat_out_through("right")], 3.0 * one[heat_out_through("right")]));
    Body warm = said<Triangle<2>>(mesh);
    warm.replace("left", FixedTemperature{400.0}).replace("right", Film{.coefficient = 15.0, .fluid = 320.0});
    const Field shifted = steady(warm);
    CHECK(close(shifted.at({0.21, 0.06}), 300.0 + one.at({0.21, 0.06})));
    CHECK(close(shifted[heat_out_through("right")], one[heat_out_through("right")], 1e-8));
}

TEST_CASE("a mirrored stack is the mirror image, and a symmetric plate is symmetric") {
    const auto stack = [](bool mirrored) {
        std::vector<Layer> layers_of{{.region = "a", .thickness = 0.1, .cells = 3},
                                     {.region = "b", .thickness = 0.3, .cells = 5}};
        if (mirrored) std::swap(layers_of[0], layers_of[1]);
        Body body{layers<Segment<2>>(layers_of)};
        body.in("a", Material{.conductivity = law([](const auto& s) { return 1.0 + 0.01 * s.temperature; })});
        body.in("b", Material{.conductivity = 0.5}).in("b", Generation{.per_volume = 1000.0});
        body.between("a", "b", Contact{.conductance = 20.0});
        body.on(mirrored ? "outer" : "inner", Film{.coefficient = 30.0, .fluid = 500.0});
        body.on(mirrored ? "inner" : "outer", Radiation{.emissivity = 0.8, .surroundings = 10.0});
        return steady(body);
    };
    const Field a = stack(false);
    const Field b = stack(true);
    for (const double x : {0.0, 0.05, 0.25, 0.4}) CHECK(close(a.at(x), b.at(0.4 - x)));
    CHECK(close(a[heat_out_through("outer")], b[heat_out_through("inner")]));

    Tiles drawing;
    drawing.add("plate", {-0.2, 0.0}, {0.2, 0.2});
    Body plate{tiles<Triangle<1>>(drawing, {.size = 0.05, .diagonals = Diagonals::crossed})};
    plate.in("plate", Material{.conductivity = 1.0}).in("plate", Generation{.per_volume = 1e4});
    plate.on("left", Film{.coefficient = 10.0, .fluid = 0.0}).on("right", Film{.coefficient = 10.0, .fluid = 0.0});
    const Field even = steady(plate);
    for (const Point p : {Point{0.13, 0.04}, Point{0.2, 0.2}}) CHECK(close(even.at(p), even.at({-p.x, p.y})));
    CHECK(close(even[heat_out_through("left")], even[heat_out_through("right")]));
}

TEST_CASE("without sources no place is hotter or colder than what the body touches") {
    for (const double k : {0.01, 1.0, 100.0}) {
        Tiles drawing;
        drawing.add("a", {0.0, 0.0}, {0.2, 0.2}).add("b", {0.2, 0.0}, {0.4, 0.2}).cut({0.1, 0.05}, {0.25, 0.1}, "duct");
        Body body{tiles<Triangle<1>>(drawing, {.size = 0.025}), BodyOptions{.lumped_faces = true}};
        body.in("a", Material{.conductivity = k}).in("b", Material{.conductivity = 1.0});
        body.between("a", "b", Contact{.conductance = 5.0});
        body.on("left", FixedTemperature{-30.0});
        body.on("duct", Film{.coefficient = 5000.0, .fluid = 90.0});
        body.on("top", Radiation{.emissivity = 0.9, .surroundings = 55.0});
        const Field field = steady(body);
        CHECK(field.hottest().temperature <= 90.0 + 1e-9);
        CHECK(field.coldest().temperature >= -30.0 - 1e-9);
    }
}
