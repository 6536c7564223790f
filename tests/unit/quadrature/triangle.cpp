// Rules on the triangle.

#include <algorithm>
#include <array>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/quadrature/rules.hpp>
#include <tests/support/measured_degree.hpp>

using namespace tepor;

namespace {

double factorial(int n) {
    return std::tgamma(n + 1.0);
}

/// The rule has a point with the same weight at (x, y).
bool has_point(const Rule<2>& rule, double x, double y, double weight) {
    for (Index q = 0; q < rule.size(); ++q)
        if (std::abs(rule.point(q)[0] - x) < 4e-16 && std::abs(rule.point(q)[1] - y) < 4e-16 &&
            rule.weight(q) == weight)
            return true;
    return false;
}

} // namespace

TEST_CASE("each triangle rule is exact to its declared degree and no further") {
    for (int asked = 0; asked <= 24; ++asked) {
        CAPTURE(asked);
        const auto rule = triangle_rule(asked);
        CHECK(rule.degree >= asked);
        CHECK(test::measured_degree(rule, true) == rule.degree);
    }
}

TEST_CASE("each collapsed triangle rule is exact to its declared degree and no further") {
    for (int asked = 0; asked <= 24; ++asked) {
        CAPTURE(asked);
        const auto rule = collapsed_triangle_rule(asked);
        CHECK(rule.degree >= asked);
        CHECK(test::measured_degree(rule, true) == rule.degree);
    }
}

TEST_CASE("triangle rules integrate x^i y^j to i! j! / (i + j + 2)!") {
    for (int degree = 1; degree <= 20; ++degree) {
        const auto rule = triangle_rule(degree);
        for (int i = 0; i <= degree; ++i) {
            const int j = degree - i;
            CAPTURE(degree);
            CAPTURE(i);
            double sum = 0.0;
            for (Index q = 0; q < rule.size(); ++q)
                sum += rule.weight(q) * std::pow(rule.point(q)[0], i) * std::pow(rule.point(q)[1], j);
            const double exact = factorial(i) * factorial(j) / factorial(degree + 2);
            CHECK(std::abs(sum - exact) <= 1e-13 * exact);
        }
    }
}

TEST_CASE("triangle rules have positive weights and points inside") {
    for (int degree = 1; degree <= 20; ++degree) {
        CAPTURE(degree);
        const auto rule = triangle_rule(degree);
        for (Index q = 0; q < rule.size(); ++q) {
            CHECK(rule.weight(q) > 0.0);
            CHECK(rule.point(q)[0] > 0.0);
            CHECK(rule.point(q)[1] > 0.0);
            CHECK(rule.point(q)[0] + rule.point(q)[1] < 1.0);
        }
    }
}

TEST_CASE("triangle rules up to degree 12 go over into themselves when the vertices change places") {
    for (int degree = 1; degree <= 12; ++degree) {
        CAPTURE(degree);
        const auto rule = triangle_rule(degree);
        for (Index q = 0; q < rule.size(); ++q) {
            const double x = rule.point(q)[0];
            const double y = rule.point(q)[1];
            CHECK(has_point(rule, y, x, rule.weight(q)));
            CHECK(has_point(rule, 1.0 - x - y, x, rule.weight(q)));
        }
    }
}

TEST_CASE("triangle rules have the published numbers of points") {
    // Source: D. A. Dunavant (1985), Table II.
    const std::array<Index, 13> points{1, 1, 3, 6, 6, 7, 12, 16, 16, 19, 25, 33, 33};
    for (int degree = 0; degree <= 12; ++degree)
        CHECK(triangle_rule(degree).size() == points[static_cast<std::size_t>(degree)]);
}

TEST_CASE("the seven-point triangle rule has its closed form") {
    // Source: A. H. Stroud (1971), T2:5-1: points (6 -+ sqrt 15) / 21, weights (155 -+ sqrt 15) / 1200.
    const auto rule = triangle_rule(5);
    const double root = std::sqrt(15.0);
    CHECK(has_point(rule, 1.0 / 3.0, 1.0 / 3.0, 0.5 * 0.225));
    for (const double sign : {-1.0, 1.0}) {
        const double place = (6.0 + sign * root) / 21.0;
        const double weight = 0.5 * (155.0 + sign * root) / 1200.0;
        bool found = false;
        for (Index q = 0; q < rule.size(); ++q)
            found = found || (std::abs(rule.point(q)[0] - place) < 1e-15 &&
                              std::abs(rule.point(q)[1] - place) < 1e-15 && std::abs(rule.weight(q) - weight) < 1e-16);
        CHECK(found);
    }
}
