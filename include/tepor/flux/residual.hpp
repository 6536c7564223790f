#pragma once
// Carries what the balances of the cells leave over to where heat can leave the body.

#include <tepor/flux/sweep.hpp>
#include <vector>

namespace tepor::detail {

/// What a cell's balance left over, and how well that number is known.
struct LeftOver {
    double value;
    double doubt; ///< bound of its rounding
};

/// Energy norms of two extra fluxes along a tree of cells rooted at prescribed temperatures, films, radiating sides and sinks.
///
/// The first has the divergence that the patches could not reach because the solver stopped early; it corrects the flux, so its
/// norm is the whole price of an inexact solve, without a constant of the domain. The second carries the rounding of all
/// balances, added in absolute value. O(cells). Infinite when some cell with heat left over has no way out.
struct CarriedNorms {
    double residual = 0.0;
    double rounding = 0.0;
};
CarriedNorms carry_left_over(const FluxWork& work, const std::vector<LeftOver>& left_over);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/residual.hpp>
#endif
