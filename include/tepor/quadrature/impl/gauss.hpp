#pragma once
// Gauss rules computed: Newton on the polynomials.

#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/text.hpp>
#include <tepor/quadrature/gauss.hpp>
#include <utility>
#include <vector>

namespace tepor {

namespace detail {

struct PolynomialValue {
    double value;
    double slope;
};

/// Legendre polynomial of degree n and its derivative at t in (-1, 1). DLMF 18.9.1, 18.9.15.
inline PolynomialValue legendre(int n, double t) noexcept {
    double previous = 1.0;
    double current = t;
    for (int k = 1; k < n; ++k) {
        const double next = ((2.0 * k + 1.0) * t * current - k * previous) / (k + 1.0);
        previous = current;
        current = next;
    }
    return {current, n * (previous - t * current) / ((1.0 - t) * (1.0 + t))};
}

/// Jacobi polynomial of degree n >= 1 with alpha = 1, beta = 0 and its derivative at t in (-1, 1): the recurrence of
/// DLMF 18.9.2, values and slopes side by side.
inline PolynomialValue jacobi_one_zero(int n, double t) noexcept {
    double previous = 1.0;
    double previous_slope = 0.0;
    double current = 0.5 * (3.0 * t + 1.0);
    double current_slope = 1.5;
    for (int k = 1; k < n; ++k) {
        const double s = 2.0 * k + 1.0; // 2k + alpha + beta
        const double a = (s + 1.0) * (s + 2.0) / (2.0 * (k + 1.0) * (k + 2.0));
        const double b = (s + 1.0) / (2.0 * (k + 1.0) * (k + 2.0) * s);
        const double c = (k + 1.0) * k * (s + 2.0) / ((k + 1.0) * (k + 2.0) * s);
        const double next = (a * t + b) * current - c * previous;
        const double next_slope = (a * t + b) * current_slope + a * current - c * previous_slope;
        previous = current;
        previous_slope = current_slope;
        current = next;
        current_slope = next_slope;
    }
    return {current, current_slope};
}

inline void check_point_count(const char* name, int n) {
    if (n < 1) throw Error(ErrorCode::bad_value, name, text(name, ": ", n, " points asked for, expected at least 1"));
}

} // namespace detail

TEPOR_INLINE Rule<1> gauss_legendre(int n) {
    detail::check_point_count("gauss_legendre", n);
    Rule<1> rule(2 * n - 1, n);
    if (n == 1) {
        rule.add(Rule<1>::point_type(0.5), 1.0);
        return rule;
    }
    std::vector<std::pair<double, double>> upper; // roots t >= 0 of [-1,1], descending, with their weights
    for (int i = 0; i < (n + 1) / 2; ++i) {
        double t = 0.0; // the middle root of odd n is exact
        if (2 * i + 1 != n) {
            const double m = 1.0 / n;
            t = (1.0 - 0.125 * m * m * (1.0 - m)) * std::cos(pi * (4.0 * i + 3.0) / (4.0 * n + 2.0));
            for (int pass = 0; pass < 20; ++pass) {
                const auto p = detail::legendre(n, t);
                const double change = p.value / p.slope;
                t -= change;
                if (std::abs(change) < 1e-15) break;
            }
        }
        const double slope = detail::legendre(n, t).slope;
        upper.emplace_back(t, 2.0 / ((1.0 - t) * (1.0 + t) * slope * slope));
    }
    for (const auto& [t, w] : upper) rule.add(Rule<1>::point_type(0.5 * (1.0 - t)), 0.5 * w);
    for (int i = n / 2 - 1; i >= 0; --i) {
        const auto& [t, w] = upper[detail::as_size(i)];
        rule.add(Rule<1>::point_type(0.5 * (1.0 + t)), 0.5 * w);
    }
    return rule;
}

TEPOR_INLINE Rule<1> gauss_jacobi(int n) {
    detail::check_point_count("gauss_jacobi", n);
    Rule<1> rule(2 * n - 1, n);
    for (int i = n - 1; i >= 0; --i) {
        // Roots of P_n^(1,0), ascending, from their asymptotic places (DLMF 18.16(ii)).
        double t = std::cos(pi * (i + 1.25) / (n + 1.0));
        for (int pass = 0; pass < 50; ++pass) {
            const auto p = detail::jacobi_one_zero(n, t);
            const double change = p.value / p.slope;
            t -= change;
            if (std::abs(change) < 1e-15) break;
        }
        // Weight on [-1,1] is 4 / ((1 - t^2) P'^2) for the weight function 1 - t, a quarter of it on [0,1].
        const double slope = detail::jacobi_one_zero(n, t).slope;
        rule.add(Rule<1>::point_type(0.5 * (1.0 + t)), 1.0 / ((1.0 - t) * (1.0 + t) * slope * slope));
    }
    return rule;
}

} // namespace tepor
