#pragma once
// What a quantity depends on besides the temperature: its derivative by slots and places at fixed T.

#include <tepor/base/config.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/field/functional.hpp>

namespace tepor {

/// Adds factor * dJ/d(slot, place) at fixed T: heats and fluxes through their coefficients and geometry, means through the
/// weights of their places, a temperature at a fixed place through the nodes that move past it. Reactions are left aside:
/// add their weights to those of contract_slopes(). An extreme moves with its cell.
TEPOR_INLINE void explicit_slope(const Functional& functional, const Quantity& quantity, const Model& model,
                                 const Values& values, Workspace& work, const double* T, TimeSpan time, double factor,
                                 SlopeSums& sums);

/// The weights of a functional's reactions as a full vector.
[[nodiscard]] TEPOR_INLINE std::vector<double> reaction_weights(const Functional& functional, const Model& model);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/field/impl/functional_slope.hpp>
#endif
