#pragma once
// Symmetric positive definite tridiagonal systems, eliminated from both ends at once.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor {

/// Factor of a symmetric positive definite tridiagonal matrix, kept for many solves.
///
/// Elimination runs from both ends and meets in the middle, so two independent chains hide each other's latency.
class Tridiagonal {
  public:
    /// Factors the n x n matrix of `diagonal` and `off`; off[i] stands in row i, column i + 1 and mirrored, i < n - 1.
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
    Index size_ = 0;
    Index middle_ = 0;
    Index singular_row_ = -1;
    std::vector<double> ratio_;   // off-diagonal over the pivot it was eliminated with
    std::vector<double> inverse_; // one over each pivot
};

/// Solves A x = b once without keeping a factor, both ends at once: `x` holds b on entry and the solution on return.
///
/// @param work  n values, overwritten
/// @return      the first row with a pivot that is not positive (x is then meaningless), or -1
TEPOR_INLINE Index solve_tridiagonal(Index n, const double* diagonal, const double* off, double* x,
                                     double* work) noexcept;

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/tridiagonal.hpp>
#endif
