#pragma once
// Sparse matrix with a symmetric pattern: the lower triangle by rows, and its products with a vector.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor {

/// Square sparse matrix on a symmetric pattern, stored as its lower triangle by rows.
///
/// Row i holds the entries start[i] .. start[i + 1] - 1; their columns ascend and the last one is the diagonal. Every row
/// has its diagonal. Entry p of row i carries the value at (i, column[p]) in `lower` and, for an unsymmetric matrix, the
/// value at (column[p], i) in `upper`; an empty `upper` means symmetric. On the diagonal only `lower` counts.
///
/// Since columns never exceed their row, the leading n x n block is simply the first n rows. Every solver of this room
/// works on such a block: free unknowns are numbered first, prescribed ones last.
struct SparseMatrix {
    Index rows = 0;
    std::vector<Id> start;     ///< rows + 1 positions
    std::vector<Id> column;    ///< column of each entry
    std::vector<double> lower; ///< value at (row, column)
    std::vector<double> upper; ///< value at (column, row); empty when symmetric

    /// Stored entries of the lower triangle, diagonal included.
    [[nodiscard]] Index entries() const noexcept { return static_cast<Index>(column.size()); }
    [[nodiscard]] bool symmetric() const noexcept { return upper.empty(); }
    [[nodiscard]] double diagonal(Index row) const noexcept {
        return lower[detail::as_size(start[detail::as_size(row) + 1]) - 1];
    }
};

/// y = A x for the leading rows x rows block. `x` and `y` hold `rows` values and do not overlap. Cost O(entries).
TEPOR_INLINE void multiply(const SparseMatrix& matrix, Index rows, const double* x, double* y) noexcept;

/// y = A^T x for the leading block; the same as multiply() for a symmetric matrix.
TEPOR_INLINE void multiply_transposed(const SparseMatrix& matrix, Index rows, const double* x, double* y) noexcept;

/// Copies the leading n x n block without the entries that are zero up to rounding, |a_ij| <= 1e-15 sqrt(a_ii a_jj), into `out`
/// when these are at least an eighth of all; symmetric matrices with a positive diagonal only. Right angles in triangles
/// leave many of them. @return whether `out` was made. Cost O(entries).
[[nodiscard]] TEPOR_INLINE bool without_zeros(const SparseMatrix& matrix, Index n, SparseMatrix& out);

/// The same in place, which spares the copy; rows from n on stay whole. @return whether entries were dropped.
TEPOR_INLINE bool drop_zeros(SparseMatrix& matrix, Index n);

/// Throws Error(bad_value) naming the row when the leading n rows break a rule of SparseMatrix: positions that do not
/// ascend, columns out of order, a row without its diagonal, or arrays of the wrong length. Cost O(entries).
TEPOR_INLINE void verify(const SparseMatrix& matrix, Index n);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/sparse_matrix.hpp>
#endif
