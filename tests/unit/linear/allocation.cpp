// Solves allocate nothing: operator new is counted.
#include "../../support/counted_new.hpp"
#include "../../support/square.hpp"
#include <doctest/doctest.h>
#include <tepor/linear/banded.hpp>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/krylov.hpp>
#include <tepor/linear/multigrid_solver.hpp>
#include <tepor/linear/tridiagonal.hpp>

using namespace tepor;

namespace {

int* volatile escape = nullptr; // or the compiler drops a pair of new and delete

template <class Work>
long allocations_of(const Work& work) {
    const long before = test::allocations;
    work();
    return test::allocations - before;
}

} // namespace

TEST_CASE("the counter sees allocations, plain and aligned") {
    CHECK(allocations_of([] {
              escape = new int(3);
              delete escape;
          }) == 1);
    CHECK(allocations_of([] { detail::Buffer<double> buffer(100); }) == 1);
}

TEST_CASE("solves with a factor, multigrid and Krylov methods allocate nothing once set up") {
    test::Random random(101);
    const test::Square square = test::square(30, true, false, 102);
    const Index n = square.matrix.rows;
    std::vector<double> b = test::random_vector(3 * n, random), x(b.size(), 0.0);

    SparseCholesky cholesky;
    cholesky.analyze(square.matrix, n, square.places.data());
    REQUIRE(cholesky.factor(square.matrix));
    CHECK(allocations_of([&] { cholesky.solve(b.data()); }) == 0);
    CHECK(allocations_of([&] { cholesky.solve(b.data(), Index{3}); }) == 0);
    CHECK(allocations_of([&] { static_cast<void>(cholesky.factor(square.matrix)); }) == 0);

    MultigridSolver multigrid({.tolerance = 1e-8, .most = 100});
    multigrid.analyze(square.matrix, n);
    REQUIRE(multigrid.factor(square.matrix));
    IterationReport reached;
    CHECK(allocations_of([&] { reached = multigrid.solve(b.data(), x.data()); }) == 0);
    CHECK(reached.converged);

    KrylovWork work;
    work.reset(n);
    const auto precondition = [&](const double* r, double* z) {
        for (Index i = 0; i < n; ++i) z[i] = r[i];
        cholesky.solve(z);
    };
    x.assign(x.size(), 0.0);
    IterationReport report;
    CHECK(allocations_of([&] {
              report = bicgstab(square.matrix, n, b.data(), x.data(), precondition, {1e-8, 20}, work);
          }) == 0);
    CHECK(report.converged);
}

TEST_CASE("solves in 1D allocate nothing, and neither does a factor of the same size") {
    const Index n = 50;
    std::vector<double> diagonal(50, 2.1), off(49, -1.0), b(50, 1.0), work(50);
    Tridiagonal chain;
    REQUIRE(chain.factor(n, diagonal.data(), off.data()));
    CHECK(allocations_of([&] { chain.solve(b.data()); }) == 0);
    CHECK(allocations_of([&] { static_cast<void>(chain.factor(n, diagonal.data(), off.data())); }) == 0);
    CHECK(allocations_of([&] { solve_tridiagonal(n, diagonal.data(), off.data(), b.data(), work.data()); }) == 0);
    test::Random random(103);
    const SparseMatrix a = test::random_matrix(n, 2.0, 3, random);
    BandedCholesky cholesky;
    BandedLu lu;
    REQUIRE(cholesky.factor(a, n));
    REQUIRE(lu.factor(a, n));
    CHECK(allocations_of([&] { cholesky.solve(b.data()); }) == 0);
    CHECK(allocations_of([&] { lu.solve(b.data()); }) == 0);
    CHECK(allocations_of([&] { lu.solve_transposed(b.data()); }) == 0);
}
