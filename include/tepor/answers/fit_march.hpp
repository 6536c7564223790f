#pragma once
// fit of a march: parameters from readings taken over time.

#include <tepor/answers/fit.hpp>
#include <tepor/solve/adaptive.hpp>
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

/// Parameters of a body from readings over time, marched from `start` with fixed steps. Slopes are exact for the steps taken:
/// by forward sensitivities, one solve per step and parameter, or by the adjoint, one run back per reading, whichever is cheaper;
/// by the adjoint alone where heat capacity depends on temperature or material melts.
///
/// Conductivity and heat capacity are told apart only when a heat is known (a flux, a power, a film); temperatures alone
/// give their quotient, and the pair is refused by name.
/// @throws Error as fit(); outside  a reading before the start
[[nodiscard]] TEPOR_INLINE Fitted fit(const Body& body, const Initial& start, const Theta& steps,
                                      const std::vector<FitBy>& parameters, const std::vector<TimedReading>& readings,
                                      const FitOptions& options = {});

/// The same with steps of controlled error, landing on the times of the readings. The steps chosen change a little from trial to
/// trial: keep their tolerance well below the readings' uncertainties.
[[nodiscard]] TEPOR_INLINE Fitted fit(const Body& body, const Initial& start, const Adaptive& steps,
                                      const std::vector<FitBy>& parameters, const std::vector<TimedReading>& readings,
                                      const FitOptions& options = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/fit_march.hpp>
#endif
