// Estimates: the likely error covers the true one on cases with exact values, for what has no guaranteed bound.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/estimate.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/section.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/mesh/triangulate.hpp>

using namespace tepor;

namespace {

void covers(const Estimate& e, double exact, double doubt) {
    CAPTURE(e.value);
    CAPTURE(e.likely_error);
    CAPTURE(exact);
    CHECK(std::abs(e.value - exact) <= e.likely_error + doubt);
    CHECK(e.reached);
}

} // namespace

TEST_CASE("slab with k(T): temperature and heat flow by the Kirchhoff integral") {
    // k = 1.5 (1 + 0.004 T), 300 to 50 degC, 0.1 m: H. S. Carslaw and J. C. Jaeger, Conduction of Heat in Solids, section 1.6
    const double flow = 1.5 / 0.1 * (250.0 + 0.002 * (300.0 * 300.0 - 50.0 * 50.0));
    Body slab{layers<Segment<1>>({{.region = "wall", .thickness = 0.1, .cells = 3}})};
    slab.in("wall", Material{.conductivity = law([](const auto& s) { return 1.5 * (1.0 + 0.004 * s.temperature); })});
    slab.on("inner", FixedTemperature{300.0}).on("outer", FixedTemperature{50.0});
    covers(estimate(slab, heat_out_through("outer"), {.relative_error = 1e-4}), flow, 0.0);
    // mean of T from the integral of T k dT over the flow
    const auto part = [](double t) { return 1.5 * (t * t / 2.0 + 0.004 * t * t * t / 3.0); };
    const Estimate mean = estimate(slab, mean_in("wall"), {.relative_error = 1e-5});
    covers(mean, (part(300.0) - part(50.0)) / (flow * 0.1), 0.0);
    CHECK(std::abs(mean.order - 2.0) <= 0.1);
    CHECK(mean.likely_error >= std::abs(mean.value - mean.passes.back().value));
}

TEST_CASE("radiating bar: end temperature (benchmark T2 of NAFEMS 1990 with its own constant)") {
    Body bar{layers<Segment<2>>({{.region = "bar", .thickness = 0.1, .cells = 2}}), TemperatureScale::kelvin};
    bar.in("bar", Material{.conductivity = 55.6});
    bar.on("inner", FixedTemperature{1000.0}).on("outer", Radiation{.emissivity = 0.98, .surroundings = 300.0});
    covers(estimate(bar, mean_on("outer"), {.relative_error = 1e-6}), 927.0, 0.05); // target 927.0 K
}

TEST_CASE_TEMPLATE("square duct of quadrilaterals and of triangles of order 3: heat flow in spite of the corners", E,
                   Quadrilateral<1>, Quadrilateral<2>, Triangle<3>) {
    // F. Bowman, Proc. London Math. Soc. 39 (1935) 211
    Tiles drawing;
    drawing.add("solid", {0, 0}, {2, 2});
    drawing.cut({0.5, 0.5}, {1.5, 1.5}, "inside");
    drawing.face("outside", {0, 0}, {2, 0})
        .face("outside", {2, 0}, {2, 2})
        .face("outside", {0, 2}, {2, 2})
        .face("outside", {0, 0}, {0, 2});
    Body body{tiles<E>(drawing, {.size = 0.25})};
    body.in("solid", Material{.conductivity = 1.0});
    body.on("inside", FixedTemperature{1.0}).on("outside", FixedTemperature{0.0});
    const Estimate e = estimate(body, heat_in_through("inside"), {.relative_error = 2e-3});
    covers(e, 10.2340925693680517, 0.0);
    CHECK(std::abs(e.order - 4.0 / 3.0) <= 0.15); // of the corner, whatever the element
}

TEST_CASE("disc with a source on curved triangles: the hottest place, on the true circle") {
    Section section;
    section.face("rim", section.add("disc", circle({0, 0}, 0.1)));
    Body disc{triangulate<Triangle<2>>(section, {.size = 0.06})};
    disc.in("disc", Material{.conductivity = 2.0});
    disc.in("disc", Generation{.per_volume = 8e4});
    disc.on("rim", FixedTemperature{20.0});
    // f R^2/(4 k) above the rim: H. S. Carslaw and J. C. Jaeger, section 7.2
    covers(estimate(disc, hottest_in("disc"), {.relative_error = 1e-4}), 20.0 + 8e4 * 0.01 / 8.0, 0.0);
    covers(estimate(disc, heat_out_through("rim"), {.relative_error = 1e-4}), 8e4 * pi * 0.01, 0.0);
}

TEST_CASE("an estimate stops at its budget and refuses options without sense") {
    Body slab{layers<Segment<1>>({{.region = "wall", .thickness = 0.1, .cells = 3}})};
    slab.in("wall", Material{.conductivity = law([](const auto& s) { return 1.5 + 0.004 * s.temperature; })});
    slab.on("inner", FixedTemperature{300.0}).on("outer", FixedTemperature{50.0});
    const Estimate e = estimate(slab, mean_in("wall"), {.relative_error = 1e-14, .max_unknowns = 30});
    CHECK_FALSE(e.reached);
    CHECK(e.passes.back().unknowns <= 30);
    CHECK(e.passes.size() == 4);
    CHECK_THROWS_AS(static_cast<void>(estimate(slab, mean_in("wall"), {.max_unknowns = 0})), Error);
    CHECK_THROWS_AS(static_cast<void>(estimate(slab, mean_in("nowhere"))), Error);
}
