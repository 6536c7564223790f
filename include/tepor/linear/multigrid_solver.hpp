#pragma once
// Conjugate gradients with multigrid as one LinearSolver.

#include <tepor/base/point.hpp>
#include <tepor/linear/conjugate_gradient.hpp>
#include <tepor/linear/multigrid.hpp>
#include <vector>

namespace tepor {

/// Solves to a tolerance by conjugate gradients preconditioned with Multigrid. Memory and time grow linearly with n.
class MultigridSolver {
  public:
    MultigridSolver() = default;
    explicit MultigridSolver(const IterationLimits& limits, const MultigridOptions& options = {})
        : limits_(limits), multigrid_(options) {}

    /// Notes the size; the pattern is not needed.
    void analyze(const SparseMatrix&, Index n, const Point* = nullptr) {
        size_ = n;
        solution_.resize(detail::as_size(n));
        work_.reset(n);
    }

    /// Builds the levels. The matrix must stay alive and unchanged until the next factor(). @return see Multigrid::setup
    [[nodiscard]] bool factor(const SparseMatrix& matrix) {
        matrix_ = &matrix;
        return multigrid_.setup(matrix, size_);
    }

    /// b := A^-1 b to the tolerance of the limits. @return false when it was not reached; report() says how far it got.
    bool solve(double* b) {
        for (double& v : solution_) v = 0.0;
        report_ = solve(b, solution_.data());
        for (Index i = 0; i < size_; ++i) b[i] = solution_[detail::as_size(i)];
        return report_.converged;
    }

    /// Improves x towards A^-1 b until the tolerance of the limits.
    IterationReport solve(const double* b, double* x) {
        return conjugate_gradient(
            *matrix_, size_, b, x, [this](const double* r, double* z) { return multigrid_.cycle(r, z); }, limits_,
            work_);
    }

    /// Improves x towards A^-1 b until stop(residual, relative) says so; see conjugate_gradient().
    template <class Stop>
    IterationReport solve(const double* b, double* x, Stop&& stop) {
        return conjugate_gradient(
            *matrix_, size_, b, x, [this](const double* r, double* z) { return multigrid_.cycle(r, z); }, limits_,
            work_, stop);
    }

    [[nodiscard]] const IterationReport& report() const noexcept { return report_; }
    [[nodiscard]] Index singular_row() const noexcept { return multigrid_.singular_row(); }
    [[nodiscard]] Multigrid& multigrid() noexcept { return multigrid_; }

  private:
    IterationLimits limits_{.tolerance = 1e-12, .most = 300};
    Multigrid multigrid_;
    const SparseMatrix* matrix_ = nullptr;
    Index size_ = 0;
    std::vector<double> solution_;
    ConjugateGradientWork work_;
    IterationReport report_;
};

} // namespace tepor
