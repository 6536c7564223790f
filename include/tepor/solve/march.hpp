#pragma once
// March: a body through time, step by step.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/field/field.hpp>
#include <tepor/solve/adaptive.hpp>
#include <tepor/solve/checkpoint.hpp>
#include <tepor/solve/initial.hpp>
#include <tepor/solve/march_handles.hpp>
#include <tepor/solve/step.hpp>
#include <tepor/solve/theta.hpp>
#include <utility>

namespace tepor {

/// A body through time: owns an immutable snapshot of the body and its own parameter values, so later calls on the Body do
/// not touch it. One thread at a time.
///
/// A control loop calls set, operator[] and advance(), which are noexcept. For a linear body (nothing depends on temperature, no
/// matrix entry on time) and Theta, advance() also allocates nothing, locks nothing and does the same number of operations each time
/// for bodies solved directly (in 2D up to 200,000 unknowns), and driven powers, fluxes, fluid and prescribed temperatures cost no
/// factorisation. Jumps of schedules inside a step split it, which factors the pieces' matrices once.
class March {
  public:
    /// @throws Error bad_value (theta, step, tolerance, initial temperatures), missing (density, specific heat), singular, and
    ///         whatever the description gets wrong
    TEPOR_INLINE March(const Body& body, const Initial& start, const Theta& theta);
    TEPOR_INLINE March(const Body& body, const Initial& start, const Adaptive& adaptive);
    /// Goes on from a checkpoint of a march of this body; the parameters have the values they had there.
    /// @throws Error bad_file (of another body), and as above
    TEPOR_INLINE March(const Body& body, const Checkpoint& from, const Theta& theta);
    TEPOR_INLINE March(const Body& body, const Checkpoint& from, const Adaptive& adaptive);
    TEPOR_INLINE March(March&&) noexcept;
    TEPOR_INLINE March& operator=(March&&) noexcept;
    March(const March&) = delete;
    March& operator=(const March&) = delete;
    TEPOR_INLINE ~March();

    // ---- before the loop: names and places are resolved once
    /// @throws Error bad_name, outside, wrong_dimension, not_supported
    [[nodiscard]] TEPOR_INLINE Probe watch(const Quantity& quantity);
    /// @throws Error unused (the body does not use it), not_supported (a thickness)
    [[nodiscard]] TEPOR_INLINE Input drive(const Parameter& parameter);
    /// Integral of a quantity over time from now on [unit s]; heat counts with its step mean, so it is what has passed.
    [[nodiscard]] TEPOR_INLINE Integral integral(const Quantity& quantity);
    /// Highest value of a quantity from now on, at step ends (Adaptive: along the parabola of each step).
    [[nodiscard]] TEPOR_INLINE Peak peak(const Quantity& quantity);

    /// Keeps the states from now on, for gradient(march, ...): 8 bytes per unknown and substep, twice that with Adaptive, up to
    /// `megabytes` in all. When they no longer fit, every second state stays, then every fourth and so on, and the gradient goes
    /// through the steps between again; n states of memory are enough for n^2 / 4 substeps. A recording loop allocates.
    /// @throws Error bad_value
    TEPOR_INLINE void record(double megabytes = 1024.0);

    // ---- the loop
    /// A new value, held from the next step on. NaN, infinity or a value its use does not allow keep the last one, and the next
    /// Step says so.
    TEPOR_INLINE void set(Input input, double value) noexcept;
    /// One step: Theta's step exactly, or one accepted step of Adaptive.
    TEPOR_INLINE Step advance() noexcept;
    /// Value now; NaN when it has none (unbounded flow, a law that fails).
    [[nodiscard]] TEPOR_INLINE double operator[](Probe probe) const noexcept;
    [[nodiscard]] TEPOR_INLINE double operator[](Integral integral) const noexcept;
    [[nodiscard]] TEPOR_INLINE Moment operator[](Peak peak) const noexcept;
    /// [s]
    [[nodiscard]] TEPOR_INLINE double time() const noexcept;
    /// Steps advanced.
    [[nodiscard]] TEPOR_INLINE Index steps() const noexcept;

    // ---- longer runs
    /// Advances to time t exactly (a last step that does not fit is shortened) and calls the observers on the way.
    /// @throws Error bad_value (t lies in the past), and what a step that could not be completed stands for; the march then stands at
    ///         the last good step
    void advance_to(double t) { run(t, nullptr); }
    /// The same with `progress(const March&)` called after every step; false stops. @throws Error cancelled
    template <class F>
    void advance_to(double t, F progress) {
        detail::MarchCall<F> call(std::move(progress));
        run(t, &call);
    }
    /// `observer(const March&)` is called by advance_to and time_to_reach at the present time plus every multiple of `interval`
    /// [s], on which steps land exactly. @throws Error bad_value
    template <class F>
    void observe(double interval, F observer) {
        observe_with(interval, std::make_unique<detail::MarchCall<F>>(std::move(observer)));
    }
    /// Advances until the quantity passes `value`, either way; the time of passing, found to rounding on the curve between steps
    /// (a straight line for Theta, a parabola for Adaptive; the march stands at the end of that step).
    /// @throws Error no_answer (not reached by `latest` [s]; 0: not reached before everything stopped changing)
    [[nodiscard]] TEPOR_INLINE double time_to_reach(const Quantity& quantity, double value, double latest = 0.0);

    // ---- cold: the state
    /// @throws Error as Field::operator[]
    [[nodiscard]] TEPOR_INLINE double operator[](const Quantity& quantity) const;
    /// The field now, with the rate of storage of this instant.
    [[nodiscard]] TEPOR_INLINE Field field() const;
    /// Mean of the last step [W].
    [[nodiscard]] TEPOR_INLINE Balance balance() const;
    /// Sum over the run [J in place of W]; every condition counts by its net over the run.
    [[nodiscard]] TEPOR_INLINE Balance total() const;
    /// Molten share of what can melt in a region, 0 to 1.
    [[nodiscard]] TEPOR_INLINE double molten_in(std::string_view region) const;
    /// The state, to go on from later.
    [[nodiscard]] TEPOR_INLINE Checkpoint checkpoint() const;
    /// The value a parameter has in this march.
    [[nodiscard]] TEPOR_INLINE double value(const Parameter& parameter) const;
    /// Size of the last step [s].
    [[nodiscard]] TEPOR_INLINE double last_step() const noexcept;
    /// The smallest step [s] that makes sense on this mesh: below it a consistent (or blended) capacity lets temperatures swing beyond
    /// their neighbours after a jump. 0 for lumped capacity, which knows no such limit. Taken at the start temperatures, and anew
    /// when a driven conductivity, density or specific heat changes.
    ///
    /// max over the nodes i of sum |M_ij| / sum max(-K_ij, 0), j not i, divided by theta: h^2 / (6 theta a) on 1D cells of order 1,
    /// h^2 / (8 theta a) on equilateral triangles (a the diffusivity), where it is sharp; an estimate on other cells. TR-BDF2 has 0.29 in
    /// place of theta. Source: the sign condition of M + theta dt K, derived.
    [[nodiscard]] TEPOR_INLINE double sensible_step() const noexcept;
    /// Factorisations so far; constant while a loop only sets loads.
    [[nodiscard]] TEPOR_INLINE Index factorisations() const noexcept;
    /// Steps that Adaptive tried again with half their size.
    [[nodiscard]] TEPOR_INLINE Index rejections() const noexcept;

    // for the verbs built on it
    [[nodiscard]] detail::Marcher& marcher() const noexcept { return *marcher_; }
    // for derivatives
    /// What record() has kept; null without it.
    [[nodiscard]] TEPOR_INLINE const detail::MarchTape* tape() const noexcept;
    [[nodiscard]] TEPOR_INLINE const std::shared_ptr<const Model>& shared_model() const noexcept;
    [[nodiscard]] TEPOR_INLINE Capacity capacity() const noexcept;

  private:
    TEPOR_INLINE void run(double t, detail::MarchCallback* progress);
    TEPOR_INLINE void observe_with(double interval, std::unique_ptr<detail::MarchCallback> observer);

    std::unique_ptr<detail::Marcher> marcher_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/march.hpp>
#endif
