// Two-ended elimination of tridiagonal systems.
#include "../../support/dense_system.hpp"
#include <doctest/doctest.h>
#include <limits>
#include <tepor/base/error.hpp>
#include <tepor/linear/tridiagonal.hpp>

using namespace tepor;

namespace {

struct Chain {
    std::vector<double> diagonal;
    std::vector<double> off;
    SparseMatrix matrix;
};

Chain random_chain(Index n, test::Random& random) {
    Chain chain;
    chain.diagonal.assign(detail::as_size(n), 0.05);
    std::vector<test::Entry> entries;
    for (Index i = 0; i + 1 < n; ++i) {
        const double k = random.between(0.1, 3.0);
        chain.off.push_back(-k);
        chain.diagonal[detail::as_size(i)] += k;
        chain.diagonal[detail::as_size(i) + 1] += k;
        entries.push_back({i + 1, i, -k, -k});
    }
    chain.matrix = test::sparse(chain.diagonal, entries);
    return chain;
}

} // namespace

TEST_CASE("the two-ended sweeps agree with dense elimination at every small size") {
    test::Random random(21);
    for (Index n = 1; n <= 24; ++n) {
        CAPTURE(n);
        const Chain chain = random_chain(n, random);
        const std::vector<double> b = test::random_vector(n, random);
        const std::vector<double> expected = test::dense_solve(test::dense(chain.matrix, n), b);
        Tridiagonal solver;
        REQUIRE(solver.factor(n, chain.diagonal.data(), chain.off.data()));
        std::vector<double> x = b;
        solver.solve(x.data());
        CHECK(test::largest_difference(x, expected) <= 1e-12 * test::largest(expected));
        REQUIRE(solver.factor(chain.matrix, n));
        std::vector<double> again = b;
        solver.solve(again.data());
        CHECK(again == x);
        std::vector<double> once = b;
        std::vector<double> work(detail::as_size(n));
        CHECK(solve_tridiagonal(n, chain.diagonal.data(), chain.off.data(), once.data(), work.data()) == -1);
        CHECK(test::largest_difference(once, expected) <= 1e-12 * test::largest(expected));
    }
}

TEST_CASE("long chains are solved as accurately as short ones") {
    test::Random random(23);
    for (const Index n : {1000, 1001, 5000}) {
        CAPTURE(n);
        const Chain chain = random_chain(n, random);
        const std::vector<double> b = test::random_vector(n, random);
        Tridiagonal solver;
        REQUIRE(solver.factor(n, chain.diagonal.data(), chain.off.data()));
        std::vector<double> x = b;
        solver.solve(x.data());
        CHECK(test::backward_error(chain.matrix, x, b) <= 1e-15);
    }
}

TEST_CASE("a chain assembled on the way reads every row once and needs no stored matrix") {
    for (const Index n : {1, 2, 3, 10, 11}) {
        CAPTURE(n);
        std::vector<int> calls(detail::as_size(n), 0);
        std::vector<double> x(detail::as_size(n)), work(detail::as_size(n));
        const Index bad = solve_chain(
            n,
            [&](Index i) { // conduction between a film at each end, load 1 in every row
                ++calls[detail::as_size(i)];
                const bool end = i == 0 || i == n - 1;
                return ChainRow{.diagonal = end && n > 1 ? 1.5 : 2.0, .next = -1.0, .load = 1.0};
            },
            x.data(), work.data());
        CHECK(bad == -1);
        CHECK(calls == std::vector<int>(detail::as_size(n), 1));
        for (Index i = 0; i < n; ++i) {
            const bool end = i == 0 || i == n - 1;
            double sum = (end && n > 1 ? 1.5 : 2.0) * x[detail::as_size(i)] - 1.0;
            if (i > 0) sum -= x[detail::as_size(i) - 1];
            if (i + 1 < n) sum -= x[detail::as_size(i) + 1];
            CHECK(std::abs(sum) <= 1e-12);
        }
    }
}

TEST_CASE("a leading block of a longer chain is solved as if it were the whole") {
    test::Random random(22);
    const Chain chain = random_chain(12, random);
    const std::vector<double> b = test::random_vector(7, random);
    Tridiagonal solver;
    REQUIRE(solver.factor(chain.matrix, 7));
    std::vector<double> x = b;
    solver.solve(x.data());
    CHECK(test::largest_difference(x, test::dense_solve(test::dense(chain.matrix, 7), b)) <= 1e-13 * test::largest(x));
}

TEST_CASE("a chain without a temperature level is reported singular at every length, and so is a pivot that is not a "
          "number") {
    for (Index n = 1; n <= 200; n += (n < 12 ? 1 : 47)) {
        CAPTURE(n);
        std::vector<double> diagonal(detail::as_size(n), 2.0);
        std::vector<double> off(detail::as_size(n), -1.0);
        diagonal.front() = diagonal.back() = n == 1 ? 0.0 : 1.0;
        Tridiagonal solver;
        CHECK_FALSE(solver.factor(n, diagonal.data(), off.data()));
        CHECK(solver.singular_row() == n / 2);
        std::vector<double> x(detail::as_size(n), 1.0);
        std::vector<double> work(detail::as_size(n));
        CHECK(solve_tridiagonal(n, diagonal.data(), off.data(), x.data(), work.data()) == n / 2);
        diagonal[detail::as_size(n / 3)] = std::numeric_limits<double>::quiet_NaN();
        CHECK_FALSE(solver.factor(n, diagonal.data(), off.data()));
    }
}

TEST_CASE("an empty chain is solved and a matrix that is not tridiagonal is refused") {
    Tridiagonal solver;
    CHECK(solver.factor(0, nullptr, nullptr));
    solver.solve(nullptr);
    CHECK(solve_tridiagonal(0, nullptr, nullptr, nullptr, nullptr) == -1);
    const SparseMatrix wide = test::sparse({4, 4, 4}, {{2, 0, -1, -1}});
    CHECK_THROWS_AS((void)solver.factor(wide, 3), Error);
    CHECK(solver.factor(wide, 2));
}
