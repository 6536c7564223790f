#pragma once
// compact: a small model of a body for control, with a bound on what it leaves out.

#include <tepor/answers/state_space.hpp>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/describe/parameter.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/solve/capacity.hpp>
#include <vector>

namespace tepor {

/// What the small model is for and how good it has to be.
struct CompactOptions {
    std::vector<Parameter> inputs{};    ///< powers, fluxes, fluid temperatures, prescribed temperatures
    std::vector<Quantity> outputs{};    ///< temperatures, means, heats
    double sample_time = 0.0;           ///< [s], > 0
    double tolerance = 1e-3;            ///< error bound as a share of the peak gain (scaled)
    double highest_frequency = 0.0;     ///< [rad/s] up to which the basis is made; 0: pi / sample_time
    std::vector<double> input_scale{};  ///< expected size of each input's change; empty: 1 each
    std::vector<double> output_scale{}; ///< what counts as one at each output; empty: 1 each
    /// The symmetric form: every state decays by itself (real poles, stable and passive at any order, more states).
    bool passive = false;
    Index order = 0; ///< balanced form: this many states whatever the tolerance; 0: as the tolerance asks
    Capacity capacity = Capacity::automatic;
};

/// A linear model of few states around the steady state at the body's present values.
///
/// The basis comes from solves of the body at real shifts, placed where the certified error is largest; the order from
/// balanced truncation of the basis model with its bound (2 x the sum of what is dropped), the dropped states replaced by
/// their steady answer so that steady gains are exact; time steps are exact for inputs held over each step. The basis is
/// certified against the full body at sampled frequencies by the residuals of both sides, without unknown constants.
/// Sources: Moore 1981; Glover 1984; Enns 1984; Liu & Anderson 1989.
///
///     StateSpace plant = compact(platen, {.inputs = {power}, .outputs = {sensor}, .sample_time = 1.0});
///
/// @throws Error missing        no inputs, outputs or sample time; density or specific heat
///               unused         an input the body does not use
///               not_supported  an input that multiplies temperature, moves the body or enters nonlinearly; an extreme as output;
///                              conductivity that depends on temperature; latent heat; data that depend on time
///               not_converged  the tolerance cannot be certified
///               singular       no stable steady state
/// Cost  at most 14 factorisations of the body's matrix
[[nodiscard]] TEPOR_INLINE StateSpace compact(const Body& body, const CompactOptions& options);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/compact.hpp>
#endif
