// Uniform refinement keeps measure, regions, faces and curves, for every element type.

#include <doctest/doctest.h>
#include <tepor/mesh/refine.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/meshes.hpp>

using namespace tepor;

TEST_CASE_TEMPLATE("a refined mesh is sound and has the same regions, faces and size", E, Segment<1>, Segment<2>,
                   Segment<3>, Triangle<1>, Triangle<2>, Triangle<3>, Quadrilateral<1>, Quadrilateral<2>,
                   Quadrilateral<3>) {
    const Mesh<E> mesh = test::unit_mesh<E>(5);
    REQUIRE(verify(mesh).problem == "");
    const Mesh<E> fine = refined(refined(mesh));
    CHECK(verify(fine).problem == "");
    const Index children = E::dim == 1 ? 2 : 4;
    CHECK(fine.cell_count() == mesh.cell_count() * children * children);
    CHECK(fine.region_names == mesh.region_names);
    for (Index r = 0; r < 2; ++r) CHECK(std::abs(test::area_of(fine, r) - test::area_of(mesh, r)) <= 1e-14);
    REQUIRE(fine.faces.size() == mesh.faces.size());
    for (std::size_t f = 0; f < mesh.faces.size(); ++f) {
        CHECK(fine.faces[f].name == mesh.faces[f].name);
        CHECK(fine.faces[f].sides.size() == mesh.faces[f].sides.size() * (E::dim == 1 ? 1U : 4U));
        const auto& kind = detail::cell_kind<E>();
        for (CellSide s : fine.faces[f].sides)
            for (int j = 0; j < kind.side_nodes; ++j) {
                const Point p = fine.nodes[detail::as_size(fine.cell(s.cell)[kind.side_node(s.side, j)])];
                if (fine.faces[f].name == "bottom") CHECK(std::abs(p.y) <= 1e-14);
                if (fine.faces[f].name == "right side") CHECK(std::abs(p.x - 1.0) <= 1e-14);
                if (fine.faces[f].name == "left end") CHECK(std::abs(p.x) <= 1e-14);
            }
    }
    // The number of nodes of a full lattice.
    const Index width = 20 * E::order + 1;
    CHECK(fine.node_count() == (E::dim == 1 ? width : width * width));
}

TEST_CASE_TEMPLATE("refining a disc puts every rim node on the true circle and its area converges with the cell order",
                   E, Triangle<1>, Triangle<2>, Triangle<3>) {
    const double r = 0.7;
    Mesh<E> mesh = test::disc_mesh<E>(8, r, {2.0, -1.0});
    REQUIRE(verify(mesh).problem == "");
    double previous = std::abs(test::area_of(mesh) - pi * r * r);
    for (int level = 0; level < 3; ++level) {
        mesh = refined(mesh);
        CAPTURE(level);
        REQUIRE(verify(mesh).problem == ""); // also holds rim nodes to their arc
        CHECK(mesh.curved.size() == mesh.faces[0].sides.size());
        const double error = std::abs(test::area_of(mesh) - pi * r * r);
        // Area of a polynomial arc of degree P: order 2 for chords, 4 for degree 2 and for degree 3 at equal angles.
        const double expected = E::order == 1 ? 4.0 : 16.0;
        CHECK(previous / error >= 0.9 * expected);
        previous = error;
    }
    // The rim stays within 1e-9 relative of the exact area for curved cells and the sum of chord segments for straight ones.
    const double chords = 0.5 * 64.0 * r * r * std::sin(2.0 * pi / 64.0);
    if (E::order == 1) CHECK(std::abs(test::area_of(mesh) - chords) <= 1e-13);
    if (E::order > 1) CHECK(previous <= 2e-6);
}

TEST_CASE("children of a triangle stand in the place of their parent") {
    const auto mesh = test::unit_mesh<Triangle<2>>(3);
    const auto fine = refined(mesh);
    for (Index c = 0; c < fine.cell_count(); ++c) {
        Point middle;
        for (int k = 0; k < 3; ++k) middle = middle + (1.0 / 3.0) * fine.nodes[detail::as_size(fine.cell(c)[k])];
        const Id* parent = mesh.cell(c / 4);
        for (int k = 0; k < 3; ++k) {
            const Point a = mesh.nodes[detail::as_size(parent[k])];
            const Point b = mesh.nodes[detail::as_size(parent[(k + 1) % 3])];
            CHECK(cross(b - a, middle - a) > 0.0);
        }
        CHECK(fine.region[detail::as_size(c)] == mesh.region[detail::as_size(c / 4)]);
    }
}
