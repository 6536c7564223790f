#pragma once
// A linear solver with nothing beyond the LinearSolver contract: dense elimination.

#include "dense_system.hpp"

namespace tepor::test {

/// Not default constructible, not copyable, solve() returns nothing.
class BareSolver {
  public:
    explicit BareSolver(int) {}
    BareSolver(const BareSolver&) = delete;
    BareSolver(BareSolver&&) = default;
    void analyze(const SparseMatrix&, Index n, const Point*) { n_ = n; }
    bool factor(const SparseMatrix& matrix) {
        matrix_ = dense(matrix, n_);
        return true;
    }
    void solve(double* b) const {
        const std::vector<double> x = dense_solve(matrix_, std::vector<double>(b, b + n_));
        std::copy(x.begin(), x.end(), b);
    }
    int singular_row() const { return -1; }

  private:
    Index n_ = 0;
    Dense matrix_;
};

} // namespace tepor::test
