#pragma once
// A recorded march gone through again: values, matrices and factors of its legs.

#include <cmath>
#include <memory>
#include <tepor/base/text.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/tape.hpp>

namespace tepor::detail {

/// One evaluation of the weak form in a leg.
struct LegPoint {
    std::vector<double> T;
    TimeSpan span;
    double weight = 0.0;
};

class MarchReplay {
  public:
    MarchReplay(std::shared_ptr<const Model> model, const MarchTape& tape, Capacity capacity)
        : model_(std::move(model)), tape_(tape), capacity_(capacity), all_(as_size(model_->unknowns)),
          work_(model_->kernels->workspace()), engine_(model_) {
        prepare_matrix(*model_, K_);
    }
    MarchReplay(const MarchReplay&) = delete;
    MarchReplay& operator=(const MarchReplay&) = delete;
    virtual ~MarchReplay() = default;

    [[nodiscard]] const Values& values() const { return tape_.values[now_]; }

  protected:
    /// Called when a leg has other values than the one before.
    virtual void values_changed() {}

    /// Values of a leg: capacity and, where nothing depends on temperature or time, K.
    void use(std::size_t which) {
        if (ready_ && which == now_) return;
        now_ = which;
        ready_ = true;
        storage_ = std::make_unique<Storage>(model_, values(), capacity_, work_);
        if (!storage_->latent().empty())
            throw Error(ErrorCode::not_supported, "latent heat",
                        "gradient: a march with latent heat has kinks at its nodes; derivatives are not offered");
        if (!storage_->linear())
            throw Error(
                ErrorCode::not_supported, "specific heat",
                "gradient: a density or specific heat that depends on temperature is not offered in marches yet; give "
                "numbers, Parameters or laws of place");
        constant_ = !model_->nonlinear && !model_->time_dependent;
        shift_ = -1.0;
        if (constant_) assemble_K(tape_.start.data(), {});
        values_changed();
    }

    void assemble_K(const double* T, TimeSpan span) {
        Pass pass;
        pass.T = T;
        pass.time = span;
        pass.matrix = &K_;
        assemble(*model_, values(), work_, pass);
        if (pass.fault) raise(pass.fault);
    }

    /// b := -(M + a K(at))^-1 b (or its transpose) on the free unknowns, 0 on the rest.
    void solve_leg(const LegPoint& at, double a, std::vector<double>& b, bool transposed) {
        factor(at, a);
        double size = 0.0;
        for (std::size_t u = 0; u < all_; ++u) {
            b[u] = as_id(u) < model_->free ? -b[u] : 0.0;
            size += std::abs(b[u]);
        }
        if (size == 0.0) return;
        const double limit = 1e-13 * size;
        if (!(transposed ? engine_.solve_transposed(b.data(), limit) : engine_.solve(b.data(), limit)))
            throw Error(ErrorCode::not_converged, "", "gradient: a linear solve stalled");
    }

    /// Factors M + a K(at), unless that is what is factored.
    void factor(const LegPoint& at, double a) {
        if (constant_ && shift_ == a) return;
        if (!constant_) assemble_K(at.T.data(), at.span);
        for (std::size_t e = 0; e < K_.lower.size(); ++e) engine_.matrix.lower[e] = a * K_.lower[e];
        for (std::size_t e = 0; e < K_.upper.size(); ++e) engine_.matrix.upper[e] = a * K_.upper[e];
        storage_->add_to(engine_.matrix);
        if (!engine_.factor(Purpose::many_solves))
            throw Error(ErrorCode::singular, "", "gradient: a step of the march has no inverse");
        shift_ = a;
    }

    void prescribed(double at, bool before, std::vector<double>& T) const {
        model_->prescribe(values(), {at, at, 1.0, before}, T.data());
    }

    std::shared_ptr<const Model> model_;
    const MarchTape& tape_;
    Capacity capacity_;
    std::size_t all_;
    Workspace work_;
    Engine engine_;
    std::unique_ptr<Storage> storage_;
    SparseMatrix K_;
    double shift_ = -1.0;
    bool constant_ = false;
    bool ready_ = false;
    std::size_t now_ = 0;
};

} // namespace tepor::detail
