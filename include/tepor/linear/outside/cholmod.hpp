#pragma once
// CHOLMOD as a LinearSolver, for programs that link it themselves. Not part of <tepor/tepor.hpp>; empty where its header
// is not found.

#if __has_include(<cholmod.h>)
#include <cholmod.h>
#define TEPOR_HAS_CHOLMOD 1
#elif __has_include(<suitesparse/cholmod.h>)
#include <suitesparse/cholmod.h>
#define TEPOR_HAS_CHOLMOD 1
#endif

#if defined(TEPOR_HAS_CHOLMOD)

#include <tepor/base/point.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor {

/// Cholesky factor of CHOLMOD with approximate minimum degree.
class CholmodSolver {
  public:
    CholmodSolver() {
        cholmod_start(&common_);
        common_.print = 0;
        common_.nmethods = 1;
        common_.method[0].ordering = CHOLMOD_AMD;
        common_.postorder = 1;
    }
    CholmodSolver(const CholmodSolver&) = delete;
    CholmodSolver& operator=(const CholmodSolver&) = delete;
    CholmodSolver(CholmodSolver&& other) noexcept : CholmodSolver() {
        size_ = other.size_;
    } // handed on before analyze()
    ~CholmodSolver() {
        release();
        cholmod_finish(&common_);
    }

    void analyze(const SparseMatrix& pattern, Index n, const Point* = nullptr) {
        release();
        size_ = n;
        if (n == 0) return;
        cholmod_sparse view = view_of(pattern);
        factor_ = cholmod_analyze(&view, &common_);
    }

    [[nodiscard]] bool factor(const SparseMatrix& matrix) {
        singular_row_ = -1;
        if (size_ == 0) return true;
        cholmod_sparse view = view_of(matrix);
        cholmod_factorize(&view, factor_, &common_);
        if (common_.status == CHOLMOD_OK) return true;
        singular_row_ = static_cast<const int*>(factor_->Perm)[factor_->minor < factor_->n ? factor_->minor : 0];
        return false;
    }

    void solve(double* b) {
        if (size_ == 0) return;
        cholmod_dense right{};
        right.nrow = right.d = right.nzmax = detail::as_size(size_);
        right.ncol = 1;
        right.x = b;
        right.xtype = CHOLMOD_REAL;
        right.dtype = CHOLMOD_DOUBLE;
        cholmod_solve2(CHOLMOD_A, factor_, &right, nullptr, &solution_, nullptr, &work_y_, &work_e_, &common_);
        const double* x = static_cast<const double*>(solution_->x);
        for (Index i = 0; i < size_; ++i) b[i] = x[i];
    }

    [[nodiscard]] Index singular_row() const noexcept { return singular_row_; }

  private:
    // The lower triangle by rows is the upper triangle by columns.
    cholmod_sparse view_of(const SparseMatrix& matrix) const {
        cholmod_sparse view{};
        view.nrow = view.ncol = detail::as_size(size_);
        view.nzmax = detail::as_size(matrix.start[detail::as_size(size_)]);
        view.p = const_cast<Id*>(matrix.start.data());
        view.i = const_cast<Id*>(matrix.column.data());
        view.x = const_cast<double*>(matrix.lower.data());
        view.stype = 1;
        view.itype = CHOLMOD_INT;
        view.xtype = CHOLMOD_REAL;
        view.dtype = CHOLMOD_DOUBLE;
        view.sorted = 1;
        view.packed = 1;
        return view;
    }

    void release() {
        cholmod_free_factor(&factor_, &common_);
        cholmod_free_dense(&solution_, &common_);
        cholmod_free_dense(&work_y_, &common_);
        cholmod_free_dense(&work_e_, &common_);
    }

    cholmod_common common_{};
    cholmod_factor* factor_ = nullptr;
    cholmod_dense* solution_ = nullptr;
    cholmod_dense* work_y_ = nullptr;
    cholmod_dense* work_e_ = nullptr;
    Index size_ = 0;
    Index singular_row_ = -1;
};

} // namespace tepor

#endif
