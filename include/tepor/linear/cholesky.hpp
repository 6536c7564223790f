#pragma once
// Sparse Cholesky for symmetric positive definite systems that are solved many times.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/linear/detail/buffer.hpp>
#include <tepor/linear/detail/front_kernels.hpp>
#include <tepor/linear/detail/supernode_tree.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor {

/// Multifrontal supernodal Cholesky factor of a symmetric positive definite matrix.
///
/// analyze() orders the unknowns by nested dissection: cut along the places of the unknowns when they are given, along
/// breadth-first order otherwise. factor() may be called again and again with other values on the same pattern.
/// Results are the same bit for bit on every run. Sources: impl/nested_dissection.hpp and impl/supernodes.hpp.
class SparseCholesky {
  public:
    /// Orders the leading n x n block and plans its factor. Values are not read. Cost O(entries log n) plus the plan.
    ///
    /// @param places  a place per unknown, or null; places only guide the order
    TEPOR_INLINE void analyze(const SparseMatrix& pattern, Index n, const Point* places = nullptr);

    /// Factors the matrix, which has the pattern given to analyze(); only its lower triangle counts.
    /// @return false when a pivot is lost: the matrix is not positive definite or singular; see singular_row().
    [[nodiscard]] TEPOR_INLINE bool factor(const SparseMatrix& matrix);

    /// b := A^-1 b, in place, n values. Allocates nothing. Uses work space of this object: one thread at a time.
    void solve(double* b) const noexcept { solve(b, work_.data()); }

    /// The same for `count` right-hand sides, n apart. They go through the factor four at a time, which costs little more
    /// than one; the bits differ by rounding from those of one at a time.
    TEPOR_INLINE void solve(double* b, Index count) const noexcept;

    /// The same with the caller's work space of work_size() values: safe from several threads.
    TEPOR_INLINE void solve(double* b, double* work) const noexcept;
    [[nodiscard]] Index work_size() const noexcept { return size_ + tree_.longest + 8; }

    [[nodiscard]] Index size() const noexcept { return size_; }
    /// The unknown whose pivot was lost in the last factor(), or -1.
    [[nodiscard]] Index singular_row() const noexcept { return singular_row_; }
    /// Values kept by the factor, padding included.
    [[nodiscard]] Index factor_entries() const noexcept { return tree_.panel_size; }

  private:
    TEPOR_INLINE void solve_four(double* b) const noexcept;

    Index size_ = 0;
    Index singular_row_ = -1;
    detail::SupernodeTree tree_;
    detail::FrontKernels kernels_;
    detail::Buffer<double> panel_;
    detail::Buffer<double> stack_[2];     // updates waiting for their parents, by parity of depth
    mutable detail::Buffer<double> work_; // for four right-hand sides
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/cholesky.hpp>
#endif
