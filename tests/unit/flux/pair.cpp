// Quantities: the interval of the hypercircle midpoint holds the exact value.

#include "tests/support/flux_case.hpp"
#include <doctest/doctest.h>
#include <tepor/flux/flux_load.hpp>
#include <tepor/flux/weak_form.hpp>

using namespace tepor;
using test::FluxCase;
using test::grid_triangles;
using test::lines;

namespace {

struct Interval {
    double value, half_width;
};

/// Interval of `direct(T) + constant` plus the outflow through held sides where the adjoint is held at 1.
Interval interval(FluxCase& primal, FluxCase& adjoint, const std::vector<double>& weights, double constant) {
    const auto t = primal.solve();
    const auto z = adjoint.solve();
    const Equilibrated flux_t = equilibrate(primal.problem, t.data());
    const Equilibrated flux_z = equilibrate(adjoint.problem, z.data());
    const PairBound pair = pair_bound(primal.problem, t.data(), flux_t, adjoint.problem, z.data(), flux_z);
    const double rho = primal.work(z) - primal.energy(t, z);
    const Summed form = weak_form(primal.problem, t.data(), z.data());
    CHECK(std::abs(form.value - rho) <= 1e-12 * form.absolute);
    const std::vector<double> load = flux_load(primal.problem, primal.dofs);
    CHECK((FluxCase::vector(load) - primal.load).lpNorm<Eigen::Infinity>() <=
          1e-13 * primal.load.lpNorm<Eigen::Infinity>());
    const double direct = FluxCase::vector(weights).dot(FluxCase::vector(t)) + constant;
    return {direct + rho + pair.correction, pair.half_width};
}

bool all_fixed(Point, FluxSide& side) {
    side.kind = SideKind::fixed;
    return true;
}

} // namespace

TEST_CASE("mean temperature of a part of the L domain lies in the interval, which narrows with twice the order of the "
          "energy") {
    // L = [0,2]^2 without [1,2]^2, f = 1, T = 0: mean over [1,1.5] x [0.5,1] = 0.0841970647 +- 1.5e-7, certified by adaptive
    // refinement
    for (int order = 1; order <= 2; ++order) {
        double last = 1e300;
        for (const int n : {4, 8, 16}) {
            CAPTURE(order);
            CAPTURE(n);
            FluxCase primal(grid_triangles(order, lines(0, 2, 2 * n), lines(0, 2, 2 * n),
                                           [](double x, double y) { return x > 1 && y > 1 ? -1 : 0; }),
                            [](int) { return 1.0; });
            primal.on_boundary(all_fixed);
            FluxCase adjoint = primal;
            primal.problem.source.assign(primal.problem.source.size(), 1.0);
            for (Index c = 0; c < adjoint.mesh.cell_count(); ++c) {
                const Point p = adjoint.centre(c);
                if (p.x > 1 && p.x < 1.5 && p.y > 0.5 && p.y < 1) adjoint.problem.source[detail::as_size(c)] = 4.0;
            }
            adjoint.assemble();
            const std::vector<double> weights(adjoint.load.data(), adjoint.load.data() + adjoint.dofs);
            const Interval q = interval(primal, adjoint, weights, 0.0);
            CHECK(std::abs(q.value - 0.0841970647) <= q.half_width + 1.5e-7);
            CHECK(std::abs(q.value - 0.0841970647) >= 0.05 * q.half_width); // not padded
            CHECK(q.half_width < 0.55 * last);
            last = q.half_width;
        }
        CHECK(last < (order == 1 ? 1.3e-3 : 1e-4));
    }
}

TEST_CASE("heat through films with sources and two fluids lies in the interval") {
    // bridged wall, fluids 20 and -5, generation 100 in the masonry: out through the outer film 23.11373 +- 6.6e-5, certified
    for (int order = 1; order <= 2; ++order)
        for (const int n : {1, 2, 4}) {
            CAPTURE(order);
            CAPTURE(n);
            FluxCase primal(grid_triangles(order, lines(0, 0.3, 6 * n), lines(0, 0.6, 12 * n),
                                           [](double x, double y) {
                                               return x > 0.1 && x < 0.2 ? (y > 0.2 && y < 0.3 ? 2 : 1) : 0;
                                           }),
                            [](int region) { return region == 0   ? 0.8
                                                    : region == 1 ? 0.035
                                                                  : 50.0; });
            primal.on_boundary([](Point p, FluxSide& side) {
                if (p.x < 1e-9)
                    side.film = 8.0, side.fluid = 20.0;
                else if (p.x > 0.3 - 1e-9)
                    side.film = 25.0, side.fluid = -5.0;
                else
                    return false;
                return true;
            });
            FluxCase adjoint = primal;
            for (Index c = 0; c < primal.mesh.cell_count(); ++c)
                if (primal.mesh.region[detail::as_size(c)] == 0) primal.problem.source[detail::as_size(c)] = 100.0;
            for (FluxSide& side : adjoint.problem.sides) side.fluid = side.film == 25.0 ? 1.0 : 0.0; // b/h = 1
            adjoint.assemble();
            const std::vector<double> weights(adjoint.load.data(), adjoint.load.data() + adjoint.dofs);
            const Interval q = interval(primal, adjoint, weights, 25.0 * 0.6 * 5.0);
            CHECK(std::abs(q.value - 23.11373) <= q.half_width + 6.6e-5);
            CHECK(q.half_width < (order == 1 ? 3.6 : 0.9) / n);
        }
}

TEST_CASE("heat through a held face lies in the interval: duct with a source") {
    // duct 2/1, f = 3, outer side 0, inner side 1: through the hot face 6.799707 +- 1.7e-5, certified (sign: into the body)
    for (int order = 1; order <= 2; ++order)
        for (const int n : {2, 4, 8}) {
            CAPTURE(order);
            CAPTURE(n);
            FluxCase primal(grid_triangles(order, lines(0, 2, 4 * n), lines(0, 2, 4 * n),
                                           [](double x, double y) {
                                               return std::abs(x - 1) < 0.5 && std::abs(y - 1) < 0.5 ? -1 : 0;
                                           }),
                            [](int) { return 1.0; });
            primal.on_boundary(all_fixed);
            primal.prescribe([](Point p) { return std::abs(p.x - 1) < 0.51 && std::abs(p.y - 1) < 0.51 ? 1.0 : 0.0; });
            FluxCase adjoint = primal;
            primal.problem.source.assign(primal.problem.source.size(), 3.0);
            const Interval q = interval(primal, adjoint, std::vector<double>(detail::as_size(primal.dofs), 0.0), 0.0);
            CHECK(std::abs(-q.value - 6.799707) <= q.half_width + 1.7e-5);
            CHECK(q.half_width < (order == 1 ? 1.0 : 0.15));
        }
}

TEST_CASE("heat through a contact lies in the interval") {
    // adjoint: a jump of one kelvin prescribed at the contact. Reference: the same body, one dimensional, in closed form
    const double exact = 10.0 / (1.0 / 2.0 + 1.0 / 5.0 + 1.0 / 3.0); // layers 1 m of k = 2 and 3, contact 5, height 1
    for (int order = 1; order <= 2; ++order) {
        FluxCase primal(
            grid_triangles(order, lines(0, 2, 6), lines(0, 1, 3), [](double x, double) { return x < 1 ? 0 : 1; }),
            [](int region) { return region == 0 ? 2.0 : 3.0; });
        primal.contact(0, 1, 5.0);
        primal.on_boundary([](Point p, FluxSide& side) {
            side.kind = SideKind::fixed;
            return p.x < 1e-9 || p.x > 2 - 1e-9;
        });
        FluxCase adjoint = primal;
        primal.prescribe([](Point p) { return p.x < 1 ? 10.0 : 0.0; });
        for (FluxSide& side : adjoint.problem.sides)
            if (side.kind == SideKind::contact)
                side.fluid = adjoint.mesh.region[detail::as_size(side.side.cell)] == 0 ? 1.0 : -1.0;
        adjoint.assemble();
        const std::vector<double> weights(adjoint.load.data(), adjoint.load.data() + adjoint.dofs);
        const Interval q = interval(primal, adjoint, weights, 0.0);
        CHECK(std::abs(q.value - exact) <= 1e-11);
        CHECK(q.half_width <= 1e-9);
    }
}

TEST_CASE("the weak form agrees with an assembly of its own, sinks, contacts and spread sources included") {
    for (int order = 1; order <= 2; ++order) {
        CAPTURE(order);
        FluxCase body(
            grid_triangles(order, lines(0, 2, 5), lines(0, 1, 3), [](double x, double) { return x < 0.8 ? 0 : 1; }),
            [](int region) { return region == 0 ? 2.0 : 3.0; });
        body.contact(0, 1, 5.0);
        body.problem.sink.assign(body.problem.source.size(), 4.0);
        body.problem.sink_temperature.assign(body.problem.source.size(), -3.0);
        body.problem.source[3] = 8.0;
        body.problem.spread.push_back({7, {0.1, 0.3, 0.2, 0.05, 0.07, 0.01}, 0.0});
        body.on_boundary([](Point p, FluxSide& side) {
            side.film = 1.0 + p.x, side.fluid = 6.0, side.flux = p.y;
            return p.y < 0.6;
        });
        body.assemble();
        std::vector<double> t, z;
        for (Index i = 0; i < body.dofs; ++i) {
            t.push_back(100.0 + std::sin(2.0 * static_cast<double>(i)));
            z.push_back(std::cos(3.0 * static_cast<double>(i)));
        }
        const Summed form = weak_form(body.problem, t.data(), z.data());
        CHECK(std::abs(form.value - (body.work(z) - body.energy(t, z))) <= 1e-13 * form.absolute);
        const std::vector<double> load = flux_load(body.problem, body.dofs);
        CHECK((FluxCase::vector(load) - body.load).lpNorm<Eigen::Infinity>() <=
              1e-13 * body.load.lpNorm<Eigen::Infinity>());
    }
}
