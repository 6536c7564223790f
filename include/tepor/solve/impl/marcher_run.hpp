#pragma once
// Longer runs: landing on asked times, observers, times to reach a value.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/solve/impl/marcher.hpp>

namespace tepor::detail {

TEPOR_INLINE void Marcher::raise_verdict(Verdict verdict) const {
    const std::string when = text("march: the step from t = ", time, " s failed, ");
    const std::string keep = "; the march stands at its last good step";
    switch (verdict) {
    case Verdict::bad_law:
        if (fault_) raise(fault_);
        throw Error(ErrorCode::bad_law, "", when + "a value cannot be used" + keep);
    case Verdict::outside_table:
        if (table_)
            throw Error(ErrorCode::outside_table, table_->label(),
                        text(when, table_->label(), ": the table covers ", table_->value().table().first(), " to ",
                             table_->value().table().last(), ", but the temperature is ", table_T_,
                             "; extend the table, or say Outside::hold to keep its end value", keep));
        throw Error(ErrorCode::outside_table, "", when + "a table was read outside its range" + keep);
    case Verdict::singular:
        throw Error(ErrorCode::singular, "",
                    text(when, "the matrix has lost a pivot",
                         "; a source that grows with temperature may need a shorter step", keep));
    case Verdict::step_too_small:
        throw Error(ErrorCode::not_converged, "Adaptive",
                    text(when, "the step would have to go below its smallest size",
                         "; raise the tolerance, or look for a law that jumps", keep));
    case Verdict::out_of_memory: throw std::bad_alloc();
    default:
        throw Error(ErrorCode::not_converged, "",
                    text(when, "not converged after ", passes, " passes, residual ", residual_,
                         " W; take a shorter step, or Adaptive, which shortens it by itself", keep));
    }
}

TEPOR_INLINE void Marcher::run(double t, const March& march, MarchCallback* progress) {
    if (!(t >= time) || !std::isfinite(t))
        throw Error(ErrorCode::bad_value, "advance_to",
                    text("advance_to: t = ", t, " s, expected a finite time at or after the present ", time, " s"));
    while (true) {
        double target = t;
        for (const Observer& o : observers) target = std::min(target, o.next());
        const double tiny = 1e-9 * (scheme.adaptive ? 1e-3 * (1.0 + std::abs(target)) : scheme.step);
        if (target > time + tiny) {
            const double grid = grid_start_ + as_double(grid_steps_ + 1) * scheme.step;
            const bool whole = !scheme.adaptive && grid <= target + tiny;
            const Verdict verdict = whole ? advance() : advance_short(target);
            if (verdict != Verdict::ok && verdict != Verdict::input_kept) raise_verdict(verdict);
            if (progress && !progress->call(march))
                throw Error(ErrorCode::cancelled, "advance_to",
                            text("advance_to: cancelled at t = ", time, " s; the march stands at its last step"));
        }
        if (time < target - tiny) continue;
        for (Observer& o : observers)
            while (o.next() <= time + tiny) {
                ++o.calls;
                (void)o.call->call(march);
            }
        if (t <= time + tiny) return;
    }
}

TEPOR_INLINE double Marcher::curve(const Reading& reading, double share) {
    if (!scheme.adaptive) {
        for (std::size_t u = 0; u < T_.size(); ++u) leg_T_[u] = start_T_[u] + share * (T_[u] - start_T_[u]);
    } else {
        // parabola through start, stage and end of the step
        const double g = 2.0 - std::sqrt(2.0);
        const double a = (share - g) * (share - 1.0) / g;
        const double b = share * (share - 1.0) / (g * (g - 1.0));
        const double c = share * (share - g) / (1.0 - g);
        for (std::size_t u = 0; u < T_.size(); ++u) leg_T_[u] = a * early_T_[u] + b * stage_T_[u] + c * T_[u];
    }
    const double at = start_time_ + share * (time - start_time_);
    if (!reading.functional.reaction.unknown.empty()) {
        rates(leg_T_.data(), {at, at, 1.0});
        instant_fresh_ = false;
    }
    return value_of(reading, leg_T_.data(), instant_.data(), {at, at, 1.0});
}

TEPOR_INLINE double Marcher::time_to_reach(const March& march, const Quantity& quantity, double value, double latest) {
    const Reading reading = compile_reading(quantity);
    const bool open = !(latest > 0.0);
    if (open && model->time_dependent && events_.empty())
        throw Error(ErrorCode::bad_value, "latest",
                    text("time_to_reach: data that depend on time may change for ever; say `latest`, when to give up"));
    double before = now_value(reading);
    if (before == value) return time;
    double hottest = 0.0;
    Index still = 0;
    while (open || time < latest) {
        double target = latest;
        if (open) target = std::numeric_limits<double>::infinity();
        for (const Observer& o : observers) target = std::min(target, o.next());
        const double grid = grid_start_ + as_double(grid_steps_ + 1) * scheme.step;
        const bool whole = scheme.adaptive ? false : grid <= target;
        const double start = time;
        const Verdict verdict =
            whole || (scheme.adaptive && !std::isfinite(target)) ? advance() : advance_short(target);
        if (verdict != Verdict::ok && verdict != Verdict::input_kept) raise_verdict(verdict);
        for (Observer& o : observers)
            while (o.next() <= time * (1.0 + 1e-14)) {
                ++o.calls;
                (void)o.call->call(march);
            }
        const double after = now_value(reading);
        if ((before - value) * (after - value) <= 0.0 && after != before) {
            // the first passage on the curve, by bisection to rounding; a stage beyond the value is met first
            double low = 0.0;
            double high = 1.0;
            if (scheme.adaptive) {
                const double middle = curve(reading, 2.0 - std::sqrt(2.0));
                if ((before - value) * (middle - value) <= 0.0) high = 2.0 - std::sqrt(2.0);
            }
            for (int i = 0; i < 60; ++i) {
                const double middle = 0.5 * (low + high);
                ((before - value) * (curve(reading, middle) - value) > 0.0 ? low : high) = middle;
            }
            return start + 0.5 * (low + high) * (time - start);
        }
        before = after;
        double change = 0.0;
        hottest = 0.0;
        for (std::size_t u = 0; u < T_.size(); ++u) {
            change = std::max(change, std::abs(step_rise_[u]));
            hottest = std::max(hottest, std::abs(T_[u]));
        }
        still = change <= 1e-12 * (1.0 + hottest) ? still + 1 : 0;
        if (open && still >= 3 && !std::isfinite(next_event(time))) break;
    }
    throw Error(ErrorCode::no_answer, quantity.label(),
                text("time_to_reach: ", quantity.label(), " has not reached ", value, " by t = ", time, " s; it is ",
                     before, open ? " and nothing changes any more" : ""));
}

} // namespace tepor::detail
