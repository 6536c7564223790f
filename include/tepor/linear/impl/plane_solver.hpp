#pragma once
// Factor or multigrid, whichever choose_solver() picks, for symmetric systems and for unsymmetric ones near them.

#include <cmath>
#include <limits>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/choose.hpp>
#include <tepor/linear/conjugate_gradient.hpp>
#include <tepor/linear/impl/updated_factor.hpp>
#include <tepor/linear/krylov.hpp>
#include <tepor/linear/multigrid.hpp>
#include <tepor/linear/plane_solver.hpp>
#include <vector>

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

/// SparseCholesky or Multigrid; an unsymmetric matrix is preconditioned by its symmetric part.
class OwnPlaneSolver final : public PlaneSolver {
  public:
    void use_threads(int threads) override {
        multigrid_.use_threads(threads);
        cg_work_.crew = multigrid_.crew();
    }

    bool factor(SparseMatrix& matrix, Index n, const Point* places, Index solves, bool may_drop_zeros) override {
        entries_ = matrix.entries() > entries_ ? matrix.entries() : entries_;
        matrix_ = &matrix;
        size_ = n;
        places_ = places;
        singular_ = -1;
        solves_ = 0;
        by_multigrid_ = false;
        few_.forget();
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
            if (may_drop_zeros && matrix.symmetric()) {
                thinned_ = false;
                static_cast<void>(drop_zeros(matrix, n));
            } else {
                thinned_ = without_zeros(definite, n, thin_);
            }
            by_multigrid_ = multigrid_.setup(thinned_ ? thin_ : definite, n);
            singular_ = by_multigrid_ ? -1 : as_id(multigrid_.singular_row());
            if (by_multigrid_) return true;
        }
        return factor_direct(definite);
    }

    bool solve(double* b, double limit, bool transposed) override {
        iterations_ = 0;
        if (!matrix_->symmetric()) return solve_unsymmetric(b, limit, transposed);
        ++solves_;
        if (by_multigrid_ && choose_solver(size_, 2, solves_) == SolverKind::cholesky)
            static_cast<void>(factor_direct(*matrix_)); // if it fails: multigrid has managed until now
        if (by_multigrid_) return iterate(b, limit);
        cholesky_.solve(b);
        few_.apply(b);
        return true;
    }

    bool keep_base() override { return few_.keep_base(*matrix_); }
    Index update(Index most) override { return few_.update(*matrix_, size_, cholesky_, most); }
    void restore_base(SparseMatrix& matrix) override { few_.restore_base(matrix); }

    Id singular_unknown() const noexcept override { return singular_; }
    bool direct() const noexcept override { return !by_multigrid_; }
    Index iterations() const noexcept override { return iterations_; }

  private:
    bool factor_direct(const SparseMatrix& definite) {
        const bool whole = definite.entries() == entries_;
        if (!analyzed_ || !whole) cholesky_.analyze(definite, size_, places_);
        analyzed_ = whole; // without its zeros a pattern goes with its values
        const bool fine = cholesky_.factor(definite);
        if (fine) by_multigrid_ = false; // else multigrid may manage all the same
        singular_ = fine ? -1 : as_id(cholesky_.singular_row());
        return fine;
    }

    void precondition(const double* r, double* z) noexcept {
        if (by_multigrid_) {
            multigrid_.cycle(r, z);
            return;
        }
        for (Index i = 0; i < size_; ++i) z[i] = r[i];
        cholesky_.solve(z);
    }

    bool iterate(double* b, double limit) {
        x_.assign(as_size(size_), 0.0);
        const SparseMatrix& a = thinned_ ? thin_ : *matrix_;
        const auto cycle = [this](const double* r, double* z) { return multigrid_.cycle(r, z); };
        // More than 40 iterations to 1e-8 are dearer than a factor, as long as that fits in memory.
        const IterationLimits limits{.trial = size_ <= 1000000 ? 30 : 0};
        const IterationReport report =
            conjugate_gradient(a, size_, b, x_.data(), cycle, limits, cg_work_,
                               stop_below(a, size_, limit, x_.data(), euclidean_norm(b, size_)));
        iterations_ = report.iterations;
        if ((report.slow || !near(report)) && factor_direct(*matrix_)) {
            cholesky_.solve(b);
            return true;
        }
        return take(report, b);
    }

    bool solve_unsymmetric(double* b, double limit, bool transposed) {
        x_.assign(as_size(size_), 0.0);
        const auto apply = [&](const double* x, double* y) {
            transposed ? multiply_transposed(*matrix_, size_, x, y) : multiply(*matrix_, size_, x, y);
        };
        const auto run = [&] {
            const IterationReport made = bicgstab(
                apply, size_, b, x_.data(), [this](const double* r, double* z) { precondition(r, z); },
                IterationLimits{}, krylov_work_,
                stop_below(*matrix_, size_, limit, x_.data(), euclidean_norm(b, size_)));
            iterations_ = made.iterations;
            return made;
        };
        IterationReport report = run();
        if (!near(report) && by_multigrid_ && factor_direct(symmetric_part_)) {
            x_.assign(as_size(size_), 0.0);
            report = run();
        }
        return take(report, b);
    }

    /// Near enough: the caller measures what is left and may come again.
    static bool near(const IterationReport& report) noexcept { return report.converged || report.residual < 1e-6; }

    bool take(const IterationReport& report, double* b) {
        for (Index i = 0; i < size_; ++i) b[i] = x_[as_size(i)];
        return near(report);
    }

    const SparseMatrix* matrix_ = nullptr;
    const Point* places_ = nullptr;
    Index size_ = 0;
    Index entries_ = 0; // of the matrix with all its zeros
    Index solves_ = 0;  // since the matrix was decomposed
    Index iterations_ = 0;
    Id singular_ = -1;
    bool by_multigrid_ = false;
    bool analyzed_ = false;
    bool thinned_ = false; // multigrid works on thin_
    SparseCholesky cholesky_;
    Multigrid multigrid_;
    ConjugateGradientWork cg_work_;
    KrylovWork krylov_work_;
    SparseMatrix symmetric_part_;
    FewRows few_;
    SparseMatrix thin_; // the free block without zeros, where there are many
    std::vector<double> x_;
};

} // namespace detail

TEPOR_INLINE std::unique_ptr<PlaneSolver> make_plane_solver() {
    return std::make_unique<detail::OwnPlaneSolver>();
}

} // namespace tepor
