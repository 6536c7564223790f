#pragma once
// A linearised steady state: the engine with the converged slope, and solves with it and its transpose.

#include <cmath>
#include <memory>
#include <tepor/base/text.hpp>
#include <tepor/field/field.hpp>
#include <tepor/solve/engine.hpp>

namespace tepor::detail {

/// Borrows the factor of a steady field's slope, or makes it, and gives it back.
class Linearised {
  public:
    explicit Linearised(const Field& field, Purpose purpose = Purpose::one_solve)
        : field_(field), model_(field.model()) {
        if (!field.storage().empty() || field.time() != 0.0)
            throw Error(ErrorCode::not_supported, "",
                        text("the field is one of a march at ", field.time(),
                             " s; derivatives of a steady field are asked here, those of a march of the march itself"));
        pool_ = std::dynamic_pointer_cast<EnginePool>(field.store());
        key_ = matrix_key(model_, field.values());
        engine_ = pool_ ? pool_->borrow(field.shared_model(), key_) : std::make_unique<Engine>(field.shared_model());
        if (!model_.nonlinear && engine_->key == key_) return;
        engine_->key.clear();
        Pass pass;
        pass.T = field.temperature().data();
        pass.residual = engine_->residual.data();
        pass.matrix = &engine_->matrix;
        assemble(model_, field.values(), engine_->work, pass);
        if (pass.fault) raise(pass.fault);
        if (!engine_->factor(purpose)) {
            const Id u = engine_->singular_unknown();
            const Point p = u >= 0 ? model_.places[as_size(u)] : Point{};
            throw Error(ErrorCode::singular, "",
                        text("the slope of the steady state has no inverse near (", p.x, ", ", p.y,
                             "); at a turning point there is no derivative"));
        }
        if (!model_.nonlinear) engine_->key = key_;
    }
    Linearised(const Linearised&) = delete;
    Linearised& operator=(const Linearised&) = delete;
    ~Linearised() {
        if (pool_) pool_->give_back(std::move(engine_));
    }

    [[nodiscard]] const Model& model() const noexcept { return model_; }
    [[nodiscard]] const Field& field() const noexcept { return field_; }
    [[nodiscard]] Workspace& work() noexcept { return engine_->work; }
    [[nodiscard]] Engine& engine() noexcept { return *engine_; }

    /// b := A^-1 b or A^-T b on the free unknowns.
    void solve(double* b, bool transposed) {
        double sum = 0.0;
        for (Index u = 0; u < model_.free; ++u) sum += std::abs(b[u]);
        if (sum == 0.0) return;
        const double limit = 1e-13 * sum;
        if (!(transposed ? engine_->solve_transposed(b, limit) : engine_->solve(b, limit)))
            throw Error(ErrorCode::not_converged, "",
                        "the linear solve for derivatives stalled; check values and units");
    }

    /// y := A^T x or A x over all unknowns.
    void multiply_all(const double* x, double* y, bool transposed) const {
        if (transposed)
            multiply_transposed(engine_->matrix, model_.unknowns, x, y);
        else
            multiply(engine_->matrix, model_.unknowns, x, y);
    }

  private:
    const Field& field_;
    const Model& model_;
    std::shared_ptr<EnginePool> pool_;
    std::vector<double> key_;
    std::unique_ptr<Engine> engine_;
};

} // namespace tepor::detail
