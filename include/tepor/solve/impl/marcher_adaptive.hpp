#pragma once
// One accepted step of TR-BDF2 with error control.
// Bank et al. 1985; as a diagonally implicit method with its error estimate: Hosea & Shampine 1996.

#include <algorithm>
#include <cmath>
#include <limits>
#include <new>
#include <tepor/solve/impl/marcher.hpp>
#include <tepor/solve/impl/marcher_newton.hpp>

namespace tepor::detail {

namespace tr_bdf2_numbers {
inline constexpr double root2 = 1.41421356237309504880;
inline constexpr double stage = 2.0 - root2; ///< where the trapezoidal stage ends, as a share of the step
inline constexpr double implicit = 0.5 * stage;
inline constexpr double weight = 0.25 * root2;
inline constexpr double error[3] = {(1.0 - 4.0 * weight) / 3.0, 1.0 / 3.0, -2.0 * implicit / 3.0};
} // namespace tr_bdf2_numbers

TEPOR_INLINE double Marcher::smallest_step() const noexcept {
    return scheme.smallest > 0.0 ? scheme.smallest : std::max(1e-9, 1e-12 * std::abs(time));
}

TEPOR_INLINE Verdict Marcher::advance_adaptive(double end) noexcept {
    Verdict verdict = Verdict::ok;
    try {
        keep_start();
        verdict = take_inputs();
        if (verdict != Verdict::ok) return verdict;
        if (!(step_ > 0.0)) step_ = scheme.first > 0.0 ? scheme.first : choose_first_step();
        while (true) {
            const double least = smallest_step();
            double dt = std::min(step_, scheme.largest);
            const double target = std::min(end, next_event(time + 0.5 * least));
            const bool lands = dt >= (target - time) * (1.0 - 1e-9);
            if (lands) dt = target - time;
            begin_books(dt);
            double error = 0.0;
            const double to = lands ? target : time + dt;
            verdict = tr_bdf2(to, dt, error);
            const bool fine = verdict == Verdict::ok && error <= scheme.error;
            if (fine) {
                if (tape) tape->add({time, to, dt, 1.0, true, 0}, {T_, molten_, stage_T_, stage_molten_}, values);
                time = to;
                last_step = dt;
                least_leg_ = tr_bdf2_numbers::implicit * dt;
                const double factor = 0.9 * std::cbrt(scheme.error / std::max(error, 1e-30));
                if (factor >= 2.0 && dt >= step_) step_ = std::min(2.0 * step_, std::max(scheme.largest, step_));
                end_books(start_time_, dt);
                break;
            }
            ++rejections;
            back_to_start();
            if (dt <= least) return verdict == Verdict::ok ? Verdict::step_too_small : verdict;
            const double factor =
                verdict == Verdict::ok ? 0.9 * std::cbrt(scheme.error / error) : 0.5; // a failed solve: half the step
            while (step_ > std::max(std::min(factor, 0.5) * dt, 0.5 * least)) step_ *= 0.5;
        }
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

/// Weak form at an instant [W].
TEPOR_INLINE bool Marcher::residual_at(const double* T, TimeSpan span, double* out) {
    if (linear_) {
        fault_ = loads_->update(values, work_, span);
        if (fault_) return false;
        multiply(K_, model->unknowns, T, out);
        for (Index u = 0; u < model->unknowns; ++u) out[u] -= loads_->vector()[u];
        return true;
    }
    Pass pass;
    pass.T = T;
    pass.time = span;
    pass.residual = out;
    assemble(*model, values, work_, pass);
    fault_ = pass.fault;
    return !fault_;
}

/// Solves for T_: heat stored since the start of the step + scale r(T) + the explicit part = 0.
TEPOR_INLINE Verdict Marcher::adaptive_stage(double scale, TimeSpan span, const double* explicit_part) {
    if (!linear_) return newton(scale, 1.0, span, explicit_part);
    Lane* lane = lane_for(scale);
    if (!lane) return Verdict::singular;
    if (!residual_at(T_.data(), span, b_.data())) return Verdict::bad_law;
    storage_->multiply(rise_.data(), stored_rise_.data());
    double limit = 0.0;
    for (Index u = 0; u < model->free; ++u) {
        double& b = b_[as_size(u)];
        b = -(stored_rise_[as_size(u)] + scale * b + explicit_part[u]);
        limit += std::abs(b);
    }
    if (!lane->engine->solve(b_.data(), 1e-12 * limit)) return Verdict::not_converged;
    for (Index u = 0; u < model->free; ++u) {
        T_[as_size(u)] += b_[as_size(u)];
        rise_[as_size(u)] += b_[as_size(u)];
    }
    return Verdict::ok;
}

TEPOR_INLINE bool Marcher::prescribe_stage(TimeSpan from, TimeSpan to) {
    if (!prescribe_ends(from, to)) return false;
    for (Index u = model->free; u < model->unknowns; ++u) {
        T_[as_size(u)] = prescribed_to_[as_size(u)];
        rise_[as_size(u)] = T_[as_size(u)] - piece_T_[as_size(u)];
    }
    if (!linear_) melt_prescribed();
    return true;
}

TEPOR_INLINE Verdict Marcher::tr_bdf2(double end, double dt, double& error) {
    using namespace tr_bdf2_numbers;
    const auto all = as_size(model->unknowns);
    const double middle = time + stage * dt;
    const TimeSpan first{time, time, 1.0};
    const TimeSpan second{middle, middle, 1.0};
    const TimeSpan third{end, end, 1.0, true};
    const double scale = implicit * dt;
    piece_T_ = T_;
    piece_molten_ = molten_;
    std::fill(rise_.begin(), rise_.end(), 0.0);
    if (!prescribe_stage(first, second)) return Verdict::bad_law;
    early_T_ = piece_T_;
    for (std::size_t u = as_size(model->free); u < all; ++u) early_T_[u] = prescribed_from_[u];
    if (!residual_at(early_T_.data(), first, r0_.data())) return Verdict::bad_law;
    for (std::size_t u = 0; u < all; ++u) explicit_[u] = scale * r0_[u];
    Verdict verdict = adaptive_stage(scale, second, explicit_.data());
    if (verdict != Verdict::ok) return verdict;
    stage_T_ = T_;
    stage_molten_ = molten_;
    if (!residual_at(stage_T_.data(), second, rg_.data())) return Verdict::bad_law;
    for (std::size_t u = 0; u < all; ++u) explicit_[u] = dt * weight * (r0_[u] + rg_[u]);
    if (!prescribe_stage(first, third)) return Verdict::bad_law;
    verdict = adaptive_stage(scale, third, explicit_.data());
    if (verdict != Verdict::ok) return verdict;
    if (!residual_at(T_.data(), third, r1_.data())) return Verdict::bad_law;

    Engine* engine = newton_.get();
    if (linear_) {
        Lane* lane = lane_for(scale);
        if (!lane) return Verdict::singular;
        engine = lane->engine.get();
    }
    double size = 0.0;
    using Numbers = const double[3];
    const Numbers& c = tr_bdf2_numbers::error;
    for (std::size_t u = 0; u < as_size(model->free); ++u) {
        b_[u] = -dt * (c[0] * r0_[u] + c[1] * rg_[u] + c[2] * r1_[u]);
        size += std::abs(b_[u]);
    }
    if (model->free > 0 && !engine->solve(b_.data(), 1e-6 * size)) return Verdict::not_converged;
    error = 0.0;
    for (std::size_t u = 0; u < as_size(model->free); ++u) error = std::max(error, std::abs(b_[u]));
    if (!std::isfinite(error)) return Verdict::not_converged;
    if (error > scheme.error) return Verdict::ok; // to be rejected
    if (!linear_ && !inside_tables()) return Verdict::outside_table;

    for (std::size_t u = 0; u < all; ++u) {
        mean_[u] = weight * (early_T_[u] + stage_T_[u]) + implicit * T_[u];
        step_rise_[u] = linear_ ? rise_[u] : T_[u] - piece_T_[u];
    }
    prescribed_dt_ = dt;
    if (lazy_books_) return Verdict::ok;
    if (linear_) storage_->multiply(rise_.data(), stored_rise_.data());
    if (!enter(early_T_.data(), first, weight * dt) || !enter(stage_T_.data(), second, weight * dt) ||
        !enter(T_.data(), third, implicit * dt))
        return Verdict::bad_law;
    return book_storage(stored_rise_.data());
}

/// A first step in which nothing moves by more than about the tolerance.
TEPOR_INLINE double Marcher::choose_first_step() {
    double fastest = 0.0;
    leg_T_ = T_;
    if (prescribe_ends({time, time, 1.0}, {time, time, 1.0}))
        for (std::size_t u = as_size(model->free); u < T_.size(); ++u) leg_T_[u] = prescribed_from_[u];
    if (!residual_at(leg_T_.data(), {time, time, 1.0}, b_.data())) return std::min(1.0, scheme.largest);
    if (storage_->lumped_capacity(values, T_.data(), rise_.data())) return std::min(1.0, scheme.largest);
    for (std::size_t u = 0; u < as_size(model->free); ++u)
        if (rise_[u] > 0.0) fastest = std::max(fastest, std::abs(b_[u]) / rise_[u]);
    if (!(fastest > 0.0) || !std::isfinite(fastest)) return std::min(1.0, scheme.largest);
    return std::clamp(scheme.error / fastest, smallest_step(), scheme.largest);
}

} // namespace tepor::detail
