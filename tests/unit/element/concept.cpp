// The Element contract, on every element of the library, on a bare one and on a user's own.

#include <array>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/base/dual.hpp>
#include <tepor/element/map.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/quadrature/rules.hpp>
#include <tests/support/archetypes.hpp>
#include <tests/support/serendipity.hpp>
#include <type_traits>
#include <vector>

using namespace tepor;

namespace {

/// Places inside, on the sides, at the nodes and a little outside the reference cell.
template <class E>
std::vector<typename E::point> sample_points() {
    std::vector<typename E::point> points;
    const auto rule = rule_for<E>(5);
    for (Index q = 0; q < rule.size(); ++q) points.push_back(rule.point(q));
    for (int i = 0; i < E::nodes; ++i) points.push_back(E::reference_node(i));
    for (int s = 0; s < E::sides; ++s) points.push_back(side_point<E>(s, 0.3));
    points.push_back(E::point::Constant(-0.1));
    return points;
}

/// Exact derivatives where the element offers its shape functions in any scalar, else central differences.
template <class E>
Eigen::Matrix<double, E::nodes, E::dim> independent_gradient(const typename E::point& xi) {
    constexpr auto dim = static_cast<std::size_t>(E::dim);
    Eigen::Matrix<double, E::nodes, E::dim> g;
    using D = Dual<E::dim>;
    if constexpr (requires(std::array<D, dim> x) { E::values(x); }) {
        std::array<D, dim> x;
        for (int d = 0; d < E::dim; ++d) x[static_cast<std::size_t>(d)] = D::variable(xi[d], d);
        const auto n = E::values(x);
        for (int i = 0; i < E::nodes; ++i)
            for (int d = 0; d < E::dim; ++d)
                g(i, d) = n[static_cast<std::size_t>(i)].slope[static_cast<std::size_t>(d)];
    } else {
        for (int d = 0; d < E::dim; ++d) {
            const double h = 1.0 / 1024.0; // exact for polynomials of degree 2 in each coordinate, and no rounding in h
            typename E::point up = xi;
            typename E::point down = xi;
            up[d] += h;
            down[d] -= h;
            g.col(d) = (E::shape(up) - E::shape(down)) / (2.0 * h);
        }
    }
    return g;
}

double monomial(const auto& xi, int i, int j) {
    double value = std::pow(xi[0], i);
    if constexpr (std::remove_cvref_t<decltype(xi)>::RowsAtCompileTime == 2) value *= std::pow(xi[1], j);
    return value;
}

/// The largest error in reproducing x^i y^j over the sample points.
template <class E>
double reproduction_error(int i, int j) {
    double worst = 0.0;
    for (const auto& xi : sample_points<E>()) {
        const auto n = E::shape(xi);
        double sum = 0.0;
        for (int a = 0; a < E::nodes; ++a) sum += n[a] * monomial(E::reference_node(a), i, j);
        worst = std::max(worst, std::abs(sum - monomial(xi, i, j)));
    }
    return worst;
}

/// A whole element but for its sides.
struct WithoutSides {
    enum : int { dim = 1, order = 1, nodes = 2 };
    using point = Eigen::Matrix<double, 1, 1>;
};

} // namespace

#define ALL_ELEMENTS                                                                                                   \
    Segment<1>, Segment<2>, Segment<3>, Triangle<1>, Triangle<2>, Triangle<3>, Quadrilateral<1>, Quadrilateral<2>,     \
        Quadrilateral<3>, test::BareSegment, test::BareTriangle, test::Serendipity8

TEST_CASE_TEMPLATE("the shape functions sum to one and their gradients to zero", E, ALL_ELEMENTS) {
    for (const auto& xi : sample_points<E>()) {
        CAPTURE(xi[0]);
        CHECK(std::abs(E::shape(xi).sum() - 1.0) <= 1e-14);
        CHECK(E::gradient(xi).colwise().sum().norm() <= 1e-13);
    }
}

TEST_CASE_TEMPLATE("shape function i is one at node i and zero at the others", E, ALL_ELEMENTS) {
    for (int i = 0; i < E::nodes; ++i) {
        const auto n = E::shape(E::reference_node(i));
        for (int j = 0; j < E::nodes; ++j) {
            CAPTURE(i);
            CAPTURE(j);
            CHECK(std::abs(n[j] - (i == j ? 1.0 : 0.0)) <= 1e-15);
        }
    }
}

TEST_CASE_TEMPLATE("the gradients are the derivatives of the shape functions", E, ALL_ELEMENTS) {
    for (const auto& xi : sample_points<E>()) {
        CAPTURE(xi[0]);
        const double error = (E::gradient(xi) - independent_gradient<E>(xi)).cwiseAbs().maxCoeff();
        CHECK(error <= 2e-13);
    }
}

TEST_CASE_TEMPLATE("polynomials up to the order are reproduced, and not all of the next", E, ALL_ELEMENTS) {
    double next = 0.0;
    for (int i = 0; i <= E::order + 1; ++i)
        for (int j = 0; i + j <= E::order + 1; ++j) {
            if (E::dim == 1 && j > 0) continue;
            CAPTURE(i);
            CAPTURE(j);
            if (i + j <= E::order)
                CHECK(reproduction_error<E>(i, j) <= 1e-14);
            else
                next = std::max(next, reproduction_error<E>(i, j));
        }
    CHECK(next > 1e-3);
}

TEST_CASE_TEMPLATE("on a side only its nodes count, and they count as in the side's own element", E, ALL_ELEMENTS) {
    if constexpr (E::dim == 1) {
        static_assert(std::is_same_v<typename E::Side, PointSide>);
        CHECK(E::reference_node(E::side_node(0, 0))[0] == 0.0);
        CHECK(E::reference_node(E::side_node(1, 0))[0] == 1.0);
    } else {
        using Side = typename E::Side;
        for (int s = 0; s < E::sides; ++s)
            for (const double t : {0.0, 0.1, 0.5, 0.85, 1.0}) {
                CAPTURE(s);
                CAPTURE(t);
                auto n = E::shape(side_point<E>(s, t));
                const auto m = Side::shape(typename Side::point(t));
                for (int j = 0; j < Side::nodes; ++j) {
                    CHECK(std::abs(n[E::side_node(s, j)] - m[j]) <= 1e-14);
                    n[E::side_node(s, j)] = 0.0;
                }
                CHECK(n.cwiseAbs().maxCoeff() <= 1e-14);
            }
    }
}

TEST_CASE_TEMPLATE("the nodes of a side stand where the side's own element has them, so neighbours agree", E,
                   ALL_ELEMENTS) {
    if constexpr (E::dim == 2) {
        using Side = typename E::Side;
        for (int s = 0; s < E::sides; ++s) {
            CHECK(E::side_node(s, 0) == s);
            CHECK(E::side_node(s, 1) == (s + 1) % E::sides);
            for (int j = 0; j < Side::nodes; ++j) {
                const double t = Side::reference_node(j)[0];
                CHECK((E::reference_node(E::side_node(s, j)) - side_point<E>(s, t)).norm() <= 1e-15);
                // The neighbour walks the side backwards: the mirrored place must be a node too.
                const int mirror = j == 0 ? 1 : j == 1 ? 0 : Side::nodes + 1 - j;
                CHECK(std::abs(Side::reference_node(mirror)[0] - (1.0 - t)) <= 1e-15);
            }
        }
    }
}

TEST_CASE_TEMPLATE("the vertices come first and run counter-clockwise with the cell on the left of each side", E,
                   ALL_ELEMENTS) {
    if constexpr (E::dim == 2) {
        typename E::point middle = E::point::Zero();
        for (int v = 0; v < E::sides; ++v) middle += E::reference_node(v) / E::sides;
        for (int s = 0; s < E::sides; ++s) {
            const typename E::point a = E::reference_node(s);
            const typename E::point along = E::reference_node((s + 1) % E::sides) - a;
            const typename E::point inward = middle - a;
            CHECK(along[0] * inward[1] - along[1] * inward[0] > 0.0);
        }
    } else {
        CHECK(E::reference_node(0)[0] == 0.0);
        CHECK(E::reference_node(1)[0] == 1.0);
    }
}

TEST_CASE_TEMPLATE("no two nodes share a place and none lies outside the cell", E, ALL_ELEMENTS) {
    for (int i = 0; i < E::nodes; ++i) {
        CHECK(outside_by<E>(E::reference_node(i)) <= 1e-15);
        for (int j = 0; j < i; ++j) CHECK((E::reference_node(i) - E::reference_node(j)).norm() > 0.1);
    }
}

TEST_CASE("a type that misses a member is not an Element") {
    static_assert(!Element<WithoutSides>);
    static_assert(!Element<int>);
    static_assert(!Element<PointSide>);
    CHECK(Element<Triangle<2>>);
}

TEST_CASE("the inner nodes of cubic cells stand in the documented order") {
    const auto is = [](const auto& p, double x, double y) { return std::abs(p[0] - x) + std::abs(p[1] - y) <= 1e-15; };
    const double third = 1.0 / 3.0;
    CHECK(is(Triangle<3>::reference_node(3), third, 0.0));
    CHECK(is(Triangle<3>::reference_node(6), third, 2 * third));
    CHECK(is(Triangle<3>::reference_node(7), 0.0, 2 * third));
    CHECK(is(Triangle<3>::reference_node(9), third, third));
    CHECK(is(Quadrilateral<3>::reference_node(6), 1.0, third));
    CHECK(is(Quadrilateral<3>::reference_node(8), 2 * third, 1.0));
    CHECK(is(Quadrilateral<3>::reference_node(11), 0.0, third));
    CHECK(is(Quadrilateral<3>::reference_node(13), 2 * third, third));
    CHECK(std::abs(Segment<3>::reference_node(2)[0] - third) <= 1e-16);
}
