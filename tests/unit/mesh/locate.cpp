// Point location in every element type.

#include <doctest/doctest.h>
#include <random>
#include <tepor/mesh/locate.hpp>
#include <tepor/mesh/refine.hpp>
#include <tests/support/meshes.hpp>
#include <tests/support/scale.hpp>

using namespace tepor;

namespace {
template <class E>
Point back(const Mesh<E>& mesh, const Location& at) {
    Point x[detail::max_cell_nodes];
    detail::cell_points(mesh, at.cell, x);
    return detail::place_in_cell(detail::cell_kind<E>(), x, at.reference);
}
} // namespace

TEST_CASE_TEMPLATE("random places are found in a cell that maps back to them", E, Segment<1>, Segment<2>, Segment<3>,
                   Triangle<1>, Triangle<2>, Triangle<3>, Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>) {
    const Mesh<E> mesh = test::unit_mesh<E>(9);
    const Locator locator(mesh);
    std::mt19937 random(7);
    std::uniform_real_distribution<double> unit(0.0, 1.0);
    for (long i = 0; i < test::scaled(1000, 100); ++i) {
        const Point p{unit(random), E::dim == 1 ? 0.0 : unit(random)};
        const Location at = locator.find(p);
        REQUIRE(at);
        CHECK(distance(back(mesh, at), p) <= 1e-12);
        CHECK(at.reference.x >= -1e-9);
        CHECK(at.reference.x <= 1.0 + 1e-9);
    }
    CHECK_FALSE(locator.find({-0.01, 0.5}));
    CHECK_FALSE(locator.find({1.01, 0.5}));
    if (E::dim == 2) CHECK_FALSE(locator.find({0.5, 1.0 + 1e-8}));
    CHECK(locator.find({1.0 + 1e-10, 0.5}));
    CHECK_FALSE(locator.find({std::nan(""), 0.5}));
}

TEST_CASE_TEMPLATE("a disc is found to its true rim and no further", E, Triangle<1>, Triangle<2>, Triangle<3>) {
    const double r = 0.3;
    const Mesh<E> mesh = refined(test::disc_mesh<E>(9, r, {0.1, 0.2}));
    const Locator locator(mesh);
    std::mt19937 random(3);
    std::uniform_real_distribution<double> turn(0.0, 2.0 * pi);
    std::uniform_real_distribution<double> unit(0.0, 1.0);
    for (long i = 0; i < test::scaled(1000, 100); ++i) {
        const double a = turn(random);
        const double s = i % 2 == 0 ? r : r * std::sqrt(unit(random));
        const Point p{0.1 + s * std::cos(a), 0.2 + s * std::sin(a)};
        const Location at = locator.find(p);
        CAPTURE(a);
        CAPTURE(s);
        REQUIRE(at);
        CHECK(distance(back(mesh, at), p) <= 1e-11);
        CHECK_FALSE(locator.find({0.1 + 1.0001 * r * std::cos(a), 0.2 + 1.0001 * r * std::sin(a)}));
    }
}

TEST_CASE("a vertex belongs to all cells around it and to the cell of lowest number first") {
    const auto mesh = test::unit_mesh<Quadrilateral<1>>(4);
    const Locator locator(mesh);
    std::vector<Location> all;
    locator.find_all(mesh.nodes[12], all); // the middle vertex of 5 x 5
    REQUIRE(all.size() == 4);
    CHECK(all.front().cell == 5);
    CHECK(all.back().cell == 10);
    CHECK(locator.find(mesh.nodes[12]).cell == 5);
    CHECK(locator.find_in(1, mesh.nodes[12]).cell == 6);
    CHECK_FALSE(locator.find_in(1, {0.01, 0.01}));
}
