#pragma once
// One step of Theta: pieces between events, damped starts, and the linear substep.

#include <algorithm>
#include <cmath>
#include <limits>
#include <new>
#include <tepor/base/memory.hpp>
#include <tepor/solve/impl/marcher.hpp>

namespace tepor::detail {

TEPOR_INLINE double Marcher::next_event(double after) const noexcept {
    if (events_.empty() || !(events_.back() > after)) return std::numeric_limits<double>::infinity();
    return *std::upper_bound(events_.begin(), events_.end(), after);
}

TEPOR_INLINE bool Marcher::jumps_at(double event) const noexcept {
    const auto at = std::lower_bound(events_.begin(), events_.end(), event);
    return at != events_.end() && *at == event && event_jumps_[as_size(at - events_.begin())] != 0;
}

TEPOR_INLINE Verdict Marcher::fail(const Fault& fault) noexcept {
    fault_ = fault;
    return Verdict::bad_law;
}

TEPOR_INLINE Verdict Marcher::advance() noexcept {
    if (scheme.adaptive) return advance_adaptive(std::numeric_limits<double>::infinity());
    const Verdict verdict = advance_by(grid_start_ + as_double(grid_steps_ + 1) * scheme.step, scheme.step);
    if (verdict == Verdict::ok || verdict == Verdict::input_kept) ++grid_steps_;
    return verdict;
}

TEPOR_INLINE Verdict Marcher::advance_short(double end) noexcept {
    if (scheme.adaptive) return advance_adaptive(end);
    const Verdict verdict = advance_by(end, end - time);
    grid_start_ = time;
    grid_steps_ = 0;
    return verdict;
}

TEPOR_INLINE void Marcher::keep_start() {
    start_time_ = time;
    start_damp_ = damp_;
    if (tape) start_legs_ = tape->legs.size();
    start_T_ = T_;
    if (!molten_.empty()) start_molten_ = molten_;
}

TEPOR_INLINE void Marcher::back_to_start() noexcept {
    time = start_time_;
    damp_ = start_damp_;
    if (tape) tape->shorten(start_legs_);
    std::copy(start_T_.begin(), start_T_.end(), T_.begin());
    std::copy(start_molten_.begin(), start_molten_.end(), molten_.begin());
}

TEPOR_INLINE Verdict Marcher::advance_by(double end, double dt) noexcept {
    Verdict verdict = Verdict::ok;
    try {
        keep_start();
        verdict = take_inputs();
        if (verdict == Verdict::ok) {
            begin_books(dt);
            verdict = interval(end, dt);
        }
        if (verdict == Verdict::ok) end_books(start_time_, dt);
    } catch (const Error& error) {
        verdict = verdict_of(error);
    } catch (const std::bad_alloc&) {
        verdict = Verdict::out_of_memory;
    }
    if (verdict != Verdict::ok) {
        back_to_start();
        return verdict;
    }
    ++steps;
    if (!input_kept_) return Verdict::ok;
    input_kept_ = false;
    return Verdict::input_kept;
}

TEPOR_INLINE Verdict Marcher::verdict_of(const Error& error) noexcept {
    switch (error.code()) {
    case ErrorCode::singular: return Verdict::singular;
    case ErrorCode::bad_law:
    case ErrorCode::bad_value: return Verdict::bad_law;
    case ErrorCode::outside_table: return Verdict::outside_table;
    default: return Verdict::not_converged;
    }
}

TEPOR_INLINE Verdict Marcher::interval(double end, double dt) {
    // events closer to the step's end than rounding are taken to lie on it
    const double tiny = 1e-9 * dt;
    double event = next_event(time + tiny);
    if (event > end + tiny) return piece(end, dt);
    while (true) {
        const bool last = event > end - tiny;
        const double to = event < end + tiny ? event : end;
        const bool whole = last && time == start_time_;
        const Verdict verdict = piece(to, whole ? dt : to - time);
        if (verdict != Verdict::ok) return verdict;
        if (to == event && jumps_at(event) && scheme.damped && scheme.theta < 1.0) damp_ = 4;
        if (last) return Verdict::ok;
        event = next_event(time + tiny);
    }
}

TEPOR_INLINE Verdict Marcher::piece(double end, double dt) {
    const bool in_one = damp_ <= 0 || scheme.theta >= 1.0;
    whole_leg_ = in_one && lazy_books_ && dt == whole_ && time == start_time_;
    if (!whole_leg_ && time == start_time_) {
        std::fill(mean_.begin(), mean_.end(), 0.0);
        std::fill(step_rise_.begin(), step_rise_.end(), 0.0);
    }
    if (in_one) return substep(end, dt, scheme.theta);
    damp_ = damp_ > 2 ? damp_ - 2 : 0;
    const Verdict first = substep(time + 0.5 * dt, 0.5 * dt, 1.0);
    return first == Verdict::ok ? substep(end, 0.5 * dt, 1.0) : first;
}

TEPOR_INLINE Verdict Marcher::substep(double end, double dt, double theta) {
    const Verdict verdict = linear_ ? linear_substep(end, dt, theta) : newton_substep(end, dt, theta);
    if (verdict == Verdict::ok) {
        least_leg_ = std::min(least_leg_, theta * dt);
        if (tape) tape->add({time, end, dt, theta, false, 0}, {T_, molten_, {}, {}}, values);
        time = end;
        last_step = dt;
    }
    return verdict;
}

TEPOR_INLINE bool Marcher::prescribe_ends(TimeSpan from, TimeSpan to) {
    if (model->free == model->unknowns) return true;
    if (prescribed_fresh_ && !prescribed_timed_) return true;
    fault_ = model->try_prescribe(values, from, prescribed_from_.data());
    if (!fault_) fault_ = model->try_prescribe(values, to, prescribed_to_.data());
    prescribed_fresh_ = !fault_;
    return prescribed_fresh_;
}

TEPOR_INLINE const std::vector<double>& Marcher::prescribed_end(double at) {
    prescribed_fresh_ = false;
    if (!prescribe_ends({at, at, 1.0}, {at, at, 1.0, true})) raise(fault_);
    prescribed_fresh_ = false;
    return prescribed_to_;
}

/// dt (F - K T) of a line, row by row.
TEPOR_INLINE void Marcher::unbalanced_line(const double* TEPOR_RESTRICT T, const double* TEPOR_RESTRICT load, double dt,
                                           double* TEPOR_RESTRICT b) const noexcept {
    const Index n = model->free;
    const double* TEPOR_RESTRICT d = line_.diagonal.data();
    const double* TEPOR_RESTRICT o = line_.off.data();
    if (n == 1) {
        b[0] = dt * (load[0] - d[0] * T[0]);
    } else {
        b[0] = dt * (load[0] - (d[0] * T[0] + o[0] * T[1]));
        for (Index i = 1; i < n - 1; ++i)
            b[i] = dt * (load[i] - (d[i] * T[i] + (o[i - 1] * T[i - 1] + o[i] * T[i + 1])));
        b[n - 1] = dt * (load[n - 1] - (d[n - 1] * T[n - 1] + o[n - 2] * T[n - 2]));
    }
    for (const Line::Coupling& c : line_.couplings) b[c.row] -= dt * (c.value * T[c.column]);
}

TEPOR_INLINE Verdict Marcher::linear_substep(double end, double dt, double theta) {
    Lane* lane = lane_for(theta * dt);
    if (!lane) return Verdict::singular;
    const TimeSpan span{time, end, theta};
    if (const Fault fault = loads_->update(values, work_, span)) return fail(fault);
    if (!prescribe_ends({time, time, 1.0}, {end, end, 1.0, true})) return Verdict::bad_law;
    const Index n = model->free;
    const Index all = model->unknowns;
    double* T = T_.data();
    double* b = b_.data();
    double* rise = rise_.data();
    const double* from = prescribed_from_.data();
    const double* to = prescribed_to_.data();
    const double* load = loads_->vector();
    bool moved = false;
    for (Index u = n; u < all; ++u) {
        rise[u] = to[u] - T[u]; // from before a jump: what the capacity feels
        moved = moved || rise[u] != 0.0;
        T[u] = from[u];
    }
    // (M + theta dt K) rise = dt (F - K T), less what the prescribed unknowns do
    if (line_.on) {
        unbalanced_line(T, load, dt, b);
    } else {
        multiply(K_, all, T, b);
        for (Index u = 0; u < n; ++u) b[u] = dt * (load[u] - b[u]);
    }
    if (moved) {
        storage_->couple(rise, b);
        const double a = theta * dt;
        for (Index i = n; i < all; ++i) {
            const double by = a * (to[i] - from[i]);
            if (by == 0.0) continue;
            for (Id p = K_.start[as_size(i)]; p < K_.start[as_size(i) + 1] - 1; ++p)
                if (K_.column[as_size(p)] < n) b[K_.column[as_size(p)]] -= by * K_.lower[as_size(p)];
        }
    }
    double limit = 0.0;
    if (!lane->engine->direct()) {
        for (Index u = 0; u < n; ++u) limit += std::abs(b[u]);
        limit *= 1e-11; // far inside what the balance of a step may leave
    }
    if (!lane->engine->solve(b, limit)) return Verdict::not_converged;
    const double share = dt / whole_;
    const double back = 1.0 - theta;
    double* TEPOR_RESTRICT mean = mean_.data();
    double* TEPOR_RESTRICT sum = step_rise_.data();
    double* TEPOR_RESTRICT run = run_mean_.data();
    double* TEPOR_RESTRICT now = T;
    const double* TEPOR_RESTRICT d = b;
    if (whole_leg_) {
        for (Index u = 0; u < n; ++u) {
            const double rise_here = d[u];
            const double end_here = now[u] + rise_here;
            const double mean_here = end_here - back * rise_here;
            now[u] = end_here;
            sum[u] = rise_here;
            mean[u] = mean_here;
            run[u] += dt * mean_here;
        }
        for (Index u = n; u < all; ++u) {
            T[u] = to[u];
            sum[u] = rise[u];
            mean[u] = theta * to[u] + back * from[u];
            run[u] += dt * mean[u];
        }
    } else {
        for (Index u = 0; u < n; ++u) {
            now[u] += d[u];
            sum[u] += d[u];
            mean[u] += share * (now[u] - back * d[u]);
        }
        for (Index u = n; u < all; ++u) {
            T[u] = to[u];
            sum[u] += rise[u];
            mean[u] += share * (theta * to[u] + back * from[u]);
        }
    }
    prescribed_dt_ = dt;
    if (lazy_books_) return Verdict::ok;
    for (Index u = 0; u < n; ++u) {
        rise[u] = b[u];
        leg_T_[as_size(u)] = T[u] - back * b[u];
    }
    for (Index u = n; u < all; ++u) leg_T_[as_size(u)] = theta * to[u] + back * from[u];
    storage_->multiply(rise, instant_.data());
    return book(leg_T_.data(), span, dt, instant_.data());
}

} // namespace tepor::detail
