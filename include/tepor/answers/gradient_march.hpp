#pragma once
// gradient of a march: derivatives of what a run ends in, passes through, or adds up to.

#include <tepor/answers/gradient.hpp>
#include <tepor/base/config.hpp>
#include <tepor/solve/march.hpp>

namespace tepor {

/// The derivative of a quantity at the end of a recorded march by every parameter and node position.
///
/// Discrete adjoint, backwards through the recorded states: exact for the steps as they were taken (the choice of step sizes
/// counts as given). A driven input's entry is the derivative by a shift of all its values alike. Say
/// `march.record()` before the run.
///
///     march.record();
///     march.advance_to(3600.0);
///     Gradient slope = gradient(march, mean_on("outer"));
///
/// @throws Error missing        nothing was recorded
///               too_large      the states did not fit the memory stated in record()
///               not_supported  latent heat; heat through a prescribed face at an instant (ask for its integral)
TEPOR_INLINE Gradient gradient(const March& march, const Quantity& quantity);

/// The same at a time at which a step ended [s]. @throws Error no_answer  no step ended then
TEPOR_INLINE Gradient gradient(const March& march, const Quantity& quantity, double time);

/// Of the quantity's integral over the recorded run [unit s], by step means, as March::integral adds it up.
TEPOR_INLINE Gradient gradient_of_integral(const March& march, const Quantity& quantity);

/// A peak's derivative is that of the quantity at the instant it has now.
struct PeakGradient {
    Gradient gradient;
    double time = 0.0; ///< [s]
    /// The peak lies at the start or end of the run, or two instants tie: the derivative holds to one side only.
    bool one_sided = false;
};
TEPOR_INLINE PeakGradient gradient_of_peak(const March& march, const Quantity& quantity);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/gradient_march.hpp>
#endif
