#pragma once
// The load vector of a FluxProblem, for adjoint problems that are not described by a body's statements.

#include <tepor/flux/problem.hpp>
#include <vector>

namespace tepor {

/// `l(N_i) = integral of (f + c T_c + spread) N_i + films and contacts (film fluid N_i) - (flux + trace) N_i` for every degree of
/// freedom, per unit depth, radian or steradian. Orders 1 and 2 in 2D, any order in 1D. O(cells).
std::vector<double> flux_load(const FluxProblem& problem, Index dofs);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/flux_load.hpp>
#endif
