#pragma once
// One pass over all vertices: the patch fluxes of order 1 and 2, summed into side moments.

#include <tepor/flux/loads.hpp>
#include <tepor/flux/problem.hpp>
#include <vector>

namespace tepor::detail {

/// What every stage of the flux reads.
struct FluxWork {
    const FluxProblem& problem;
    const double* temperature;
    std::vector<Id> neighbours;       ///< side_neighbours
    std::vector<SideMoments> moments; ///< side_moments
    SourceLoads loads;                ///< source_loads
};

/// Order 1, planar: adds the flux of every vertex to `outflow`: per cell side two numbers, the flux leaving the cell times the
/// length of the side, at the start and at the end of the side.
///
/// Patch minimisation in closed form over linear fields, continuous in their normal part (P. Destuynder and B. Metivet, Math.
/// Comp. 68 (1999) 1379; D. Braess and J. Schoeberl, Math. Comp. 77 (2008) 651). O(vertices); balances that do not close by
/// what the solver left over are closed by a constant divergence on the patch, which the residual term finds again.
void sweep_order1(const FluxWork& work, double* outflow);

/// Order 2, planar: per cell side three Legendre moments of the outflow, counter-clockwise; `bubble` one number per cell.
/// The dofs of FluxTables2; its dofs 9 and 10 follow from the divergence.
void sweep_order2(const FluxWork& work, double* outflow, double* bubble);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/sweep1.hpp>
#include <tepor/flux/impl/sweep2.hpp>
#endif
