// Two-sided conductances against exact values.

#include "tests/support/flux_case.hpp"
#include <doctest/doctest.h>
#include <tepor/base/error.hpp>
#include <tepor/flux/conductance.hpp>

using namespace tepor;
using test::FluxCase;
using test::grid_triangles;
using test::lines;

namespace {

/// Bounds between the sides at x = left (1) and the others that are held or washed.
TwoSided bounds(FluxCase& body, double left, double& index, double exact) {
    const auto t = body.solve();
    const Equilibrated flux = equilibrate(body.problem, t.data());
    std::vector<char> hot;
    for (const FluxSide& side : body.problem.sides)
        hot.push_back(side.kind != SideKind::contact && body.corner(side.side.cell, side.side.side).x < left + 1e-9 &&
                      body.corner(side.side.cell, side.side.side + 1).x < left + 1e-9);
    const TwoSided g = conductance_bounds(body.problem, t.data(), flux, hot);
    index = flux.bound() / std::sqrt(g.upper - exact);
    CHECK(g.lower >= g.upper - flux.bound() * flux.bound() - 1e-12);
    return g;
}

} // namespace

TEST_CASE("bridged wall between films: the conductance lies between the bounds, index at most 1.3") {
    // 0.3 x 0.6 m, k 0.8, insulation 0.035 bridged by k = 50, films 8 and 25: between 0.6620373 and 0.6620424 W/(m K), computed
    // by adaptive refinement with certified bounds
    for (int order = 1; order <= 2; ++order)
        for (const int n : {1, 2, 4}) {
            CAPTURE(order);
            CAPTURE(n);
            FluxCase wall(grid_triangles(
                              order, lines(0, 0.3, 6 * n), lines(0, 0.6, 12 * n),
                              [](double x, double y) { return x > 0.1 && x < 0.2 ? (y > 0.2 && y < 0.3 ? 2 : 1) : 0; }),
                          [](int region) { return region == 0   ? 0.8
                                                  : region == 1 ? 0.035
                                                                : 50.0; });
            wall.on_boundary([](Point p, FluxSide& side) {
                if (p.x < 1e-9)
                    side.film = 8.0, side.fluid = 1.0;
                else if (p.x > 0.3 - 1e-9)
                    side.film = 25.0;
                else
                    return false;
                return true;
            });
            double index = 0.0;
            const TwoSided g = bounds(wall, 0.0, index, 0.66204);
            CHECK(g.lower < 0.6620373);
            CHECK(g.upper > 0.6620424);
            CHECK(g.upper - g.lower < (order == 1 ? 0.105 : 0.034) / n * 1.1);
            CHECK(index <= (order == 1 ? 1.3 : 1.27));
        }
}

TEST_CASE("checkerboard of conductivities: the exact square root lies between the bounds") {
    // J. B. Keller, J. Math. Phys. 5 (1964) 548: effective conductivity sqrt(k1 k2)
    for (const double c : {10.0, 100.0})
        for (int order = 1; order <= 2; ++order)
            for (const int n : {2, 8}) {
                CAPTURE(c);
                CAPTURE(order);
                CAPTURE(n);
                FluxCase board(grid_triangles(order, lines(0, 1, 2 * n), lines(0, 1, 2 * n),
                                              [](double x, double y) { return (x > 0.5) != (y > 0.5) ? 1 : 0; }),
                               [c](int region) { return region == 0 ? 1.0 : c; });
                board.on_boundary([](Point p, FluxSide& side) {
                    side.kind = SideKind::fixed;
                    return p.x < 1e-9 || p.x > 1 - 1e-9;
                });
                board.prescribe([](Point p) { return p.x < 0.5 ? 1.0 : 0.0; });
                double index = 0.0;
                const TwoSided g = bounds(board, 0.0, index, std::sqrt(c));
                CHECK(g.lower < std::sqrt(c));
                CHECK(g.upper > std::sqrt(c));
                CHECK(index <= 3.5);
            }
}

TEST_CASE("two blocks with uneven contact: brackets are nested under refinement") {
    for (int order = 1; order <= 2; ++order) {
        TwoSided last{0.0, 1e300};
        for (const int n : {2, 4, 8, 16}) {
            CAPTURE(order);
            CAPTURE(n);
            FluxCase blocks(grid_triangles(order, lines(0, 2, 2 * n), lines(0, 1, n),
                                           [](double x, double y) { return x < 1     ? 0
                                                                           : y < 0.5 ? 1
                                                                                     : 2; }),
                            [](int region) { return region == 0 ? 1.0 : 3.0; });
            blocks.contact(0, 1, 2.0); // closes where region 2 joins both
            blocks.on_boundary([](Point p, FluxSide& side) {
                side.kind = SideKind::fixed;
                return p.x < 1e-9 || p.x > 2 - 1e-9;
            });
            blocks.prescribe([](Point p) { return p.x < 0.5 ? 1.0 : 0.0; });
            double index = 0.0;
            const TwoSided g = bounds(blocks, 0.0, index, 0.683);
            CHECK(g.lower > last.lower);
            CHECK(g.upper < last.upper);
            CHECK(g.lower < 0.68379);
            CHECK(g.upper > 0.68312);
            last = g;
        }
    }
}

TEST_CASE("a conductance of a body with a source is refused") {
    FluxCase body(grid_triangles(1, lines(0, 1, 2), lines(0, 1, 2), [](double, double) { return 0; }),
                  [](int) { return 1.0; });
    body.on_boundary([](Point, FluxSide& side) {
        side.kind = SideKind::fixed;
        return true;
    });
    body.problem.source[3] = 1.0;
    const auto t = body.solve();
    const Equilibrated flux = equilibrate(body.problem, t.data());
    CHECK_THROWS_AS(conductance_bounds(body.problem, t.data(), flux, std::vector<char>(body.problem.sides.size(), 0)),
                    Error);
}
