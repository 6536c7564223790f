#pragma once
// Which solver fits a system: by its size, its dimension and the number of right-hand sides to come.

#include <tepor/base/numbers.hpp>

namespace tepor {

/// The solvers of this room.
enum class SolverKind : int {
    automatic, ///< choose_solver() decides
    banded,    ///< Tridiagonal or BandedCholesky
    cholesky,  ///< SparseCholesky
    multigrid  ///< conjugate gradients with Multigrid
};

/// The kind expected to be fastest for `solves` right-hand sides with one matrix.
///
/// @param dim  1 or 2: in 1D banded elimination is best at every size
/// One solve pays for multigrid from about 20,000 unknowns; many solves share one factor, which stays the better up to
/// about 200,000, where its solves become as dear as multigrid's and its memory several times as large.
constexpr SolverKind choose_solver(Index unknowns, int dim, Index solves) noexcept {
    if (dim == 1) return SolverKind::banded;
    if (unknowns < 20000) return SolverKind::cholesky;
    if (unknowns > 200000) return SolverKind::multigrid;
    // Between: a factor costs about as much as 3 (at 2e4) to 6 (at 2e5) multigrid solves.
    return solves >= 6 ? SolverKind::cholesky : SolverKind::multigrid;
}

} // namespace tepor
