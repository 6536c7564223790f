// Rules on the segment and the square.

#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/quadrature/rules.hpp>
#include <tests/support/measured_degree.hpp>

using namespace tepor;

TEST_CASE("each Gauss-Legendre rule is exact to its declared degree and no further") {
    for (int points = 1; points <= 24; ++points) {
        CAPTURE(points);
        const auto rule = gauss_legendre(points);
        CHECK(rule.size() == points);
        CHECK(rule.degree == 2 * points - 1);
        CHECK(test::measured_degree(rule) == rule.degree);
    }
}

TEST_CASE("a Gauss-Legendre rule has positive weights and ascending, mirrored points inside [0,1]") {
    for (const int points : {1, 2, 3, 4, 7, 16, 65, 200}) {
        CAPTURE(points);
        const auto rule = gauss_legendre(points);
        double previous = 0.0;
        for (Index q = 0; q < rule.size(); ++q) {
            CHECK(rule.weight(q) > 0.0);
            CHECK(rule.point(q)[0] > previous);
            CHECK(rule.point(q)[0] < 1.0);
            CHECK(std::abs(rule.point(q)[0] + rule.point(rule.size() - 1 - q)[0] - 1.0) <= 2.3e-16);
            CHECK(rule.weight(q) == rule.weight(rule.size() - 1 - q));
            previous = rule.point(q)[0];
        }
    }
}

TEST_CASE("the five-point Gauss-Legendre rule has the published points and weights") {
    // Source: Abramowitz and Stegun, Handbook of Mathematical Functions (1964), table 25.4, n = 5, on [-1,1].
    const double x[] = {-0.906179845938664, -0.538469310105683, 0.0, 0.538469310105683, 0.906179845938664};
    const double w[] = {0.236926885056189, 0.478628670499366, 0.568888888888889, 0.478628670499366, 0.236926885056189};
    const auto rule = gauss_legendre(5);
    for (Index q = 0; q < 5; ++q) {
        CHECK(std::abs(2.0 * rule.point(q)[0] - 1.0 - x[q]) <= 6e-16);
        CHECK(std::abs(2.0 * rule.weight(q) - w[q]) <= 6e-16);
    }
}

TEST_CASE("each Gauss-Jacobi rule with weight 1 - x is exact to its declared degree and no further") {
    // The polynomials P_k^(1,0) are orthogonal to constants under this weight (DLMF 18.3).
    for (int points = 1; points <= 20; ++points) {
        CAPTURE(points);
        const auto rule = gauss_jacobi(points);
        REQUIRE(rule.size() == points);
        CHECK(rule.degree == 2 * points - 1);
        for (int degree = 0; degree <= 2 * points; ++degree) {
            CAPTURE(degree);
            double sum = 0.0;
            for (Index q = 0; q < rule.size(); ++q)
                sum += rule.weight(q) * test::jacobi(degree, 1.0, 2.0 * rule.point(q)[0] - 1.0);
            const double error = std::abs(sum - (degree == 0 ? 0.5 : 0.0));
            if (degree <= rule.degree)
                CHECK(error < 1e-13);
            else
                CHECK(error > 1e-3);
        }
    }
}

TEST_CASE("a Gauss-Jacobi rule has positive weights and ascending points inside [0,1]") {
    for (const int points : {1, 2, 5, 30, 100}) {
        CAPTURE(points);
        const auto rule = gauss_jacobi(points);
        double previous = 0.0;
        for (Index q = 0; q < rule.size(); ++q) {
            CHECK(rule.weight(q) > 0.0);
            CHECK(rule.point(q)[0] > previous);
            CHECK(rule.point(q)[0] < 1.0);
            previous = rule.point(q)[0];
        }
    }
}

TEST_CASE("line_rule gives the fewest points that reach the degree") {
    for (int degree = 0; degree <= 20; ++degree) {
        CAPTURE(degree);
        CHECK(line_rule(degree).degree >= degree);
        CHECK(line_rule(degree).degree <= degree + 1);
    }
    CHECK(line_rule(-3).size() == 1);
}

TEST_CASE("each square rule is exact to its declared degree in each coordinate and no further") {
    for (int points = 1; points <= 8; ++points) {
        CAPTURE(points);
        const auto rule = square_rule(points);
        CHECK(rule.size() == points * points);
        CHECK(test::measured_degree(rule) == rule.degree);
        for (Index q = 0; q < rule.size(); ++q) CHECK(rule.weight(q) > 0.0);
    }
}

TEST_CASE("a rule without points is refused and says how many it needs") {
    for (const int points : {0, -4}) {
        CAPTURE(points);
        try {
            (void)gauss_legendre(points);
            FAIL("no error");
        } catch (const Error& error) {
            CHECK(error.code() == ErrorCode::bad_value);
            CHECK(std::string(error.what()).find("at least 1") != std::string::npos);
        }
        CHECK_THROWS_AS((void)gauss_jacobi(points), Error);
        CHECK_THROWS_AS((void)square_rule(points), Error);
    }
}

TEST_CASE("a rule without points is exact to no degree") {
    CHECK(Rule<2>().size() == 0);
    CHECK(Rule<2>().degree == -1);
}
