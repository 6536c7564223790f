// Products of a SparseMatrix with a vector, and the check of its rules.
#include "../../support/dense_system.hpp"
#include <algorithm>
#include <doctest/doctest.h>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/linear/sparse_matrix.hpp>

using namespace tepor;

namespace {

std::vector<double> dense_product(const test::Dense& a, const std::vector<double>& x, bool transposed) {
    std::vector<double> y(x.size(), 0.0);
    for (Index i = 0; i < a.n; ++i) {
        for (Index j = 0; j < a.n; ++j) {
            y[detail::as_size(i)] += (transposed ? a(j, i) : a(i, j)) * x[detail::as_size(j)];
        }
    }
    return y;
}

} // namespace

TEST_CASE("products with the leading block agree with the dense matrix, symmetric or not") {
    test::Random random(11);
    for (const bool symmetric : {true, false}) {
        for (const Index n : {1, 2, 7, 40}) {
            const SparseMatrix a = test::random_matrix(40, 3.0, 40, random, symmetric);
            const std::vector<double> x = test::random_vector(n, random);
            const test::Dense full = test::dense(a, n);
            std::vector<double> y(x.size(), 1e30);
            multiply(a, n, x.data(), y.data());
            CAPTURE(n);
            CHECK(test::largest_difference(y, dense_product(full, x, false)) <= 1e-14);
            multiply_transposed(a, n, x.data(), y.data());
            CHECK(test::largest_difference(y, dense_product(full, x, true)) <= 1e-14);
        }
    }
}

TEST_CASE("an empty matrix multiplies without touching anything") {
    const SparseMatrix a = test::sparse({}, {});
    double y = 3.0;
    multiply(a, 0, nullptr, &y);
    CHECK(y == 3.0);
    verify(a, 0);
}

TEST_CASE("a broken matrix is refused and its row named") {
    test::Random random(12);
    const SparseMatrix good = test::random_matrix(8, 2.0, 8, random);
    verify(good, 8);
    const auto message = [](const SparseMatrix& a, Index n) {
        try {
            verify(a, n);
        } catch (const Error& error) {
            CHECK(error.code() == ErrorCode::bad_value);
            return std::string(error.what());
        }
        return std::string();
    };
    SparseMatrix no_diagonal = good;
    no_diagonal.column[detail::as_size(no_diagonal.start[4]) - 1] = 2;
    CHECK(message(no_diagonal, 8).find("row 3") != std::string::npos);
    CHECK(message(good, 9).find("9 rows") != std::string::npos);
    SparseMatrix negative = good;
    negative.column[detail::as_size(negative.start[7])] = -1;
    CHECK(message(negative, 8).find("row 7 has columns out of order") != std::string::npos);
    SparseMatrix short_values = good;
    short_values.lower.pop_back();
    CHECK(message(short_values, 8).find("differ in length") != std::string::npos);
}

TEST_CASE("without its zeros a matrix is the same matrix, and one with few of them is left alone") {
    // a chain with zeros between second neighbours, one of them only nearly zero
    std::vector<double> diagonal(40, 3.0);
    std::vector<test::Entry> entries;
    for (Id i = 1; i < 40; ++i) entries.push_back({i, i - 1, -1.0, -1.0});
    for (Id i = 2; i < 40; ++i) entries.push_back({i, i - 2, i == 7 ? 1e-16 : 0.0, i == 7 ? 1e-16 : 0.0});
    const SparseMatrix full = test::sparse(diagonal, entries);
    SparseMatrix thin;
    REQUIRE(without_zeros(full, 30, thin));
    verify(thin, 30);
    CHECK(thin.entries() == 30 + 29);
    test::Random random(13);
    const std::vector<double> x = test::random_vector(30, random);
    std::vector<double> y(x.size()), z(x.size());
    multiply(full, 30, x.data(), y.data());
    multiply(thin, 30, x.data(), z.data());
    CHECK(test::largest_difference(y, z) <= 1e-15);

    // in place: the leading rows are those of the copy, the others are left whole
    SparseMatrix shorter = full;
    REQUIRE(drop_zeros(shorter, 30));
    verify(shorter, 40);
    CHECK(shorter.entries() == thin.entries() + 10 * 3);
    CHECK(std::equal(thin.start.begin(), thin.start.end(), shorter.start.begin()));
    CHECK(std::equal(thin.column.begin(), thin.column.end(), shorter.column.begin()));
    CHECK(std::equal(thin.lower.begin(), thin.lower.end(), shorter.lower.begin()));
    const std::vector<double> all = test::random_vector(40, random);
    std::vector<double> by_full(all.size()), by_shorter(all.size());
    multiply(full, 40, all.data(), by_full.data());
    multiply(shorter, 40, all.data(), by_shorter.data());
    CHECK(test::largest_difference(by_full, by_shorter) <= 1e-15);

    entries.resize(39 + 2); // two zeros only
    SparseMatrix filled = test::sparse(std::vector<double>(40, 3.0), entries);
    CHECK_FALSE(without_zeros(filled, 40, thin));
    CHECK_FALSE(drop_zeros(filled, 40));
    CHECK(filled.entries() == 40 + 39 + 2);
}
