#pragma once
// Which factor for which matrix, and the pool.

#include <tepor/base/detail/huge_pages.hpp>
#include <tepor/solve/engine.hpp>

namespace tepor {

TEPOR_INLINE Engine::Engine(std::shared_ptr<const Model> model)
    : work(model->kernels->workspace()), model_(std::move(model)) {
    prepare_matrix(*model_, matrix);
    for (std::vector<double>* v : {&residual, &step, &product})
        detail::resize_huge(*v, detail::as_size(model_->unknowns));
}

TEPOR_INLINE bool Engine::factor_line() {
    const Index n = model_->free;
    if (!matrix.symmetric()) {
        method_ = Method::banded_lu;
        const bool fine = banded_lu_.factor(matrix, n);
        singular_ = fine ? -1 : detail::as_id(banded_lu_.singular_row());
        return fine;
    }
    if (half_bandwidth(matrix, n) <= 1) {
        method_ = Method::tridiagonal;
        const bool fine = tridiagonal_.factor(matrix, n);
        singular_ = fine ? -1 : detail::as_id(tridiagonal_.singular_row());
        return fine;
    }
    method_ = Method::banded;
    const bool fine = banded_.factor(matrix, n);
    singular_ = fine ? -1 : detail::as_id(banded_.singular_row());
    return fine;
}

TEPOR_INLINE bool Engine::factor(Index solves) {
    singular_ = -1;
    const Index n = model_->free;
    if (n == 0) return true;
    if (outside_ && matrix.symmetric()) {
        method_ = Method::outside;
        if (!outside_knows_) outside_->analyze(matrix, n, model_->places.data());
        outside_knows_ = true;
        const bool fine = outside_->factor(matrix);
        singular_ = fine ? -1 : detail::as_id(outside_->singular_row());
        return fine;
    }
    if (model_->mesh->dim == 1) return factor_line();
    method_ = Method::plane;
    if (!plane_) {
        plane_ = model_->make_plane_solver();
        plane_->use_threads(threads_);
    }
    const bool fine = plane_->factor(matrix, n, model_->places.data(), solves, may_drop_zeros);
    singular_ = fine ? -1 : plane_->singular_unknown();
    return fine;
}

TEPOR_INLINE bool Engine::solve(double* b, double limit) {
    if (model_->free == 0) return true;
    switch (method_) {
    case Method::none: return false;
    case Method::outside: return outside_->solve(b);
    case Method::tridiagonal: tridiagonal_.solve(b); return true;
    case Method::banded: banded_.solve(b); return true;
    case Method::banded_lu: banded_lu_.solve(b); return true;
    case Method::plane: return plane_->solve(b, limit, false);
    }
    return false;
}

TEPOR_INLINE bool Engine::solve_transposed(double* b, double limit) {
    if (method_ == Method::banded_lu) {
        banded_lu_.solve_transposed(b);
        return true;
    }
    if (method_ == Method::plane) return plane_->solve(b, limit, true);
    return solve(b, limit);
}

TEPOR_INLINE std::vector<double> matrix_key(const Model& model, const Values& values) {
    std::vector<double> key;
    key.reserve(values.slots.size() + 1);
    key.push_back(0.0); // never empty, so that an unfactored engine matches nothing
    for (std::size_t s = 0; s < values.slots.size(); ++s)
        if (model.roles[s].matrix || model.roles[s].place) key.push_back(values.slots[s]);
    return key;
}

TEPOR_INLINE std::unique_ptr<Engine> EnginePool::borrow(const std::shared_ptr<const Model>& model,
                                                        const std::vector<double>& key) {
    {
        const std::lock_guard<std::mutex> lock(guard_);
        for (std::size_t i = idle_.size(); i-- > 0;)
            if (idle_[i]->key == key) {
                std::unique_ptr<Engine> found = std::move(idle_[i]);
                idle_.erase(idle_.begin() + static_cast<Index>(i));
                return found;
            }
        if (idle_.size() == most) {
            std::unique_ptr<Engine> oldest = std::move(idle_.front());
            idle_.erase(idle_.begin());
            oldest->key.clear();
            return oldest;
        }
    }
    return std::make_unique<Engine>(model);
}

TEPOR_INLINE void EnginePool::give_back(std::unique_ptr<Engine> engine) {
    const std::lock_guard<std::mutex> lock(guard_);
    if (idle_.size() < most) idle_.push_back(std::move(engine));
}

TEPOR_INLINE std::unique_ptr<LineSweep> EnginePool::borrow_sweep(const std::shared_ptr<const Model>& model) {
    if (model->mesh->dim != 1) return nullptr;
    const std::lock_guard<std::mutex> lock(guard_);
    if (!planned_) plan_ = plan_line(*model);
    planned_ = true;
    if (!plan_) return nullptr;
    if (idle_sweeps_.empty()) return std::make_unique<LineSweep>(model, plan_);
    std::unique_ptr<LineSweep> found = std::move(idle_sweeps_.back());
    idle_sweeps_.pop_back();
    return found;
}

TEPOR_INLINE void EnginePool::give_back(std::unique_ptr<LineSweep> sweep) {
    const std::lock_guard<std::mutex> lock(guard_);
    if (idle_sweeps_.size() < most) idle_sweeps_.push_back(std::move(sweep));
}

} // namespace tepor
