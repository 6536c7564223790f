#pragma once
// The degree up to which a rule is exact, measured with orthogonal polynomials, whose integrals are zero.

#include <algorithm>
#include <cmath>
#include <tepor/quadrature/rule.hpp>

namespace tepor::test {

/// Jacobi polynomial P_n^(a,0) at t. Source: DLMF 18.9.2.
inline double jacobi(int n, double a, double t) {
    if (n == 0) return 1.0;
    double previous = 1.0;
    double current = 0.5 * (a + (a + 2.0) * t);
    for (int k = 1; k < n; ++k) {
        const double s = 2.0 * k + a;
        const double d = 2.0 * (k + 1.0) * (k + 1.0 + a) * s;
        const double next =
            ((s + 1.0) * ((s + 2.0) * s * t + a * a) * current - 2.0 * (k + a) * k * (s + 2.0) * previous) / d;
        previous = current;
        current = next;
    }
    return current;
}

/// Orthogonal polynomial (i, j) of total degree i + j on the triangle (0,0) (1,0) (0,1).
/// Source: T. Koornwinder, Two-variable analogues of the classical orthogonal polynomials (1975).
inline double on_triangle(int i, int j, double x, double y) {
    const double height = 1.0 - y; // points of rules lie inside, so it is not 0
    return jacobi(i, 0.0, 2.0 * x / height - 1.0) * std::pow(height, i) * jacobi(j, 2.0 * i + 1.0, 2.0 * y - 1.0);
}

/// Largest error of the rule over the orthogonal polynomials of exactly this degree (square: in one coordinate or both).
template <int Dim>
double error_at_degree(const Rule<Dim>& rule, int degree, bool triangle) {
    const auto integral = [&](auto f) {
        double sum = 0.0;
        for (Index q = 0; q < rule.size(); ++q) sum += rule.weight(q) * f(rule.point(q));
        return sum;
    };
    double worst = 0.0;
    if constexpr (Dim == 1) {
        worst = std::abs(integral([&](const auto& p) { return jacobi(degree, 0.0, 2.0 * p[0] - 1.0); }) -
                         (degree == 0 ? 1.0 : 0.0));
    } else {
        for (int i = 0; i <= degree; ++i)
            for (int j = 0; j <= degree; ++j) {
                if (triangle ? i + j != degree : std::max(i, j) != degree) continue;
                const double got = integral([&](const auto& p) {
                    return triangle ? on_triangle(i, j, p[0], p[1])
                                    : jacobi(i, 0.0, 2.0 * p[0] - 1.0) * jacobi(j, 0.0, 2.0 * p[1] - 1.0);
                });
                worst = std::max(worst, std::abs(got - (degree > 0 ? 0.0 : triangle ? 0.5 : 1.0)));
            }
    }
    return worst;
}

/// The largest degree up to which the rule is exact to rounding (1e-12); -1 when not even constants are.
template <int Dim>
int measured_degree(const Rule<Dim>& rule, bool triangle = false) {
    int degree = 0;
    while (degree < 200 && error_at_degree(rule, degree, triangle) < 1e-12) ++degree;
    return degree - 1;
}

} // namespace tepor::test
