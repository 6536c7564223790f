// The map of a cell and its inverse.

#include <array>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/map.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/quadrature/rules.hpp>
#include <tests/support/archetypes.hpp>
#include <tests/support/serendipity.hpp>

using namespace tepor;

namespace {

/// A cell whose nodes follow a smooth bend of the reference cell, away from the origin.
template <class E>
std::array<Point, static_cast<std::size_t>(E::nodes)> bent_cell(double bend) {
    std::array<Point, static_cast<std::size_t>(E::nodes)> x{};
    for (int i = 0; i < E::nodes; ++i) {
        const auto r = E::reference_node(i);
        if constexpr (E::dim == 1)
            x[static_cast<std::size_t>(i)] = {5.0 + 0.2 * r[0] + bend * 0.05 * r[0] * r[0], 0.0};
        else
            x[static_cast<std::size_t>(i)] = {5.0 + 0.3 * r[0] + 0.1 * r[1] + bend * 0.05 * r[0] * r[1],
                                              -2.0 - 0.05 * r[0] + 0.2 * r[1] + bend * 0.04 * r[0] * r[0]};
    }
    return x;
}

} // namespace

#define MAPPED                                                                                                         \
    Segment<1>, Segment<2>, Segment<3>, Triangle<1>, Triangle<2>, Triangle<3>, Quadrilateral<1>, Quadrilateral<2>,     \
        Quadrilateral<3>, test::BareSegment, test::BareTriangle, test::Serendipity8

TEST_CASE_TEMPLATE("the inverse map returns the reference point of every place in a bent cell", E, MAPPED) {
    const auto x = bent_cell<E>(1.0);
    const auto rule = rule_for<E>(5);
    for (Index q = 0; q < rule.size(); ++q) {
        const auto found = inverse_map<E>(x, place<E>(x, rule.point(q)));
        CHECK(found.converged);
        CHECK((found.xi - rule.point(q)).norm() <= 1e-12);
    }
    for (int i = 0; i < E::nodes; ++i) {
        const auto found = inverse_map<E>(x, x[static_cast<std::size_t>(i)]);
        CHECK(found.converged);
        CHECK((found.xi - E::reference_node(i)).norm() <= 1e-12);
    }
}

TEST_CASE_TEMPLATE("the inverse map is Newton's: one step on an affine cell, a handful on a bent one", E, MAPPED) {
    const auto rule = rule_for<E>(3);
    for (Index q = 0; q < rule.size(); ++q) {
        const auto affine = bent_cell<E>(0.0);
        CHECK(inverse_map<E>(affine, place<E>(affine, rule.point(q))).steps <= 2);
        const auto bent = bent_cell<E>(1.0);
        CHECK(inverse_map<E>(bent, place<E>(bent, rule.point(q))).steps <= 7);
    }
}

TEST_CASE_TEMPLATE("the Jacobian is the derivative of the place", E, MAPPED) {
    const auto x = bent_cell<E>(1.0);
    const auto rule = rule_for<E>(3);
    const double h = 1e-5;
    for (Index q = 0; q < rule.size(); ++q) {
        const auto j = jacobian<E>(x, rule.point(q));
        for (int d = 0; d < E::dim; ++d) {
            typename E::point up = rule.point(q);
            typename E::point down = up;
            up[d] += h;
            down[d] -= h;
            const Point slope = (0.5 / h) * (place<E>(x, up) - place<E>(x, down));
            CHECK(std::abs(j(0, d) - slope.x) <= 1e-9);
            if constexpr (E::dim == 2) CHECK(std::abs(j(1, d) - slope.y) <= 1e-9);
        }
        CHECK(determinant<E::dim>(j) > 0.0);
    }
}

TEST_CASE_TEMPLATE("a place outside is told from one inside", E, MAPPED) {
    const auto x = bent_cell<E>(0.0);
    typename E::point out = E::point::Constant(0.5);
    out[0] = 1.2;
    const auto found = inverse_map<E>(x, place<E>(x, out));
    CHECK(found.converged);
    CHECK(outside_by<E>(found.xi) > 0.19);
    const auto rule = rule_for<E>(2);
    CHECK(outside_by<E>(rule.point(0)) < 0.0);
}

TEST_CASE("a place far outside a bent cell is given up, not answered wrongly") {
    const auto x = bent_cell<Quadrilateral<2>>(1.0);
    const auto found = inverse_map<Quadrilateral<2>>(x, Point{500.0, 40.0});
    CHECK((!found.converged || outside_by<Quadrilateral<2>>(found.xi) > 0.5));
}

TEST_CASE("a cell folded onto a line is reported as not invertible") {
    const std::array<Point, 3> flat{Point{0.0, 0.0}, Point{1.0, 0.0}, Point{2.0, 0.0}};
    CHECK_FALSE(inverse_map<Triangle<1>>(flat, Point{0.5, 0.1}).converged);
}

TEST_CASE("the area of a bent cell is the integral of the determinant") {
    // The sides of a six-node triangle with one bent side: area by the exact formula for a parabolic segment, 2/3 chord x rise.
    const double rise = 0.1;
    std::array<Point, 6> x{Point{0, 0}, Point{1, 0}, Point{0, 1}, Point{0.5, -rise}, Point{0.5, 0.5}, Point{0, 0.5}};
    const auto rule = rule_for<Triangle<2>>(4);
    double area = 0.0;
    for (Index q = 0; q < rule.size(); ++q)
        area += rule.weight(q) * determinant<2>(jacobian<Triangle<2>>(x, rule.point(q)));
    CHECK(std::abs(area - (0.5 + 2.0 / 3.0 * rise)) <= 1e-15);
}
