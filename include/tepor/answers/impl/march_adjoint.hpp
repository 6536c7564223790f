#pragma once
// The adjoint of a recorded march, leg by leg from its end.

#include <tepor/answers/impl/march_replay.hpp>
#include <tepor/answers/impl/march_sums.hpp>
#include <tepor/field/functional_slope.hpp>

namespace tepor::detail {

/// One leg's residual is E(T1) - E(T0) + sum over points of weight_k r(T_k): one point for a theta step, two legs of it that
/// share their points for TR-BDF2. E is the heat content.
class MarchAdjoint : public MarchReplay {
  public:
    MarchAdjoint(const March& march, const Quantity& quantity)
        : MarchReplay(march), quantity_(quantity), sums_(*model_, tape_, linear_ && long_groups()), nu_(all_, 0.0),
          before_(all_, 0.0), by_leg_(all_), product_(all_, 0.0), stored_(all_, 0.0), to_(all_), lambda_(all_),
          solved_(all_) {}

    /// An instant at which a step ended (-1: the start of the run) and what the quantity there counts with.
    struct Instant {
        Index leg = 0;
        double weight = 1.0;
    };

    /// Value and slope at the end of leg `last`.
    double run_to(std::size_t last) { return run_at({{static_cast<Index>(last), 1.0}}); }

    /// Sum of the quantity at instants (rising) times their weights, and its slope.
    double run_at(const std::vector<Instant>& instants) {
        double value = 0.0;
        Index below = instants.back().leg;
        for (std::size_t k = instants.size(); k-- > 0;) {
            const auto [leg, weight] = instants[k];
            if (leg < below) backwards(below, leg, false);
            below = leg;
            use(tape_.legs[as_size(std::max(leg, Index{0}))].values);
            const std::vector<double> T = leg < 0 ? tape_.start.T : states_.end_of(as_size(leg)).T;
            const double t = leg < 0 ? tape_.legs.front().from : tape_.legs[as_size(leg)].to;
            const TimeSpan now{t, t, 1.0};
            const Functional& f = functional();
            refuse_reactions(f);
            value += weight * evaluate(f, *model_, values(), work_, T.data(), nullptr, now);
            std::vector<double> row(all_, 0.0);
            temperature_slope(f, *model_, values(), work_, T.data(), now, row.data());
            drop_held(T, row);
            for (std::size_t u = 0; u < all_; ++u) nu_[u] += weight * row[u];
            explicit_slope(f, quantity_, *model_, values(), work_, T.data(), now, weight, sums_.sums);
        }
        if (below >= 0) backwards(below, -1, false);
        return value;
    }

    /// Value and slope of the integral over all legs.
    double run_integral() {
        backwards(static_cast<Index>(tape_.legs.size()) - 1, -1, true);
        return integral_;
    }

    [[nodiscard]] SlopeSums& sums() noexcept { return sums_.sums; }
    [[nodiscard]] double value_at(std::size_t leg) {
        use(tape_.legs[leg].values);
        const double t = tape_.legs[leg].to;
        refuse_reactions(functional());
        return evaluate(functional(), *model_, values(), work_, states_.end_of(leg).T.data(), nullptr, {t, t, 1.0});
    }

  private:
    void values_changed(bool matrices) override {
        bool prescribed_too = matrices;
        if (!matrices)
            for (const SlotRole& role : model_->roles) prescribed_too = prescribed_too || role.prescribed;
        if (prescribed_too) functional_ = compile(*model_, values(), quantity_);
        if (matrices) heat_fresh_ = false;
    }
    void leave_group() override { sums_.finish(values(), work_, storage_->lumped_share()); }
    [[nodiscard]] const Functional& functional() const { return functional_; }

    /// Summing up pays when several legs share their matrices.
    [[nodiscard]] bool long_groups() const {
        std::size_t groups = 1;
        for (std::size_t v = 1; v < group_of_.size(); ++v) groups += group_of_[v] != group_of_[v - 1] ? 1U : 0U;
        return tape_.legs.size() >= 4 * groups;
    }

    void refuse_reactions(const Functional& f) const {
        if (!f.reaction.unknown.empty())
            throw Error(ErrorCode::not_supported, quantity_.label(),
                        text("gradient: ", quantity_.label(),
                             " at an instant of a march holds a rate of change; ask gradient_of_integral"));
    }

    /// A temperature held at a melting point does not move with anything.
    void drop_held(const std::vector<double>& T, std::vector<double>& row) const {
        for (const LatentNode& node : storage_->latent()) {
            const auto u = as_size(node.unknown);
            if (node.unknown < model_->free && !(node.liquidus > node.solidus) && T[u] == node.solidus) row[u] = 0.0;
        }
    }

    /// From the end of leg `last` to that of leg `until`.
    void backwards(Index last, Index until, bool integral) {
        for (Index k = last; k > until; --k) {
            const auto i = as_size(k);
            const MarchTape::Leg& leg = tape_.legs[i];
            use(leg.values);
            const MarchTape::State& end = states_.end_of(i);
            const MarchTape::State& start = states_.start_of(i);
            if (!heat_fresh_) slope_of_heat(end.T, end_heat_);
            slope_of_heat(start.T, start_heat_);
            if (leg.two_stages)
                two_stages(leg, start, end, integral);
            else
                one_stage(leg, start, end, integral);
            nu_.swap(before_);
            std::swap(end_heat_, start_heat_);
            heat_fresh_ = true;
        }
        if (until < 0) sums_.finish(values(), work_, storage_->lumped_share());
    }

    /// y := K^T x at a point.
    void through_K(const LegPoint& at, const double* x, double* y) {
        if (!linear_) assemble_K(at.T.data(), at.span);
        multiply_transposed(K_, model_->unknowns, x, y);
    }
    /// The same with K as it was assembled for the last solve; only its prescribed rows where the rest follows from the solve.
    void through_K_again(const double* x, double* y) const {
        if (!linear_) {
            multiply_transposed(K_, model_->unknowns, x, y);
            return;
        }
        for (Index i = model_->free; i < model_->unknowns; ++i) {
            double sum = 0.0;
            for (Id p = K_.start[as_size(i)]; p < K_.start[as_size(i) + 1]; ++p)
                sum += K_.lower[as_size(p)] * x[K_.column[as_size(p)]];
            y[i] = sum;
        }
        // entries among prescribed unknowns to the right of the diagonal
        for (Index i = model_->free; i < model_->unknowns; ++i)
            for (Id p = K_.start[as_size(i)]; p < K_.start[as_size(i) + 1] - 1; ++p)
                if (K_.column[as_size(p)] >= model_->free) y[K_.column[as_size(p)]] += K_.lower[as_size(p)] * x[i];
    }

    /// Latent heat taken up between two states, against the weights: its derivative by all that sets its amount.
    void contract_melting(const std::vector<double>& from, const std::vector<double>& to,
                          const std::vector<double>& T_from, const std::vector<double>& T_to,
                          const std::vector<double>& lambda) {
        const std::vector<LatentNode>& nodes = storage_->latent();
        if (nodes.empty()) return;
        for (std::size_t r = 0; r < model_->regions.size(); ++r) {
            std::vector<double> share(all_, 0.0);
            bool any = false;
            const RegionModel& region = model_->regions[r];
            for (std::size_t i = 0; i < nodes.size(); ++i) {
                if (nodes[i].region != as_id(r)) continue;
                const auto u = as_size(nodes[i].unknown);
                share[u] = lambda[u] * (to[i] - from[i]) / nodes[i].full;
                any = any || share[u] != 0.0;
                const double width = nodes[i].liquidus - nodes[i].solidus;
                if (!(width > 0.0)) continue;
                for (const double sign : {1.0, -1.0}) {
                    const double T = sign > 0.0 ? T_to[u] : T_from[u];
                    if (!(T > nodes[i].solidus && T < nodes[i].liquidus)) continue;
                    const double at = sign * lambda[u] * nodes[i].full / (width * width);
                    by_parameter(region.solidus, at * (T - nodes[i].liquidus));
                    by_parameter(region.liquidus, -at * (T - nodes[i].solidus));
                }
            }
            if (any) contract_latent(*model_, values(), work_, as_id(r), share.data(), sums_.sums);
        }
    }
    void by_parameter(const Coefficient& c, double slope) {
        if (c.value().kind() == Value::Kind::parameter) sums_.sums.slots[as_size(c.slots()[0])] += slope;
    }

    void contract_heat(const std::vector<double>& from, const std::vector<double>& from_molten,
                       const std::vector<double>& to, const std::vector<double>& to_molten,
                       const std::vector<double>& lambda) {
        sums_.heat(values(), work_, *storage_, from, to, lambda);
        contract_melting(from_molten, to_molten, from, to, lambda);
    }

    /// Adds `factor` times the quantity's own slope at a point to `row`; its value counts in the integral.
    void integrate(const LegPoint& at, double factor, std::vector<double>& row) {
        const Functional& f = functional();
        Functional plain = f;
        plain.reaction = {};
        integral_ += factor * evaluate(plain, *model_, values(), work_, at.T.data(), nullptr, at.span);
        std::vector<double> slope(all_, 0.0);
        temperature_slope(plain, *model_, values(), work_, at.T.data(), at.span, slope.data());
        for (std::size_t u = 0; u < all_; ++u) row[u] += factor * slope[u];
        explicit_slope(plain, quantity_, *model_, values(), work_, at.T.data(), at.span, factor, sums_.sums);
    }

    void residual(const LegPoint& at, std::vector<double>& r) {
        r.resize(all_);
        Pass pass;
        pass.T = at.T.data();
        pass.time = at.span;
        pass.residual = r.data();
        assemble(*model_, values(), work_, pass);
        if (pass.fault) raise(pass.fault);
    }

    /// Value of the reactions' integral: w . (E(T1) - E(T0) + sum weight_k r_k).
    void integrate_reactions(const std::vector<double>& w, const std::vector<const LegPoint*>& points,
                             const MarchTape::State& start, const MarchTape::State& end) {
        std::vector<double> r;
        for (const LegPoint* p : points) {
            residual(*p, r);
            for (std::size_t u = 0; u < all_; ++u) integral_ += p->weight * w[u] * r[u];
        }
        r.assign(all_, 0.0);
        if (const Fault fault =
                storage_->rise(values(), work_, start.T.data(), end.T.data(), r.data(), nullptr, nullptr))
            raise(fault);
        const std::vector<LatentNode>& nodes = storage_->latent();
        for (std::size_t i = 0; i < nodes.size(); ++i) r[as_size(nodes[i].unknown)] += end.molten[i] - start.molten[i];
        for (std::size_t u = 0; u < all_; ++u) integral_ += w[u] * r[u];
    }

    [[nodiscard]] bool with_reactions(bool integral) const {
        return integral && !functional().reaction.unknown.empty();
    }

    /// E(T1) - E(T0) + dt r(theta T1 + (1 - theta) T0).
    void one_stage(const MarchTape::Leg& leg, const MarchTape::State& start, const MarchTape::State& end,
                   bool integral) {
        const double dt = leg.dt;
        const double theta = leg.theta;
        LegPoint& at = points_[0];
        at.T = start.T;
        prescribed(leg.from, false, at.T);
        at.span = {leg.from, leg.to, theta};
        at.weight = dt;
        for (std::size_t u = 0; u < all_; ++u) at.T[u] = theta * end.T[u] + (1.0 - theta) * at.T[u];
        std::fill(by_leg_.begin(), by_leg_.end(), 0.0); // slope by the temperature the weak form sees
        if (integral) integrate(at, dt, by_leg_);
        const bool reactions = with_reactions(integral);
        solved_ = nu_;
        if (reactions) {
            lambda_ = reaction_weights(functional(), *model_);
            integrate_reactions(lambda_, {&at}, start, end);
            through_K(at, lambda_.data(), product_.data());
            through_heat(end_heat_, lambda_.data(), stored_.data());
            for (std::size_t u = 0; u < all_; ++u)
                if (!end_heat_.holds(u)) solved_[u] += stored_[u] + theta * dt * product_[u];
        }
        if (integral)
            for (std::size_t u = 0; u < all_; ++u)
                if (!end_heat_.holds(u)) solved_[u] += theta * by_leg_[u];
        solve_leg(at, theta * dt, end_heat_, solved_, true);
        if (reactions)
            for (std::size_t u = 0; u < all_; ++u) lambda_[u] += solved_[u];
        else
            lambda_ = solved_;
        through_heat(end_heat_, lambda_.data(), stored_.data());
        through_K_again(lambda_.data(), product_.data());
        // what the weak form's temperature is worth; for free unknowns it follows from the equation just solved
        for (std::size_t u = 0; u < all_; ++u)
            product_[u] = as_id(u) < model_->free && !end_heat_.holds(u) ? -(nu_[u] + stored_[u]) / theta
                                                                         : by_leg_[u] + dt * product_[u];
        if (end_held()) { // the rows of held unknowns answer for themselves
            multiply_transposed(K_, model_->unknowns, lambda_.data(), to_.data());
            for (std::size_t u = 0; u < all_; ++u)
                if (end_heat_.holds(u)) product_[u] = by_leg_[u] + dt * to_[u];
        }
        sums_.weak_form(values(), work_, at.T, at.span, dt, lambda_);
        contract_heat(start.T, start.molten, end.T, end.molten, lambda_);
        for (std::size_t u = 0; u < all_; ++u) {
            to_[u] = nu_[u] + stored_[u] + theta * product_[u];
            product_[u] *= 1.0 - theta;
        }
        through_heat(start_heat_, lambda_.data(), stored_.data());
        for (std::size_t u = 0; u < all_; ++u) {
            before_[u] = (as_id(u) < model_->free ? product_[u] : 0.0) - stored_[u];
            if (start_heat_.holds(u)) before_[u] = -lambda_[u];
        }
        sums_.prescribed(values(), leg.to, true, to_);
        sums_.prescribed(values(), leg.from, false, product_);
    }

    /// E(Tg) - E(T0) + s (r(T0) + r(Tg)) and E(T1) - E(T0) + w (r(T0) + r(Tg)) + s r(T1).
    void two_stages(const MarchTape::Leg& leg, const MarchTape::State& start, const MarchTape::State& end,
                    bool integral) {
        constexpr double root2 = 1.41421356237309504880;
        const double dt = leg.dt;
        const double s = (1.0 - 0.5 * root2) * dt;
        const double w = 0.25 * root2 * dt;
        const double middle = leg.from + (2.0 - root2) * dt;
        LegPoint& first = points_[0];
        first.T = start.T;
        first.span = {leg.from, leg.from, 1.0};
        first.weight = w;
        prescribed(leg.from, false, first.T);
        LegPoint& second = points_[1];
        second.T = end.stage;
        second.span = {middle, middle, 1.0};
        second.weight = w;
        LegPoint& third = points_[2];
        third.T = end.T;
        third.span = {leg.to, leg.to, 1.0, true};
        third.weight = s;
        slope_of_heat(end.stage, stage_heat_);
        std::vector<double> row0(all_, 0.0), row_g(all_, 0.0), row1(all_, 0.0);
        std::fill(lambda_.begin(), lambda_.end(), 0.0);
        if (integral) {
            integrate(first, w, row0);
            integrate(second, w, row_g);
            integrate(third, s, row1);
        }
        const auto add_K = [&](const LegPoint& at, double factor, const std::vector<double>& with,
                               std::vector<double>& to) {
            through_K(at, with.data(), product_.data());
            for (std::size_t u = 0; u < all_; ++u) to[u] += factor * product_[u];
        };
        solved_ = nu_;
        if (with_reactions(integral)) {
            lambda_ = reaction_weights(functional(), *model_);
            integrate_reactions(lambda_, {&first, &second, &third}, start, end);
            add_K(third, s, lambda_, row1);
            through_heat(end_heat_, lambda_.data(), stored_.data());
            for (std::size_t u = 0; u < all_; ++u)
                if (!end_heat_.holds(u)) solved_[u] += stored_[u];
        }
        for (std::size_t u = 0; u < all_; ++u)
            if (!end_heat_.holds(u)) solved_[u] += row1[u];
        solve_leg(third, s, end_heat_, solved_, true);
        for (std::size_t u = 0; u < all_; ++u) lambda_[u] += solved_[u];
        add_K(third, s, solved_, row1);
        through_heat(end_heat_, lambda_.data(), stored_.data());
        for (std::size_t u = 0; u < all_; ++u) to_[u] = nu_[u] + row1[u] + stored_[u];
        // the stage: its molten heat, where held, is seen by no later equation
        add_K(second, w, lambda_, row_g);
        std::vector<double> lambda_g = row_g;
        for (std::size_t u = 0; u < all_; ++u)
            if (stage_heat_.holds(u)) lambda_g[u] = 0.0;
        solve_leg(second, s, stage_heat_, lambda_g, true);
        std::vector<double> mixed(all_);
        for (std::size_t u = 0; u < all_; ++u) mixed[u] = w * lambda_[u] + s * lambda_g[u];
        add_K(second, s, lambda_g, row_g);
        through_heat(stage_heat_, lambda_g.data(), stored_.data());
        std::vector<double> at_stage(all_);
        for (std::size_t u = 0; u < all_; ++u) at_stage[u] = row_g[u] + stored_[u];
        add_K(first, 1.0, mixed, row0);
        for (std::size_t u = 0; u < all_; ++u) solved_[u] = lambda_[u] + lambda_g[u];
        through_heat(start_heat_, solved_.data(), stored_.data());
        for (std::size_t u = 0; u < all_; ++u) {
            before_[u] = (as_id(u) < model_->free ? row0[u] : 0.0) - stored_[u];
            if (start_heat_.holds(u)) before_[u] = -solved_[u];
        }
        sums_.weak_form(values(), work_, first.T, first.span, 1.0, mixed);
        sums_.weak_form(values(), work_, second.T, second.span, 1.0, mixed);
        sums_.weak_form(values(), work_, third.T, third.span, s, lambda_);
        contract_heat(start.T, start.molten, end.stage, end.stage_molten, lambda_g);
        contract_heat(start.T, start.molten, end.T, end.molten, lambda_);
        sums_.prescribed(values(), leg.to, true, to_);
        sums_.prescribed(values(), middle, false, at_stage);
        sums_.prescribed(values(), leg.from, false, row0);
    }

    [[nodiscard]] bool end_held() const {
        for (const unsigned char h : end_heat_.held)
            if (h != 0) return true;
        return false;
    }

    const Quantity& quantity_;
    MarchSums sums_;
    std::vector<double> nu_;     // slope by the state at the end of the leg in hand
    std::vector<double> before_; // at its start
    std::vector<double> by_leg_, product_, stored_, to_, lambda_, solved_;
    LegPoint points_[3];
    HeatSlope end_heat_, start_heat_, stage_heat_;
    bool heat_fresh_ = false;
    Functional functional_;
    double integral_ = 0.0;
};

} // namespace tepor::detail
