// Checkpoints, periodic states, times to reach, peaks.
#include "../../support/refused.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/periodic.hpp>
#include <vector>

using namespace tepor;

namespace {

const Parameter power{"power", 500.0};

/// Two materials with a contact and a schedule; with `curved` also radiation and c(T).
Body plate(bool curved) {
    Tiles drawing;
    drawing.add("core", {0.0, 0.0}, {0.03, 0.04});
    drawing.add("shell", {0.03, 0.0}, {0.05, 0.04});
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.008}, Planar{.depth = 0.5})};
    body.in("core",
            Material{.conductivity = 45.0,
                     .density = 7850.0,
                     .specific_heat = curved ? Value(table({{0, 450}, {300, 600}}, Outside::hold)) : Value(470)});
    body.in("shell", Material{.conductivity = 2.0, .density = 2500.0, .specific_heat = 900.0});
    body.in("core", Generation{.total = power});
    body.between("core", "shell", Contact{.conductance = 500.0});
    body.on("right", Film{.coefficient = 12.0, .fluid = 20.0});
    body.on("left", FixedTemperature{.temperature = schedule({{0.0, 20.0}, {31.0, 40.0}})});
    if (curved) body.on("top", Radiation{.emissivity = 0.9, .surroundings = 20.0});
    return body;
}

Body lump() {
    Body body{layers<Segment<1>>({{.region = "lump", .thickness = 0.01, .cells = 2}})};
    body.in("lump", Material{.conductivity = 1e5, .density = 1000.0, .specific_heat = 1000.0});
    body.on("outer", Film{.coefficient = 100.0, .fluid = 0.0}); // time constant 100 s
    return body;
}

template <class Scheme>
void check_split(bool curved, const Scheme& scheme) {
    const Body body = plate(curved);
    const auto drive = [](March& march, Input heater, int from, int to) {
        for (int i = from; i < to; ++i) {
            march.set(heater, 400.0 + 37.0 * (i % 5));
            march.advance().require();
        }
    };
    March whole{body, initial(20.0), scheme};
    const Input heater = whole.drive(power);
    const Integral sum = whole.integral(heat_out_through("right"));
    drive(whole, heater, 0, 25);
    whole.set(heater, 123.0); // set, but not yet taken: goes into the checkpoint too
    const Checkpoint saved = whole.checkpoint();
    March again{body, Checkpoint(saved.bytes()), scheme};
    const Input heater_again = again.drive(power);
    const Integral sum_again = again.integral(heat_out_through("right"));
    CHECK(again.time() == whole.time());
    drive(whole, heater, 25, 40);
    drive(again, heater_again, 25, 40);
    CHECK(again.time() == whole.time());
    const std::vector<double> a = whole.field().temperature();
    const std::vector<double> b = again.field().temperature();
    for (std::size_t i = 0; i < a.size(); ++i) CHECK(a[i] == b[i]);
    CHECK(whole[sum] == again[sum_again]);
    CHECK(whole.total().left_over == again.total().left_over);
    CHECK(whole.total().gross > 0.0);
}

} // namespace

TEST_CASE("a march read from a checkpoint goes on bit for bit like the one that wrote it") {
    check_split(false, Theta{.theta = 0.5, .step = 2.0});
    check_split(true, Theta{.theta = 0.5, .step = 2.0});
    check_split(false, Adaptive{.tolerance = 1e-2});
    check_split(true, Adaptive{.tolerance = 1e-2});
}

TEST_CASE("damage of a checkpoint is told") {
    March march{plate(false), initial(20.0), Theta{.theta = 0.5, .step = 2.0}};
    march.advance_to(50.0);
    const Checkpoint saved = march.checkpoint();
    std::vector<unsigned char> bytes = saved.bytes();
    bytes[bytes.size() / 2] ^= 1U;
    test::check_refused([&] { Checkpoint damaged(bytes); }, ErrorCode::bad_file, "checkpoint", "checksum");
    bytes = saved.bytes();
    bytes.resize(bytes.size() - 16);
    test::check_refused([&] { Checkpoint cut(bytes); }, ErrorCode::bad_file, "checkpoint", "checksum");
    bytes = saved.bytes();
    bytes[12] = '7';
    test::check_refused([&] { Checkpoint other(bytes); }, ErrorCode::bad_file, "checkpoint", "version");
    test::check_refused(
        [&] {
            Checkpoint none(std::vector<unsigned char>{1, 2, 3});
        },
        ErrorCode::bad_file, "checkpoint", "no checkpoint");
    test::check_refused([&] { March m(lump(), saved, Theta{.step = 1.0}); }, ErrorCode::bad_file, "checkpoint",
                        "another body");
}

TEST_CASE("the time to reach a temperature is that of the exponential") {
    const double exact = 100.0 * std::log(100.0 / 30.0);
    March march{lump(), initial(100.0), Theta{.theta = 0.5, .step = 0.5, .damped_start = false}};
    CHECK(std::abs(march.time_to_reach(mean_in("lump"), 30.0) - exact) <= 2e-3);
    CHECK(march.time() >= exact);
    March adaptive{lump(), initial(100.0), Adaptive{.tolerance = 1e-4}};
    CHECK(std::abs(adaptive.time_to_reach(mean_in("lump"), 30.0) - exact) <= 0.02);
    test::check_refused([&] { (void)march.time_to_reach(mean_in("lump"), -5.0); }, ErrorCode::no_answer,
                        "mean in \"lump\"", "nothing changes any more");
    March other{lump(), initial(100.0), Theta{.theta = 1.0, .step = 1.0}};
    test::check_refused([&] { (void)other.time_to_reach(mean_in("lump"), 1.0, 50.0); }, ErrorCode::no_answer,
                        "mean in \"lump\"", "has not reached 1");
}

TEST_CASE("a peak keeps the highest value and its time") {
    Body body = lump();
    body.in("lump", Generation{.total = schedule({{0.0, 5000.0}, {60.0, 0.0}})});
    March march{body, initial(0.0), Theta{.theta = 0.5, .step = 1.0}};
    const Peak peak = march.peak(mean_in("lump"));
    march.advance_to(300.0);
    CHECK(march[peak].time == 60.0);
    CHECK(std::abs(march[peak].value - 50.0 * (1.0 - std::exp(-0.6))) <= 2e-3);
}

TEST_CASE("the periodic state is that of a long march of the same steps, found in fewer periods") {
    // slow: a heavy block behind a weak film and a contact, under a pulsed heater
    for (const auto capacity : {Capacity::lumped, Capacity::consistent}) {
        Tiles drawing;
        drawing.add("core", {0.0, 0.0}, {0.03, 0.04});
        drawing.add("shell", {0.03, 0.0}, {0.05, 0.04});
        Body body{tiles<Triangle<1>>(drawing, {.size = 0.01}, Planar{.depth = 0.5})};
        body.in("core", Material{.conductivity = 45.0, .density = 7850.0, .specific_heat = 470.0});
        body.in("shell", Material{.conductivity = 2.0, .density = 2500.0, .specific_heat = 900.0});
        body.between("core", "shell", Contact{.conductance = 500.0});
        body.in("core", Generation{.total = schedule({{0.0, 900.0}, {500.0, 0.0}})});
        body.on("right", Film{.coefficient = 80.0,
                              .fluid = of_time([](double t) { return 20.0 + 5.0 * std::sin(2.0 * pi * t / 2000.0); })});
        const Theta theta{.theta = 0.5, .step = 50.0, .capacity = capacity, .damped_start = false};
        Periodic cycle = periodic_steady(body, 2000.0, theta);
        CHECK(cycle.marches < 40);
        CHECK(cycle.mismatch <= 1e-10);
        const Swing swing = cycle.swing(mean_in("core"));
        CHECK(swing.amplitude() > 5.0);
        // the long march: the schedule written out for 60 periods
        std::vector<ScheduleEntry> entries;
        for (int i = 0; i < 60; ++i) {
            entries.push_back({2000.0 * i, 900.0});
            entries.push_back({2000.0 * i + 500.0, 0.0});
        }
        body.replace("core", Generation{.total = schedule(entries)});
        March march{body, initial(200.0), theta};
        march.advance_to(2000.0 * 59.0);
        cycle.march.advance_to(650.0);
        march.advance_to(2000.0 * 59.0 + 650.0);
        for (const Quantity& q : {mean_in("core"), mean_in("shell"), at({0.05, 0.04})})
            CHECK(std::abs(march[q] - cycle.march[q]) <= 1e-8 * swing.amplitude());
    }
    test::check_refused([] { (void)periodic_steady(lump(), 100.0, Theta{.step = 30.0}); }, ErrorCode::bad_value,
                        "period", "whole number of steps");
    test::check_refused([] { (void)periodic_steady(plate(true), 100.0, Theta{.step = 10.0}); },
                        ErrorCode::not_supported, "periodic_steady", "depends on temperature");
}
