#pragma once
// Newton's method for one substep: enthalpy increments, so that no heat is lost whatever the step.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/solve/impl/marcher.hpp>
#include <tepor/solve/impl/newton.hpp>

namespace tepor::detail {

/// Residual of the step in joules, into b_: heat stored since the start + scale times the weak form where the leg points
/// + the explicit part. The engine's matrix becomes its derivative.
TEPOR_INLINE bool Marcher::evaluate(double scale, double leg, TimeSpan span, const double* explicit_part,
                                    bool with_matrix) {
    Engine& engine = *newton_;
    const Index n = model->free;
    const Index all = model->unknowns;
    for (Index u = 0; u < n; ++u)
        leg_T_[as_size(u)] = piece_T_[as_size(u)] + leg * (T_[as_size(u)] - piece_T_[as_size(u)]);
    for (Index u = n; u < all; ++u)
        leg_T_[as_size(u)] = leg * T_[as_size(u)] + (1.0 - leg) * prescribed_from_[as_size(u)];
    pass_ = Pass();
    pass_.T = leg_T_.data();
    pass_.time = span;
    pass_.residual = b_.data();
    pass_.matrix = with_matrix ? &engine.matrix : nullptr;
    assemble(*model, values, engine.work, pass_);
    if (pass_.fault) {
        fault_ = pass_.fault;
        return false;
    }
    if (with_matrix) {
        for (double& v : engine.matrix.lower) v *= scale * leg;
        for (double& v : engine.matrix.upper) v *= scale * leg;
    }
    std::fill(stored_rise_.begin(), stored_rise_.end(), 0.0);
    fault_ = storage_->rise(values, engine.work, piece_T_.data(), T_.data(), stored_rise_.data(),
                            with_matrix ? &engine.matrix : nullptr, nullptr);
    if (fault_) return false;
    const std::vector<LatentNode>& nodes = storage_->latent();
    for (std::size_t i = 0; i < nodes.size(); ++i)
        stored_rise_[as_size(nodes[i].unknown)] += molten_[i] - piece_molten_[i];
    double traffic = pass_.side_traffic + pass_.source_traffic;
    double stored = 0.0;
    for (Index u = 0; u < all; ++u) {
        const auto at = as_size(u);
        stored += stored_rise_[at];
        b_[at] = stored_rise_[at] + scale * b_[at] + (explicit_part ? explicit_part[u] : 0.0);
        if (u >= n) traffic += std::abs(b_[at]) / scale;
    }
    gross_ = 0.5 * (traffic + std::abs(stored) / scale);
    return true;
}

/// Derivative of the latent heat on the diagonal; a node at a melting temperature without width is held there.
TEPOR_INLINE void Marcher::add_latent_slopes() {
    const std::vector<LatentNode>& nodes = storage_->latent();
    SparseMatrix& matrix = newton_->matrix;
    for (std::size_t i = 0; i < nodes.size(); ++i) {
        const LatentNode& node = nodes[i];
        const auto u = as_size(node.unknown);
        const double T = T_[u];
        latent_slope_[i] = 0.0;
        const double width = node.liquidus - node.solidus;
        const bool between = molten_[i] > 0.0 && molten_[i] < node.full;
        if (between && width > 0.0) latent_slope_[i] = node.full / width;
        const auto diagonal = as_size(matrix.start[u + 1] - 1);
        if (between && !(width > 0.0) && T == node.solidus)
            latent_slope_[i] = 1e10 * (std::abs(matrix.lower[diagonal]) + capacity_[u]);
    }
    for (std::size_t i = 0; i < nodes.size(); ++i) {
        const auto diagonal = as_size(matrix.start[as_size(nodes[i].unknown) + 1] - 1);
        matrix.lower[diagonal] += latent_slope_[i];
        if (!matrix.upper.empty()) matrix.upper[diagonal] += latent_slope_[i];
    }
}

/// Puts the heat content of one unknown, capacity a times T plus latent heat, back into a temperature and molten shares.
TEPOR_INLINE void Marcher::invert_latent(std::size_t first, std::size_t last, double a, double heat) noexcept {
    const LatentNode* nodes = storage_->latent().data();
    double& T = T_[as_size(nodes[first].unknown)];
    const auto molten_at = [&](double t) {
        double sum = 0.0; // heat at t with everything that melts at t itself still solid
        for (std::size_t i = first; i < last; ++i) {
            const double width = nodes[i].liquidus - nodes[i].solidus;
            if (t > nodes[i].liquidus || (t == nodes[i].liquidus && width > 0.0))
                sum += nodes[i].full;
            else if (t > nodes[i].solidus)
                sum += nodes[i].full * (t - nodes[i].solidus) / width;
        }
        return sum;
    };
    // the heat content is piecewise linear in T with upright pieces: find the knots on both sides
    double below = -std::numeric_limits<double>::infinity();
    double above = std::numeric_limits<double>::infinity();
    double held = -1.0; // share molten of what melts at one temperature
    double at = 0.0;
    for (std::size_t i = first; i < last; ++i)
        for (const double knot : {nodes[i].solidus, nodes[i].liquidus}) {
            double upright = 0.0;
            for (std::size_t j = first; j < last; ++j)
                if (nodes[j].solidus == knot && nodes[j].liquidus == knot) upright += nodes[j].full;
            const double low = a * knot + molten_at(knot);
            if (heat >= low && heat <= low + upright && upright > 0.0) {
                held = (heat - low) / upright;
                at = knot;
            }
            if (heat < low) above = std::min(above, knot);
            if (heat > low + upright) below = std::max(below, knot);
            if (heat == low && upright == 0.0) below = std::max(below, knot);
        }
    if (held >= 0.0) {
        T = at;
    } else {
        double slope = a;
        double base = 0.0; // heat at the anchor, upright pieces below counted
        double anchor = 0.0;
        const bool has_below = below > -std::numeric_limits<double>::infinity();
        const bool has_above = above < std::numeric_limits<double>::infinity();
        for (std::size_t i = first; i < last; ++i)
            if (nodes[i].liquidus > nodes[i].solidus && has_below && has_above && nodes[i].solidus <= below &&
                nodes[i].liquidus >= above)
                slope += nodes[i].full / (nodes[i].liquidus - nodes[i].solidus);
        if (has_below) {
            anchor = below;
            base = a * below + molten_at(below);
            for (std::size_t j = first; j < last; ++j)
                if (nodes[j].solidus == below && nodes[j].liquidus == below) base += nodes[j].full;
        } else {
            anchor = above;
            base = a * above + molten_at(above);
        }
        T = anchor + (heat - base) / slope;
        if (has_below && T < below) T = below;
        if (has_above && T > above) T = above;
    }
    for (std::size_t i = first; i < last; ++i) {
        const double width = nodes[i].liquidus - nodes[i].solidus;
        if (width > 0.0)
            molten_[i] = nodes[i].full * std::clamp((T - nodes[i].solidus) / width, 0.0, 1.0);
        else if (held >= 0.0 && nodes[i].solidus == at)
            molten_[i] = held * nodes[i].full;
        else
            molten_[i] = T > nodes[i].solidus || (T == nodes[i].solidus && below == T) ? nodes[i].full : 0.0;
    }
}

/// T := try_T_ + share times the engine's step; where heat is latent the step counts in heat, not in temperature.
TEPOR_INLINE void Marcher::take(double share) {
    const double* step = newton_->step.data();
    for (Index u = 0; u < model->free; ++u) T_[as_size(u)] = try_T_[as_size(u)] + share * step[u];
    const std::vector<LatentNode>& nodes = storage_->latent();
    for (std::size_t first = 0; first < nodes.size();) {
        const auto u = as_size(nodes[first].unknown);
        std::size_t last = first;
        double slope = capacity_[u];
        double heat = capacity_[u] * try_T_[u];
        for (; last < nodes.size() && as_size(nodes[last].unknown) == u; ++last) {
            slope += latent_slope_[last];
            heat += try_molten_[last];
        }
        if (as_id(u) < model->free)
            heat += share * slope * step[u];
        else
            heat = 0.0; // prescribed: the temperature is given
        if (as_id(u) < model->free) invert_latent(first, last, capacity_[u], heat);
        first = last;
    }
}

TEPOR_INLINE Verdict Marcher::newton(double scale, double leg, TimeSpan span, const double* explicit_part) {
    Engine& engine = *newton_;
    const Index n = model->free;
    const bool fixed = scheme.passes > 0;
    constexpr Index most = 60;
    fault_ = storage_->lumped_capacity(values, piece_T_.data(), capacity_.data());
    if (fault_ || !evaluate(scale, leg, span, explicit_part, true)) return Verdict::bad_law;
    bool with_matrix = true;
    double rounding = 0.0;
    const auto sum = [&] {
        double total = 0.0;
        for (Index u = 0; u < n; ++u) total += std::abs(b_[as_size(u)]);
        return total;
    };
    const bool curved = model->nonlinear || !storage_->linear();
    for (Index pass = 0;; ++pass) {
        const double now = sum();
        if (with_matrix) rounding = residual_rounding(*model, engine.matrix, T_.data());
        // a quarter: what the balance of the step calls gross may be less than what is at hand here
        const double limit = 0.25 * scheme.tolerance * gross_ * scale + rounding;
        residual_ = now / scale;
        if (!std::isfinite(now)) return Verdict::not_converged;
        const bool done = fixed ? pass >= scheme.passes : now <= limit && (pass > 0 || curved);
        if (done) {
            passes += pass;
            return Verdict::ok;
        }
        if (!fixed && pass >= most) return Verdict::not_converged;
        if (!with_matrix && !evaluate(scale, leg, span, explicit_part, true)) return Verdict::bad_law;
        if (n == 0) return Verdict::ok;
        if (!molten_.empty()) add_latent_slopes();
        const bool again = !curved && slope_fresh_ && engine.matrix.lower == factored_;
        if (!again) {
            ++factorisations;
            if (!engine.factor(curved ? Purpose::one_solve : Purpose::many_solves)) return Verdict::singular;
            if (!curved) factored_ = engine.matrix.lower;
            slope_fresh_ = !curved;
        }
        for (Index u = 0; u < n; ++u) engine.step[as_size(u)] = -b_[as_size(u)];
        const double forcing = curved ? std::max(0.1 * limit, 0.01 * now) : 0.1 * limit;
        if (!engine.solve(engine.step.data(), forcing)) return Verdict::not_converged;
        try_T_ = T_;
        try_molten_ = molten_;
        double share = 1.0;
        for (int halving = 0;; ++halving) {
            // phase changes may need a step uphill: after some halvings the whole one is taken
            const bool give_up = halving == 8;
            take(give_up ? 1.0 : share);
            with_matrix = (halving == 0 && curved) || give_up;
            const bool fine = evaluate(scale, leg, span, explicit_part, with_matrix);
            if (fixed || !curved) {
                if (!fine) return Verdict::bad_law;
                break;
            }
            const double then = fine ? sum() : std::numeric_limits<double>::infinity();
            if (then <= (1.0 - 1e-4 * share) * now || then <= limit) break;
            if (give_up) {
                if (!fine) return Verdict::bad_law;
                break;
            }
            share *= 0.5;
        }
    }
}

TEPOR_INLINE Verdict Marcher::newton_substep(double end, double dt, double theta) {
    const TimeSpan span{time, end, theta};
    if (!prescribe_ends({time, time, 1.0}, {end, end, 1.0, true})) return Verdict::bad_law;
    piece_T_ = T_;
    piece_molten_ = molten_;
    for (Index u = model->free; u < model->unknowns; ++u) T_[as_size(u)] = prescribed_to_[as_size(u)];
    melt_prescribed();
    const Verdict verdict = newton(dt, theta, span, nullptr);
    if (verdict != Verdict::ok) return verdict;
    if (!inside_tables()) return Verdict::outside_table;
    const double share = dt / whole_;
    for (std::size_t u = 0; u < T_.size(); ++u) {
        step_rise_[u] += T_[u] - piece_T_[u];
        mean_[u] += share * leg_T_[u];
    }
    prescribed_dt_ = dt;
    return book(leg_T_.data(), span, dt, stored_rise_.data());
}

/// Latent heat of unknowns whose temperature is given.
TEPOR_INLINE void Marcher::melt_prescribed() noexcept {
    const std::vector<LatentNode>& nodes = storage_->latent();
    for (std::size_t i = 0; i < nodes.size(); ++i) {
        if (nodes[i].unknown < model->free) continue;
        const double T = T_[as_size(nodes[i].unknown)];
        const double width = nodes[i].liquidus - nodes[i].solidus;
        if (width > 0.0)
            molten_[i] = nodes[i].full * std::clamp((T - nodes[i].solidus) / width, 0.0, 1.0);
        else if (T != nodes[i].solidus)
            molten_[i] = T > nodes[i].solidus ? nodes[i].full : 0.0;
    }
}

TEPOR_INLINE bool Marcher::inside_tables() noexcept {
    for (const RegionModel& region : model->regions) {
        double low = std::numeric_limits<double>::infinity();
        double high = -low;
        bool known = false;
        const auto check = [&](const Coefficient& c) {
            if (c.value().kind() != Value::Kind::table || c.value().table().outside() != Outside::refuse) return true;
            if (!known) {
                for (Id cell = region.first_cell; cell < region.last_cell; ++cell)
                    for (int i = 0; i < model->kernels->nodes; ++i) {
                        const double T = T_[as_size(model->cell(cell)[i])];
                        low = std::min(low, T);
                        high = std::max(high, T);
                    }
                known = true;
            }
            const double slack = 1e-9 * (1.0 + std::abs(high - low));
            for (const double T : {low + slack, high - slack})
                if (!c.covers(T)) {
                    table_ = &c;
                    table_T_ = T;
                    return false;
                }
            return true;
        };
        for (const Coefficient& k : region.k)
            if (!check(k)) return false;
        if (!check(region.density) || !check(region.specific_heat)) return false;
        for (const VolumeTerm& term : region.volume)
            if (!check(term.amount)) return false;
    }
    for (const FaceModel& face : model->faces)
        for (const FaceTerm& term : face.terms) {
            if (term.amount.value().kind() != Value::Kind::table) continue;
            for (const Id u : face.sides.unknowns)
                if (!term.amount.covers(T_[as_size(u)])) {
                    table_ = &term.amount;
                    table_T_ = T_[as_size(u)];
                    return false;
                }
        }
    return true;
}

} // namespace tepor::detail
