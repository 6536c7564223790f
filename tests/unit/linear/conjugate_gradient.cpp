// Conjugate gradients with and without a preconditioner, and their stops.
#include "../../support/square.hpp"
#include <doctest/doctest.h>
#include <limits>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/conjugate_gradient.hpp>

using namespace tepor;

namespace {

const auto none = [](Index n) {
    return [n](const double* r, double* z) {
        for (Index i = 0; i < n; ++i) z[i] = r[i];
    };
};

} // namespace

TEST_CASE("conjugate gradients end within n iterations in exact arithmetic, and nearly so here") {
    test::Random random(81);
    for (const Index n : {1, 2, 6, 15}) {
        CAPTURE(n);
        const SparseMatrix a = test::random_matrix(n, 2.0, n, random);
        const std::vector<double> b = test::random_vector(n, random);
        std::vector<double> x(b.size(), 0.0);
        ConjugateGradientWork work;
        const IterationReport report = conjugate_gradient(a, n, b.data(), x.data(), none(n), {1e-10, n + 2}, work);
        CHECK(report.converged);
        CHECK(test::largest_difference(x, test::dense_solve(test::dense(a, n), b)) <= 1e-8 * test::largest(x));
    }
}

TEST_CASE("a factor as preconditioner ends in one iteration, and a good start in none") {
    const test::Square square = test::square(25, true, false, 82);
    const Index n = square.matrix.rows;
    test::Random random(83);
    const std::vector<double> b = test::random_vector(n, random);
    SparseCholesky factor;
    factor.analyze(square.matrix, n, square.places.data());
    REQUIRE(factor.factor(square.matrix));
    const auto precondition = [&](const double* r, double* z) {
        for (Index i = 0; i < n; ++i) z[i] = r[i];
        factor.solve(z);
    };
    std::vector<double> x(b.size(), 0.0);
    ConjugateGradientWork work;
    CHECK(conjugate_gradient(square.matrix, n, b.data(), x.data(), precondition, {1e-11, 10}, work).iterations == 1);
    const IterationReport again =
        conjugate_gradient(square.matrix, n, b.data(), x.data(), precondition, {1e-11, 10}, work);
    CHECK(again.converged);
    CHECK(again.iterations == 0);
}

TEST_CASE("the residual in the report is that of x, and the caller's stop sees it") {
    const test::Square square = test::square(30, true, false, 84);
    const Index n = square.matrix.rows;
    test::Random random(85);
    const std::vector<double> b = test::random_vector(n, random);
    std::vector<double> x(b.size(), 0.0);
    ConjugateGradientWork work;
    const auto residual_of = [&] {
        std::vector<double> y(b.size());
        multiply(square.matrix, n, x.data(), y.data());
        double sum = 0.0, scale = 0.0;
        for (std::size_t i = 0; i < b.size(); ++i) {
            sum += (b[i] - y[i]) * (b[i] - y[i]);
            scale += b[i] * b[i];
        }
        return std::sqrt(sum / scale);
    };
    const IterationReport cut = conjugate_gradient(square.matrix, n, b.data(), x.data(), none(n), {1e-12, 7}, work);
    CHECK_FALSE(cut.converged);
    CHECK(cut.iterations == 7);
    CHECK(std::abs(cut.residual - residual_of()) <= 1e-12);
    // Stop when the residuals sum to (nearly) nothing, as a heat balance does.
    Index calls = 0;
    const IterationReport balanced = conjugate_gradient(square.matrix, n, b.data(), x.data(), none(n), {0.0, 2000},
                                                        work, [&](const double* r, double relative) {
                                                            ++calls;
                                                            double sum = 0.0;
                                                            for (Index i = 0; i < n; ++i) sum += r[i];
                                                            return relative < 1e-3 && std::abs(sum) < 1e-6;
                                                        });
    CHECK(balanced.converged);
    CHECK(calls >= balanced.iterations);
    CHECK(balanced.residual < 1e-3);
    CHECK(std::abs(balanced.residual - residual_of()) <= 1e-12);
}

TEST_CASE("a start far off leaves rounding that the recurrence does not see, but the report does") {
    const test::Square square = test::square(20, true, false, 86);
    const Index n = square.matrix.rows;
    test::Random random(87);
    const std::vector<double> b = test::random_vector(n, random);
    std::vector<double> x = test::random_vector(n, random), y(b.size());
    for (double& v : x) v *= 1e12;
    ConjugateGradientWork work;
    double seen = 1.0;
    const IterationReport report = conjugate_gradient(square.matrix, n, b.data(), x.data(), none(n), {0.0, 400}, work,
                                                      [&](const double*, double relative) {
                                                          seen = std::min(seen, relative);
                                                          return false;
                                                      });
    multiply(square.matrix, n, x.data(), y.data());
    double sum = 0.0, scale = 0.0;
    for (std::size_t i = 0; i < b.size(); ++i) {
        sum += (b[i] - y[i]) * (b[i] - y[i]);
        scale += b[i] * b[i];
    }
    const double residual = std::sqrt(sum / scale);
    CHECK(std::abs(report.residual - residual) <= 1e-3 * residual);
    CHECK(seen <= 1e-3 * residual);
}

TEST_CASE(
    "an indefinite matrix, an indefinite preconditioner and values that are not numbers end without convergence") {
    const SparseMatrix a = test::sparse({1.0, 1.0}, {{1, 0, 2.0, 2.0}});
    const std::vector<double> b{1.0, -1.0};
    std::vector<double> x(2, 0.0);
    ConjugateGradientWork work;
    CHECK_FALSE(conjugate_gradient(a, 2, b.data(), x.data(), none(2), {1e-8, 50}, work).converged);
    const SparseMatrix good = test::sparse({2.0, 2.0}, {{1, 0, 1.0, 1.0}});
    const auto negative = [](const double* r, double* z) {
        z[0] = -r[0];
        z[1] = -r[1];
    };
    x.assign(2, 0.0);
    CHECK_FALSE(conjugate_gradient(good, 2, b.data(), x.data(), negative, {1e-8, 50}, work).converged);
    const std::vector<double> bad{1.0, std::numeric_limits<double>::quiet_NaN()};
    CHECK_FALSE(conjugate_gradient(good, 2, bad.data(), x.data(), none(2), {1e-8, 50}, work).converged);
    x.assign(2, 7.0);
    const std::vector<double> zero(2, 0.0);
    CHECK(conjugate_gradient(good, 2, zero.data(), x.data(), none(2), {1e-8, 50}, work).converged);
    CHECK(x == zero);
    CHECK(conjugate_gradient(good, 0, zero.data(), x.data(), none(0), {1e-8, 50}, work).converged);
}

TEST_CASE("what lies below rounding is given up soon, and the iterate is as good as it gets") {
    const test::Square square = test::square(40, true, false, 86);
    const Index n = square.matrix.rows;
    test::Random random(87);
    const std::vector<double> b = test::random_vector(n, random);
    SparseCholesky factor;
    factor.analyze(square.matrix, n, square.places.data());
    REQUIRE(factor.factor(square.matrix));
    std::vector<double> best = b;
    factor.solve(best.data());
    const auto precondition = [&](const double* r, double* z) { // a factor spoilt, so that it takes some iterations
        for (Index i = 0; i < n; ++i) z[i] = r[i];
        factor.solve(z);
        for (Index i = 0; i < n; ++i) z[i] += (i % 2 == 0 ? 0.1 : 0.2) * r[i];
    };
    std::vector<double> x(b.size(), 0.0);
    ConjugateGradientWork work;
    const IterationReport reach =
        conjugate_gradient(square.matrix, n, b.data(), x.data(), precondition, {1e-12, 500}, work);
    REQUIRE(reach.converged);
    x.assign(b.size(), 0.0);
    const IterationReport report =
        conjugate_gradient(square.matrix, n, b.data(), x.data(), precondition, {1e-17, 500}, work);
    CHECK_FALSE(report.converged);
    CHECK(report.stagnated);
    CHECK(report.iterations <= 3 * reach.iterations + 45);
    CHECK(report.residual <= 1e-12);
    CHECK(test::largest_difference(x, best) <= 1e-10 * test::largest(best));
}
