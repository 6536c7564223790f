// Low-rank changes of a factored matrix against factoring again.
#include "../../support/square.hpp"
#include <doctest/doctest.h>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/low_rank.hpp>

using namespace tepor;

namespace {

SparseMatrix changed(const SparseMatrix& a, const std::vector<Id>& rows, const std::vector<double>& block) {
    SparseMatrix out = a;
    const Index k = static_cast<Index>(rows.size());
    for (Index i = 0; i < k; ++i) {
        for (Index j = 0; j <= i; ++j) {
            const Id low = std::min(rows[detail::as_size(i)], rows[detail::as_size(j)]);
            const Id high = std::max(rows[detail::as_size(i)], rows[detail::as_size(j)]);
            for (Index p = a.start[detail::as_size(high)]; p < a.start[detail::as_size(high) + 1]; ++p) {
                if (a.column[detail::as_size(p)] == low)
                    out.lower[detail::as_size(p)] += block[detail::as_size(i * k + j)];
            }
        }
    }
    return out;
}

} // namespace

TEST_CASE("a changed film on one face solves as if factored again, from weak to very strong") {
    const Index cells = 20;
    const test::Square square = test::square(cells, true, false, 111);
    const Index n = square.matrix.rows;
    test::Random random(112);
    const std::vector<double> b = test::random_vector(n, random);
    SparseCholesky base;
    base.analyze(square.matrix, n, square.places.data());
    REQUIRE(base.factor(square.matrix));
    std::vector<Id> rows;
    for (Index i = 0; i <= cells; ++i) rows.push_back(detail::as_id(i)); // the lower edge
    const Index k = cells + 1;
    LowRankUpdate update;
    update.prepare(n, rows, [&](double* column) { base.solve(column); });
    std::vector<double> x = b;
    base.solve(x.data());
    std::vector<double> same = x;
    update.apply(same.data()); // before any change: nothing
    CHECK(same == x);
    for (const double film : {-5.0, 0.0, 1.0, 1e3, 1e8}) {
        CAPTURE(film);
        std::vector<double> block(detail::as_size(k * k), 0.0);
        const double h = 1.0 / static_cast<double>(cells);
        for (Index i = 0; i + 1 < k; ++i) {
            block[detail::as_size(i * k + i)] += film * h / 3.0;
            block[detail::as_size((i + 1) * k + i + 1)] += film * h / 3.0;
            block[detail::as_size(i * k + i + 1)] = block[detail::as_size((i + 1) * k + i)] = film * h / 6.0;
        }
        REQUIRE(update.change(block.data()));
        std::vector<double> y = x;
        update.apply(y.data());
        const SparseMatrix other = changed(square.matrix, rows, block);
        SparseCholesky again;
        again.analyze(other, n, square.places.data());
        REQUIRE(again.factor(other));
        std::vector<double> expected = b;
        again.solve(expected.data());
        CHECK(test::largest_difference(y, expected) <= 1e-11 * test::largest(x));
    }
}

TEST_CASE("a change that makes the matrix singular is refused, one that is not a number too") {
    const SparseMatrix a = test::sparse({2.0, 2.0, 1.0}, {{1, 0, -1.0, -1.0}, {2, 1, -1.0, -1.0}});
    SparseCholesky base;
    base.analyze(a, 3);
    REQUIRE(base.factor(a));
    LowRankUpdate update;
    update.prepare(3, {0}, [&](double* column) { base.solve(column); });
    const double remove_level = -1.0; // leaves a chain whose rows sum to zero
    CHECK_FALSE(update.change(&remove_level));
    const double bad = std::nan("");
    CHECK_FALSE(update.change(&bad));
    const double fine = 1.0;
    CHECK(update.change(&fine));
    LowRankUpdate nothing;
    nothing.prepare(3, {}, [&](double* column) { base.solve(column); });
    CHECK(nothing.change(nullptr));
    std::vector<double> x{1.0, 2.0, 3.0};
    nothing.apply(x.data());
    CHECK(x == std::vector<double>{1.0, 2.0, 3.0});
}
