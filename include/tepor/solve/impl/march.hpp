#pragma once
// March on top of its Marcher.

#include <cmath>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/solve/impl/marcher_adaptive.hpp>
#include <tepor/solve/impl/marcher_books.hpp>
#include <tepor/solve/impl/marcher_minimum.hpp>
#include <tepor/solve/impl/marcher_newton.hpp>
#include <tepor/solve/impl/marcher_repeat.hpp>
#include <tepor/solve/impl/marcher_run.hpp>
#include <tepor/solve/impl/marcher_setup.hpp>
#include <tepor/solve/impl/marcher_state.hpp>
#include <tepor/solve/impl/marcher_theta.hpp>
#include <tepor/solve/march.hpp>

namespace tepor {

namespace detail {

TEPOR_INLINE Scheme scheme_of(const Theta& theta) {
    if (!(theta.theta >= 0.5 && theta.theta <= 1.0))
        throw Error(
            ErrorCode::bad_value, "theta",
            text("Theta: theta = ", theta.theta, ", expected 0.5 <= theta <= 1; below 0.5 steps are not stable"));
    if (!(theta.step > 0.0) || !std::isfinite(theta.step))
        throw Error(ErrorCode::bad_value, "step", text("Theta: step = ", theta.step, " s, expected a finite step > 0"));
    if (!(theta.tolerance > 0.0 && theta.tolerance < 1.0))
        throw Error(ErrorCode::bad_value, "tolerance",
                    text("Theta: tolerance = ", theta.tolerance, ", expected 0 < tolerance < 1"));
    if (theta.expected_steps < 0)
        throw Error(ErrorCode::bad_value, "expected_steps",
                    text("Theta: expected_steps = ", theta.expected_steps, ", expected 0 (many) or more"));
    if (theta.newton_passes < 0)
        throw Error(ErrorCode::bad_value, "newton_passes",
                    text("Theta: newton_passes = ", theta.newton_passes, ", expected 0 (until converged) or more"));
    Scheme scheme;
    scheme.theta = theta.theta;
    scheme.step = theta.step;
    scheme.damped = theta.damped_start;
    scheme.passes = theta.newton_passes;
    scheme.expected_steps = theta.expected_steps;
    scheme.tolerance = theta.tolerance;
    scheme.capacity = theta.capacity;
    return scheme;
}

TEPOR_INLINE Scheme scheme_of(const Adaptive& adaptive) {
    const auto refuse = [](const char* name, double value, const char* rule) {
        throw Error(ErrorCode::bad_value, name, text("Adaptive: ", name, " = ", value, ", expected ", rule));
    };
    if (!(adaptive.tolerance > 0.0) || !std::isfinite(adaptive.tolerance))
        refuse("tolerance", adaptive.tolerance, "a finite error per step in kelvin > 0");
    if (!(adaptive.first_step >= 0.0) || !std::isfinite(adaptive.first_step))
        refuse("first_step", adaptive.first_step, "seconds, or 0 to have it chosen");
    if (!(adaptive.largest_step > 0.0)) refuse("largest_step", adaptive.largest_step, "seconds > 0");
    if (!(adaptive.smallest_step >= 0.0 && adaptive.smallest_step < adaptive.largest_step))
        refuse("smallest_step", adaptive.smallest_step, "seconds from 0 to less than largest_step");
    if (!(adaptive.newton_tolerance > 0.0 && adaptive.newton_tolerance < 1.0))
        refuse("newton_tolerance", adaptive.newton_tolerance, "0 < newton_tolerance < 1");
    Scheme scheme;
    scheme.adaptive = true;
    scheme.damped = false;
    scheme.theta = 1.0;
    scheme.tolerance = adaptive.newton_tolerance;
    scheme.capacity = adaptive.capacity;
    scheme.error = adaptive.tolerance;
    scheme.first = adaptive.first_step;
    scheme.largest = adaptive.largest_step;
    scheme.smallest = adaptive.smallest_step;
    return scheme;
}

} // namespace detail

TEPOR_INLINE March::March(const Body& body, const Initial& start, const Theta& theta)
    : marcher_(std::make_unique<detail::Marcher>(body, start, detail::scheme_of(theta))) {}
TEPOR_INLINE March::March(const Body& body, const Initial& start, const Adaptive& adaptive)
    : marcher_(std::make_unique<detail::Marcher>(body, start, detail::scheme_of(adaptive))) {}
TEPOR_INLINE March::March(const Body& body, const Checkpoint& from, const Theta& theta)
    : March(body, initial(body.model()->scale == TemperatureScale::kelvin ? 300.0 : 20.0), theta) {
    marcher_->restore(from);
}
TEPOR_INLINE March::March(const Body& body, const Checkpoint& from, const Adaptive& adaptive)
    : March(body, initial(body.model()->scale == TemperatureScale::kelvin ? 300.0 : 20.0), adaptive) {
    marcher_->restore(from);
}
TEPOR_INLINE March::March(March&&) noexcept = default;
TEPOR_INLINE March& March::operator=(March&&) noexcept = default;
TEPOR_INLINE March::~March() = default;

TEPOR_INLINE Probe March::watch(const Quantity& quantity) {
    return Probe(marcher_->watch(quantity));
}
TEPOR_INLINE Input March::drive(const Parameter& parameter) {
    return Input(marcher_->drive(parameter));
}
TEPOR_INLINE Integral March::integral(const Quantity& quantity) {
    return Integral(marcher_->integral(quantity));
}
TEPOR_INLINE Peak March::peak(const Quantity& quantity) {
    return Peak(marcher_->peak(quantity));
}
TEPOR_INLINE void March::set(Input input, double value) noexcept {
    marcher_->set(input.id_, value);
}
TEPOR_INLINE Step March::advance() noexcept {
    return {marcher_.get(), marcher_->advance()};
}
TEPOR_INLINE double March::operator[](Probe probe) const noexcept {
    return marcher_->read(probe.id_);
}
TEPOR_INLINE double March::operator[](Integral integral) const noexcept {
    if (integral.id_ < 0 || detail::as_size(integral.id_) >= marcher_->integrals.size())
        return std::numeric_limits<double>::quiet_NaN();
    return marcher_->integrals[detail::as_size(integral.id_)].sum;
}
TEPOR_INLINE Moment March::operator[](Peak peak) const noexcept {
    if (peak.id_ < 0 || detail::as_size(peak.id_) >= marcher_->peaks.size())
        return {std::numeric_limits<double>::quiet_NaN(), 0.0};
    return marcher_->peaks[detail::as_size(peak.id_)].moment;
}
TEPOR_INLINE double March::time() const noexcept {
    return marcher_->time;
}
TEPOR_INLINE Index March::steps() const noexcept {
    return marcher_->steps;
}
TEPOR_INLINE double March::operator[](const Quantity& quantity) const {
    return marcher_->read(quantity);
}
TEPOR_INLINE Field March::field() const {
    return marcher_->field();
}
TEPOR_INLINE Balance March::balance() const {
    return marcher_->balance_of(false);
}
TEPOR_INLINE Balance March::total() const {
    return marcher_->balance_of(true);
}
TEPOR_INLINE double March::molten_in(std::string_view region) const {
    return marcher_->molten_in(region);
}
TEPOR_INLINE Checkpoint March::checkpoint() const {
    return marcher_->checkpoint();
}
TEPOR_INLINE double March::value(const Parameter& parameter) const {
    const Index slot = marcher_->model->slot_of(parameter);
    return slot < 0 ? parameter.value() : marcher_->values.slots[detail::as_size(slot)];
}
TEPOR_INLINE double March::last_step() const noexcept {
    return marcher_->last_step;
}
TEPOR_INLINE double March::sensible_step() const noexcept {
    return marcher_->sensible_step();
}
TEPOR_INLINE Index March::factorisations() const noexcept {
    return marcher_->factorisations;
}
TEPOR_INLINE void March::record(double megabytes) {
    if (!(megabytes > 0.0) || !std::isfinite(megabytes))
        throw Error(ErrorCode::bad_value, "megabytes",
                    detail::text("record: megabytes = ", megabytes, ", expected a finite number > 0"));
    marcher_->record(megabytes);
}
TEPOR_INLINE const detail::MarchTape* March::tape() const noexcept {
    return marcher_->tape.get();
}
TEPOR_INLINE const std::shared_ptr<const Model>& March::shared_model() const noexcept {
    return marcher_->model;
}
TEPOR_INLINE Capacity March::capacity() const noexcept {
    return marcher_->scheme.capacity;
}
TEPOR_INLINE Index March::rejections() const noexcept {
    return marcher_->rejections;
}
TEPOR_INLINE double March::time_to_reach(const Quantity& quantity, double value, double latest) {
    return marcher_->time_to_reach(*this, quantity, value, latest);
}
TEPOR_INLINE void March::run(double t, detail::MarchCallback* progress) {
    marcher_->run(t, *this, progress);
}
TEPOR_INLINE void March::observe_with(double interval, std::unique_ptr<detail::MarchCallback> observer) {
    if (!(interval > 0.0) || !std::isfinite(interval))
        throw Error(ErrorCode::bad_value, "interval",
                    detail::text("observe: interval = ", interval, " s, expected a finite time > 0"));
    marcher_->observers.push_back({marcher_->time, interval, 0, std::move(observer)});
}

TEPOR_INLINE double Step::residual() const {
    return marcher_->residual();
}
TEPOR_INLINE double Step::left_over() const {
    return marcher_->balance_of(false).left_over;
}
TEPOR_INLINE bool Step::below_minimum() const noexcept {
    return marcher_->below_minimum();
}
TEPOR_INLINE Index Step::passes() const noexcept {
    return marcher_->passes;
}
TEPOR_INLINE void Step::require() const {
    if (!completed()) marcher_->raise_verdict(verdict_);
}

} // namespace tepor
