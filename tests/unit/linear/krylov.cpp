// BiCGSTAB for unsymmetric systems, straight and transposed.
#include "../../support/square.hpp"
#include <doctest/doctest.h>
#include <limits>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/krylov.hpp>

using namespace tepor;

namespace {

const auto copy = [](Index n) {
    return [n](const double* r, double* z) {
        for (Index i = 0; i < n; ++i) z[i] = r[i];
    };
};

test::Dense flipped(const test::Dense& a) {
    test::Dense out = a;
    for (Index i = 0; i < a.n; ++i) {
        for (Index j = 0; j < a.n; ++j) out(i, j) = a(j, i);
    }
    return out;
}

} // namespace

TEST_CASE("BiCGSTAB agrees with dense elimination on unsymmetric systems and their transposes") {
    test::Random random(91);
    for (const Index n : {1, 2, 10, 60}) {
        CAPTURE(n);
        const SparseMatrix a = test::random_matrix(n + 4, 2.0, n, random, false);
        const std::vector<double> b = test::random_vector(n, random);
        const test::Dense full = test::dense(a, n);
        KrylovWork work;
        std::vector<double> x(b.size(), 0.0);
        CHECK(bicgstab(a, n, b.data(), x.data(), copy(n), {1e-11, 500}, work).converged);
        CHECK(test::largest_difference(x, test::dense_solve(full, b)) <= 1e-8 * test::largest(x));
        x.assign(b.size(), 0.0);
        CHECK(bicgstab_transposed(a, n, b.data(), x.data(), copy(n), {1e-11, 500}, work).converged);
        CHECK(test::largest_difference(x, test::dense_solve(flipped(full), b)) <= 1e-8 * test::largest(x));
    }
}

TEST_CASE("the factor of the symmetric part makes the slope of a varying conductivity easy") {
    // A slope K + C, C unsymmetric as k'(T) makes it: one-sided couplings along the mesh.
    const test::Square square = test::square(40, true, false, 92);
    const Index n = square.matrix.rows;
    SparseMatrix slope = square.matrix;
    slope.upper = slope.lower;
    test::Random random(93);
    for (Index i = 0; i < n; ++i) {
        for (Index p = slope.start[detail::as_size(i)]; p < slope.start[detail::as_size(i) + 1] - 1; ++p) {
            const double skew = 0.1 * random.between(-1.0, 1.0) * slope.lower[detail::as_size(p)];
            slope.lower[detail::as_size(p)] += skew;
            slope.upper[detail::as_size(p)] -= skew;
        }
    }
    const SparseMatrix half = symmetric_part(slope);
    CHECK(test::largest_difference(half.lower, square.matrix.lower) <= 1e-14 * test::largest(half.lower));
    SparseCholesky factor;
    factor.analyze(half, n, square.places.data());
    REQUIRE(factor.factor(half));
    const auto precondition = [&](const double* r, double* z) {
        for (Index i = 0; i < n; ++i) z[i] = r[i];
        factor.solve(z);
    };
    const std::vector<double> b = test::random_vector(n, random);
    std::vector<double> x(b.size(), 0.0), y(b.size());
    KrylovWork work;
    const IterationReport report = bicgstab(slope, n, b.data(), x.data(), precondition, {1e-10, 50}, work);
    CHECK(report.converged);
    CHECK(report.iterations <= 12);
    multiply(slope, n, x.data(), y.data());
    CHECK(test::largest_difference(y, b) <= 1e-8);
    const IterationReport other = bicgstab_transposed(slope, n, b.data(), x.data(), precondition, {1e-10, 50}, work);
    CHECK(other.converged);
    multiply_transposed(slope, n, x.data(), y.data());
    CHECK(test::largest_difference(y, b) <= 1e-8);
}

TEST_CASE("breakdowns, zero and unusable right-hand sides end in an honest report") {
    // A rotation: the first product is orthogonal to the residual, so the method breaks down at once.
    const SparseMatrix rotation = test::sparse({0.0, 0.0}, {{1, 0, 1.0, -1.0}}, false);
    const std::vector<double> b{1.0, 0.0};
    std::vector<double> x(2, 0.0);
    KrylovWork work;
    CHECK_FALSE(bicgstab(rotation, 2, b.data(), x.data(), copy(2), {1e-8, 50}, work).converged);
    const SparseMatrix good = test::sparse({2.0, 2.0}, {{1, 0, 1.0, 0.5}}, false);
    const std::vector<double> zero(2, 0.0), bad(2, std::numeric_limits<double>::infinity());
    x.assign(2, 1.0);
    CHECK(bicgstab(good, 2, zero.data(), x.data(), copy(2), {1e-8, 50}, work).converged);
    CHECK(x == zero);
    CHECK_FALSE(bicgstab(good, 2, bad.data(), x.data(), copy(2), {1e-8, 50}, work).converged);
    x.assign(2, 0.0);
    const IterationReport cut = bicgstab(good, 2, b.data(), x.data(), copy(2), {1e-16, 0}, work);
    CHECK_FALSE(cut.converged);
    CHECK(std::abs(cut.residual - 1.0) <= 1e-15);
}
