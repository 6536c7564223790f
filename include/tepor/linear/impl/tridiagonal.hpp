#pragma once
// Two-ended elimination of tridiagonal systems.

#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/linear/impl/pivot.hpp>
#include <tepor/linear/tridiagonal.hpp>

namespace tepor {
namespace detail {

TEPOR_INLINE double chain_floor(Index n) noexcept {
    return pivot_floor(n);
}

/// Half of a short chain, from its end towards the middle and back, two rows at a time. Row k lies at Step * k from `b`.
template <Index Step>
struct HalfChain {
    double* b;
    const double* ratio;
    const double* product;
    const double* inverse;
    double y0 = 0.0, y1 = 0.0; // the last two rows done
    double given = 0.0;        // what the row before held when its turn came

    void first() noexcept {
        y1 = given = b[0];
        b[0] = y1 * inverse[0];
    }
    void second() noexcept {
        const double next = b[Step];
        y0 = y1;
        y1 = next - ratio[0] * given;
        given = next;
        b[Step] = y1 * inverse[Step];
    }
    void in(Index k) noexcept {
        const double next = b[Step * k];
        const double y = (next - ratio[Step * (k - 1)] * given) + product[Step * (k - 2)] * y0;
        given = next;
        y0 = y1;
        y1 = y;
        b[Step * k] = y * inverse[Step * k];
    }
    /// Backwards: y0 and y1 are now the solution in rows k + 2 and k + 1, `given` what row k + 1 held.
    void turn(Index k, double middle) noexcept {
        y0 = middle;
        given = b[Step * k];
        y1 = b[Step * k] -= ratio[Step * k] * middle;
    }
    void out(Index k) noexcept {
        const double held = b[Step * k];
        const double y = (held - ratio[Step * k] * given) + product[Step * k] * y0;
        given = held;
        y0 = y1;
        y1 = b[Step * k] = y;
    }
};

} // namespace detail

TEPOR_INLINE bool Tridiagonal::factor(Index n, const double* diagonal, const double* off) {
    size_ = n;
    middle_ = n / 2;
    singular_row_ = -1;
    ratio_.resize(detail::as_size(n));
    inverse_.resize(detail::as_size(n));
    product_.resize(n <= short_ ? detail::as_size(n) : 0);
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
    if (n <= short_) {
        double* product = product_.data();
        product[m] = 0.0;
        for (Index i = 0; i < m; ++i) product[i] = ratio[i] * ratio[i + 1];
        for (Index j = m + 1; j < n; ++j) product[j] = ratio[j] * ratio[j - 1];
    }
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
    if (n >= 8 && n <= short_) return solve_short(b);
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

TEPOR_INLINE void Tridiagonal::solve_short(double* b) const noexcept {
    const Index last = size_ - 1;
    const Index m = middle_;
    const Index both = last - m;
    const double* ratio = ratio_.data();
    const double* product = product_.data();
    const double* inverse = inverse_.data();
    detail::HalfChain<1> left{b, ratio, product, inverse};
    detail::HalfChain<-1> right{b + last, ratio + last, product + last, inverse + last};
    left.first();
    right.first();
    left.second();
    right.second();
    for (Index k = 2; k < both; ++k) {
        left.in(k);
        right.in(k);
    }
    if (both < m) left.in(both); // n even: the left chain has one row more
    const double middle = (b[m] - ratio[m - 1] * left.y1 - ratio[m + 1] * right.y1) * inverse[m];
    b[m] = middle;
    left.turn(m - 1, middle);
    right.turn(both - 1, middle);
    for (Index k = both - 2; k >= 0; --k) {
        left.out(k + (m - both));
        right.out(k);
    }
    if (both < m) left.out(0);
}

TEPOR_INLINE Index solve_tridiagonal(Index n, const double* diagonal, const double* off, double* x,
                                     double* work) noexcept {
    return solve_chain(
        n,
        [=](Index i) {
            return ChainRow{diagonal[i], i + 1 < n ? off[i] : 0.0, x[i]};
        },
        x, work);
}

} // namespace tepor
