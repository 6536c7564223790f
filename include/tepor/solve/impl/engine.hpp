#pragma once
// Which factor for which matrix, and the pool.

#include <cmath>
#include <limits>
#include <tepor/base/detail/huge_pages.hpp>
#include <tepor/solve/engine.hpp>

namespace tepor {

namespace detail {

/// An iteration is done when the sum of |r| is below `limit`, or below what rounding leaves: each row of r sums terms of
/// the size of its diagonal times x. `scale` is the norm of the right-hand side, which the iteration's own norms are relative
/// to: the sum is never less than the Euclidean norm, so that most iterations need not form it.
inline auto stop_below(const SparseMatrix& matrix, Index n, double limit, const double* x, double scale) {
    return [&matrix, n, limit, x, scale](const double* r, double relative) {
        constexpr double rounding = 8.0 * std::numeric_limits<double>::epsilon();
        const double norm = relative * scale;
        if (norm > limit && relative > 1e-7) return false;
        double even = 0.0, odd = 0.0;
        for (Index i = 0; i + 1 < n; i += 2) {
            even += std::abs(r[i]);
            odd += std::abs(r[i + 1]);
        }
        const double sum = even + odd + (n % 2 != 0 ? std::abs(r[n - 1]) : 0.0);
        if (sum <= limit) return true;
        double terms = 0.0;
        for (Index i = 0; i < n; ++i) terms += std::abs(matrix.diagonal(i) * x[i]);
        return sum <= rounding * terms;
    };
}

inline double euclidean_norm(const double* b, Index n) noexcept {
    return std::sqrt(dot_product(b, b, n));
}

} // namespace detail

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
    solves_ = 0;
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
    // an unsymmetric slope is preconditioned by its symmetric part
    if (!matrix.symmetric()) {
        symmetric_part_.rows = matrix.rows;
        symmetric_part_.start = matrix.start;
        symmetric_part_.column = matrix.column;
        symmetric_part_.lower.resize(matrix.lower.size());
        for (std::size_t e = 0; e < matrix.lower.size(); ++e)
            symmetric_part_.lower[e] = 0.5 * (matrix.lower[e] + matrix.upper[e]);
    }
    const SparseMatrix& definite = matrix.symmetric() ? matrix : symmetric_part_;
    if (choose_solver(n, 2, solves) == SolverKind::multigrid) {
        method_ = Method::multigrid;
        thinned_ = without_zeros(definite, n, thin_);
        const bool fine = multigrid_.setup(thinned_ ? thin_ : definite, n);
        singular_ = fine ? -1 : detail::as_id(multigrid_.singular_row());
        if (fine) return true;
        method_ = Method::none;
    }
    return factor_direct(definite);
}

TEPOR_INLINE bool Engine::factor_direct(const SparseMatrix& definite) {
    if (!analyzed_) cholesky_.analyze(definite, model_->free, model_->places.data());
    analyzed_ = true;
    const bool fine = cholesky_.factor(definite);
    if (fine || method_ != Method::multigrid) method_ = Method::cholesky; // multigrid may manage all the same
    singular_ = fine ? -1 : detail::as_id(cholesky_.singular_row());
    return fine;
}

TEPOR_INLINE void Engine::precondition(const double* r, double* z) noexcept {
    const Index n = model_->free;
    if (method_ == Method::multigrid) {
        multigrid_.cycle(r, z);
        return;
    }
    for (Index i = 0; i < n; ++i) z[i] = r[i];
    cholesky_.solve(z);
}

TEPOR_INLINE bool Engine::solve(double* b, double limit) {
    iterations_ = 0;
    const Index n = model_->free;
    if (n == 0) return true;
    switch (method_) {
    case Method::none: return false;
    case Method::outside: return outside_->solve(b);
    case Method::tridiagonal: tridiagonal_.solve(b); return true;
    case Method::banded: banded_.solve(b); return true;
    case Method::banded_lu: banded_lu_.solve(b); return true;
    case Method::cholesky:
    case Method::multigrid: break;
    }
    if (!matrix.symmetric()) return solve_unsymmetric(b, limit, false);
    ++solves_;
    if (method_ == Method::multigrid && choose_solver(n, 2, solves_) == SolverKind::cholesky)
        static_cast<void>(factor_direct(matrix)); // if it fails: multigrid has managed until now
    if (method_ == Method::multigrid) return iterate(b, limit);
    cholesky_.solve(b);
    return true;
}

TEPOR_INLINE bool Engine::iterate(double* b, double limit) {
    const Index n = model_->free;
    cg_x_.assign(detail::as_size(n), 0.0);
    const SparseMatrix& a = thinned_ ? thin_ : matrix;
    const auto cycle = [this](const double* r, double* z) { return multigrid_.cycle(r, z); };
    // More than 40 iterations to 1e-8 are dearer than a factor, as long as that fits in memory.
    const IterationLimits limits{.trial = n <= 1000000 ? 30 : 0};
    const IterationReport report =
        conjugate_gradient(a, n, b, cg_x_.data(), cycle, limits, cg_work_,
                           detail::stop_below(a, n, limit, cg_x_.data(), detail::euclidean_norm(b, n)));
    iterations_ = report.iterations;
    if ((report.slow || !(report.converged || report.residual < 1e-6)) && factor_direct(matrix)) {
        cholesky_.solve(b);
        return true;
    }
    for (Index i = 0; i < n; ++i) b[i] = cg_x_[detail::as_size(i)];
    return report.converged || report.residual < 1e-6; // the caller measures what is left and may come again
}

TEPOR_INLINE bool Engine::solve_transposed(double* b, double limit) {
    if (method_ == Method::banded_lu) {
        banded_lu_.solve_transposed(b);
        return true;
    }
    if (matrix.symmetric()) return solve(b, limit);
    return solve_unsymmetric(b, limit, true);
}

TEPOR_INLINE bool Engine::solve_unsymmetric(double* b, double limit, bool transposed) {
    const Index n = model_->free;
    cg_x_.assign(detail::as_size(n), 0.0);
    const auto apply = [&](const double* x, double* y) {
        transposed ? multiply_transposed(matrix, n, x, y) : multiply(matrix, n, x, y);
    };
    const auto run = [&] {
        const IterationReport made = bicgstab(
            apply, n, b, cg_x_.data(), [this](const double* r, double* z) { precondition(r, z); }, IterationLimits{},
            krylov_work_, detail::stop_below(matrix, n, limit, cg_x_.data(), detail::euclidean_norm(b, n)));
        iterations_ = made.iterations;
        return made;
    };
    IterationReport report = run();
    if (!(report.converged || report.residual < 1e-6) && method_ == Method::multigrid &&
        factor_direct(symmetric_part_)) {
        cg_x_.assign(detail::as_size(n), 0.0);
        report = run();
    }
    for (Index i = 0; i < n; ++i) b[i] = cg_x_[detail::as_size(i)];
    return report.converged || report.residual < 1e-6;
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
