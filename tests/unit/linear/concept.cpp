// The LinearSolver concept and solvers chosen when the program runs.
#include "../../support/bare_solver.hpp"
#include "../../support/square.hpp"
#include <doctest/doctest.h>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/choose.hpp>
#include <tepor/linear/concept.hpp>
#include <tepor/linear/multigrid_solver.hpp>

using namespace tepor;

static_assert(LinearSolver<SparseCholesky>);
static_assert(LinearSolver<MultigridSolver>);
static_assert(LinearSolver<test::BareSolver>);
static_assert(!LinearSolver<int>);
static_assert(!LinearSolver<Multigrid>); // a preconditioner, not a solver
static_assert(!LinearSolver<const MultigridSolver>);

TEST_CASE("every solver behind the common base solves the same system, the user's own included") {
    const test::Square square = test::square(12, true, false, 95);
    const Index n = square.matrix.rows;
    test::Random random(96);
    const std::vector<double> b = test::random_vector(n, random);
    const std::vector<double> expected = test::dense_solve(test::dense(square.matrix, n), b);
    std::unique_ptr<AnySolver> solvers[3] = {any_solver(SparseCholesky()), any_solver(MultigridSolver()),
                                             any_solver(test::BareSolver(1))};
    for (const auto& solver : solvers) {
        solver->analyze(square.matrix, n, square.places.data());
        REQUIRE(solver->factor(square.matrix));
        std::vector<double> x = b;
        CHECK(solver->solve(x.data()));
        CHECK(test::largest_difference(x, expected) <= 1e-10 * test::largest(expected));
        CHECK(solver->singular_row() == -1);
    }
}

TEST_CASE("a solver that does not reach its tolerance says so through the base") {
    const test::Square square = test::square(40, true, false, 97);
    const auto solver = any_solver(MultigridSolver({.tolerance = 1e-12, .most = 2}));
    solver->analyze(square.matrix, square.matrix.rows, nullptr);
    REQUIRE(solver->factor(square.matrix));
    std::vector<double> x(detail::as_size(square.matrix.rows), 1.0);
    CHECK_FALSE(solver->solve(x.data()));
}

TEST_CASE("bodies in 1D get banded elimination, one large solve multigrid, many solves a factor") {
    CHECK(choose_solver(1000000, 1, 1) == SolverKind::banded);
    CHECK(choose_solver(2000, 2, 1) == SolverKind::cholesky);
    CHECK(choose_solver(100000, 2, 1) == SolverKind::multigrid);
    CHECK(choose_solver(100000, 2, 1000) == SolverKind::cholesky);
    CHECK(choose_solver(300000, 2, 4) == SolverKind::multigrid);
    CHECK(choose_solver(300000, 2, 1000) == SolverKind::cholesky);
    CHECK(choose_solver(1000000, 2, 1000) == SolverKind::multigrid);
}
