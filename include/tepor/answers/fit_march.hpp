#pragma once
// fit of a march: parameters from readings taken over time.

#include <tepor/answers/fit.hpp>
#include <tepor/solve/initial.hpp>
#include <tepor/solve/theta.hpp>
#include <vector>

namespace tepor {

/// One measured number at a time of a march.
struct TimedReading {
    Quantity quantity;
    double time = 0.0; ///< [s]; between steps the model is read on the straight line between their ends
    double value = 0.0;
    double uncertainty = 0.0; ///< standard uncertainty (one sigma), > 0, in the unit of the quantity
};

/// Parameters of a body from readings over time, marched from `start` with fixed steps. Slopes by forward sensitivities: one
/// solve per step and parameter, exact for the steps taken.
///
/// Conductivity and heat capacity are told apart only when a heat is known (a flux, a power, a film); temperatures alone
/// give their quotient, and the pair is refused by name.
/// @throws Error as fit(); outside  a reading before the start
[[nodiscard]] TEPOR_INLINE Fitted fit(const Body& body, const Initial& start, const Theta& steps,
                                      const std::vector<FitBy>& parameters, const std::vector<TimedReading>& readings,
                                      const FitOptions& options = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/fit_march.hpp>
#endif
