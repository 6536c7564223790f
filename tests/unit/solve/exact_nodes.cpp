// ExactSegment: nodal values, values inside cells and flows against nested integrals, in all frames.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/layered.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using test::LayerCase;
using test::LayeredCase;

namespace {

Frame frame_of(int n) {
    if (n == 0) return Planar{.area = 0.7};
    if (n == 1) return Cylindrical{.length = 1.3};
    return Spherical{};
}

// Two layers with conductivities and sources of place, a contact between them, films at both ends.
double k_inner(double x) {
    return 1.2 + std::sin(9.0 * x);
}
double f_inner(double x) {
    return 4e4 * std::exp(-8.0 * x);
}
double k_outer(double x) {
    return 0.3 * std::exp(2.0 * x);
}
double f_outer(double x) {
    return 2e3 * std::cos(12.0 * x);
}

Body two_layers(int n, Index inner_cells, Index outer_cells, double start) {
    Body body(layers<ExactSegment>(
        {{.region = "inner", .thickness = 0.12, .cells = inner_cells, .grading = finer_at_start(3)},
         {.region = "outer", .thickness = 0.2, .cells = outer_cells, .grading = finer_at_end(5)}},
        frame_of(n), {.start = start}));
    body.in("inner", Material{.conductivity = of_place([](const auto& p) { return 1.2 + sin(9.0 * p.x); })});
    body.in("outer", Material{.conductivity = of_place([](const auto& p) { return 0.3 * exp(2.0 * p.x); })});
    body.in("inner", Generation{.per_volume = of_place([](const auto& p) { return 4e4 * exp(-8.0 * p.x); })});
    body.in("outer", Generation{.per_volume = of_place([](const auto& p) { return 2e3 * cos(12.0 * p.x); })});
    body.between("inner", "outer", Contact{.conductance = 250.0});
    if (start > 0.0 || n == 0) body.on("inner", Film{.coefficient = 90.0, .fluid = 400.0});
    body.on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    return body;
}

LayeredCase two_layers_case(int n, double start) {
    return LayeredCase(start, n, frame_of(n).factor(1),
                       {{start + 0.12, k_inner, f_inner, 250.0}, {start + 0.32, k_outer, f_outer}}, 90.0, 400.0, 12.0,
                       25.0);
}

} // namespace

TEST_CASE("exact cells hit every node in every frame on any mesh, one cell per layer included") {
    // Source: the resistance cell of I. Babuska, J. E. Osborn, SIAM J. Numerical Analysis 20 (1983) 510-536; numbers by nested integrals
    for (const int n : {0, 1, 2})
        for (const double start : {0.08, 0.0})
            for (const auto& cells : {std::pair<Index, Index>{1, 1}, {2, 1}, {5, 7}}) {
                const Index inner = cells.first;
                const Index outer = cells.second;
                CAPTURE(n);
                CAPTURE(start);
                CAPTURE(inner);
                const Body body = two_layers(n, inner, outer, start);
                const LayeredCase truth = two_layers_case(n, start);
                const Field field = steady(body);
                const auto places = field.node_places();
                const auto T = field.node_temperatures();
                for (std::size_t i = 0; i < places.size(); ++i) {
                    CAPTURE(places[i].x);
                    CHECK(std::abs(T[i] - truth.at(places[i].x)) <= 1e-12 * 400.0);
                }
                const double end = start + 0.32;
                CHECK(std::abs(field[heat_out_through("outer")] - truth.flow(end)) <=
                      1e-12 * std::abs(truth.flow(end)));
                CHECK(std::abs(field[heat_from("inner", "outer")] - truth.flow(start + 0.12)) <=
                      2e-12 * std::abs(truth.flow(start + 0.12)));
                const Balance balance = field.balance();
                CHECK(std::abs(balance.left_over) <= 1e-10 * balance.gross + balance.floor);
            }
}

TEST_CASE("between its nodes an exact cell has the exact temperature and heat flux") {
    for (const int n : {0, 1, 2})
        for (const double start : {0.08, 0.0}) {
            CAPTURE(n);
            CAPTURE(start);
            const Field field = steady(two_layers(n, 1, 1, start));
            const LayeredCase truth = two_layers_case(n, start);
            for (const double x : {0.003, 0.04, 0.0777, 0.119, 0.15, 0.25, 0.31}) {
                CAPTURE(x);
                const double r = start + x;
                CHECK(std::abs(field.at(r) - truth.at(r)) <= 1e-12 * 400.0);
                const double flux = truth.flow(r) / truth.area(r);
                CHECK(std::abs(field.heat_flux(r).x - flux) <= 2e-11 * (std::abs(flux) + 1000.0));
            }
            // mean over the outer layer
            const double volume = test::integrate(start + 0.12, start + 0.32, [&](double r) { return truth.area(r); });
            const double content = test::integrate(
                start + 0.12 + 1e-14, start + 0.32, [&](double r) { return truth.area(r) * truth.at(r); }, 8);
            CHECK(std::abs(field[mean_in("outer")] - content / volume) <= 1e-9);
        }
}
