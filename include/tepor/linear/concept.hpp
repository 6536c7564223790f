#pragma once
// The LinearSolver concept, and a base class for solvers chosen when the program runs.

#include <concepts>
#include <memory>
#include <tepor/base/point.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <type_traits>
#include <utility>

namespace tepor {

/// A solver for symmetric positive definite systems on the leading n x n block of a SparseMatrix.
///
/// analyze(pattern, n, places)  reads the pattern only; `places` (one per unknown, or null) may guide an ordering
/// factor(matrix)               takes the values; false when the matrix is found singular or indefinite. The matrix stays
///                              alive and unchanged until the next factor()
/// solve(b)                     b := A^-1 b for n values; may return bool: false when it did not reach its tolerance
/// singular_row()               an unknown of the singular part after factor() has returned false, or -1
/// analyze() may be called again for another system, factor() again for other values on the same pattern.
template <class S>
concept LinearSolver = requires(S& solver, const SparseMatrix& matrix, Index n, const Point* places, double* b) {
    solver.analyze(matrix, n, places);
    { solver.factor(matrix) } -> std::convertible_to<bool>;
    solver.solve(b);
    { solver.singular_row() } -> std::convertible_to<Index>;
};

/// A LinearSolver behind a pointer.
class AnySolver {
  public:
    AnySolver() = default;
    AnySolver(const AnySolver&) = delete;
    AnySolver& operator=(const AnySolver&) = delete;
    virtual ~AnySolver() = default;

    virtual void analyze(const SparseMatrix& pattern, Index n, const Point* places) = 0;
    [[nodiscard]] virtual bool factor(const SparseMatrix& matrix) = 0;
    /// false when the solver did not reach its tolerance.
    [[nodiscard]] virtual bool solve(double* b) = 0;
    [[nodiscard]] virtual Index singular_row() const = 0;
};

namespace detail {

template <LinearSolver S>
class ErasedSolver final : public AnySolver {
  public:
    explicit ErasedSolver(S solver) : solver_(std::move(solver)) {}
    void analyze(const SparseMatrix& pattern, Index n, const Point* places) override {
        solver_.analyze(pattern, n, places);
    }
    bool factor(const SparseMatrix& matrix) override { return solver_.factor(matrix); }
    bool solve(double* b) override {
        if constexpr (std::is_void_v<decltype(solver_.solve(b))>) {
            solver_.solve(b);
            return true;
        } else {
            return solver_.solve(b);
        }
    }
    Index singular_row() const override { return solver_.singular_row(); }

  private:
    S solver_;
};

} // namespace detail

/// Puts a solver of any type behind the common base.
template <LinearSolver S>
std::unique_ptr<AnySolver> any_solver(S solver) {
    return std::make_unique<detail::ErasedSolver<S>>(std::move(solver));
}

} // namespace tepor
