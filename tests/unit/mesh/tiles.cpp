// Meshes of rectangles on grid lines.

#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/element/map.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/mesh/verify.hpp>
#include <tepor/quadrature/rules.hpp>
#include <tests/support/archetypes.hpp>
#include <tests/support/refused.hpp>
#include <tests/support/serendipity.hpp>
#include <vector>

using namespace tepor;
using test::check_refused;

namespace {

/// A concrete wall with insulation, a duct through the concrete and a notch in the upper right corner.
Tiles wall() {
    Tiles t;
    t.add("concrete", {0.0, 0.0}, {0.3, 1.0});
    t.add("insulation", {0.42, 1.0}, {0.3, 0.0}); // corners in any order
    t.cut({0.1, 0.4}, {0.2, 0.6}, "duct");
    t.cut({0.36, 0.9}, {0.50, 1.2});
    t.face("floor heating", {0.0, 0.0}, {0.3, 0.0});
    return t;
}

template <class E>
double area_of(const Mesh<E>& mesh, const char* region) {
    const Index wanted = mesh.find_region(region);
    const auto rule = rule_for<E>(2 * E::order);
    double area = 0.0;
    std::vector<Point> x(static_cast<std::size_t>(E::nodes));
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        if (mesh.region[static_cast<std::size_t>(c)] != wanted) continue;
        for (int i = 0; i < E::nodes; ++i)
            x[static_cast<std::size_t>(i)] = mesh.nodes[static_cast<std::size_t>(mesh.cell(c)[i])];
        const CellNodes<E> nodes(x.data(), x.size());
        for (Index q = 0; q < rule.size(); ++q)
            area += rule.weight(q) * determinant<2>(jacobian<E>(nodes, rule.point(q)));
    }
    return area;
}

/// Ends of a side, in walking order.
std::pair<Point, Point> ends(const MeshData& mesh, CellSide s) {
    const Id* ids = mesh.cell(s.cell);
    return {mesh.nodes[static_cast<std::size_t>(ids[s.side])],
            mesh.nodes[static_cast<std::size_t>(ids[(s.side + 1) % mesh.sides_per_cell])]};
}

double length_of(const MeshData& mesh, const char* face) {
    const Index f = mesh.find_face(face);
    if (f < 0) return -1.0;
    double length = 0.0;
    for (const CellSide s : mesh.faces[static_cast<std::size_t>(f)].sides) {
        const auto [a, b] = ends(mesh, s);
        length += distance(a, b);
    }
    return length;
}

/// All sides of a face satisfy what is asked of their two ends.
template <class What>
bool all_sides(const MeshData& mesh, const char* face, What what) {
    const auto& sides = mesh.faces.at(static_cast<std::size_t>(mesh.find_face(face))).sides;
    return std::all_of(sides.begin(), sides.end(), [&](CellSide s) {
        const auto [a, b] = ends(mesh, s);
        return what(a) && what(b);
    });
}

} // namespace

#define ON_TILES                                                                                                       \
    Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>, Triangle<1>, Triangle<2>, Triangle<3>, test::BareTriangle,   \
        test::Serendipity8

TEST_CASE_TEMPLATE("tiles are sound, fill the drawing and name its faces, with every element and diagonal", E,
                   ON_TILES) {
    for (const Diagonals diagonals :
         {Diagonals::alternating, Diagonals::crossed, Diagonals::rising, Diagonals::falling}) {
        const auto mesh = tiles<E>(wall(), {.size = 0.1, .diagonals = diagonals}, Planar{.depth = 3.0});
        verify(mesh).or_throw();
        CHECK(mesh.frame.factor(2) == 3.0);
        CHECK(std::abs(area_of(mesh, "concrete") - (0.3 - 0.1 * 0.2)) <= 1e-14);
        CHECK(std::abs(area_of(mesh, "insulation") - (0.12 - 0.06 * 0.1)) <= 1e-14);
        CHECK(std::abs(length_of(mesh, "left") - 1.0) <= 1e-14);
        CHECK(std::abs(length_of(mesh, "right") - 0.9) <= 1e-14);
        CHECK(std::abs(length_of(mesh, "bottom") - 0.42) <= 1e-14);
        CHECK(std::abs(length_of(mesh, "top") - 0.36) <= 1e-14);
        CHECK(std::abs(length_of(mesh, "duct") - 0.6) <= 1e-14);
        CHECK(std::abs(length_of(mesh, "floor heating") - 0.3) <= 1e-14);
        CHECK(mesh.faces.size() == 6);
        CHECK(all_sides(mesh, "duct",
                        [](Point p) { return p.x > 0.0999 && p.x < 0.2001 && p.y > 0.3999 && p.y < 0.6001; }));
        CHECK(all_sides(mesh, "floor heating", [](Point p) { return p.y == 0.0 && p.x <= 0.3; }));
        CHECK(all_sides(mesh, "right", [](Point p) { return p.x == 0.42 && p.y <= 0.9; }));
    }
}

TEST_CASE("a tile is one quadrilateral, two triangles, or four around its middle") {
    Tiles t;
    t.add("plate", {0.0, 0.0}, {0.4, 0.2});
    const TilesOptions two{.size = 0.1};
    const TilesOptions four{.size = 0.1, .diagonals = Diagonals::crossed};
    CHECK(tiles<Quadrilateral<1>>(t, two).cell_count() == 8);
    CHECK(tiles<Quadrilateral<2>>(t, two).node_count() == 9 * 5);
    CHECK(tiles<test::Serendipity8>(t, two).node_count() == 9 * 5 - 8);
    CHECK(tiles<Triangle<1>>(t, two).cell_count() == 16);
    CHECK(tiles<Triangle<1>>(t, two).node_count() == 15);
    CHECK(tiles<Triangle<3>>(t, two).node_count() == 13 * 7);
    CHECK(tiles<Triangle<1>>(t, four).cell_count() == 32);
    CHECK(tiles<Triangle<1>>(t, four).node_count() == 15 + 8);
}

TEST_CASE("crossed diagonals keep the mirror symmetries of the drawing, alternating ones turn into each other") {
    Tiles t;
    t.add("plate", {-0.2, -0.1}, {0.2, 0.1});
    const auto mesh = tiles<Triangle<2>>(t, {.size = 0.1, .diagonals = Diagonals::crossed});
    for (const Point p : mesh.nodes)
        for (const Point mirror : {Point{-p.x, p.y}, Point{p.x, -p.y}}) {
            const bool found =
                std::any_of(mesh.nodes.begin(), mesh.nodes.end(), [&](Point q) { return distance(q, mirror) < 1e-15; });
            CHECK(found);
        }
    // Two neighbours of an alternating pattern share the node their diagonals meet in.
    const auto chequered = tiles<Triangle<1>>(t, {.size = 0.1});
    std::vector<int> around(static_cast<std::size_t>(chequered.node_count()), 0);
    for (const Id n : chequered.cells) ++around[static_cast<std::size_t>(n)];
    // 5 x 3 nodes, the inner ones of the middle row have 8 or 4 triangles around them in turn
    CHECK(around[6] + around[7] == 12);
    CHECK(around[7] + around[8] == 12);
    CHECK(std::abs(around[6] - around[7]) == 4);
}

TEST_CASE("later rectangles cover earlier ones, and cuts apply after all painting") {
    Tiles t;
    t.cut({0.4, 0.4}, {0.6, 0.6}, "hole");
    t.add("plate", {0.0, 0.0}, {1.0, 1.0});
    t.add("inlay", {0.5, 0.0}, {1.0, 1.0});
    const auto mesh = tiles<Quadrilateral<1>>(t, {.size = 0.1});
    verify(mesh).or_throw();
    CHECK(std::abs(area_of(mesh, "plate") - (0.5 - 0.02)) <= 1e-14);
    CHECK(std::abs(area_of(mesh, "inlay") - (0.5 - 0.02)) <= 1e-14);
    CHECK(std::abs(length_of(mesh, "hole") - 0.8) <= 1e-14);
}

TEST_CASE("where cuts overlap, an edge belongs to the cut that removed the tile last") {
    Tiles t;
    t.add("plate", {0.0, 0.0}, {1.0, 1.0});
    t.cut({0.2, 0.2}, {0.6, 0.6}, "wide");
    t.cut({0.4, 0.2}, {0.8, 0.6}, "late");
    const auto mesh = tiles<Quadrilateral<1>>(t, {.size = 0.2});
    CHECK(std::abs(length_of(mesh, "wide") - (0.4 + 2 * 0.2)) <= 1e-14);
    CHECK(std::abs(length_of(mesh, "late") - (0.4 + 2 * 0.4)) <= 1e-14);
}

TEST_CASE("an L of two rectangles has its own outline; the inner corner is named by a piece") {
    Tiles t;
    t.add("foot", {0.0, 0.0}, {1.0, 0.2});
    t.add("stem", {0.0, 0.2}, {0.2, 1.0});
    t.face("inside", {0.2, 0.2}, {1.0, 0.2});
    t.face("inside", {0.2, 1.0}, {0.2, 0.2});
    const auto mesh = tiles<Quadrilateral<2>>(t, {.size = 0.1});
    verify(mesh).or_throw();
    CHECK(std::abs(length_of(mesh, "inside") - 1.6) <= 1e-14);
    CHECK(std::abs(length_of(mesh, "right") - 0.2) <= 1e-14);
    CHECK(std::abs(length_of(mesh, "top") - 0.2) <= 1e-14);
    CHECK(std::abs(length_of(mesh, "left") - 1.0) <= 1e-14);
}

TEST_CASE("a face of the drawing takes the place of the box's face of that name, and repeated pieces count once") {
    Tiles t;
    t.add("plate", {0.0, 0.0}, {1.0, 0.5});
    t.face("top", {0.0, 0.5}, {0.6, 0.5});
    t.face("top", {0.4, 0.5}, {0.8, 0.5});
    const auto mesh = tiles<Quadrilateral<1>>(t, {.size = 0.1});
    verify(mesh).or_throw();
    CHECK(std::abs(length_of(mesh, "top") - 0.8) <= 1e-14);
    CHECK(std::abs(length_of(mesh, "bottom") - 1.0) <= 1e-14);
}

TEST_CASE("splits, finer lines and extra lines shape the cells") {
    Tiles t = wall();
    t.finer_x({.at = 0.30, .size = 0.004}).split_y({.from = 0.6, .to = 0.9, .cells = 7}).line_y(0.05).line_x(0.01);
    const auto mesh = tiles<Quadrilateral<1>>(t, {.size = 0.05});
    verify(mesh).or_throw();
    std::vector<double> x;
    std::vector<double> y;
    for (const Point p : mesh.nodes) {
        if (p.y == 0.0) x.push_back(p.x);
        if (p.x == 0.0) y.push_back(p.y);
    }
    const auto line = std::find(x.begin(), x.end(), 0.3);
    REQUIRE(line != x.end());
    CHECK(*(line + 1) - *line <= 0.004 + 1e-15);
    CHECK(*line - *(line - 1) <= 0.004 + 1e-15);
    CHECK(std::count(x.begin(), x.end(), 0.01) == 1);
    CHECK(std::count(y.begin(), y.end(), 0.05) == 1);
    CHECK(std::count_if(y.begin(), y.end(), [](double v) { return v > 0.6 + 1e-9 && v < 0.9 - 1e-9; }) == 6);
}

TEST_CASE("nodes of straight cells lie on the lattice to the last digits, rows from below") {
    Tiles t;
    t.add("plate", {0.1, -0.3}, {0.7, 0.2});
    const auto mesh = tiles<Quadrilateral<3>>(t, {.size = 0.2});
    for (std::size_t n = 1; n < mesh.nodes.size(); ++n) {
        const Point a = mesh.nodes[n - 1];
        const Point b = mesh.nodes[n];
        CHECK((b.y > a.y || (b.y == a.y && b.x > a.x)));
    }
}

TEST_CASE("in r-z the axis is no face, a bore is") {
    Tiles solid;
    solid.add("rod", {0.0, 0.0}, {0.02, 0.1});
    const auto rod = tiles<Quadrilateral<1>>(solid, {.size = 0.01}, Cylindrical{});
    CHECK(rod.frame.power() == 1);
    CHECK(rod.find_face("left") == -1);
    CHECK(rod.find_face("right") >= 0);
    Tiles bored;
    bored.add("tube", {0.01, 0.0}, {0.02, 0.1});
    CHECK(tiles<Quadrilateral<1>>(bored, {.size = 0.01}, Cylindrical{}).find_face("left") >= 0);
    CHECK(tiles<Quadrilateral<1>>(solid, {.size = 0.01}).find_face("left") >= 0);
    solid.face("axis", {0.0, 0.0}, {0.0, 0.1});
    check_refused([&] { tiles<Quadrilateral<1>>(solid, {.size = 0.01}, Cylindrical{}); }, ErrorCode::bad_geometry,
                  "axis", "the axis r = 0 has no area");
}

TEST_CASE("drawings that cannot be meshed are refused by name, value and remedy") {
    using E = Quadrilateral<1>;
    constexpr double nan = std::numeric_limits<double>::quiet_NaN();
    const TilesOptions coarse{.size = 0.5};
    const auto plate = [] {
        Tiles t;
        t.add("plate", {0.0, 0.0}, {1.0, 1.0});
        return t;
    };
    check_refused([&] { tiles<E>(Tiles{}, coarse); }, ErrorCode::missing, "tiles", "add(");
    check_refused([&] { tiles<E>(plate()); }, ErrorCode::missing, "size", "give .size");
    check_refused([&] { Tiles{}.add("", {0, 0}, {1, 1}); }, ErrorCode::bad_name, "", "region name");
    check_refused([&] { Tiles{}.add("a", {0, 0}, {0, 1}); }, ErrorCode::bad_geometry, "a", "has no area");
    check_refused([&] { Tiles{}.add("a", {0, nan}, {1, 1}); }, ErrorCode::bad_value, "a", "not finite");
    check_refused(
        [&] {
            Tiles{}.cut({0, 0}, {1, 0}, "hole");
        },
        ErrorCode::bad_geometry, "hole", "two opposite corners");
    check_refused([&] { Tiles{}.face("", {0, 0}, {1, 0}); }, ErrorCode::bad_name, "", "no name");
    check_refused([&] { Tiles{}.face("f", {0, 0}, {1, 1}); }, ErrorCode::bad_geometry, "f", "along x or along y");
    check_refused([&] { Tiles{}.face("f", {0, 0}, {0, 0}); }, ErrorCode::bad_geometry, "f", "along x or along y");
    check_refused([&] { Tiles{}.face("f", {0, 0}, {nan, 0}); }, ErrorCode::bad_value, "f", "not finite");
    check_refused(
        [&] {
            tiles<E>(plate().face("f", {0, 0.5}, {1, 0.5}), coarse);
        },
        ErrorCode::bad_geometry, "f", "meets no edge of the body");
    check_refused(
        [&] {
            tiles<E>(plate().face("f", {0, 3}, {1, 3}), coarse);
        },
        ErrorCode::bad_geometry, "f", "meets no edge of the body");
    check_refused(
        [&] {
            tiles<E>(plate().cut({2, 2}, {3, 3}, "hole"), coarse);
        },
        ErrorCode::bad_geometry, "hole", "removes nothing");
    check_refused(
        [&] {
            tiles<E>(plate().cut({-1, -1}, {2, 2}), coarse);
        },
        ErrorCode::bad_geometry, "tiles", "leave nothing");
    check_refused(
        [&] {
            tiles<E>(plate().add("cover", {0, 0}, {1, 1}), coarse);
        },
        ErrorCode::unused, "plate", "change the order");
    check_refused([&] { tiles<E>(plate(), coarse, Spherical{}); }, ErrorCode::wrong_dimension, "tiles",
                  "Cylindrical (r-z)");
    check_refused([&] { tiles<E>(plate(), coarse, Planar{.depth = 0.0}); }, ErrorCode::bad_value, "tiles", "depth = 0");
    check_refused(
        [&] {
            tiles<E>(Tiles{}.add("a", {-1, 0}, {1, 1}), coarse, Cylindrical{});
        },
        ErrorCode::bad_geometry, "tiles", "r >= 0");
    check_refused([&] { tiles<Triangle<3>>(plate(), {.size = 2e-5}); }, ErrorCode::too_large, "tiles", "larger");
    check_refused([&] { tiles<E>(plate(), {.size = 1e-5}); }, ErrorCode::too_large, "tiles", "larger");
    check_refused([&] { tiles<E>(plate().finer_x({.at = 4.0, .size = 0.1}), coarse); }, ErrorCode::outside,
                  "finer_x: at", "outside the body");
}
