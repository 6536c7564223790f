// Traces of radiating sides against integrals of their own polynomials, and the remainder of the linearised law.

#include "tests/support/flux_case.hpp"
#include <doctest/doctest.h>
#include <tepor/base/error.hpp>
#include <tepor/flux/radiating.hpp>

using namespace tepor;
using test::FluxCase;
using test::grid_triangles;
using test::lines;

namespace {

/// One square of two triangles that radiates on its whole edge; T = 300 + 40 x (+ 60 x y in order 2).
FluxCase radiating_square(int order, std::vector<double>& t, Radiating& radiating) {
    FluxCase body(grid_triangles(order, lines(0, 1, 1), lines(0, 1, 1), [](double, double) { return 0; }),
                  [](int) { return 1.0; });
    body.on_boundary([](Point, FluxSide&) { return true; });
    t.assign(detail::as_size(body.dofs), 0.0);
    for (std::size_t i = 0; i < body.mesh.cells.size(); ++i) {
        const Point p = body.mesh.nodes[detail::as_size(body.mesh.cells[i])];
        t[detail::as_size(body.problem.dof[i])] = 300.0 + 40.0 * p.x + (order == 2 ? 60.0 * p.x * p.y : 0.0);
    }
    for (std::size_t i = 0; i < body.problem.sides.size(); ++i)
        radiating.sides.push_back({detail::as_id(i), 3e-8, 3e-8 * std::pow(290.0, 4)});
    radiating.coldest = 290.0;
    radiating.hottest = 500.0;
    return body;
}

} // namespace

TEST_CASE("the heat of radiating sides adds up to its integral, and what a projection loses to the rest") {
    for (int order = 1; order <= 2; ++order) {
        CAPTURE(order);
        std::vector<double> t;
        Radiating radiating;
        FluxCase body = radiating_square(order, t, radiating);
        body.problem.mesh = &body.mesh;
        detail::set_radiation(body.problem, radiating, t.data(), detail::exact_radiation_points);
        double sum = 0.0, squares = 0.0;
        for (const FluxSide& side : body.problem.sides) {
            const SideTrace& trace = body.problem.traces[detail::as_size(side.trace)];
            sum += trace.moment[0];
            // projection on degree p by Legendre coefficients
            const double *m = trace.moment, p1 = 2.0 * m[1] - m[0], p2 = 6.0 * m[2] - 6.0 * m[1] + m[0];
            squares += m[0] * m[0] + 3.0 * p1 * p1 + (order == 2 ? 5.0 * p2 * p2 : 0.0) + trace.lost_squared;
            CHECK(trace.least_slope == doctest::Approx(4.0 * 3e-8 * std::pow(290.0, 3)).epsilon(1e-14));
        }
        // g = 3e-8 (T^4 - 290^4) along the four edges by the trapezoidal rule with its end correction left out: 1e5 steps
        double exact = 0.0, exact_squares = 0.0;
        const int n = 100000;
        for (int i = 0; i < n; ++i) {
            const double s = (i + 0.5) / n, xy = order == 2 ? 60.0 : 0.0;
            for (const double T : {300.0 + 40.0 * s, 340.0 + xy * s, 300.0 + (40.0 + xy) * s, 300.0}) {
                const double g = 3e-8 * (std::pow(T, 4) - std::pow(290.0, 4));
                exact += g / n;
                exact_squares += g * g / n;
            }
        }
        CHECK(std::abs(sum - exact) <= 1e-8 * exact);
        CHECK(std::abs(squares - exact_squares) <= 1e-8 * exact_squares);
    }
}

TEST_CASE("the remainder bounds the bend of the law between the temperatures possible") {
    std::vector<double> t;
    Radiating radiating;
    FluxCase body = radiating_square(1, t, radiating);
    body.problem.mesh = &body.mesh;
    detail::set_radiation(body.problem, radiating, t.data(), 3);
    const std::vector<double> z(t.size(), 0.25);
    const std::vector<char> weighed{1, 0, 0, 0};
    const detail::Remainder r = detail::radiation_remainder(body.problem, radiating, t.data(), z.data(), weighed);
    // against every pair of temperatures: rho (chi - z) / (least slope (T - Th)^2)
    const double slope = 4.0 * 3e-8 * std::pow(290.0, 3);
    double worst = 0.0;
    for (double th = 300.0; th <= 340.0; th += 5.0)
        for (double T = 290.0; T <= 500.0; T += 1.5) {
            const double e = T - th;
            if (std::abs(e) < 0.1) continue;
            const double rho = 3e-8 * (std::pow(T, 4) - std::pow(th, 4) - 4.0 * std::pow(th, 3) * e);
            worst = std::max(worst, rho / (slope * e * e));
        }
    CHECK(r.most >= 0.75 * worst);
    CHECK(r.most <= 3.0 * 0.75 * worst);
    CHECK(r.least <= -0.25 * worst);
}

TEST_CASE("a field that comes down to absolute zero has no bound") {
    std::vector<double> t;
    Radiating radiating;
    FluxCase body = radiating_square(1, t, radiating);
    body.problem.mesh = &body.mesh;
    t[0] = -1.0;
    CHECK_THROWS_AS(detail::set_radiation(body.problem, radiating, t.data(), 3), Error);
}
