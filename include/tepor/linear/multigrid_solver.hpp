#pragma once
// Conjugate gradients with multigrid as one LinearSolver.

#include <tepor/base/point.hpp>
#include <tepor/linear/conjugate_gradient.hpp>
#include <tepor/linear/multigrid.hpp>
#include <vector>

namespace tepor {

/// Solves to a tolerance by conjugate gradients preconditioned with Multigrid. Memory and time grow linearly with n.
///
/// A matrix whose numbering scatters neighbours is copied into a better one inside; nothing of that shows outside.
class MultigridSolver {
  public:
    MultigridSolver() = default;
    explicit MultigridSolver(const IterationLimits& limits, const MultigridOptions& options = {})
        : limits_(limits), multigrid_(options) {
        work_.crew = multigrid_.crew();
    }

    /// Notes the size, and finds a better numbering where the pattern needs one.
    TEPOR_INLINE void analyze(const SparseMatrix& pattern, Index n, const Point* places = nullptr);

    /// Builds the levels. The matrix must stay alive and unchanged until the next factor(). @return see Multigrid::setup
    [[nodiscard]] TEPOR_INLINE bool factor(const SparseMatrix& matrix);

    /// b := A^-1 b to the tolerance of the limits. @return false when it was not reached; report() says how far it got.
    TEPOR_INLINE bool solve(double* b);

    /// Improves x towards A^-1 b until the tolerance of the limits.
    TEPOR_INLINE IterationReport solve(const double* b, double* x);

    /// Improves x towards A^-1 b until stop(residual, relative) says so; see conjugate_gradient(). The residual comes in the
    /// caller's numbering.
    template <class Stop>
    IterationReport solve(const double* b, double* x, Stop&& stop);

    [[nodiscard]] const IterationReport& report() const noexcept { return report_; }
    [[nodiscard]] Index singular_row() const noexcept { return singular_row_; }
    [[nodiscard]] const Multigrid& multigrid() const noexcept { return multigrid_; }
    [[nodiscard]] IterationLimits& limits() noexcept { return limits_; }

  private:
    IterationLimits limits_{.tolerance = 1e-12, .most = 300};
    Multigrid multigrid_;
    const SparseMatrix* matrix_ = nullptr;
    Index size_ = 0;
    Index singular_row_ = -1;
    std::vector<double> solution_;
    ConjugateGradientWork work_;
    IterationReport report_;
    // Only where the numbering was poor:
    SparseMatrix own_;
    std::vector<Id> order_;  // order_[position] = unknown of the caller
    std::vector<Id> source_; // entries of the caller's matrix in the order of own_
    std::vector<double> right_, shown_;
};

// ---------------------------------------------------------------------------------------------------------------------

template <class Stop>
IterationReport MultigridSolver::solve(const double* b, double* x, Stop&& stop) {
    const auto precondition = [this](const double* r, double* z) { return multigrid_.cycle(r, z); };
    if (order_.empty()) {
        report_ = conjugate_gradient(*matrix_, size_, b, x, precondition, limits_, work_, stop);
        return report_;
    }
    for (Index i = 0; i < size_; ++i) {
        right_[detail::as_size(i)] = b[order_[detail::as_size(i)]];
        shown_[detail::as_size(i)] = x[order_[detail::as_size(i)]];
    }
    solution_.swap(shown_); // the caller's x, in the better numbering
    report_ = conjugate_gradient(own_, size_, right_.data(), solution_.data(), precondition, limits_, work_,
                                 [&](const double* residual, double relative) {
                                     for (Index i = 0; i < size_; ++i) {
                                         shown_[detail::as_size(order_[detail::as_size(i)])] = residual[i];
                                     }
                                     return stop(static_cast<const double*>(shown_.data()), relative);
                                 });
    for (Index i = 0; i < size_; ++i) x[order_[detail::as_size(i)]] = solution_[detail::as_size(i)];
    return report_;
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/multigrid_solver.hpp>
#endif
