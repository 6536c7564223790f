#pragma once
// The small dense system of a low-rank update.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/linear/low_rank.hpp>

namespace tepor {

TEPOR_INLINE bool LowRankUpdate::change(const double* block) {
    const Index k = rank();
    std::copy_n(block, k * k, block_.data());
    double* a = factor_.data();
    for (Index i = 0; i < k; ++i) { // I + D G, G(j, c) = Z(rows[j], c)
        for (Index c = 0; c < k; ++c) {
            double sum = i == c ? 1.0 : 0.0;
            for (Index j = 0; j < k; ++j)
                sum += block_[detail::as_size(i * k + j)] * column(c)[rows_[detail::as_size(j)]];
            a[i * k + c] = sum;
        }
    }
    bool regular = true;
    for (Index j = 0; j < k; ++j) {
        Index best = j;
        double largest = 0.0; // of the column before this step's pivot, the yardstick for it
        for (Index i = 0; i < k; ++i) largest = std::max(largest, std::abs(a[i * k + j]));
        for (Index i = j + 1; i < k; ++i) {
            if (std::abs(a[i * k + j]) > std::abs(a[best * k + j])) best = i;
        }
        pivot_[detail::as_size(j)] = detail::as_id(best);
        if (best != j) std::swap_ranges(a + j * k, a + j * k + k, a + best * k);
        if (!(std::abs(a[j * k + j]) > 64.0 * std::numeric_limits<double>::epsilon() * std::max(1.0, largest)))
            regular = false;
        a[j * k + j] = 1.0 / a[j * k + j];
        for (Index i = j + 1; i < k; ++i) {
            const double factor = a[i * k + j] *= a[j * k + j];
            for (Index c = j + 1; c < k; ++c) a[i * k + c] -= factor * a[j * k + c];
        }
    }
    return regular;
}

TEPOR_INLINE void LowRankUpdate::apply(double* x) noexcept {
    const Index k = rank();
    const double* a = factor_.data();
    double* w = small_.data();
    for (Index i = 0; i < k; ++i) {
        w[i] = 0.0;
        for (Index j = 0; j < k; ++j) w[i] += block_[detail::as_size(i * k + j)] * x[rows_[detail::as_size(j)]];
    }
    for (Index j = 0; j < k; ++j) std::swap(w[j], w[pivot_[detail::as_size(j)]]);
    for (Index i = 0; i < k; ++i) {
        for (Index j = 0; j < i; ++j) w[i] -= a[i * k + j] * w[j];
    }
    for (Index i = k - 1; i >= 0; --i) {
        for (Index j = i + 1; j < k; ++j) w[i] -= a[i * k + j] * w[j];
        w[i] *= a[i * k + i];
    }
    for (Index c = 0; c < k; ++c) {
        const double* z = column(c);
        const double factor = w[c];
        for (Index i = 0; i < size_; ++i) x[i] -= factor * z[i];
    }
}

} // namespace tepor
