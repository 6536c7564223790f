// Sizing: closed forms, limits, several answers, reasons for none, shapes, several parameters.

#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/size_for.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;

namespace {

const Parameter thickness{"backing thickness", 0.115};
const Parameter k_backing{"backing conductivity", 0.28};
const Parameter gas{"gas temperature", 1250.0};
const Quantity loss = heat_out_through("outer");
const Quantity shell = mean_on("outer");

/// A furnace wall: two linings and a casing, film and radiation outside.
Body furnace() {
    Body wall{layers<Segment<2>>({{.region = "working lining", .thickness = 0.230, .cells = 8},
                                  {.region = "backing", .thickness = thickness, .cells = 6},
                                  {.region = "casing", .thickness = 0.006, .cells = 1}})};
    wall.in("working lining", Material{.conductivity = table({{0, 1.05}, {800, 1.35}, {1300, 1.53}}, Outside::hold)});
    wall.in("backing", Material{.conductivity = k_backing});
    wall.in("casing", Material{.conductivity = 48.0});
    wall.on("inner", Film{.coefficient = 90.0, .fluid = gas});
    wall.on("outer", Film{.coefficient = 8.0, .fluid = 25.0});
    wall.on("outer", Radiation{.emissivity = 0.85, .surroundings = 25.0});
    return wall;
}

/// Two films and a layer: q = dT / (1/h1 + d/k + 1/h2), so that d = k (dT / q - 1/h1 - 1/h2).
const Parameter layer{"layer", 0.1};
const Parameter k_layer{"k", 0.5};
Body slab() {
    Body body{layers<Segment<1>>({{.region = "layer", .thickness = layer, .cells = 2}})};
    body.in("layer", Material{.conductivity = k_layer});
    body.on("inner", Film{.coefficient = 20.0, .fluid = 100.0});
    body.on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    return body;
}

} // namespace

TEST_CASE("a layer is sized to its closed form and the body stays as it was") {
    Body body = slab();
    for (const double q : {50.0, 150.0, 300.0, 450.0}) {
        const Sized sized = size_for(body, layer, loss, q);
        CAPTURE(q);
        CAPTURE(sized.message);
        REQUIRE(bool(sized));
        CHECK(std::abs(sized.value - 0.5 * (80.0 / q - 0.05 - 0.1)) <= 1e-6);
        CHECK(std::abs(sized.reached - q) <= 1e-8 * 600.0);
        CHECK(std::abs(sized.field[loss] - sized.reached) <= 1e-12 * q);
        CHECK(sized.answers.size() == 1);
        CHECK(sized.solves <= 8);
        CHECK(body.value(layer) == 0.1);
    }
    const Sized by_k = size_for(body, k_layer, loss, 200.0);
    CHECK(std::abs(by_k.value - 0.1 / (80.0 / 200.0 - 0.15)) <= 1e-7);
    CHECK(by_k.solves <= 8);
}

TEST_CASE("a furnace wall with tables and radiation takes at most eight solves") {
    const Body wall = furnace();
    for (const double q : {600.0, 900.0, 1500.0, 2500.0}) {
        const Sized sized = size_for(wall, thickness, loss, q);
        CAPTURE(sized.message);
        REQUIRE(bool(sized));
        CHECK(sized.solves <= 8);
        Body other = wall;
        other.set(thickness, sized.value);
        CHECK(std::abs(steady(other)[loss] - q) <= 1e-3);
    }
    for (const double T : {60.0, 90.0, 140.0}) {
        const Sized sized = size_for(wall, k_backing, shell, at_most(T));
        CAPTURE(sized.message);
        REQUIRE(bool(sized));
        CHECK(sized.solves <= 8);
        CHECK(sized.reached <= T);
        CHECK(sized.reached >= T - 1e-4);
    }
    const Sized least = size_for(wall, gas, loss, at_least(1000.0), {.from = 600.0, .to = 1500.0});
    CHECK(bool(least));
    CHECK(least.reached >= 1000.0);
    CHECK(least.reached <= 1000.0 + 1e-4);
}

TEST_CASE("the insulated pipe below its critical radius has two answers and both are listed") {
    // heat per length 2 pi dT / (ln((r + d)/r)/k + 1/(h (r + d))), greatest at r + d = k/h. Source: Incropera & DeWitt,
    // Fundamentals of Heat and Mass Transfer, section 3.3 (critical radius); from memory.
    const Parameter d{"insulation", 0.01};
    Body pipe{
        layers<Segment<3>>({{.region = "insulation", .thickness = d, .cells = 8}}, Cylindrical{}, {.start = 0.005})};
    pipe.in("insulation", Material{.conductivity = 0.2});
    pipe.on("inner", FixedTemperature{90.0});
    pipe.on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    const auto heat = [](double thick) {
        return 2.0 * pi * 70.0 / (std::log(1.0 + thick / 0.005) / 0.2 + 1.0 / (10.0 * (0.005 + thick)));
    };
    const double q = heat(0.004); // critical at 0.015
    const Sized sized = size_for(pipe, d, loss, q);
    CAPTURE(sized.message);
    CHECK_FALSE(bool(sized));
    CHECK(sized.reason == SizeReason::several);
    REQUIRE(sized.answers.size() == 2);
    CHECK(std::abs(sized.answers[0] - 0.004) <= 1e-6);
    CHECK(std::abs(heat(sized.answers[1]) - q) <= 1e-4 * q);
    CHECK(sized.answers[1] > 0.015);
    CHECK(sized.message.find("more than one") != std::string::npos);
    // a target just below the greatest heat is found from both sides of the turn, one above is out of reach
    const double top = heat(0.015);
    const Sized near_top = size_for(pipe, d, loss, 0.9999 * top);
    CHECK(near_top.answers.size() == 2);
    const Sized beyond = size_for(pipe, d, loss, 1.001 * top);
    CHECK(beyond.reason == SizeReason::unreachable);
    CHECK(std::abs(beyond.value - 0.015) <= 1e-3);
    CHECK(std::abs(beyond.reached - top) <= 1e-4 * top);
    // between the bounds of one branch there is one answer
    const Sized thin = size_for(pipe, d, loss, q, {.from = 1e-4, .to = 0.015});
    CHECK(bool(thin));
    CHECK(std::abs(thin.value - 0.004) <= 1e-6);
}

TEST_CASE("a target out of reach comes with the best value, a limit kept everywhere with the present one") {
    const Body body = slab();
    const Sized cold = size_for(body, layer, loss, 600.0); // even without the layer 80 / 0.15 = 533
    CHECK_FALSE(bool(cold));
    CHECK(cold.reason == SizeReason::unreachable);
    CHECK(std::abs(cold.value - 0.001) <= 1e-12);
    CHECK(std::abs(cold.reached - 80.0 / 0.152) <= 1e-6);
    CHECK(cold.message.find("does not reach 600") != std::string::npos);
    const Sized easy = size_for(body, layer, loss, at_most(600.0));
    CHECK(bool(easy));
    CHECK(easy.reason == SizeReason::always_met);
    CHECK(easy.value == 0.1);
    const Sized hard = size_for(body, layer, loss, at_least(600.0));
    CHECK(hard.reason == SizeReason::unreachable);
}

TEST_CASE("a source that runs away is the reason given, with the value where it does") {
    // heat generated per volume g (1 + b T) in a slab held at 0 on both faces has a steady state for L < pi sqrt(k / (g b)) only;
    // L = 0.1, k = 1, b = 0.01: g < 98696
    const Parameter g{"source", 2e4};
    Body slab_with_source{layers<Segment<2>>({{.region = "core", .thickness = 0.1, .cells = 10}})};
    slab_with_source.in("core", Material{.conductivity = 1.0});
    slab_with_source.in("core", Generation{.per_volume = law({g}, [](const auto& s, auto q) {
                                               return q * exp(0.01 * s.temperature);
                                           })});
    slab_with_source.on("inner", FixedTemperature{0.0});
    slab_with_source.on("outer", FixedTemperature{0.0});
    // with exp the critical value is 0.878 * 4 k / (b L^2) = 35138. Source: Frank-Kamenetskii, Diffusion and Heat Exchange in Chemical Kinetics
    const Sized sized = size_for(slab_with_source, g, hottest_in("core"), 1000.0, {.from = 1e3, .to = 1e5});
    CAPTURE(sized.message);
    CHECK(sized.reason == SizeReason::runaway);
    CHECK(sized.failed_at > 35000.0);
    CHECK(sized.value < 35200.0);
    CHECK(sized.message.find("no steady state") != std::string::npos);
    const Sized mild = size_for(slab_with_source, g, hottest_in("core"), 60.0, {.from = 1e3, .to = 1e5});
    CAPTURE(mild.message);
    CHECK(bool(mild));
    CHECK(std::abs(mild.reached - 60.0) <= 1e-4);
}

TEST_CASE("a shape is sized through a function that draws it") {
    const auto wall = [](double width) {
        Tiles drawing;
        drawing.add("wall", {0.0, 0.0}, {width, 0.5});
        Body body{tiles<Triangle<1>>(drawing, {.size = 0.1})};
        body.in("wall", Material{.conductivity = 0.5});
        body.on("left", Film{.coefficient = 20.0, .fluid = 100.0});
        body.on("right", Film{.coefficient = 10.0, .fluid = 20.0});
        return body;
    };
    const Sized sized = size_for(wall, heat_out_through("right"), at_most(50.0), SizeOptions{.from = 0.02, .to = 1.0});
    CAPTURE(sized.message);
    REQUIRE(bool(sized));
    CHECK(std::abs(sized.value - 0.5 * (80.0 * 0.5 / 50.0 - 0.15)) <= 1e-6);
    CHECK(sized.reached <= 50.0);
    CHECK(sized.solves <= 8);
}

TEST_CASE("two parameters meet two targets, or the reason is given") {
    const Body wall = furnace();
    const SizedTogether both = size_for(wall, {{thickness}, {gas, 800.0, 1400.0}}, {{loss, 1000.0}, {at(0.23), 900.0}});
    CAPTURE(both.message);
    REQUIRE(bool(both));
    CHECK(std::abs(both.reached[0] - 1000.0) <= 1e-4);
    CHECK(std::abs(both.reached[1] - 900.0) <= 1e-4);
    Body other = wall;
    other.set(thickness, both.values[0]);
    other.set(gas, both.values[1]);
    CHECK(std::abs(steady(other)[loss] - 1000.0) <= 1e-3);
    CHECK(both.solves <= 12);
    // thickness and conductivity of a layer act through their ratio alone
    const SizedTogether alike = size_for(slab(), {{layer}, {k_layer}}, {{loss, 200.0}, {mean_on("outer"), 45.0}});
    CAPTURE(alike.message);
    CHECK_FALSE(bool(alike));
    CHECK(alike.message.find("do not move the targets apart") != std::string::npos);
    const SizedTogether far =
        size_for(wall, {{thickness, 0.1, 0.12}, {gas, 1200.0, 1300.0}}, {{loss, 1e5}, {at(0.23), 900.0}});
    CHECK(far.reason == SizeReason::unreachable);
}

TEST_CASE("the certified side of a limit is kept by the bad end of the bracket") {
    // two materials side by side: flow along and across, so that the mesh has an error worth certifying
    Tiles drawing;
    drawing.add("wall", {0.0, 0.0}, {0.3, 0.3});
    drawing.add("stud", {0.1, 0.1}, {0.2, 0.2});
    const Parameter k{"k", 0.5};
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.05})};
    body.in("wall", Material{.conductivity = k});
    body.in("stud", Material{.conductivity = 20.0});
    body.on("left", Film{.coefficient = 20.0, .fluid = 100.0});
    body.on("right", Film{.coefficient = 10.0, .fluid = 20.0});
    const Quantity out = heat_out_through("right");
    // a coarse mesh tells too much heat: what just reaches 40 W there does not reach it in truth
    const Sized plain = size_for(body, k, out, at_least(40.0));
    const Sized sure = size_for(body, k, out, at_least(40.0), {.certified_side = true, .certified_width = 5e-3});
    CAPTURE(sure.message);
    REQUIRE(bool(plain));
    REQUIRE(bool(sure));
    CHECK(sure.lower >= 40.0);
    CHECK(sure.lower <= 40.0 * (1.0 + 1e-2));
    CHECK(sure.lower <= sure.upper);
    CHECK(sure.value > 1.01 * plain.value);
    CHECK(sure.solves <= 8);
    // on the other side the coarse mesh errs towards safety
    const Sized less = size_for(body, k, out, at_most(40.0), {.certified_side = true, .certified_width = 5e-3});
    CHECK(less.upper <= 40.0);
    test::check_refused([&] { (void)size_for(body, k, out, 40.0, {.certified_side = true}); },
                        ErrorCode::not_certifiable, out.label(), "needs a limit");
    test::check_refused([&] { (void)size_for(body, k, hottest_in("stud"), at_most(60.0), {.certified_side = true}); },
                        ErrorCode::not_certifiable, hottest_in("stud").label(), "no certified bound");
}

TEST_CASE("sizing refuses what it cannot search and says what is needed") {
    const Body wall = furnace();
    const Parameter stranger{"stranger", 1.0};
    test::check_refused([&] { (void)size_for(wall, stranger, loss, 900.0); }, ErrorCode::unused, "stranger",
                        "its parameters are");
    test::check_refused([&] { (void)size_for(wall, gas, loss, 900.0); }, ErrorCode::missing, "gas temperature",
                        "is a temperature; say between which values");
    test::check_refused([&] { (void)size_for(wall, thickness, loss, 900.0, {.from = 0.4, .to = 0.1}); },
                        ErrorCode::bad_value, "backing thickness", "from < to");
    test::check_refused([&] { (void)size_for(wall, thickness, loss, 900.0, {.from = -1.0, .to = 0.1}); },
                        ErrorCode::bad_value, "backing thickness", "expected a number > 0");
    test::check_refused([&] { (void)size_for(wall, thickness, loss, 900.0, {.tolerance = 0.5}); }, ErrorCode::bad_value,
                        "tolerance", "0 < tolerance < 0.1");
    test::check_refused([&] { (void)size_for(wall, thickness, heat_out_through("roof"), 900.0); }, ErrorCode::bad_name,
                        "roof", "no face");
    test::check_refused(
        [&] {
            (void)size_for(wall, {{thickness}}, {{loss, 900.0}, {shell, 60.0}});
        },
        ErrorCode::contradiction, "targets", "1 parameters for 2 targets");
    const auto make = [&](double) { return wall; };
    test::check_refused([&] { (void)size_for(make, loss, 900.0, SizeOptions{}); }, ErrorCode::missing, "bounds",
                        "need both bounds");
}
