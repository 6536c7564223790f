#pragma once
// gradient of a march: derivatives of what a run ends in, passes through, or adds up to.

#include <tepor/answers/gradient.hpp>
#include <tepor/base/config.hpp>
#include <tepor/solve/march.hpp>

namespace tepor {

/// The derivative of a quantity at the end of a recorded march by every parameter and node position.
///
/// Discrete adjoint, backwards through the recorded states: exact for the steps as they were taken (the choice of step sizes and
/// the temperatures it started from count as given). A driven input's entry is the derivative by a shift of all its values alike.
/// Say `march.record()` before the run. Heat capacities that depend on temperature and latent heat count with the slope of the
/// heat content at each state; a node on its way through a melting temperature without width stays there.
///
/// Cost of a linear body  about one run: one solve per step with the factors of the march, sums of products, and one contraction
/// at the end. Others are assembled, factored and contracted once per step. States that did not fit the memory stated are gone
/// through again from checkpoints, which costs one more run.
///
///     march.record();
///     march.advance_to(3600.0);
///     Gradient slope = gradient(march, mean_on("outer"));
///
/// @throws Error missing        nothing was recorded
///               too_large      not even checkpoints fit the memory stated in record()
///               not_supported  heat through a prescribed face at an instant (ask for its integral); stored heat that is in part
///                              latent; a Parameter as a melting temperature without width; exact cells
TEPOR_INLINE Gradient gradient(const March& march, const Quantity& quantity);

/// The same at a time at which a step ended [s]. @throws Error no_answer  no step ended then
TEPOR_INLINE Gradient gradient(const March& march, const Quantity& quantity, double time);

/// Of the quantity's integral over the recorded run [unit s], by step means, as March::integral adds it up.
TEPOR_INLINE Gradient gradient_of_integral(const March& march, const Quantity& quantity);

/// A peak's derivative is that of the quantity at the instant it has now.
struct PeakGradient {
    Gradient gradient;
    double time = 0.0; ///< [s]
    /// The peak lies at the start or end of the run or at an entry of a schedule, or two instants tie: the derivative holds to
    /// one side only.
    bool one_sided = false;
};
TEPOR_INLINE PeakGradient gradient_of_peak(const March& march, const Quantity& quantity);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/gradient_march.hpp>
#endif
