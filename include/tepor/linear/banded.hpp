#pragma once
// Banded direct solvers for 1D bodies of higher order: Cholesky, and LU with partial pivoting.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor {

/// Largest distance of an entry from the diagonal in the leading n rows. Cost O(n): columns ascend.
TEPOR_INLINE Index half_bandwidth(const SparseMatrix& matrix, Index n) noexcept;

/// L D L^T factor of a symmetric positive definite matrix of small half-bandwidth b. Time O(n b^2), memory O(n b).
class BandedCholesky {
  public:
    /// Factors the leading n x n block (of its lower triangle). @return false when a pivot is not positive, see singular_row().
    [[nodiscard]] TEPOR_INLINE bool factor(const SparseMatrix& matrix, Index n);

    /// b := A^-1 b, in place. Allocates nothing; safe from several threads.
    TEPOR_INLINE void solve(double* b) const noexcept;

    [[nodiscard]] Index size() const noexcept { return size_; }
    /// First row with a pivot that is not positive, or -1.
    [[nodiscard]] Index singular_row() const noexcept { return singular_row_; }

  private:
    Index size_ = 0;
    Index band_ = 0;
    Index singular_row_ = -1;
    std::vector<double> lower_;   // row i: L(i, i - band .. i - 1)
    std::vector<double> inverse_; // one over each pivot
};

/// L U factor with partial pivoting of an unsymmetric matrix of small half-bandwidth b. Time O(n b^2), memory O(n b).
class BandedLu {
  public:
    /// Factors the leading n x n block. @return false when no usable pivot is left in a column, see singular_row().
    [[nodiscard]] TEPOR_INLINE bool factor(const SparseMatrix& matrix, Index n);

    /// b := A^-1 b, in place. Allocates nothing; safe from several threads.
    TEPOR_INLINE void solve(double* b) const noexcept;
    /// b := A^-T b, in place. Allocates nothing; safe from several threads.
    TEPOR_INLINE void solve_transposed(double* b) const noexcept;

    [[nodiscard]] Index size() const noexcept { return size_; }
    /// First column without a usable pivot, or -1.
    [[nodiscard]] Index singular_row() const noexcept { return singular_row_; }

  private:
    Index size_ = 0;
    Index band_ = 0;
    Index singular_row_ = -1;
    std::vector<double> upper_; // row i: U(i, i .. i + 2 band), the pivot inverted
    std::vector<double>
        lower_;             // column j: the multipliers of the rows j + 1 .. j + band, in the order after the exchange
    std::vector<Id> pivot_; // row exchanged with row j at step j
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/banded.hpp>
#endif
