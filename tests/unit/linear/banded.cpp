// Banded Cholesky and LU against dense elimination.
#include "../../support/dense_system.hpp"
#include <doctest/doctest.h>
#include <tepor/linear/banded.hpp>

using namespace tepor;

TEST_CASE("banded Cholesky agrees with dense elimination for any small band") {
    test::Random random(31);
    for (const Index n : {1, 2, 3, 9, 30}) {
        for (const Index band : {1, 2, 3, 6}) {
            CAPTURE(n);
            CAPTURE(band);
            const SparseMatrix a = test::random_matrix(n + 3, 3.0, band, random);
            CHECK(half_bandwidth(a, n) <= band);
            const std::vector<double> b = test::random_vector(n, random);
            BandedCholesky solver;
            REQUIRE(solver.factor(a, n));
            std::vector<double> x = b;
            solver.solve(x.data());
            const std::vector<double> expected = test::dense_solve(test::dense(a, n), b);
            CHECK(test::largest_difference(x, expected) <= 1e-12 * test::largest(expected));
        }
    }
}

TEST_CASE("banded LU agrees with dense elimination, straight and transposed, where rows must be exchanged") {
    test::Random random(32);
    for (const Index n : {1, 2, 3, 9, 30}) {
        for (const Index band : {1, 2, 3}) {
            CAPTURE(n);
            CAPTURE(band);
            SparseMatrix a = test::random_matrix(n, 4.0, band, random, false);
            for (Index i = 0; i < n; ++i) { // shrink the diagonal so that pivoting has work to do
                a.lower[detail::as_size(a.start[detail::as_size(i) + 1]) - 1] *= n > 2 ? 0.02 : 1.0;
            }
            const std::vector<double> b = test::random_vector(n, random);
            const test::Dense full = test::dense(a, n);
            test::Dense flipped = full;
            for (Index i = 0; i < n; ++i) {
                for (Index j = 0; j < n; ++j) flipped(i, j) = full(j, i);
            }
            BandedLu solver;
            REQUIRE(solver.factor(a, n));
            std::vector<double> x = b;
            solver.solve(x.data());
            const std::vector<double> expected = test::dense_solve(full, b);
            CHECK(test::largest_difference(x, expected) <= 1e-9 * test::largest(expected));
            x = b;
            solver.solve_transposed(x.data());
            const std::vector<double> other = test::dense_solve(flipped, b);
            CHECK(test::largest_difference(x, other) <= 1e-9 * test::largest(other));
        }
    }
}

TEST_CASE("banded solvers name the row of a singular system and survive an empty one") {
    // A chain of order 2 with no level: rows sum to zero.
    std::vector<test::Entry> entries;
    std::vector<double> diagonal(9, 0.0);
    for (Index i = 0; i < 9; ++i) {
        for (Index j = i + 1; j < std::min<Index>(9, i + 3); ++j) {
            entries.push_back({j, i, -1.5, -1.5});
            diagonal[detail::as_size(i)] += 1.5;
            diagonal[detail::as_size(j)] += 1.5;
        }
    }
    const SparseMatrix a = test::sparse(diagonal, entries);
    BandedCholesky cholesky;
    CHECK_FALSE(cholesky.factor(a, 9));
    CHECK(cholesky.singular_row() == 8);
    BandedLu lu;
    CHECK_FALSE(lu.factor(a, 9));
    CHECK(lu.singular_row() == 8);
    CHECK(cholesky.factor(a, 8));
    CHECK(lu.factor(a, 8));
    CHECK(cholesky.factor(a, 0));
    CHECK(lu.factor(a, 0));
    cholesky.solve(nullptr);
    lu.solve(nullptr);
    lu.solve_transposed(nullptr);
}
