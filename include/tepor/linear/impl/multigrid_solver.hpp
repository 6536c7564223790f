#pragma once
// The parts of MultigridSolver that are no templates.

#include <tepor/linear/impl/renumber.hpp>
#include <tepor/linear/multigrid_solver.hpp>

namespace tepor {

TEPOR_INLINE void MultigridSolver::analyze(const SparseMatrix& pattern, Index n, const Point*) {
    size_ = n;
    solution_.assign(detail::as_size(n), 0.0);
    work_.reset(n);
    own_ = {};
    order_.clear();
    source_.clear();
    if (!detail::scattered(pattern, n)) return;
    const detail::Graph graph = detail::graph_of(pattern, n);
    order_ = detail::breadth_first_order(graph);
    own_ = detail::permuted(pattern, graph, order_, source_);
    right_.resize(detail::as_size(n));
    shown_.resize(detail::as_size(n));
}

TEPOR_INLINE bool MultigridSolver::factor(const SparseMatrix& matrix) {
    matrix_ = &matrix;
    if (!order_.empty()) {
        for (std::size_t e = 0; e < source_.size(); ++e) own_.lower[e] = matrix.lower[detail::as_size(source_[e])];
        matrix_ = &own_;
    }
    const bool regular = multigrid_.setup(*matrix_, size_);
    singular_row_ = multigrid_.singular_row();
    if (singular_row_ >= 0 && !order_.empty()) singular_row_ = order_[detail::as_size(singular_row_)];
    return regular;
}

TEPOR_INLINE IterationReport MultigridSolver::solve(const double* b, double* x) {
    return solve(b, x, [this](const double*, double relative) { return relative <= limits_.tolerance; });
}

TEPOR_INLINE bool MultigridSolver::solve(double* b) {
    for (double& v : solution_) v = 0.0;
    if (order_.empty()) {
        report_ = solve(b, solution_.data());
        for (Index i = 0; i < size_; ++i) b[i] = solution_[detail::as_size(i)];
        return report_.converged;
    }
    for (Index i = 0; i < size_; ++i) right_[detail::as_size(i)] = b[order_[detail::as_size(i)]];
    report_ = conjugate_gradient(
        own_, size_, right_.data(), solution_.data(),
        [this](const double* r, double* z) { return multigrid_.cycle(r, z); }, limits_, work_);
    for (Index i = 0; i < size_; ++i) b[order_[detail::as_size(i)]] = solution_[detail::as_size(i)];
    return report_.converged;
}

} // namespace tepor
