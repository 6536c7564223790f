#pragma once
// The adjoint of a recorded march, leg by leg from its end.

#include <tepor/answers/impl/march_replay.hpp>
#include <tepor/field/functional_slope.hpp>

namespace tepor::detail {

/// One leg's residual is E(T1) - E(T0) + sum over points of weight_k r(T_k): one point for a theta step, three for TR-BDF2.
class MarchAdjoint : public MarchReplay {
  public:
    MarchAdjoint(std::shared_ptr<const Model> model, const MarchTape& tape, Capacity capacity, const Quantity& quantity)
        : MarchReplay(std::move(model), tape, capacity), quantity_(quantity),
          sums_(*model_, model_->kernels->shape_at(0) != nullptr), nu_(all_, 0.0), before_(all_, 0.0) {}

    /// Value and slope at the end of leg `last`.
    double run_to(std::size_t last) {
        use(tape_.legs[last].values);
        const MarchTape::Leg& leg = tape_.legs[last];
        const TimeSpan now{leg.to, leg.to, 1.0};
        const Functional& f = functional();
        if (!f.reaction.unknown.empty())
            throw Error(ErrorCode::not_supported, quantity_.label(),
                        text("gradient: ", quantity_.label(),
                             " at an instant of a march holds a rate of change; ask gradient_of_integral"));
        const double value = evaluate(f, *model_, values(), work_, leg.T.data(), nullptr, now);
        temperature_slope(f, *model_, values(), work_, leg.T.data(), now, nu_.data());
        explicit_slope(f, quantity_, *model_, values(), work_, leg.T.data(), now, 1.0, sums_);
        backwards(last, false);
        return value;
    }

    /// Value and slope of the integral over all legs.
    double run_integral() {
        backwards(tape_.legs.size() - 1, true);
        return integral_;
    }

    [[nodiscard]] SlopeSums& sums() noexcept { return sums_; }

  private:
    void values_changed() override { functional_ = compile(*model_, values(), quantity_); }
    [[nodiscard]] const Functional& functional() const { return functional_; }

    /// y := K^T x at a point.
    void through_K(const LegPoint& at, const double* x, double* y) {
        if (!constant_) assemble_K(at.T.data(), at.span);
        multiply_transposed(K_, model_->unknowns, x, y);
    }

    /// b := -(M + a K(at))^-T b on the free unknowns, 0 on the rest.
    void solve(const LegPoint& at, double a, std::vector<double>& b) { solve_leg(at, a, b, true); }

    void backwards(std::size_t last, bool integral) {
        for (std::size_t i = last + 1; i-- > 0;) {
            const MarchTape::Leg& leg = tape_.legs[i];
            const std::vector<double>& T0 = i > 0 ? tape_.legs[i - 1].T : tape_.start;
            use(leg.values);
            if (leg.two_stages)
                two_stages(leg, T0, integral);
            else
                one_stage(leg, T0, integral);
            nu_.swap(before_);
        }
    }

    /// Slopes by the values prescribed at a time, with the given weights on them.
    void by_prescribed(double at, bool before, const std::vector<double>& weights) {
        if (model_->free == model_->unknowns) return;
        contract_prescribed(*model_, values(), {at, at, 1.0, before}, weights.data(), sums_);
    }

    void contract(const LegPoint& at, double factor, const std::vector<double>& lambda) {
        contract_slopes(*model_, values(), work_, {at.T.data(), lambda.data(), at.span, nullptr, factor}, sums_);
    }

    void contract_storage(const std::vector<double>& T1, const std::vector<double>& T0,
                          const std::vector<double>& lambda) {
        rise_.resize(all_);
        for (std::size_t u = 0; u < all_; ++u) rise_[u] = T1[u] - T0[u];
        contract_capacity(*model_, values(), work_, rise_.data(), lambda.data(), storage_->lumped_share(), sums_);
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
        explicit_slope(plain, quantity_, *model_, values(), work_, at.T.data(), at.span, factor, sums_);
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
                             const std::vector<double>& T1, const std::vector<double>& T0) {
        std::vector<double> r;
        std::vector<double> d(all_);
        for (const LegPoint* p : points) {
            residual(*p, r);
            for (std::size_t u = 0; u < all_; ++u) integral_ += p->weight * w[u] * r[u];
        }
        for (std::size_t u = 0; u < all_; ++u) d[u] = T1[u] - T0[u];
        r.assign(all_, 0.0);
        storage_->multiply(d.data(), r.data());
        for (std::size_t u = 0; u < all_; ++u) integral_ += w[u] * r[u];
    }

    void one_stage(const MarchTape::Leg& leg, const std::vector<double>& T0, bool integral) {
        const double dt = leg.to - leg.from;
        const double theta = leg.theta;
        std::vector<double> from = T0;
        prescribed(leg.from, false, from);
        LegPoint at{std::vector<double>(all_), {leg.from, leg.to, theta}, dt};
        for (std::size_t u = 0; u < all_; ++u) at.T[u] = theta * leg.T[u] + (1.0 - theta) * from[u];
        std::vector<double> lambda(all_, 0.0);
        std::vector<double> by_leg(all_, 0.0); // slope by the temperature the weak form sees
        if (integral) {
            integrate(at, dt, by_leg);
            const Functional& f = functional();
            if (!f.reaction.unknown.empty()) {
                lambda = reaction_weights(f, *model_);
                integrate_reactions(lambda, {&at}, leg.T, T0);
            }
        }
        std::vector<double> product(all_);
        std::vector<double> stored(all_, 0.0);
        const auto gather = [&](const std::vector<double>& with) { // by_leg + dt K^T with; M with
            through_K(at, with.data(), product.data());
            storage_->multiply(with.data(), stored.data());
        };
        std::vector<double> b(all_);
        if (integral && !functional().reaction.unknown.empty())
            gather(lambda);
        else
            product.assign(all_, 0.0);
        for (std::size_t u = 0; u < all_; ++u) b[u] = nu_[u] + stored[u] + theta * (by_leg[u] + dt * product[u]);
        solve(at, theta * dt, b);
        for (std::size_t u = 0; u < all_; ++u) lambda[u] += b[u];
        gather(lambda);
        contract(at, dt, lambda);
        contract_storage(leg.T, T0, lambda);
        std::vector<double> to(all_);
        for (std::size_t u = 0; u < all_; ++u) {
            const double seen = by_leg[u] + dt * product[u];
            const bool free = as_id(u) < model_->free;
            before_[u] = free ? (1.0 - theta) * seen - stored[u] : -stored[u];
            to[u] = nu_[u] + stored[u] + theta * seen;
            product[u] = (1.0 - theta) * seen;
        }
        by_prescribed(leg.to, true, to);
        by_prescribed(leg.from, false, product);
    }

    void two_stages(const MarchTape::Leg& leg, const std::vector<double>& T0, bool integral) {
        constexpr double root2 = 1.41421356237309504880;
        const double dt = leg.to - leg.from;
        const double s = (1.0 - 0.5 * root2) * dt;
        const double w = 0.25 * root2 * dt;
        const double middle = leg.from + (2.0 - root2) * dt;
        LegPoint first{T0, {leg.from, leg.from, 1.0}, w};
        prescribed(leg.from, false, first.T);
        const LegPoint second{leg.stage, {middle, middle, 1.0}, w};
        const LegPoint third{leg.T, {leg.to, leg.to, 1.0, true}, s};
        std::vector<double> lambda1(all_, 0.0);
        std::vector<double> row0(all_, 0.0), row_g(all_, 0.0), row1(all_, 0.0);
        if (integral) {
            integrate(first, w, row0);
            integrate(second, w, row_g);
            integrate(third, s, row1);
            const Functional& f = functional();
            if (!f.reaction.unknown.empty()) {
                lambda1 = reaction_weights(f, *model_);
                integrate_reactions(lambda1, {&first, &second, &third}, leg.T, T0);
            }
        }
        std::vector<double> product(all_, 0.0);
        std::vector<double> stored(all_, 0.0);
        const auto add_K = [&](const LegPoint& at, double factor, const std::vector<double>& with,
                               std::vector<double>& to) {
            through_K(at, with.data(), product.data());
            for (std::size_t u = 0; u < all_; ++u) to[u] += factor * product[u];
        };
        // the end
        std::vector<double> b = nu_;
        add_K(third, s, lambda1, row1);
        storage_->multiply(lambda1.data(), stored.data());
        for (std::size_t u = 0; u < all_; ++u) b[u] += row1[u] + stored[u];
        solve(third, s, b);
        for (std::size_t u = 0; u < all_; ++u) lambda1[u] += b[u];
        add_K(third, s, b, row1);
        storage_->multiply(lambda1.data(), stored.data());
        std::vector<double> at_end(all_);
        for (std::size_t u = 0; u < all_; ++u) {
            at_end[u] = nu_[u] + row1[u] + stored[u];
            before_[u] = -stored[u];
        }
        // the stage
        add_K(second, w, lambda1, row_g);
        std::vector<double> lambda_g = row_g;
        solve(second, s, lambda_g);
        std::vector<double> mixed(all_);
        for (std::size_t u = 0; u < all_; ++u) mixed[u] = w * lambda1[u] + s * lambda_g[u];
        add_K(second, s, lambda_g, row_g);
        storage_->multiply(lambda_g.data(), stored.data());
        std::vector<double> at_stage(all_);
        for (std::size_t u = 0; u < all_; ++u) {
            at_stage[u] = row_g[u] + stored[u];
            before_[u] -= stored[u];
        }
        add_K(first, 1.0, mixed, row0);
        for (Index u = 0; u < model_->free; ++u) before_[as_size(u)] += row0[as_size(u)];
        contract(first, 1.0, mixed);
        contract(second, 1.0, mixed);
        contract(third, s, lambda1);
        contract_storage(leg.stage, T0, lambda_g);
        contract_storage(leg.T, T0, lambda1);
        by_prescribed(leg.to, true, at_end);
        by_prescribed(middle, false, at_stage);
        by_prescribed(leg.from, false, row0);
    }

    const Quantity& quantity_;
    SlopeSums sums_;
    std::vector<double> nu_;     // slope by the temperatures at the end of the leg in hand
    std::vector<double> before_; // at its start
    std::vector<double> rise_;
    Functional functional_;
    double integral_ = 0.0;
};

} // namespace tepor::detail
