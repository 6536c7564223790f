// Where plain Galerkin segments are exact at their end nodes, what breaks it, and balances of long 1D bodies.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/exact_segment.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/layered.hpp>
#include <tests/support/scale.hpp>
#include <tests/support/study.hpp>

using namespace tepor;

namespace {

/// Largest distance from `exact` over the ends of cells, for two-material slabs.
template <class E, class F>
double end_error(const Field& field, F exact) {
    double worst = 0.0;
    const std::vector<double> values = field.cell_temperatures();
    for (Index c = 0; c < field.mesh().cell_count(); ++c)
        for (int i = 0; i < 2; ++i)
            worst = std::max(worst, std::abs(values[detail::as_size(c * E::nodes + i)] -
                                             exact(field.mesh().nodes[detail::as_size(field.mesh().cell(c)[i])].x)));
    return worst;
}

} // namespace

TEST_CASE_TEMPLATE("in a slab of constant k end nodes are exact when the load integral is, films and contacts included",
                   E, Segment<1>, Segment<2>, Segment<3>) {
    // Source: P. Tong, Int. J. Solids and Structures 5 (1969) 331-340
    const auto f = [](double x) { return 4000.0 * std::exp(-6.0 * x) * (1.0 + std::sin(20.0 * x)); };
    const auto slab = [&](int extra_degree) {
        Body body(layers<E>({{.region = "a", .thickness = 0.2, .cells = 3, .grading = finer_at_start(4)},
                             {.region = "b", .thickness = 0.3, .cells = 4, .grading = finer_at_end(3)}}),
                  BodyOptions{.extra_degree = extra_degree});
        body.in("a", Material{.conductivity = 1.5});
        body.in("b", Material{.conductivity = 0.2});
        for (const char* region : {"a", "b"})
            body.in(region, Generation{.per_volume = of_place([f](Point p) { return f(p.x); })});
        body.between("a", "b", Contact{.conductance = 60.0});
        body.on("inner", Film{.coefficient = 10.0, .fluid = 200.0});
        body.on("outer", FixedTemperature{20.0});
        return steady(body);
    };
    const test::LayeredCase truth(0.0, 0, 1.0,
                                  {{0.2, [](double) { return 1.5; }, f, 60.0}, {0.5, [](double) { return 0.2; }, f}},
                                  10.0, 200.0, 1e30, 20.0);
    // at the contact the cell in front and the one behind have their own temperature: compare away from it
    const auto off = [&](const Field& field) {
        double worst = 0.0;
        for (const Point p : field.node_places()) {
            if (std::abs(p.x - 0.2) < 1e-9) continue;
            const double xi = p.x; // end nodes only: inner nodes of order 2 and 3 are not exact
            bool end = false;
            for (Index c = 0; c < field.mesh().cell_count(); ++c)
                for (int i = 0; i < 2; ++i)
                    end = end || field.mesh().nodes[detail::as_size(field.mesh().cell(c)[i])].x == xi;
            if (end) worst = std::max(worst, std::abs(field.at(p) - truth.at(p.x)));
        }
        return worst;
    };
    const Field fine = slab(24);
    CHECK(off(fine) <= 1e-12 * fine.hottest().temperature);
    CHECK(off(slab(0)) >
          1e-9 * fine.hottest().temperature); // a load integral too coarse breaks it, by the order of the rule
}

TEST_CASE_TEMPLATE("lateral loss breaks the exact end nodes of segments down to order 2P, the exact cell keeps them", E,
                   Segment<1>, Segment<2>, Segment<3>) {
    // Source: fin with an adiabatic tip, F. P. Incropera, D. P. DeWitt, Fundamentals of Heat and Mass Transfer, table 3.4
    const double m = std::sqrt(2.0 * 40.0 / (50.0 * 0.004));
    const auto exact = [m](double x) { return 25.0 + 75.0 * std::cosh(m * (0.25 - x)) / std::cosh(m * 0.25); };
    const auto fin = [](auto mesh) {
        Body body(std::move(mesh));
        body.in("fin", Material{.conductivity = 50.0});
        body.in("fin", SideFilm{.coefficient = 40.0, .fluid = 25.0, .thickness = 0.004});
        body.on("inner", FixedTemperature{100.0});
        return steady(body);
    };
    const auto study =
        test::refine(E::order == 3 ? std::vector<int>{2, 4, 8} : std::vector<int>{8, 16, 32}, [&](int n) {
            return end_error<E>(fin(layers<E>({{.region = "fin", .thickness = 0.25, .cells = n}})), exact);
        });
    INFO(study.text());
    CHECK(std::abs(study.order() - 2.0 * E::order) <= 0.1);
    static constexpr double level[3] = {2.87e-2, 1.17e-5, 8.24e-6}; // measured, 2 % added
    CHECK(study.error.back() <= level[E::order - 1]);
    const Field one = fin(layers<ExactSegment>({{.region = "fin", .thickness = 0.25, .cells = 3}}));
    CHECK(end_error<ExactSegment>(one, exact) <= 1e-12 * 100.0);
}

TEST_CASE_TEMPLATE("bodies of 100 000 cells balance within 1e-10 of the traffic and the rounding floor", E, Segment<1>,
                   Segment<2>, ExactSegment) {
    const Index cells = test::scaled(100000, 1000);
    for (const int n : {0, 1, 2}) {
        CAPTURE(n);
        const Frame frame = n == 0 ? Frame(Planar{}) : n == 1 ? Frame(Cylindrical{}) : Frame(Spherical{});
        for (const bool hot : {false, true}) {
            Body body(layers<E>({{.region = "wall", .thickness = 0.4, .cells = cells}}, frame, {.start = 0.1}));
            if (hot)
                body.in("wall",
                        Material{.conductivity = law([](const auto& s) { return 1.0 + 0.002 * s.temperature; })});
            else
                body.in("wall", Material{.conductivity = of_place([](const auto& p) { return 1.0 + p.x; })});
            body.in("wall", Generation{.per_volume = of_place([](const auto& p) { return 500.0 * p.x; })});
            body.on("inner", Film{.coefficient = 30.0, .fluid = 900.0});
            body.on("outer", Film{.coefficient = 8.0, .fluid = 20.0});
            const Balance balance = steady(body).balance();
            CHECK(std::abs(balance.left_over) <= 1e-10 * balance.gross + balance.floor);
            CHECK(balance.floor <= 2e-7 * balance.gross); // and it hides nothing that matters
        }
    }
}

TEST_CASE("exact cells find one answer from one cell to thousands") {
    const auto wall = [](Index cells) {
        Body body(layers<ExactSegment>({{.region = "wall", .thickness = 0.4, .cells = cells}}, Cylindrical{},
                                       {.start = 0.1}));
        body.in("wall", Material{.conductivity = of_place([](const auto& p) { return 1.0 + p.x * p.x; })});
        body.in("wall", Generation{.per_volume = of_place([](const auto& p) { return 5e4 * exp(-5.0 * p.x); })});
        body.on("inner", Film{.coefficient = 30.0, .fluid = 900.0});
        body.on("outer", Film{.coefficient = 8.0, .fluid = 20.0});
        return steady(body);
    };
    const double one = wall(1)[heat_out_through("outer")];
    for (const Index cells : {2, 7, 100, 5000}) {
        CAPTURE(cells);
        CHECK(std::abs(wall(cells)[heat_out_through("outer")] - one) <= (cells > 100 ? 1e-10 : 2e-13) * one);
    }
}
