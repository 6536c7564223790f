// verify() names the first broken invariant; mesh_from_arrays() refuses what verify() refuses.

#include <doctest/doctest.h>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/meshes.hpp>

using namespace tepor;

namespace {
bool says(const MeshReport& report, const std::string& words) {
    INFO(report.problem);
    const bool found = report.problem.find(words) != std::string::npos;
    CHECK(found);
    return found;
}

/// Two triangles on the unit square.
MeshArrays square() {
    MeshArrays arrays;
    arrays.nodes = {{0, 0}, {1, 0}, {1, 1}, {0, 1}};
    arrays.cells = {0, 1, 2, 0, 2, 3};
    return arrays;
}

void refuses(const MeshArrays& arrays, const std::string& words) {
    try {
        (void)mesh_from_arrays<Triangle<1>>(arrays);
        FAIL_CHECK("accepted: ", words);
    } catch (const Error& error) {
        CHECK(error.code() == ErrorCode::bad_mesh);
        INFO(std::string(error.what()));
        CHECK(std::string(error.what()).find(words) != std::string::npos);
    }
}
} // namespace

TEST_CASE("arrays that form a mesh are taken as they are") {
    const auto mesh = mesh_from_arrays<Triangle<1>>(square());
    CHECK(mesh.cell_count() == 2);
    CHECK(mesh.region_names == std::vector<std::string>{"body"});
    CHECK(mesh.region == std::vector<Id>{0, 0});
}

TEST_CASE("arrays that form no mesh are refused with the ids at fault") {
    auto arrays = square();
    arrays.cells = {0, 1, 2, 0, 3, 2};
    refuses(arrays, "cell 1 has Jacobian determinant -1, expected > 0; list its nodes counter-clockwise");
    arrays = square();
    arrays.cells = {0, 1, 2, 0, 2};
    refuses(arrays, "5 entries, expected a multiple of 3");
    arrays = square();
    arrays.cells[4] = 4;
    refuses(arrays, "cell 1 has node id 4, expected 0 to 3");
    arrays = square();
    arrays.cells[4] = 0;
    refuses(arrays, "cell 1 holds node 0 twice");
    arrays = square();
    arrays.nodes.push_back({2, 2});
    refuses(arrays, "node 4 at (2, 2) belongs to no cell");
    arrays = square();
    arrays.nodes.push_back({1, 1});
    arrays.cells[4] = 4;
    refuses(arrays, "nodes 2 and 4 lie at the same place (1, 1)");
    arrays = square();
    arrays.cells = {0, 1, 2, 0, 2, 3, 2, 0, 1};
    refuses(arrays, "cells 0 and 2 have the same vertices");
    arrays = square();
    arrays.nodes[2].x = std::nan("");
    refuses(arrays, "node 2 lies at");
    arrays = square();
    arrays.nodes[2] = {2, 0};
    arrays.cells = {0, 1, 2, 0, 2, 3};
    refuses(arrays, "its vertices lie on one line");
    arrays = square();
    arrays.nodes.push_back({0.5, 0.1});
    arrays.cells = {0, 1, 2, 0, 2, 3, 0, 1, 4};
    refuses(arrays, "overlap or one of them is inverted");
    arrays = square();
    arrays.nodes.push_back({2, 0});
    arrays.nodes.push_back({2, 0.5});
    arrays.nodes.push_back({1, 0.5});
    arrays.cells = {0, 1, 2, 0, 2, 3, 1, 4, 5, 1, 5, 6};
    refuses(arrays, "node 6 hangs on the side from node 1 to node 2 of cell 0");
    arrays = square();
    arrays.nodes.push_back({0.4, 0.5});
    arrays.nodes.push_back({3, 0.4});
    arrays.nodes.push_back({3, 0.6});
    arrays.cells = {0, 1, 2, 0, 2, 3, 4, 5, 6};
    refuses(arrays, "cross");
    arrays = square();
    arrays.faces = {{"left", {{1, 3}}}};
    refuses(arrays, "face \"left\" refers to side 3 of cell 1");
    arrays = square();
    arrays.faces = {{"left", {{1, 2}, {1, 2}}}};
    refuses(arrays, "face \"left\" holds side 2 of cell 1 twice");
    arrays = square();
    arrays.faces = {{"left", {{1, 2}}}, {"left", {}}};
    refuses(arrays, "two faces are named \"left\"");
    arrays = square();
    arrays.region = {0, 1};
    refuses(arrays, "cell 1 has region 1, expected 0 to 0");
    arrays = square();
    arrays.arcs = {{{0, 0}, 0.5}};
    arrays.curved = {{{0, 1}, 0}};
    refuses(arrays, "off its arc of radius 0.5 m");
    refuses(MeshArrays{}, "no cells");
}

TEST_CASE("overlaps that no pair of sides shows are found by the angles around a node") {
    // A fan that winds twice around its middle.
    MeshArrays arrays;
    arrays.nodes.push_back({0, 0});
    const int n = 10;
    for (int i = 0; i < n; ++i) {
        const double a = 4.0 * pi * i / n;
        const double r = i < 5 ? 1.0 : 1.5;
        arrays.nodes.push_back({r * std::cos(a), r * std::sin(a)});
        arrays.cells.insert(arrays.cells.end(), {0, i + 1, (i + 1) % n + 1});
    }
    refuses(arrays, "the cells around node 0 at (0, 0) fill 720 degrees");
}

TEST_CASE("curved cells are checked all over, not only at their vertices") {
    auto mesh = test::unit_mesh<Triangle<2>>(2);
    const Id middle = mesh.cell(0)[4]; // middle of the diagonal of the first square
    REQUIRE(verify(mesh));
    mesh.nodes[detail::as_size(middle)] = mesh.nodes[detail::as_size(mesh.cell(0)[1])] + Point{-0.02, 0.02};
    says(verify(mesh), "cell 0 has Jacobian determinant");
}

TEST_CASE("neighbours must share the inner nodes of their side") {
    auto mesh = test::unit_mesh<Triangle<3>>(2);
    REQUIRE(verify(mesh));
    std::swap(mesh.cells[7], mesh.cells[8]); // side 2 of cell 0 is the diagonal shared with cell 1
    const MeshReport report = verify(mesh);
    CHECK_FALSE(report);
    auto split = test::unit_mesh<Triangle<2>>(2);
    const Id shared = split.cell(0)[5];
    split.nodes.push_back(split.nodes[detail::as_size(shared)] + Point{1e-3, -1e-3});
    split.cells[5] = static_cast<Id>(split.nodes.size()) - 1;
    says(verify(split), "share a side but not its inner nodes");
}

TEST_CASE("a gap or an overlap between 1D cells is named with both nodes") {
    MeshArrays arrays;
    arrays.nodes = {{0, 0}, {1, 0}, {1.5, 0}, {2, 0}};
    arrays.cells = {0, 1, 2, 3};
    try {
        (void)mesh_from_arrays<Segment<1>>(arrays);
        FAIL_CHECK("accepted");
    } catch (const Error& error) {
        CHECK(std::string(error.what()).find("cell 0 ends at node 1, x = 1, and the next cell 1 begins at node 2") !=
              std::string::npos);
    }
    arrays.nodes = {{0, 0}, {1, 0}, {2, 0}};
    arrays.cells = {0, 2, 1, 2};
    CHECK_THROWS_AS((void)mesh_from_arrays<Segment<1>>(arrays), Error);
    arrays.cells = {0, 1, 2, 1};
    CHECK_THROWS_AS((void)mesh_from_arrays<Segment<1>>(arrays), Error);
    arrays.cells = {0, 1, 1, 2};
    CHECK(mesh_from_arrays<Segment<1>>(arrays).cell_count() == 2);
}
