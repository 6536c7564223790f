// The mesh of a 1D stack.

#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/base/error.hpp>
#include <tepor/describe/parameter.hpp>
#include <tepor/element/map.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/archetypes.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using test::check_refused;

namespace {

const std::vector<Layer> wall{{.region = "working lining", .thickness = 0.230, .cells = 8},
                              {.region = "backing", .thickness = 0.115, .cells = 6, .grading = finer_at_both_ends(3.0)},
                              {.region = "casing", .thickness = 0.006}};

/// A cell law with its two end nodes and no shape functions.
struct TwoEnds {
    static constexpr int dim = 1;
    static constexpr int order = 1;
    static constexpr int nodes = 2;
    static constexpr int sides = 2;
    static constexpr CellShape shape_of_cell = CellShape::segment;
};

} // namespace

TEST_CASE_TEMPLATE("layers fill the stack from left to right without gap or overlap", E, Segment<1>, Segment<2>,
                   Segment<3>, test::BareSegment) {
    const Mesh<E> mesh = layers<E>(wall, Planar{.area = 2.0}, {.start = -0.1});
    verify(mesh).or_throw();
    CHECK(mesh.cell_count() == 15);
    CHECK(mesh.node_count() == 15 * E::order + 1);
    CHECK(mesh.frame.factor(1) == 2.0);
    double x = -0.1;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        CAPTURE(c);
        const Id* ids = mesh.cell(c);
        CHECK(std::abs(mesh.nodes[static_cast<std::size_t>(ids[0])].x - x) <= 1e-16);
        const double right = mesh.nodes[static_cast<std::size_t>(ids[1])].x;
        CHECK(right > x);
        for (int i = 0; i < E::nodes; ++i) {
            const double at = mesh.nodes[static_cast<std::size_t>(ids[i])].x;
            CHECK(std::abs(at - (x + (right - x) * E::reference_node(i)[0])) <= 1e-15);
        }
        x = right;
    }
    CHECK(std::abs(x - (-0.1 + 0.230 + 0.115 + 0.006)) <= 1e-15);
}

TEST_CASE("nodes are numbered from left to right, inner nodes included") {
    const auto mesh = layers<Segment<3>>(wall);
    for (std::size_t n = 1; n < mesh.nodes.size(); ++n) CHECK(mesh.nodes[n].x > mesh.nodes[n - 1].x);
}

TEST_CASE("each cell belongs to the region of its layer and borders lie at the sums of thickness") {
    const auto mesh = layers<Segment<2>>(wall);
    REQUIRE(mesh.region_names.size() == 3);
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const auto region = static_cast<std::size_t>(mesh.region[static_cast<std::size_t>(c)]);
        CHECK(mesh.region_names[region] == (c < 8 ? "working lining" : c < 14 ? "backing" : "casing"));
        CHECK(mesh.stack.layer_of_cell[static_cast<std::size_t>(c)] == static_cast<Id>(region));
    }
    CHECK(mesh.nodes[16].x == 0.230);
    CHECK(mesh.nodes[28].x == 0.230 + 0.115);
    CHECK(mesh.nodes[30].x == 0.230 + 0.115 + 0.006);
}

TEST_CASE("two layers of one name are one region") {
    const auto mesh = layers<Segment<1>>({{.region = "steel", .thickness = 0.01},
                                          {.region = "wool", .thickness = 0.10, .cells = 4},
                                          {.region = "steel", .thickness = 0.01}});
    CHECK(mesh.region_names.size() == 2);
    CHECK(mesh.region.front() == mesh.region.back());
}

TEST_CASE("the faces are the left end of the first cell and the right end of the last") {
    const auto mesh = layers<Segment<2>>(wall);
    REQUIRE(mesh.find_face("inner") == 0);
    REQUIRE(mesh.find_face("outer") == 1);
    CHECK(mesh.faces[0].sides == std::vector<CellSide>{{0, 0}});
    CHECK(mesh.faces[1].sides == std::vector<CellSide>{{14, 1}});
}

TEST_CASE("a solid centre has no inner face, a slab that starts at 0 and a bored cylinder do") {
    const std::vector<Layer> one{{.region = "fuel", .thickness = 0.005, .cells = 4}};
    CHECK(layers<Segment<1>>(one, Cylindrical{.length = 1.0}).find_face("inner") == -1);
    CHECK(layers<Segment<1>>(one, Spherical{}).find_face("inner") == -1);
    CHECK(layers<Segment<1>>(one, Spherical{}).find_face("outer") >= 0);
    CHECK(layers<Segment<1>>(one, Planar{}).find_face("inner") >= 0);
    CHECK(layers<Segment<1>>(one, Cylindrical{}, {.start = 0.001}).find_face("inner") >= 0);
}

TEST_CASE("a parameter as thickness is kept, and moving the nodes equals meshing anew to the last bit") {
    const Parameter backing("backing thickness", 0.115);
    const Parameter bore("bore", 0.2);
    std::vector<Layer> stack = wall;
    stack[1].thickness = backing;
    auto mesh = layers<Segment<3>>(stack, Cylindrical{.length = 3.0}, {.start = bore});
    REQUIRE(mesh.stack.given());
    REQUIRE(mesh.stack.layer_count() == 3);
    REQUIRE(mesh.stack.thickness[1].parameter() != nullptr);
    CHECK(*mesh.stack.thickness[1].parameter() == backing);
    CHECK(mesh.stack.thickness[0].parameter() == nullptr);
    REQUIRE(mesh.stack.start.parameter() != nullptr);
    CHECK(*mesh.stack.start.parameter() == bore);

    const double thickness[] = {0.230, 0.171, 0.006};
    detail::place_nodes(mesh.stack, 0.31, thickness, mesh.nodes.data());
    stack[1].thickness = 0.171;
    const auto anew = layers<Segment<3>>(stack, Cylindrical{.length = 3.0}, {.start = 0.31});
    CHECK(mesh.nodes == anew.nodes);
    CHECK(mesh.cells == anew.cells);
}

TEST_CASE_TEMPLATE("a refined stack moves with its parameters as the stack it came from", E, Segment<1>, Segment<2>,
                   Segment<3>) {
    auto fine = refined(refined(layers<E>(wall, Planar{}, {.start = 0.5})));
    REQUIRE(fine.stack.given());
    CHECK(fine.stack.layer_of_cell.size() == fine.region.size());
    const double as_made[] = {0.230, 0.115, 0.006};
    const auto before = fine.nodes;
    detail::place_nodes(fine.stack, 0.5, as_made, fine.nodes.data());
    for (std::size_t n = 0; n < before.size(); ++n) CHECK(distance(before[n], fine.nodes[n]) <= 1e-15);
    const double moved[] = {0.1, 0.3, 0.02};
    auto coarse = layers<E>(wall, Planar{}, {.start = 0.5});
    detail::place_nodes(coarse.stack, 0.25, moved, coarse.nodes.data());
    const auto expected = refined(refined(coarse));
    detail::place_nodes(fine.stack, 0.25, moved, fine.nodes.data());
    for (std::size_t n = 0; n < before.size(); ++n) CHECK(distance(expected.nodes[n], fine.nodes[n]) <= 1e-15);
}

TEST_CASE("a node's place says how it moves with each thickness") {
    auto mesh = layers<Segment<2>>(wall);
    const auto before = mesh.nodes;
    const double h = 1.0 / 1024.0;
    for (Index l = 0; l < 3; ++l) {
        double thickness[] = {0.230, 0.115, 0.006};
        thickness[l] += h;
        detail::place_nodes(mesh.stack, 0.0, thickness, mesh.nodes.data());
        for (std::size_t n = 0; n < before.size(); ++n)
            CHECK(std::abs((mesh.nodes[n].x - before[n].x) / h - mesh.stack.place[n].slope_by_thickness(l)) <= 1e-12);
    }
}

TEST_CASE("a place between two nodes is in their layer, however the border is written") {
    const auto is = [](StackPlace p, Id layer, double fraction) {
        return p.layer == layer && std::abs(p.fraction - fraction) <= 1e-16;
    };
    CHECK(is(between({1, 0.2}, {1, 0.6}, 0.25), 1, 0.3));
    CHECK(is(between({0, 1.0}, {1, 0.5}, 0.5), 1, 0.25));
    CHECK(is(between({0, 0.5}, {1, 0.0}, 0.5), 0, 0.75));
    CHECK(is(between({1, 0.5}, {0, 1.0}, 0.5), 1, 0.25));
    CHECK(is(between({1, 0.0}, {0, 0.5}, 0.5), 0, 0.75));
    CHECK(is(between({0, 1.0}, {1, 1.0}, 0.5), 1, 0.5));
}

TEST_CASE("a cell law with two end nodes and no shape functions can be meshed") {
    const auto mesh = layers<TwoEnds>(wall);
    CHECK(mesh.node_count() == 16);
    CHECK(mesh.cell(14)[1] == 15);
}

TEST_CASE("layers that cannot be meshed are refused by name, value and remedy") {
    using E = Segment<1>;
    constexpr double nan = std::numeric_limits<double>::quiet_NaN();
    const auto one = [](Layer layer) { return std::vector<Layer>{std::move(layer)}; };
    check_refused([] { layers<E>(std::vector<Layer>{}); }, ErrorCode::missing, "layers", "at least one");
    check_refused([&] { layers<E>(one({.region = "", .thickness = 1.0})); }, ErrorCode::bad_name, "", ".region");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = 0.0})); }, ErrorCode::bad_value, "a",
                  "thickness = 0 m, expected > 0");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = -0.1})); }, ErrorCode::bad_value, "a", "-0.1 m");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = nan})); }, ErrorCode::bad_value, "a", "thickness");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = 1.0, .cells = 0})); }, ErrorCode::bad_value, "a",
                  "expected at least 1");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = 1.0, .cells = 3, .grading = 0.0})); },
                  ErrorCode::bad_value, "a", "grading");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = 1.0, .grading = nan})); }, ErrorCode::bad_value, "a",
                  "grading");
    check_refused([&] { layers<E>(wall, Cylindrical{}, {.start = -0.01}); }, ErrorCode::bad_value, "layers",
                  "a radius >= 0");
    check_refused([&] { layers<E>(wall, Planar{}, {.start = nan}); }, ErrorCode::bad_value, "layers", "start");
    check_refused([&] { layers<E>(wall, Planar{.area = 0.0}); }, ErrorCode::bad_value, "layers", "area = 0");
    check_refused([&] { layers<E>(wall, Cylindrical{.length = -2.0}); }, ErrorCode::bad_value, "layers", "length = -2");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = 1.0, .cells = 3000000000})); }, ErrorCode::too_large,
                  "a", "fewer cells");
    check_refused([&] { layers<E>(one({.region = "a", .thickness = 1e-9, .cells = 100}), Planar{}, {.start = 1e6}); },
                  ErrorCode::bad_value, "a", "too thin");
}
