#pragma once
// Symmetric positive definite tridiagonal systems, eliminated from both ends at once.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor {

/// Factor of a symmetric positive definite tridiagonal matrix, kept for many solves.
///
/// Elimination runs from both ends and meets in the middle, so that two chains hide each other's latency. Short chains, as
/// in a control step, also take two rows at a time: y(k) = b(k) - r(k-1) b(k-1) + r(k-1) r(k-2) y(k-2) halves the chain.
class Tridiagonal {
  public:
    /// Factors the n x n matrix of `diagonal` and `off`; off[i] stands in row i, column i + 1 and mirrored, i below n - 1.
    /// @return false when a pivot is not positive; singular_row() then names its row. Cost O(n); allocates when n grows.
    [[nodiscard]] TEPOR_INLINE bool factor(Index n, const double* diagonal, const double* off);

    /// The same for the leading block of a symmetric matrix; throws Error(not_supported) when it is not tridiagonal.
    [[nodiscard]] TEPOR_INLINE bool factor(const SparseMatrix& matrix, Index n);

    /// b := A^-1 b, in place; n values. Allocates nothing; safe from several threads. Cost O(n).
    TEPOR_INLINE void solve(double* b) const noexcept;

    [[nodiscard]] Index size() const noexcept { return size_; }
    /// First row with a pivot that is not positive, or -1.
    [[nodiscard]] Index singular_row() const noexcept { return singular_row_; }

  private:
    /// Up to this many unknowns latency counts, beyond it memory traffic.
    static constexpr Index short_ = 1000;

    TEPOR_INLINE void solve_short(double* b) const noexcept;

    Index size_ = 0;
    Index middle_ = 0;
    Index singular_row_ = -1;
    std::vector<double> ratio_;   // off-diagonal over the pivot it was eliminated with
    std::vector<double> product_; // of the ratios of a row and its neighbour towards the middle; short chains only
    std::vector<double> inverse_; // one over each pivot
};

/// One row of a chain as solve_chain() asks for it.
struct ChainRow {
    double diagonal = 0.0;
    double next = 0.0; ///< coupling with the next row; of no account in the last
    double load = 0.0; ///< right-hand side
};

/// Assembles, eliminates and solves a symmetric positive definite chain in one pass from both ends, without storing it.
///
/// @param row   row(i) gives a ChainRow; called once for every i, in no particular order
/// @param x     n values: the solution
/// @param work  n values, overwritten
/// @return      the first row found with a pivot that is not positive (x is then meaningless), or -1
template <class Row>
Index solve_chain(Index n, Row&& row, double* x, double* work) noexcept;

/// The same for stored arrays: `x` holds b on entry and the solution on return; see Tridiagonal::factor for the others.
TEPOR_INLINE Index solve_tridiagonal(Index n, const double* diagonal, const double* off, double* x,
                                     double* work) noexcept;

// ---------------------------------------------------------------------------------------------------------------------

namespace detail {

/// A pivot at or below this part of its original diagonal is lost in rounding; see impl/pivot.hpp.
TEPOR_INLINE double chain_floor(Index n) noexcept;

} // namespace detail

template <class Row>
Index solve_chain(Index n, Row&& row, double* x, double* work) noexcept {
    if (n <= 0) return -1;
    const double floor = detail::chain_floor(n);
    Index bad = -1;
    const Index m = n / 2;
    const Index both = n - 1 - m; // rows right of the middle; left of it there are as many or one more
    double take_left = 0.0, take_right = 0.0, load_left = 0.0,
           load_right = 0.0; // what a neighbour takes off the next row
    const auto eliminate_left = [&](Index i) {
        const ChainRow left = row(i);
        const double pivot = left.diagonal - take_left;
        if (!(pivot > floor * left.diagonal)) bad = bad < 0 ? i : bad;
        const double inverse = 1.0 / pivot;
        const double ratio = left.next * inverse;
        const double load = left.load - load_left;
        work[i] = ratio;
        x[i] = load * inverse;
        take_left = ratio * left.next;
        load_left = ratio * load;
    };
    ChainRow right = row(n - 1); // the coupling of row j towards the middle belongs to row j - 1: read one row ahead
    for (Index i = 0; i < both; ++i) {
        eliminate_left(i);
        const Index j = n - 1 - i;
        const ChainRow ahead = row(j - 1);
        const double pivot = right.diagonal - take_right;
        if (!(pivot > floor * right.diagonal)) bad = bad < 0 ? j : bad;
        const double inverse = 1.0 / pivot;
        const double ratio = ahead.next * inverse;
        const double load = right.load - load_right;
        work[j] = ratio;
        x[j] = load * inverse;
        take_right = ratio * ahead.next;
        load_right = ratio * load;
        right = ahead;
    }
    if (both < m) eliminate_left(both);
    const double pivot = right.diagonal - take_left - take_right; // `right` has reached the middle
    if (!(pivot > floor * right.diagonal)) bad = bad < 0 ? m : bad;
    double up = (right.load - load_left - load_right) / pivot;
    x[m] = up;
    double down = up;
    for (Index i = 0; i < both; ++i) {
        down = x[m + 1 + i] -= work[m + 1 + i] * down;
        up = x[m - 1 - i] -= work[m - 1 - i] * up;
    }
    if (both < m) x[0] -= work[0] * up;
    return bad;
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/tridiagonal.hpp>
#endif
