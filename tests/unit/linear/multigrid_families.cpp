// Multigrid on hard families of meshes and data: how many iterations at 1e4 and 1e5 unknowns, and that they hardly grow.
#include "../../support/bent_square.hpp"
#include "../../support/scale.hpp"
#include <doctest/doctest.h>
#include <tepor/linear/multigrid_solver.hpp>

using namespace tepor;

namespace {

Index iterations(const SparseMatrix& a, double* off = nullptr) {
    test::Random random(5);
    const std::vector<double> b = test::random_vector(a.rows, random);
    MultigridSolver solver({.tolerance = 1e-8, .most = 200});
    solver.analyze(a, a.rows);
    REQUIRE(solver.factor(a));
    std::vector<double> x(b.size(), 0.0);
    const IterationReport report = solver.solve(b.data(), x.data());
    CHECK(report.converged);
    if (off) *off = test::backward_error(a, x, b);
    return report.iterations;
}

/// 1e4 and 1e5 unknowns, less under sanitizers. The growth asked is 60 %; one iteration more is the grain of counting.
template <class Make>
void check_family(const char* name, const Make& make) {
    CAPTURE(name);
    double off = 1.0;
    const Index few = iterations(make(static_cast<Index>(test::scaled(99, 40))), &off);
    const Index many = iterations(make(static_cast<Index>(test::scaled(316, 70))));
    CAPTURE(few);
    CAPTURE(many);
    CHECK(off <= 1e-8);
    CHECK(few < 40);
    CHECK(many < 40);
    CHECK(many * 10 <= (few + 1) * 16);
}

double one(double, double) {
    return 1.0;
}
Point straight(double x, double y) {
    return {x, y};
}

} // namespace

TEST_CASE("jumps of 1e6 in conductivity, also where four corners meet, stay under 40 iterations and hardly grow") {
    const auto family = [](const char* name, const auto& k) {
        check_family(name, [&](Index cells) { return test::square_of(cells, true, false, 66, 10.0, 1.0, k).matrix; });
    };
    family("four quarters", [](double x, double y) { return (x < 0.5) == (y < 0.5) ? 1.0 : 1e6; });
    family("a barrier", [](double x, double y) { return std::abs(x - 0.5) < 0.1 && y > 0.2 ? 1e-6 : 1.0; });
    family("a chessboard", [](double x, double y) {
        return (static_cast<int>(8.0 * x) + static_cast<int>(8.0 * y)) % 2 != 0 ? 1.0 : 1e6;
    });
    family("64 x 64 patches at random", [](double x, double y) {
        std::uint32_t h = static_cast<std::uint32_t>(64.0 * x) * 7919U + static_cast<std::uint32_t>(64.0 * y) * 104729U;
        h = (h ^ (h >> 7U)) * 2654435761U;
        return ((h >> 16U) & 1U) != 0U ? 1.0 : 1e6;
    });
}

TEST_CASE("contacts from loose to welded, astride the blocks of the sweeps too, stay under 40 iterations") {
    for (const double contact : {1.0, 1e3, 1e4, 1e5, 1e6, 1e7}) {
        CAPTURE(contact);
        check_family("contact", [contact](Index cells) {
            return test::bent_square(cells, true, 1, 10.0, straight, one, contact).matrix;
        });
    }
}

TEST_CASE("films from 1e-4 to 1e6, slender and graded cells stay under 40 iterations and hardly grow") {
    for (const double film : {1e-4, 1e6}) {
        CAPTURE(film);
        check_family("film",
                     [film](Index cells) { return test::square_of(cells, true, false, 66, film, 1.0, one).matrix; });
    }
    for (const double aspect : {100.0, 0.01}) {
        CAPTURE(aspect);
        check_family("slender cells in rows", [aspect](Index cells) {
            return test::square_of(cells, false, false, 66, 10.0, aspect, one).matrix;
        });
    }
    check_family("slender cells in a ring", [](Index cells) {
        return test::bent_square(
                   cells, false, 1, 10.0,
                   [](double x, double y) {
                       const double r = 1.0 + 0.01 * y;
                       return Point{-r * std::cos(3.0 * x), r * std::sin(3.0 * x)};
                   },
                   one)
            .matrix;
    });
    for (const double aspect : {10.0, 0.1}) {
        CAPTURE(aspect);
        check_family("jittered cells of aspect 10", [aspect](Index cells) {
            return test::square_of(cells, true, false, 66, 10.0, aspect, one).matrix;
        });
    }
    const auto crowded = [](double t) { return std::pow(10.0, 5.0 * (t - 1.0)) - 1e-5; };
    check_family("rows that crowd towards a corner over five decades", [&](Index cells) {
        return test::bent_square(
                   cells, false, 1, 10.0,
                   [&](double x, double y) {
                       return Point{crowded(x), crowded(y)};
                   },
                   one)
            .matrix;
    });
    check_family("jittered cells that shrink towards a point by 8,000", [](Index cells) {
        return test::bent_square(
                   cells, true, 1, 10.0,
                   [](double x, double y) {
                       const double r = std::exp(9.0 * (y - 1.0));
                       return Point{-r * std::cos(5.4 * x), r * std::sin(5.4 * x)};
                   },
                   one)
            .matrix;
    });
}
