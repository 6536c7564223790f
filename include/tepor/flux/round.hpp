#pragma once
// Bodies of revolution, order 1: the flux times the radius, in quadratic fields that vanish on the axis.

#include <tepor/flux/defect.hpp>
#include <tepor/flux/sweep.hpp>

namespace tepor::detail {

/// With `tau = r s` the planar identity holds for div tau = r f and the weights k r, film r: fields of degree 2 (the dofs of
/// FluxTables2) balance r f exactly. On a cell side that lies on the axis tau vanishes altogether, else its energy would be
/// infinite. Adds to `outflow` (three moments per cell side) and `bubble` as sweep_order2 does; `loads` are pair moments of r f.
/// O(vertices), with a dense system of about 3 n unknowns for a vertex of n cells.
void sweep_round(const FluxWork& work, double* outflow, double* bubble);

/// Pair moments of r f as in SpreadSource, six per cell.
SourceLoads round_loads(const FluxProblem& problem);

/// Defect of `k r grad Th + tau` on a cell, as Defect2 but with radii: multiply by round_product alone.
Defect2 defect_round(const FluxWork& work, const Equilibrated& flux, Index c);

/// Integral of w.v/(k r) for two defects of cell c.
double round_product(const FluxProblem& problem, Index c, const Defect2& w, const Defect2& v);

/// True when the flux of a cell is zero to rounding on its side on the axis, if it has one; `size` in the units of Defect2.
bool vanishes_on_axis(const FluxProblem& problem, Index c, const Defect2& d, double size);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/round.hpp>
#endif
