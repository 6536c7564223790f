#pragma once
// Two-ended elimination of tridiagonal systems.

#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/linear/impl/pivot.hpp>
#include <tepor/linear/tridiagonal.hpp>

namespace tepor {

TEPOR_INLINE bool Tridiagonal::factor(Index n, const double* diagonal, const double* off) {
    size_ = n;
    middle_ = n / 2;
    singular_row_ = -1;
    ratio_.resize(detail::as_size(n));
    inverse_.resize(detail::as_size(n));
    if (n == 0) return true;
    const double floor = detail::pivot_floor(n);
    double* ratio = ratio_.data();
    double* inverse = inverse_.data();
    // ratio[i] belongs to the coupling of row i with its neighbour towards the middle; ratio[middle] is not used.
    const auto pivot = [&](Index i, double value) {
        if (!(value > floor * diagonal[i]) && singular_row_ < 0) singular_row_ = i;
        inverse[i] = 1.0 / value;
    };
    const Index m = middle_;
    double left = diagonal[0];
    double right = diagonal[n - 1];
    double from_right = 0.0; // what the right chain takes off the middle
    for (Index i = 0; i < m;
         ++i) { // rows i from the left and n - 1 - i from the right, while these stay beyond the middle
        pivot(i, left);
        ratio[i] = off[i] * inverse[i];
        left = diagonal[i + 1] - ratio[i] * off[i];
        const Index j = n - 1 - i;
        if (j > m) {
            pivot(j, right);
            ratio[j] = off[j - 1] * inverse[j];
            from_right = ratio[j] * off[j - 1];
            right = diagonal[j - 1] - from_right;
        }
    }
    pivot(m, left - from_right);
    ratio[m] = 0.0;
    return singular_row_ < 0;
}

TEPOR_INLINE bool Tridiagonal::factor(const SparseMatrix& matrix, Index n) {
    std::vector<double> diagonal(detail::as_size(n));
    std::vector<double> off(detail::as_size(n), 0.0);
    for (Index i = 0; i < n; ++i) {
        const Index last = matrix.start[detail::as_size(i) + 1] - 1;
        const Index count = last - matrix.start[detail::as_size(i)];
        if (count > 1 || (count == 1 && matrix.column[detail::as_size(last) - 1] != i - 1)) {
            throw Error(ErrorCode::not_supported, "matrix",
                        detail::text("matrix: row ", i, " is not tridiagonal; use a banded or sparse solver"));
        }
        diagonal[detail::as_size(i)] = matrix.lower[detail::as_size(last)];
        if (count == 1) off[detail::as_size(i) - 1] = matrix.lower[detail::as_size(last) - 1];
    }
    return factor(n, diagonal.data(), off.data());
}

TEPOR_INLINE void Tridiagonal::solve(double* b) const noexcept {
    const Index n = size_;
    if (n == 0) return;
    const Index m = middle_;
    const double* ratio = ratio_.data();
    const double* inverse = inverse_.data();
    double left = b[0];
    double right = b[n - 1];
    double from_right = 0.0;
    // Inwards: row i passes ratio * b[i] on to its neighbour towards the middle.
    const Index both = n - 1 - m; // rows right of the middle; m or m - 1
    for (Index i = 0; i < both; ++i) {
        const Index j = n - 1 - i;
        const double next_left = b[i + 1] - ratio[i] * left;
        from_right = ratio[j] * right;
        const double next_right = b[j - 1] - from_right;
        b[i] = left * inverse[i];
        b[j] = right * inverse[j];
        left = next_left;
        right = next_right;
    }
    if (both < m) { // n even: the left chain has one row more
        const double next_left = b[both + 1] - ratio[both] * left;
        b[both] = left * inverse[both];
        left = next_left;
    }
    double up = (left - from_right) * inverse[m];
    b[m] = up;
    double down = up;
    for (Index i = 0; i < both; ++i) {
        down = b[m + 1 + i] -= ratio[m + 1 + i] * down;
        up = b[m - 1 - i] -= ratio[m - 1 - i] * up;
    }
    if (both < m) b[0] -= ratio[0] * up;
}

TEPOR_INLINE Index solve_tridiagonal(Index n, const double* diagonal, const double* off, double* x,
                                     double* work) noexcept {
    if (n <= 0) return -1;
    const double floor = detail::pivot_floor(n);
    double* ratio = work;
    Index bad = -1;
    const Index m = n / 2;
    const Index both = n - 1 - m;
    double left = diagonal[0];
    double right = diagonal[n - 1];
    double pivot_from_right = 0.0;
    double load_from_right = 0.0;
    double load_left = x[0];
    double load_right = x[n - 1];
    for (Index i = 0; i < both; ++i) {
        const Index j = n - 1 - i;
        if (!(left > floor * diagonal[i]) && bad < 0) bad = i;
        if (!(right > floor * diagonal[j]) && bad < 0) bad = j;
        const double inverse_left = 1.0 / left;
        const double inverse_right = 1.0 / right;
        ratio[i] = off[i] * inverse_left;
        ratio[j] = off[j - 1] * inverse_right;
        left = diagonal[i + 1] - ratio[i] * off[i];
        pivot_from_right = ratio[j] * off[j - 1];
        right = diagonal[j - 1] - pivot_from_right;
        x[i] = load_left * inverse_left;
        x[j] = load_right * inverse_right;
        load_left = x[i + 1] - off[i] * x[i];
        load_from_right = off[j - 1] * x[j];
        load_right = x[j - 1] - load_from_right;
    }
    if (both < m) {
        if (!(left > floor * diagonal[both]) && bad < 0) bad = both;
        const double inverse_left = 1.0 / left;
        ratio[both] = off[both] * inverse_left;
        left = diagonal[m] - ratio[both] * off[both];
        x[both] = load_left * inverse_left;
        load_left = x[m] - off[both] * x[both];
    }
    const double pivot = left - pivot_from_right;
    if (!(pivot > floor * diagonal[m]) && bad < 0) bad = m;
    double up = (load_left - load_from_right) / pivot;
    x[m] = up;
    double down = up;
    for (Index i = 0; i < both; ++i) {
        down = x[m + 1 + i] -= ratio[m + 1 + i] * down;
        up = x[m - 1 - i] -= ratio[m - 1 - i] * up;
    }
    if (both < m) x[0] -= ratio[0] * up;
    return bad;
}

} // namespace tepor
