#pragma once
// Borders of graded cells: sums of a geometric progression.

#include <cmath>
#include <tepor/mesh/grading.hpp>

namespace tepor::detail {

TEPOR_INLINE std::vector<double> graded_fractions(Index cells, const Grading& grading) {
    std::vector<double> at(as_size(cells + 1));
    const double n = as_double(cells);
    // Steps between the first and the longest (shortest) cell; none means that there is nothing to grade.
    const Index steps = grading.symmetric() ? (cells - 1) / 2 : cells - 1;
    const double log_q = steps > 0 ? std::log(grading.ratio()) / as_double(steps) : 0.0;
    if (std::abs(log_q) < 1e-14) {
        for (Index k = 0; k <= cells; ++k) at[as_size(k)] = as_double(k) / n;
    } else if (!grading.symmetric()) {
        const double whole = std::expm1(n * log_q); // the sum of q^k is (q^n - 1) / (q - 1)
        for (Index k = 0; k <= cells; ++k) at[as_size(k)] = std::expm1(as_double(k) * log_q) / whole;
    } else {
        // Half the run: full cells up to the middle, and for an odd count half of the middle cell.
        const Index half = cells / 2;
        const double one = std::expm1(log_q);
        const double middle = cells % 2 == 1 ? 0.5 * std::exp(as_double(half) * log_q) * one : 0.0;
        const double whole = 2.0 * (std::expm1(as_double(half) * log_q) + middle);
        for (Index k = 0; k <= half; ++k) {
            at[as_size(k)] = std::expm1(as_double(k) * log_q) / whole;
            at[as_size(cells - k)] = 1.0 - at[as_size(k)];
        }
        if (cells % 2 == 0) at[as_size(half)] = 0.5;
    }
    at.front() = 0.0;
    at.back() = 1.0;
    return at;
}

} // namespace tepor::detail
