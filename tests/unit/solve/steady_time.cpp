// A steady state of data over time: refused without an instant, taken at the one that is said.

#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

Body wall(const Value& gas) {
    Body body{layers<Segment<1>>({{.region = "wall", .thickness = 0.5, .cells = 4}})};
    body.in("wall", Material{.conductivity = 2.0});
    body.on("inner", FixedTemperature{gas}).on("outer", FixedTemperature{0.0});
    return body;
}

} // namespace

TEST_CASE("a steady state of scheduled data needs an instant, and takes the data of it") {
    const Body body = wall(schedule({{0.0, 100.0}, {600.0, 300.0}}));
    try {
        (void)steady(body);
        FAIL("not refused");
    } catch (const Error& error) {
        CHECK(error.code() == ErrorCode::missing);
        CHECK(std::string(error.what()).find("SteadyOptions{.time") != std::string::npos);
    }
    CHECK(std::abs(steady(body, {.time = 0.0})[heat_out_through("outer")] - 400.0) <= 1e-9);
    const Field late = steady(body, {.time = 700.0});
    CHECK(std::abs(late[heat_out_through("outer")] - 1200.0) <= 1e-9);
    CHECK(late.time() == 700.0);
    CHECK(late.balance().balanced());
}

TEST_CASE("laws of place that do not mind the time need none") {
    const Body body = wall(of_place([](const auto& p) { return 100.0 + p.x; }));
    CHECK(std::abs(steady(body)[heat_out_through("outer")] - 400.0) <= 1e-9);
}

TEST_CASE("what acts on a face or in a region is taken at the instant too") {
    Body body{layers<Segment<1>>({{.region = "wall", .thickness = 0.5, .cells = 4}})};
    body.in("wall", Material{.conductivity = 2.0});
    body.in("wall", Generation{.total = schedule({{0.0, 0.0}, {600.0, 40.0}})});
    body.on("inner", Flux{.into = schedule({{0.0, 0.0}, {600.0, 60.0}})});
    body.on("outer", FixedTemperature{0.0});
    CHECK(std::abs(steady(body, {.time = 0.0})[heat_out_through("outer")]) <= 1e-9);
    CHECK(std::abs(steady(body, {.time = 700.0})[heat_out_through("outer")] - 100.0) <= 1e-9);
}
