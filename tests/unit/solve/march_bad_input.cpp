// Bad input of marches: each is refused with its code, the offender's name, and words that say the rule or the remedy.
#include "../../support/refused.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/periodic.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

const double infinite = std::numeric_limits<double>::infinity();
const Parameter thickness{"thickness", 0.03};

Body bar(const Material& material = {.conductivity = 45.0, .density = 7850.0, .specific_heat = 470.0}) {
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = thickness, .cells = 5}})};
    body.in("bar", material);
    body.on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    return body;
}

void march_of(const Body& body, const Theta& theta = {.step = 1.0}) {
    March march(body, initial(20.0), theta);
}

} // namespace

TEST_CASE("options of Theta out of range are refused by name") {
    const Body body = bar();
    const auto with = [&](const Theta& theta) { return [&body, theta] { march_of(body, theta); }; };
    test::check_refused(with({.theta = 0.4, .step = 1.0}), ErrorCode::bad_value, "theta", "theta = 0.4");
    test::check_refused(with({.theta = 1.4, .step = 1.0}), ErrorCode::bad_value, "theta", "0.5 <= theta <= 1");
    test::check_refused(with({.theta = std::nan(""), .step = 1.0}), ErrorCode::bad_value, "theta", "theta = nan");
    test::check_refused(with({.step = -2.0}), ErrorCode::bad_value, "step", "step = -2");
    test::check_refused(with({.theta = 0.5}), ErrorCode::bad_value, "step", "expected a finite step > 0");
    test::check_refused(with({.step = std::nan("")}), ErrorCode::bad_value, "step", "step = nan");
    test::check_refused(with({.step = infinite}), ErrorCode::bad_value, "step", "finite");
    test::check_refused(with({.step = 1.0, .newton_passes = -1}), ErrorCode::bad_value, "newton_passes", "-1");
    test::check_refused(with({.step = 1.0, .tolerance = 0.0}), ErrorCode::bad_value, "tolerance", "0 < tolerance < 1");
}

TEST_CASE("options of Adaptive out of range are refused by name") {
    const Body body = bar();
    const auto with = [&](const Adaptive& adaptive) {
        return [&body, adaptive] { March march(body, initial(20.0), adaptive); };
    };
    test::check_refused(with({.tolerance = 0.0}), ErrorCode::bad_value, "tolerance", "Adaptive: tolerance = 0");
    test::check_refused(with({.tolerance = std::nan("")}), ErrorCode::bad_value, "tolerance", "kelvin");
    test::check_refused(with({.first_step = -1.0}), ErrorCode::bad_value, "first_step", "0 to have it chosen");
    test::check_refused(with({.largest_step = 0.0}), ErrorCode::bad_value, "largest_step", "seconds > 0");
    test::check_refused(with({.largest_step = 1.0, .smallest_step = 2.0}), ErrorCode::bad_value, "smallest_step",
                        "less than largest_step");
    test::check_refused(with({.newton_tolerance = 2.0}), ErrorCode::bad_value, "newton_tolerance",
                        "newton_tolerance < 1");
}

TEST_CASE("start temperatures that cannot be are refused with their place") {
    const Body body = bar();
    const auto from = [&](const Initial& start) {
        return [&body, start] { March m(body, start, Theta{.step = 1.0}); };
    };
    test::check_refused(from(initial(std::nan(""))), ErrorCode::bad_value, "initial", "temperature = nan");
    test::check_refused(from(initial(-300.0)), ErrorCode::bad_value, "initial", "absolute zero");
    test::check_refused(from(initial(of_place([](Point p) { return p.x > 0.02 ? std::nan("") : 20.0; }))),
                        ErrorCode::bad_value, "initial", "at (0.024");
    test::check_refused(from(initial(law([](const auto& s) { return s.temperature; }))), ErrorCode::not_supported,
                        "initial", "of_place");
}

TEST_CASE("a material that cannot store heat, or stores it in no order, is refused by its region") {
    test::check_refused([] { march_of(bar({.conductivity = 1.0, .density = 1000.0})); }, ErrorCode::missing, "bar",
                        "specific heat");
    test::check_refused([] { march_of(bar({.conductivity = 1.0, .specific_heat = 1000.0})); }, ErrorCode::missing,
                        "bar", "density");
    test::check_refused([] { march_of(bar({.conductivity = 1.0, .density = -1.0, .specific_heat = 1000.0})); },
                        ErrorCode::bad_value, "bar", "> 0");
    test::check_refused(
        [] {
            march_of(bar({.conductivity = 1.0,
                          .density = 1000.0,
                          .specific_heat = 1000.0,
                          .latent = {.heat = 1e5, .solidus = 60.0, .liquidus = 50.0}}));
        },
        ErrorCode::bad_value, "bar", "solidus");
    test::check_refused(
        [] {
            Tiles drawing;
            drawing.add("plate", {0.0, 0.0}, {0.1, 0.1});
            Body body{tiles<Triangle<2>>(drawing, {.size = 0.05})};
            body.in("plate", Material{.conductivity = 1.0, .density = 1000.0, .specific_heat = 1000.0});
            march_of(body, {.step = 1.0, .capacity = Capacity::lumped});
        },
        ErrorCode::not_supported, "capacity", "Capacity::consistent");
}

TEST_CASE("handles and longer runs refuse what they cannot do") {
    const Body body = bar();
    March march(body, initial(20.0), Theta{.step = 1.0});
    test::check_refused([&] { (void)march.watch(mean_in("cork")); }, ErrorCode::bad_name, "cork", "the regions are");
    test::check_refused([&] { (void)march.integral(heat_out_through("top")); }, ErrorCode::bad_name, "top",
                        "the faces are");
    test::check_refused([&] { (void)march.peak(at(7.0)); }, ErrorCode::outside, "x = 7", "metres");
    test::check_refused([&] { (void)march.drive(Parameter("load", 1.0)); }, ErrorCode::unused, "load", "drive");
    test::check_refused([&] { (void)march.drive(thickness); }, ErrorCode::not_supported, "thickness",
                        "set it on the body and march again");
    test::check_refused([&] { (void)march.molten_in("bar"); }, ErrorCode::missing, "bar", "no latent heat");
    test::check_refused([&] { (void)march.molten_in("wax"); }, ErrorCode::bad_name, "wax", "the regions are");
    test::check_refused([&] { march.advance_to(-1.0); }, ErrorCode::bad_value, "advance_to", "t = -1");
    test::check_refused([&] { march.advance_to(infinite); }, ErrorCode::bad_value, "advance_to", "finite time");
    test::check_refused([&] { march.observe(0.0, [](const March&) {}); }, ErrorCode::bad_value, "interval",
                        "interval = 0");
    test::check_refused([&] { march.record(-1.0); }, ErrorCode::bad_value, "megabytes", "megabytes = -1");
    CHECK(march.steps() == 0);
    Body moved = bar();
    moved.also_on("outer", Flux{.into = of_time([](double t) { return 100.0 * t; })});
    March timed(moved, initial(20.0), Theta{.step = 1.0});
    test::check_refused([&] { (void)timed.time_to_reach(mean_in("bar"), 900.0); }, ErrorCode::bad_value, "latest",
                        "when to give up");
    test::check_refused([&] { (void)periodic_steady(body, -5.0, Theta{.step = 1.0}); }, ErrorCode::bad_value, "period",
                        "whole number of steps");
}

TEST_CASE("schedules out of order or without a value are refused") {
    test::check_refused([] { (void)schedule({{5.0, 1.0}, {5.0, 2.0}}); }, ErrorCode::bad_value, "schedule", "follows");
    test::check_refused([] { (void)schedule({{0.0, std::nan("")}}); }, ErrorCode::bad_value, "schedule", "nan");
}

TEST_CASE("a law that fails is told by name, cell and time") {
    Body body = bar();
    body.in("bar", Generation{.per_volume = of_place([](const Place& p) {
                                                return p.time > 2.5 && p.x > 0.02 ? std::nan("") : 1e5;
                                            }).named("heater law")});
    March march(body, initial(20.0), Theta{.theta = 1.0, .step = 1.0});
    march.advance_to(2.0);
    for (const char* words : {"nan", "in cell 4", "time 3 s"})
        test::check_refused([&] { march.advance_to(10.0); }, ErrorCode::bad_law, "heater law", words);
    CHECK(march.time() == 2.0);
    const Step failed = march.advance();
    CHECK(failed.verdict() == Verdict::bad_law);
    test::check_refused([&] { failed.require(); }, ErrorCode::bad_law, "heater law", "in cell 4");
}
