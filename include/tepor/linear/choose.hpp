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
/// Measured on general meshes of linear triangles (benchmarks/linear.cpp), all times in units of one multigrid solve of the
/// same size near 1e5 unknowns: building a factor 2.0, solving with it 0.16, building multigrid 0.8. Below, a factor gains: a steady
/// solve at a new conductivity takes half the time of multigrid at 20,000 unknowns and two thirds at 57,000. So one solve pays for
/// multigrid from about 60,000 unknowns, and from the third on a factor is ahead. Its memory grows faster than the mesh: 45 MB at 1e5
/// unknowns, 0.3 GB at 5e5; beyond that multigrid is chosen whatever the number of solves.
constexpr SolverKind choose_solver(Index unknowns, int dim, Index solves) noexcept {
    if (dim == 1) return SolverKind::banded;
    if (unknowns < 60000) return SolverKind::cholesky;
    const Index worthwhile = unknowns <= 200000 ? 3 : 20;
    return solves >= worthwhile && unknowns <= 500000 ? SolverKind::cholesky : SolverKind::multigrid;
}

} // namespace tepor
