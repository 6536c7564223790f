// Sparse Cholesky against dense elimination, on hard shapes of graphs, and its promises.
#include "../../support/dense_system.hpp"
#include "../../support/square.hpp"
#include <doctest/doctest.h>
#include <limits>
#include <tepor/linear/cholesky.hpp>

using namespace tepor;

namespace {

std::vector<double> solved(const SparseMatrix& a, Index n, const Point* places, const std::vector<double>& b) {
    SparseCholesky solver;
    solver.analyze(a, n, places);
    REQUIRE(solver.factor(a));
    CHECK(solver.singular_row() == -1);
    std::vector<double> x = b;
    solver.solve(x.data());
    return x;
}

} // namespace

TEST_CASE("sparse Cholesky agrees with dense elimination on random matrices of every shape") {
    test::Random random(41);
    for (const Index n : {1, 2, 3, 5, 17, 64, 65, 130, 200}) {
        for (const double links : {0.0, 0.7, 2.0, 8.0}) {
            CAPTURE(n);
            CAPTURE(links);
            const SparseMatrix a = test::random_matrix(n + 5, links, n + 5, random);
            const std::vector<double> b = test::random_vector(n, random);
            const std::vector<double> expected = test::dense_solve(test::dense(a, n), b);
            CHECK(test::largest_difference(solved(a, n, nullptr, b), expected) <= 1e-11 * test::largest(expected));
            std::vector<Point> places(detail::as_size(n));
            for (Point& p : places) p = {random.next(), random.next()};
            CHECK(test::largest_difference(solved(a, n, places.data(), b), expected) <=
                  1e-11 * test::largest(expected));
        }
    }
}

TEST_CASE("a dense matrix and a star are factored like any other") {
    test::Random random(42);
    const SparseMatrix full = test::random_matrix(150, 400.0, 150, random);
    const std::vector<double> b = test::random_vector(150, random);
    CHECK(test::backward_error(full, solved(full, 150, nullptr, b), b) <= 1e-14);
    std::vector<test::Entry> entries;
    std::vector<double> diagonal(300, 1.5);
    diagonal[150] = 400.0;
    for (Index i = 0; i < 300; ++i) {
        if (i != 150) entries.push_back({i, 150, -1.0, -1.0});
    }
    const SparseMatrix star = test::sparse(diagonal, entries);
    const std::vector<double> c = test::random_vector(300, random);
    CHECK(test::backward_error(star, solved(star, 300, nullptr, c), c) <= 1e-14);
}

TEST_CASE("meshes of a square leave a backward error of rounding, with places and without, in any numbering") {
    for (const bool jittered : {false, true}) {
        for (const bool shuffled : {false, true}) {
            test::Square square = test::square(45, jittered, shuffled, 7);
            const Index n = square.matrix.rows;
            test::Random random(43);
            const std::vector<double> b = test::random_vector(n, random);
            CHECK(test::backward_error(square.matrix, solved(square.matrix, n, square.places.data(), b), b) <= 1e-14);
            CHECK(test::backward_error(square.matrix, solved(square.matrix, n, nullptr, b), b) <= 1e-14);
            const Index part = n - n / 3; // a leading block: its graph has holes
            const std::vector<double> c = test::random_vector(part, random);
            CHECK(test::backward_error(square.matrix, solved(square.matrix, part, square.places.data(), c), c) <=
                  1e-14);
        }
    }
}

TEST_CASE(
    "nested dissection keeps the factor near n log n, whether it cuts along places or along breadth-first order") {
    // 31/4 n log2 n is the leading term for a square grid (George 1973); small grids stay well below it.
    for (const bool jittered : {false, true}) {
        const test::Square square = test::square(120, jittered, true, 12);
        const Index n = square.matrix.rows;
        const double unit = static_cast<double>(n) * std::log2(static_cast<double>(n));
        SparseCholesky solver;
        solver.analyze(square.matrix, n, square.places.data());
        CHECK(static_cast<double>(solver.factor_entries()) <= 3.3 * unit);
        solver.analyze(square.matrix, n);
        CHECK(static_cast<double>(solver.factor_entries()) <= 3.7 * unit);
    }
}

TEST_CASE("places that coincide, lie on a line or are not numbers only cost time") {
    test::Square square = test::square(20, false, false, 8);
    const Index n = square.matrix.rows;
    test::Random random(44);
    const std::vector<double> b = test::random_vector(n, random);
    std::vector<Point> places(detail::as_size(n), Point{1.0, 2.0});
    CHECK(test::backward_error(square.matrix, solved(square.matrix, n, places.data(), b), b) <= 1e-14);
    for (std::size_t i = 0; i < places.size(); ++i) places[i] = {square.places[i].x, 0.0};
    CHECK(test::backward_error(square.matrix, solved(square.matrix, n, places.data(), b), b) <= 1e-14);
    places.assign(detail::as_size(n), Point{std::numeric_limits<double>::quiet_NaN(), 0.0});
    CHECK(test::backward_error(square.matrix, solved(square.matrix, n, places.data(), b), b) <= 1e-14);
}

TEST_CASE("a mesh without a temperature level is singular and a row is named") {
    const test::Square square = test::square(24, true, true, 9, 0.0);
    SparseCholesky solver;
    solver.analyze(square.matrix, square.matrix.rows, square.places.data());
    CHECK_FALSE(solver.factor(square.matrix));
    CHECK(solver.singular_row() >= 0);
    CHECK(solver.singular_row() < square.matrix.rows);
    // The same object recovers when given a matrix with a level, and one row less is regular as well.
    const test::Square level = test::square(24, true, true, 9, 1.0);
    CHECK(solver.factor(level.matrix));
    CHECK(solver.singular_row() == -1);
    solver.analyze(square.matrix, square.matrix.rows - 1, square.places.data());
    CHECK(solver.factor(square.matrix));
}

TEST_CASE("an indefinite matrix and one with a value that is not a number are refused") {
    SparseMatrix a = test::sparse({1.0, 1.0, 1.0}, {{1, 0, 2.0, 2.0}});
    SparseCholesky solver;
    solver.analyze(a, 3);
    CHECK_FALSE(solver.factor(a));
    a.lower[detail::as_size(a.start[1])] = std::numeric_limits<double>::quiet_NaN();
    CHECK_FALSE(solver.factor(a));
    a.lower[detail::as_size(a.start[1])] = 0.5;
    CHECK(solver.factor(a));
}

TEST_CASE("an empty system and single unknowns without couplings are solved") {
    const SparseMatrix a = test::sparse({2.0, 4.0, 8.0}, {});
    CHECK(solved(a, 0, nullptr, {}).empty());
    CHECK(test::largest_difference(solved(a, 1, nullptr, {1.0}), {0.5}) <= 1e-15);
    CHECK(test::largest_difference(solved(a, 3, nullptr, {1.0, 1.0, 1.0}), {0.5, 0.25, 0.125}) <= 1e-15);
}

TEST_CASE("two factorisations of the same matrix give the same bits, and so do several right-hand sides at once") {
    const test::Square square = test::square(30, true, true, 10);
    const Index n = square.matrix.rows;
    test::Random random(45);
    std::vector<double> b = test::random_vector(9 * n, random);
    SparseCholesky solver;
    solver.analyze(square.matrix, n, square.places.data());
    REQUIRE(solver.factor(square.matrix));
    std::vector<double> one = b;
    for (Index k = 0; k < 9; ++k) solver.solve(one.data() + k * n);
    SparseCholesky other;
    other.analyze(square.matrix, n, square.places.data());
    REQUIRE(other.factor(square.matrix));
    REQUIRE(other.factor(square.matrix));
    std::vector<double> two = b;
    std::vector<double> work(detail::as_size(other.work_size()));
    for (Index k = 0; k < 9; ++k) other.solve(two.data() + k * n, work.data());
    CHECK(one == two);
    std::vector<double> together = b;
    solver.solve(together.data(), 9);
    CHECK(test::largest_difference(one, together) <= 1e-13 * test::largest(one));
}
