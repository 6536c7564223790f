#pragma once
// Banded Cholesky and LU.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/linear/banded.hpp>
#include <tepor/linear/impl/pivot.hpp>

namespace tepor {

TEPOR_INLINE Index half_bandwidth(const SparseMatrix& matrix, Index n) noexcept {
    Index band = 0;
    for (Index i = 0; i < n; ++i) {
        const Index first = matrix.start[detail::as_size(i)];
        band = std::max(band, i - static_cast<Index>(matrix.column[detail::as_size(first)]));
    }
    return band;
}

TEPOR_INLINE bool BandedCholesky::factor(const SparseMatrix& matrix, Index n) {
    size_ = n;
    singular_row_ = -1;
    band_ = half_bandwidth(matrix, n);
    const Index b = band_;
    lower_.assign(detail::as_size(n * b), 0.0);
    inverse_.resize(detail::as_size(n));
    const double floor = detail::pivot_floor(n);
    for (Index i = 0; i < n; ++i) {
        double* row = lower_.data() + i * b + (b - i); // row[j] = L(i, j)
        const Index last = matrix.start[detail::as_size(i) + 1] - 1;
        for (Index p = matrix.start[detail::as_size(i)]; p < last; ++p) {
            row[matrix.column[detail::as_size(p)]] = matrix.lower[detail::as_size(p)];
        }
        // row[j] first becomes D(j) L(i, j), then L(i, j); the pivot loses their product.
        const Index from = std::max<Index>(0, i - b);
        double pivot = matrix.lower[detail::as_size(last)];
        const double floor_here = floor * pivot;
        for (Index j = from; j < i; ++j) {
            const double* other = lower_.data() + j * b + (b - j);
            double sum = row[j];
            for (Index k = std::max(from, j - b); k < j; ++k) sum -= row[k] * other[k];
            row[j] = sum;
        }
        for (Index j = from; j < i; ++j) {
            const double scaled = row[j] * inverse_[detail::as_size(j)];
            pivot -= scaled * row[j];
            row[j] = scaled;
        }
        if (!(pivot > floor_here) && singular_row_ < 0) singular_row_ = i;
        inverse_[detail::as_size(i)] = 1.0 / pivot;
    }
    return singular_row_ < 0;
}

TEPOR_INLINE void BandedCholesky::solve(double* x) const noexcept {
    const Index n = size_;
    const Index b = band_;
    for (Index i = 0; i < n; ++i) {
        const double* row = lower_.data() + i * b + (b - i);
        double sum = x[i];
        for (Index j = std::max<Index>(0, i - b); j < i; ++j) sum -= row[j] * x[j];
        x[i] = sum;
    }
    for (Index i = 0; i < n; ++i) x[i] *= inverse_[detail::as_size(i)];
    for (Index i = n - 1; i >= 0; --i) {
        const double* row = lower_.data() + i * b + (b - i);
        for (Index j = std::max<Index>(0, i - b); j < i; ++j) x[j] -= row[j] * x[i];
    }
}

TEPOR_INLINE bool BandedLu::factor(const SparseMatrix& matrix, Index n) {
    size_ = n;
    singular_row_ = -1;
    band_ = half_bandwidth(matrix, n);
    const Index b = band_;
    const Index width = 2 * b + 1;
    upper_.assign(detail::as_size(n * width), 0.0);
    lower_.assign(detail::as_size(n * b), 0.0);
    pivot_.resize(detail::as_size(n));
    // A row is kept from its first column that can still be non-zero: max(0, i - b) at the start, j at step j (each step
    // moves the rows it touches one place to the left).
    const auto at = [&](Index i, Index j) -> double& { return upper_[detail::as_size(i * width + j)]; };
    const auto first_of = [&](Index i) { return std::max<Index>(0, i - b); };
    const double* upper = matrix.symmetric() ? matrix.lower.data() : matrix.upper.data();
    std::vector<double> largest(detail::as_size(n), 0.0); // of each column of A, the yardstick for its pivot
    for (Index i = 0; i < n; ++i) {
        const Index last = matrix.start[detail::as_size(i) + 1] - 1;
        for (Index p = matrix.start[detail::as_size(i)]; p <= last; ++p) {
            const Index j = matrix.column[detail::as_size(p)];
            const double below = matrix.lower[detail::as_size(p)];
            at(i, j - first_of(i)) = below;
            largest[detail::as_size(j)] = std::max(largest[detail::as_size(j)], std::abs(below));
            if (p == last) continue;
            at(j, i - first_of(j)) = upper[p];
            largest[detail::as_size(i)] = std::max(largest[detail::as_size(i)], std::abs(upper[p]));
        }
    }
    const double floor = detail::pivot_floor(n);
    for (Index j = 0; j < n; ++j) {
        const Index end = std::min(n, j + b + 1);
        // All rows j .. end - 1 now start at column j.
        Index best = j;
        for (Index i = j + 1; i < end; ++i) {
            if (std::abs(at(i, 0)) > std::abs(at(best, 0))) best = i;
        }
        pivot_[detail::as_size(j)] = detail::as_id(best);
        if (best != j) std::swap_ranges(&at(j, 0), &at(j, 0) + width, &at(best, 0));
        if (!(std::abs(at(j, 0)) > floor * largest[detail::as_size(j)]) && singular_row_ < 0) singular_row_ = j;
        const double inverse = 1.0 / at(j, 0);
        at(j, 0) = inverse;
        for (Index i = j + 1; i < end; ++i) {
            const double factor = at(i, 0) * inverse;
            lower_[detail::as_size(j * b + (i - j - 1))] = factor;
            double* row = &at(i, 0);
            const double* other = &at(j, 0);
            for (Index k = 1; k < width; ++k) row[k - 1] = row[k] - factor * other[k];
            row[width - 1] = 0.0;
        }
    }
    return singular_row_ < 0;
}

TEPOR_INLINE void BandedLu::solve(double* x) const noexcept {
    const Index n = size_;
    const Index b = band_;
    const Index width = 2 * b + 1;
    for (Index j = 0; j < n; ++j) {
        std::swap(x[j], x[pivot_[detail::as_size(j)]]);
        const double* factor = lower_.data() + j * b;
        for (Index i = j + 1; i < std::min(n, j + b + 1); ++i) x[i] -= factor[i - j - 1] * x[j];
    }
    for (Index i = n - 1; i >= 0; --i) {
        const double* row = upper_.data() + i * width;
        double sum = x[i];
        for (Index k = 1; k < std::min(width, n - i); ++k) sum -= row[k] * x[i + k];
        x[i] = sum * row[0];
    }
}

TEPOR_INLINE void BandedLu::solve_transposed(double* x) const noexcept {
    const Index n = size_;
    const Index b = band_;
    const Index width = 2 * b + 1;
    for (Index i = 0; i < n; ++i) {
        const double* row = upper_.data() + i * width;
        x[i] *= row[0];
        for (Index k = 1; k < std::min(width, n - i); ++k) x[i + k] -= row[k] * x[i];
    }
    for (Index j = n - 1; j >= 0; --j) {
        const double* factor = lower_.data() + j * b;
        double sum = x[j];
        for (Index i = j + 1; i < std::min(n, j + b + 1); ++i) sum -= factor[i - j - 1] * x[i];
        x[j] = sum;
        std::swap(x[j], x[pivot_[detail::as_size(j)]]);
    }
}

} // namespace tepor
