// Multigrid: its cycle as an operator, iteration counts on easy and hard systems, singular systems.
#include "../../support/scale.hpp"
#include "../../support/square.hpp"
#include <doctest/doctest.h>
#include <limits>
#include <tepor/linear/conjugate_gradient.hpp>
#include <tepor/linear/multigrid.hpp>
#include <tepor/linear/multigrid_solver.hpp>

using namespace tepor;

namespace {

struct Solved {
    IterationReport report;
    std::vector<double> x;
    double backward_error = 0.0;
};

Solved solve(const SparseMatrix& a, Index n, std::uint64_t seed = 5, double tolerance = 1e-8) {
    test::Random random(seed);
    const std::vector<double> b = test::random_vector(n, random);
    MultigridSolver solver({.tolerance = tolerance, .most = 200});
    solver.analyze(a, n);
    REQUIRE(solver.factor(a));
    Solved out;
    out.x.assign(detail::as_size(n), 0.0);
    out.report = solver.solve(b.data(), out.x.data());
    out.backward_error = test::backward_error(a, out.x, b);
    return out;
}

double dot(const std::vector<double>& a, const std::vector<double>& b) {
    double sum = 0.0;
    for (std::size_t i = 0; i < a.size(); ++i) sum += a[i] * b[i];
    return sum;
}

} // namespace

TEST_CASE("the cycle is symmetric and positive definite to single precision") {
    for (const Index cells : {20, 75}) {
        const test::Square square = test::square(cells, true, false, 61);
        const Index n = square.matrix.rows;
        Multigrid multigrid;
        REQUIRE(multigrid.setup(square.matrix, n));
        CHECK(multigrid.levels() >= 2);
        test::Random random(62);
        for (int trial = 0; trial < 5; ++trial) {
            const std::vector<double> r = test::random_vector(n, random), s = test::random_vector(n, random);
            std::vector<double> br(r.size()), bs(r.size());
            multigrid.cycle(r.data(), br.data());
            multigrid.cycle(s.data(), bs.data());
            CHECK(dot(r, br) > 0.0);
            CHECK(std::abs(dot(s, br) - dot(r, bs)) <= 1e-4 * std::sqrt(dot(r, br) * dot(s, bs)));
        }
    }
}

TEST_CASE("a cycle does not depend on the units of the matrix and of the right-hand side") {
    test::Square square = test::square(40, true, false, 63);
    const Index n = square.matrix.rows;
    test::Random random(64);
    const std::vector<double> r = test::random_vector(n, random);
    Multigrid multigrid;
    REQUIRE(multigrid.setup(square.matrix, n));
    std::vector<double> plain(r.size());
    multigrid.cycle(r.data(), plain.data());
    for (double& v : square.matrix.lower) v *= 0x1p-90;
    std::vector<double> tiny = r;
    for (double& v : tiny) v *= 0x1p-200;
    REQUIRE(multigrid.setup(square.matrix, n));
    multigrid.cycle(tiny.data(), tiny.data());
    for (double& v : tiny) v *= 0x1p110;
    CHECK(test::largest_difference(tiny, plain) <= 1e-5 * test::largest(plain));
}

TEST_CASE("iterations stay few and hardly grow with the size, on lattices and general meshes") {
    for (const bool jittered : {false, true}) {
        Index few = 0;
        for (const Index cells : {32, 96, 200}) {
            CAPTURE(cells);
            const Index side = static_cast<Index>(test::scaled(cells, 20));
            const test::Square square = test::square(side, jittered, false, 65);
            const Solved solved = solve(square.matrix, square.matrix.rows);
            CHECK(solved.report.converged);
            CHECK(solved.report.residual <= 1e-8);
            CHECK(solved.report.iterations <= 20);
            if (few == 0) few = solved.report.iterations;
            CHECK(solved.report.iterations * 10 <= few * 17);
        }
    }
}

TEST_CASE("jumps of 1e6 in conductivity, strong and weak films and slender cells stay under 40 iterations") {
    const Index cells = static_cast<Index>(test::scaled(110, 30));
    const auto count = [&](double film, double stretch, const auto& k) {
        const bool slender =
            stretch > 20.0 || stretch < 0.05; // slender cells come in rows, as layers and tiles make them
        const test::Square square = test::square_of(cells, !slender, false, 66, film, stretch, k);
        const Solved solved = solve(square.matrix, square.matrix.rows);
        CHECK(solved.report.converged);
        CHECK(solved.backward_error <= 1e-8);
        return solved.report.iterations;
    };
    const auto one = [](double, double) { return 1.0; };
    CHECK(count(10.0, 1.0, [](double x, double y) { return (x < 0.5) == (y < 0.5) ? 1.0 : 1e6; }) < 40);
    CHECK(count(10.0, 1.0, [](double x, double y) { return std::abs(x - 0.5) < 0.1 && y > 0.2 ? 1e-6 : 1.0; }) < 40);
    CHECK(count(10.0, 1.0, [](double x, double) { return std::exp2(20.0 * std::sin(9.0 * x)); }) < 40);
    CHECK(count(1e6, 1.0, one) < 40);
    CHECK(count(1e-4, 1.0, one) < 40);
    CHECK(count(10.0, 8.0, one) < 40);
    CHECK(count(10.0, 100.0, one) < 40);
    CHECK(count(10.0, 0.01, one) < 40);
}

TEST_CASE("a mesh graded towards a corner over five decades stays under 40 iterations") {
    // A lattice whose lines crowd towards the origin: cells of every aspect up to 1e5.
    const Index cells = static_cast<Index>(test::scaled(100, 30));
    test::Square square = test::square(cells, false, false, 67);
    const Index n = square.matrix.rows;
    // Couplings of a tensor grid: rebuild the matrix from the moved places.
    std::vector<double> line(detail::as_size(cells + 1));
    for (Index i = 0; i <= cells; ++i) {
        const double t = static_cast<double>(i) / static_cast<double>(cells);
        line[detail::as_size(i)] = i == 0 ? 0.0 : std::pow(10.0, -5.0 * (1.0 - t));
    }
    std::vector<double> diagonal(detail::as_size(n), 0.0);
    std::vector<test::Entry> entries;
    const auto node = [&](Index i, Index j) { return j * (cells + 1) + i; };
    const auto width = [&](Index i) { // of the strip that belongs to line i
        const double low = i > 0 ? line[detail::as_size(i)] - line[detail::as_size(i - 1)] : 0.0;
        const double high = i < cells ? line[detail::as_size(i + 1)] - line[detail::as_size(i)] : 0.0;
        return 0.5 * (low + high);
    };
    const auto couple = [&](Index a, Index b, double g) {
        entries.push_back({a, b, -g, -g});
        diagonal[detail::as_size(a)] += g;
        diagonal[detail::as_size(b)] += g;
    };
    for (Index j = 0; j <= cells; ++j) {
        for (Index i = 0; i <= cells; ++i) {
            if (i < cells)
                couple(node(i, j), node(i + 1, j),
                       width(j) / (line[detail::as_size(i + 1)] - line[detail::as_size(i)]));
            if (j < cells)
                couple(node(i, j), node(i, j + 1),
                       width(i) / (line[detail::as_size(j + 1)] - line[detail::as_size(j)]));
            if (i == cells || j == cells) diagonal[detail::as_size(node(i, j))] += 5.0 * (width(i) + width(j));
        }
    }
    square.matrix = test::sparse(diagonal, entries);
    const Solved solved = solve(square.matrix, n);
    CHECK(solved.report.converged);
    CHECK(solved.report.iterations < 40);
}

TEST_CASE("matrices shifted by a capacity, and capacity alone, take hardly an iteration more") {
    const test::Square square = test::square(60, true, false, 68);
    const Index n = square.matrix.rows;
    for (const double fourier : {1e-3, 1.0, 1e3}) {
        CAPTURE(fourier);
        SparseMatrix shifted = square.matrix; // consistent capacity of a lattice plus `fourier` times conduction
        for (Index i = 0; i < n; ++i) {
            for (Index p = shifted.start[detail::as_size(i)]; p < shifted.start[detail::as_size(i) + 1]; ++p) {
                const bool own = shifted.column[detail::as_size(p)] == i;
                shifted.lower[detail::as_size(p)] =
                    fourier * shifted.lower[detail::as_size(p)] + (own ? 0.5 : 0.5 / 6.0);
            }
        }
        const Solved solved = solve(shifted, n);
        CHECK(solved.report.converged);
        CHECK(solved.report.iterations <= 20);
    }
}

TEST_CASE("small, empty, diagonal and separate systems are solved") {
    test::Random random(69);
    for (const Index n : {0, 1, 2, 5, 149, 150, 151, 400}) {
        CAPTURE(n);
        const SparseMatrix a = test::random_matrix(n + 2, 1.2, n + 2, random); // several components
        const Solved solved = solve(a, n, 70, 1e-11);
        CHECK(solved.report.converged);
        CHECK(solved.backward_error <= 1e-10);
    }
    const SparseMatrix diagonal = test::sparse(std::vector<double>(500, 3.0), {});
    const Solved solved = solve(diagonal, 500);
    CHECK(solved.report.iterations <= 2);
    CHECK(solved.backward_error <= 1e-7);
}

TEST_CASE("the answer has the same bits at any number of threads") {
    for (const Index cells : {Index{60}, Index{test::scaled(260, 185)}}) { // below and above the size that is sliced
        CAPTURE(cells);
        const test::Square square = test::square(cells, true, false, 78);
        const Index n = square.matrix.rows;
        test::Random random(79);
        const std::vector<double> b = test::random_vector(n, random);
        std::vector<double> first;
        for (const int threads : {1, 2, 3}) {
            CAPTURE(threads);
            MultigridSolver solver({.tolerance = 1e-9, .most = 60}, {.threads = threads});
            solver.analyze(square.matrix, n);
            REQUIRE(solver.factor(square.matrix));
            std::vector<double> x = b;
            REQUIRE(solver.solve(x.data()));
            if (threads == 1) first = x;
            CHECK(x == first);
        }
    }
}

TEST_CASE("a shuffled numbering changes neither the answer nor the number of iterations by much, and stays inside") {
    const Index cells = 90;
    const test::Square plain = test::square(cells, true, false, 74), mixed = test::square(cells, true, true, 74);
    const Index n = mixed.matrix.rows;
    const Solved straight = solve(plain.matrix, n), shuffled = solve(mixed.matrix, n, 5, 1e-10);
    CHECK(shuffled.report.converged);
    CHECK(shuffled.report.iterations <= straight.report.iterations + 6);
    CHECK(shuffled.backward_error <= 1e-9);
    test::Random random(75);
    const std::vector<double> b = test::random_vector(n, random);
    MultigridSolver solver({.tolerance = 1e-10, .most = 100});
    solver.analyze(mixed.matrix, n);
    REQUIRE(solver.factor(mixed.matrix));
    std::vector<double> x(b.size(), 0.0), product(b.size());
    bool same = true;
    const IterationReport report = solver.solve(b.data(), x.data(), [&](const double* residual, double relative) {
        if (relative > 1e-10) return false;
        for (std::size_t i = 0; i < b.size(); ++i) product[i] = residual[i]; // of the last call: recomputed from x
        return true;
    });
    CHECK(report.converged);
    std::vector<double> y(b.size());
    multiply(mixed.matrix, n, x.data(), y.data());
    for (std::size_t i = 0; i < b.size(); ++i) same = same && std::abs(b[i] - y[i] - product[i]) <= 1e-12;
    CHECK(same);
    std::vector<double> in_place = b;
    CHECK(solver.solve(in_place.data()));
    CHECK(test::largest_difference(in_place, x) <= 1e-8 * test::largest(x));
    // Other values on the same pattern are taken over by factor().
    SparseMatrix twice = mixed.matrix;
    for (double& v : twice.lower) v *= 2.0;
    REQUIRE(solver.factor(twice));
    std::vector<double> half = b;
    CHECK(solver.solve(half.data()));
    for (double& v : half) v *= 2.0;
    CHECK(test::largest_difference(half, x) <= 1e-8 * test::largest(x));
    // A scattered matrix straight into Multigrid is slower, not wrong.
    Multigrid multigrid;
    REQUIRE(multigrid.setup(mixed.matrix, n));
    ConjugateGradientWork work;
    x.assign(b.size(), 0.0);
    CHECK(conjugate_gradient(
              mixed.matrix, n, b.data(), x.data(), [&](const double* r, double* z) { return multigrid.cycle(r, z); },
              {1e-8, 60}, work)
              .converged);
}

TEST_CASE("two set-ups give the same bits, and a cycle leaves nothing behind for the next") {
    const test::Square square = test::square(80, true, true, 71);
    const Index n = square.matrix.rows;
    const Solved one = solve(square.matrix, n), two = solve(square.matrix, n);
    CHECK(one.x == two.x);
    Multigrid multigrid;
    REQUIRE(multigrid.setup(square.matrix, n));
    test::Random random(72);
    const std::vector<double> r = test::random_vector(n, random);
    std::vector<double> first(r.size()), second(r.size()), poison(r.size(), std::numeric_limits<double>::max());
    multigrid.cycle(r.data(), first.data());
    multigrid.cycle(poison.data(), second.data());
    poison.assign(r.size(), std::numeric_limits<double>::quiet_NaN());
    multigrid.cycle(poison.data(), second.data());
    multigrid.cycle(r.data(), second.data());
    CHECK(first == second);
}

TEST_CASE("of two separate bodies the one without a level is named") {
    const test::Square warm = test::square(35, true, false, 76, 10.0),
                       floating = test::square(25, true, false, 77, 0.0);
    SparseMatrix both = warm.matrix;
    const Id rows = detail::as_id(both.rows), entries = detail::as_id(both.column.size());
    for (Index i = 0; i < floating.matrix.rows; ++i) {
        both.start.push_back(entries + floating.matrix.start[detail::as_size(i) + 1]);
    }
    for (const Id j : floating.matrix.column) both.column.push_back(rows + j);
    both.lower.insert(both.lower.end(), floating.matrix.lower.begin(), floating.matrix.lower.end());
    both.rows += floating.matrix.rows;
    verify(both, both.rows);
    Multigrid multigrid;
    CHECK_FALSE(multigrid.setup(both, both.rows));
    CHECK(multigrid.singular_row() >= rows);
    CHECK(multigrid.singular_row() < both.rows);
    CHECK(multigrid.setup(both, rows));
    CHECK(multigrid.singular_row() == -1);
}

TEST_CASE("a system without a level or with a bad diagonal is refused and a row named") {
    for (const Index cells : {5, 40}) {
        CAPTURE(cells);
        test::Square square = test::square(cells, true, false, 73, 0.0);
        Multigrid multigrid;
        CHECK_FALSE(multigrid.setup(square.matrix, square.matrix.rows));
        CHECK(multigrid.singular_row() >= 0);
        square.matrix.lower[detail::as_size(square.matrix.start[8]) - 1] = std::numeric_limits<double>::quiet_NaN();
        CHECK_FALSE(multigrid.setup(square.matrix, square.matrix.rows));
        CHECK(multigrid.singular_row() == 7);
    }
}
