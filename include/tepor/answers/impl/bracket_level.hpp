#pragma once
// One mesh of a bracket: its model, one factor and the fields asked for; what a pass answers.

#include <algorithm>
#include <cmath>
#include <memory>
#include <tepor/base/error.hpp>
#include <tepor/flux/equilibrated.hpp>
#include <tepor/flux/flux_load.hpp>
#include <tepor/flux/model_problem.hpp>
#include <tepor/solve/engine.hpp>
#include <vector>

namespace tepor::detail {

/// One mesh of a bracket: its model, one factor, and the fields asked for.
class BracketLevel {
  public:
    explicit BracketLevel(Body body, RadiatingFaces radiating = RadiatingFaces::refuse)
        : body_(std::move(body)), model_(body_.model()), values_(body_.values()),
          primal_(model_problem(*model_, values_, radiating)), engine_(model_) {}

    [[nodiscard]] const Body& body() const noexcept { return body_; }
    [[nodiscard]] const Model& model() const noexcept { return *model_; }
    [[nodiscard]] const Values& values() const noexcept { return values_; }
    [[nodiscard]] ModelProblem& primal() noexcept { return primal_; }

    /// The slope at a temperature (any, when the body is linear).
    void factor(const std::vector<double>& temperature) {
        Pass pass;
        pass.matrix = &engine_.matrix;
        pass.T = temperature.data();
        assemble(*model_, values_, engine_.work, pass);
        if (pass.fault) raise(pass.fault);
        if (!engine_.factor(Purpose::many_solves))
            throw Error(ErrorCode::singular, "",
                        "bracket: the system has no unique solution; check conductivities and films");
    }

    void factor() { factor(std::vector<double>(as_size(model_->unknowns), 0.0)); }

    /// The field of a problem with this body's matrix; `held` are the values of the prescribed unknowns.
    [[nodiscard]] std::vector<double> solve(const FluxProblem& problem, const std::vector<double>& held) {
        const Index all = model_->unknowns, free = model_->free;
        const std::vector<double> load = flux_load(problem, all);
        std::vector<double> field(as_size(all), 0.0), product(as_size(all)), right(as_size(free));
        std::copy(held.begin(), held.end(), field.begin() + free);
        // A second solve for what the first left over brings an iterative or badly scaled one down to rounding.
        for (int round = 0; round < 2; ++round) {
            multiply(engine_.matrix, all, field.data(), product.data());
            double size = 0.0;
            for (Index u = 0; u < free; ++u) {
                right[as_size(u)] = primal_.factor * load[as_size(u)] - product[as_size(u)];
                size += std::abs(right[as_size(u)]);
            }
            if (!engine_.solve(right.data(), 1e-13 * size))
                break; // the residual term of the bound pays for what is left
            for (Index u = 0; u < free; ++u) field[as_size(u)] += right[as_size(u)];
        }
        return field;
    }

  private:
    Body body_;
    std::shared_ptr<const Model> model_;
    Values values_;
    ModelProblem primal_;
    Engine engine_;
};

/// The interval of one pass and the share of each cell in its width.
struct LevelAnswer {
    double lower = 0.0, value = 0.0, upper = 0.0;
    std::vector<double> share;
};

inline std::vector<double> shares(const Equilibrated& flux) {
    std::vector<double> share(flux.squared.size());
    double total = 0.0;
    for (std::size_t c = 0; c < share.size(); ++c) {
        const double eta = std::sqrt(flux.squared[c]) + (flux.lost.empty() ? 0.0 : flux.lost[c]);
        share[c] = eta * eta;
        total += share[c];
    }
    if (total > 0.0)
        for (double& s : share) s /= total;
    return share;
}

} // namespace tepor::detail
