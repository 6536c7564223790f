#pragma once
// Forward sensitivities of a recorded theta march: dT/dp along the run, leg by leg.

#include <tepor/answers/impl/march_replay.hpp>
#include <tepor/field/functional_slope.hpp>

namespace tepor::detail {

class MarchForward : public MarchReplay {
  public:
    MarchForward(const March& march, std::vector<Id> slots)
        : MarchReplay(march), slots_(std::move(slots)), S_(slots_.size(), std::vector<double>(all_, 0.0)) {}

    /// Runs over all legs; `visit(leg, T)` after each, when read() knows the sensitivities at its end. Leg -1 is the start.
    template <class Visit>
    void run(const Visit& visit) {
        use(tape_.legs.front().values);
        visit(Index{-1}, tape_.start.T);
        for (std::size_t i = 0; i < tape_.legs.size(); ++i) {
            advance(tape_.legs[i], states_.start_of(i).T, states_.end_of(i).T);
            visit(static_cast<Index>(i), states_.end_of(i).T);
        }
    }

    /// dQ/dp at temperatures T and time t, with the sensitivities as they stand; the value is returned.
    double read(const Functional& f, const Quantity& quantity, const double* T, double t, double* slope) {
        const TimeSpan now{t, t, 1.0};
        const double value = evaluate(f, *model_, values(), work_, T, nullptr, now);
        std::vector<double> row(all_, 0.0);
        temperature_slope(f, *model_, values(), work_, T, now, row.data());
        SlopeSums sums(*model_, model_->moving && model_->kernels->shape_at(0) != nullptr);
        explicit_slope(f, quantity, *model_, values(), work_, T, now, 1.0, sums);
        chain_places(*model_, sums);
        for (std::size_t j = 0; j < slots_.size(); ++j) {
            slope[j] = sums.slots[as_size(slots_[j])];
            for (std::size_t u = 0; u < all_; ++u) slope[j] += row[u] * S_[j][u];
        }
        return value;
    }

  private:
    void advance(const MarchTape::Leg& leg, const std::vector<double>& T0, const std::vector<double>& T1) {
        use(leg.values);
        const double dt = leg.dt;
        const double theta = leg.theta;
        std::vector<double> from = T0;
        prescribed(leg.from, false, from);
        LegPoint at{std::vector<double>(all_), {leg.from, leg.to, theta}, dt};
        std::vector<double> rise(all_);
        for (std::size_t u = 0; u < all_; ++u) {
            at.T[u] = theta * T1[u] + (1.0 - theta) * from[u];
            rise[u] = T1[u] - T0[u];
        }
        std::vector<double> by_r(all_);
        std::vector<double> by_M(all_);
        std::vector<double> seen(all_);
        std::vector<double> grown(all_);
        std::vector<double> held_from(all_, 0.0);
        std::vector<double> held_to(all_, 0.0);
        std::vector<double> b(all_);
        std::vector<double> product(all_);
        Engine* engine = nullptr;
        for (std::size_t j = 0; j < slots_.size(); ++j) {
            residual_by_slot(*model_, values(), work_, at.T.data(), at.span, slots_[j], by_r.data());
            capacity_by_slot(*model_, values(), work_, rise.data(), slots_[j], storage_->lumped_share(), by_M.data());
            (void)prescribed_by_slot(*model_, values(), {leg.from, leg.from, 1.0}, slots_[j], held_from.data());
            (void)prescribed_by_slot(*model_, values(), {leg.to, leg.to, 1.0, true}, slots_[j], held_to.data());
            // M (S1 - S0) + dt K (theta S1 + (1 - theta) S0) + dM rise + dt dr = 0 from a start at S1 = S0
            for (std::size_t u = 0; u < all_; ++u) {
                const bool free = as_id(u) < model_->free;
                const double early = free ? S_[j][u] : held_from[u];
                const double late = free ? S_[j][u] : held_to[u];
                grown[u] = late - S_[j][u];
                seen[u] = theta * late + (1.0 - theta) * early;
            }
            if (!linear_ && j == 0) assemble_K(at.T.data(), at.span);
            multiply(K_, model_->unknowns, seen.data(), product.data());
            storage_->multiply(grown.data(), b.data());
            for (std::size_t u = 0; u < all_; ++u) b[u] += by_M[u] + dt * (by_r[u] + product[u]);
            if (j == 0) engine = &factor(at, theta * dt, HeatSlope{});
            solve_factored(*engine, b);
            for (std::size_t u = 0; u < all_; ++u) S_[j][u] = as_id(u) < model_->free ? S_[j][u] + b[u] : held_to[u];
        }
    }

    /// b := -A^-1 b on the free unknowns with the factor in hand.
    void solve_factored(Engine& engine, std::vector<double>& b) const {
        double size = 0.0;
        for (std::size_t u = 0; u < all_; ++u) {
            b[u] = as_id(u) < model_->free ? -b[u] : 0.0;
            size += std::abs(b[u]);
        }
        if (size > 0.0 && !engine.solve(b.data(), 1e-13 * size))
            throw Error(ErrorCode::not_converged, "", "fit: a linear solve stalled");
    }

    std::vector<Id> slots_;
    std::vector<std::vector<double>> S_;
};

} // namespace tepor::detail
