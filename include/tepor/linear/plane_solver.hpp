#pragma once
// PlaneSolver: factor or multigrid for systems of 2D bodies, behind a pointer.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/linear/sparse_matrix.hpp>

namespace tepor {

/// Solves with the leading block of a matrix by the means choose_solver() picks. Behind a pointer, because these solvers are
/// much code: a program of 1D bodies alone never makes one, and so its compiler never meets them (see PlaneSolverMaker).
/// One thread at a time.
class PlaneSolver {
  public:
    PlaneSolver() = default;
    PlaneSolver(const PlaneSolver&) = delete;
    PlaneSolver& operator=(const PlaneSolver&) = delete;
    virtual ~PlaneSolver() = default;

    /// Iterative solves and their set-up use this many threads, the caller's included; the results keep the same bits.
    virtual void use_threads(int threads) = 0;

    /// Decomposes `matrix` for `solves` right-hand sides. It must stay alive and unchanged until the next call; the pattern is
    /// always the same, and the places (one per unknown) guide an ordering. With `may_drop_zeros` an iterative solver may take
    /// entries out of `matrix` that are zero up to rounding, instead of working on a copy without them.
    /// @return false when it is singular; see singular_unknown()
    [[nodiscard]] virtual bool factor(SparseMatrix& matrix, Index n, const Point* places, Index solves,
                                      bool may_drop_zeros) = 0;

    /// b := A^-1 b in place, with the transposed matrix where asked; with a direct factor it allocates nothing. An iterative
    /// solver that meets more right-hand sides than it was made for, or proves slow, gives way to a factor where that pays.
    /// @param limit  the residual sum of |r| an iterative solve has to reach; direct ones ignore it
    /// @return false when an iteration stalled
    [[nodiscard]] virtual bool solve(double* b, double limit, bool transposed) = 0;

    /// For direct factors of symmetric matrices: notes the values of the factored matrix before others take their place.
    /// @return whether they were not known before
    virtual bool keep_base() = 0;
    /// Makes the factor serve the matrix as it stands, which differs from the factored one in at most `most` rows, by a low-rank
    /// update (see linear/low_rank.hpp): new rows cost a solve each, other values in the same rows next to nothing.
    /// @return 0, or how many rows differ when they are too many or the update fails: the factor then serves the old matrix
    [[nodiscard]] virtual Index update(Index most) = 0;
    /// Gives the matrix the values of keep_base() and ends the update.
    virtual void restore_base(SparseMatrix& matrix) = 0;

    [[nodiscard]] virtual Id singular_unknown() const noexcept = 0;
    /// The factor in use is exact up to rounding.
    [[nodiscard]] virtual bool direct() const noexcept = 0;
    /// Iterations of the last solve; 0 for direct ones.
    [[nodiscard]] virtual Index iterations() const noexcept = 0;
};

/// What makes a PlaneSolver. A body carries it from where its element is known to be two-dimensional to where it is solved.
using PlaneSolverMaker = std::unique_ptr<PlaneSolver> (*)();

/// The library's own: SparseCholesky and Multigrid.
[[nodiscard]] TEPOR_INLINE std::unique_ptr<PlaneSolver> make_plane_solver();

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/plane_solver.hpp>
#endif
