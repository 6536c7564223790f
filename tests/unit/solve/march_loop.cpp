// The control loop of a march: probes, inputs, verdicts, what a step costs.
#include "../../support/counted_new.hpp"
#include "../../support/refused.hpp"
#include "../../support/scale.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

const Material steel{.conductivity = 45.0, .density = 7850.0, .specific_heat = 470.0};
const Material ceramic{.conductivity = 2.0, .density = 2500.0, .specific_heat = 900.0};
const Parameter power{"power", 500.0};
const Parameter air{"air", 20.0};
const Parameter plate{"plate temperature", 20.0};
const Parameter film{"film", 12.0};

/// Two layers with a contact, heated inside, cooled outside.
Body wall() {
    Body body{layers<Segment<1>>(
        {{.region = "core", .thickness = 0.03, .cells = 25}, {.region = "shell", .thickness = 0.02, .cells = 24}})};
    body.in("core", steel);
    body.in("shell", ceramic);
    body.in("core", Generation{.total = power});
    body.between("core", "shell", Contact{.conductance = 500.0});
    body.on("outer", Film{.coefficient = film, .fluid = air});
    return body;
}

/// The same in 2D, with a side held and a schedule.
Body block() {
    Tiles drawing;
    drawing.add("core", {0.0, 0.0}, {0.03, 0.04});
    drawing.add("shell", {0.03, 0.0}, {0.05, 0.04});
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.005}, Planar{.depth = 0.5})};
    body.in("core", steel);
    body.in("shell", ceramic);
    body.in("core", Generation{.total = power});
    body.between("core", "shell", Contact{.conductance = 500.0});
    body.on("right", Film{.coefficient = 12.0, .fluid = air});
    body.on("left", FixedTemperature{.temperature = plate});
    body.on("top", Flux{.into = schedule({{0.0, 0.0}, {30.0, 2000.0}, {50.0, 0.0}})});
    return body;
}

} // namespace

TEST_CASE("a step of a linear body allocates nothing and factors nothing while loads are set") {
    for (int dim = 1; dim <= 2; ++dim) {
        const Body body = dim == 1 ? wall() : block();
        March march{body, initial(20.0), Theta{.theta = 0.5, .step = 2.0}};
        const Probe inside = march.watch(mean_in("core"));
        const Probe loss = march.watch(heat_out_through(dim == 1 ? "outer" : "right"));
        const Integral lost = march.integral(heat_out_through(dim == 1 ? "outer" : "right"));
        const Input heater = march.drive(power);
        const Input outside = march.drive(air);
        const long turns = test::scaled(dim == 1 ? 1000000 : 4000, 2000);
        const long before = test::allocations;
        const Index factors = march.factorisations();
        double sum = 0.0;
        bool fine = true;
        for (long i = 0; i < turns; ++i) {
            march.set(heater, march[inside] < 60.0 ? 500.0 : 0.0);
            march.set(outside, 20.0 + static_cast<double>(i % 7));
            const Step step = march.advance();
            fine = fine && step.ok();
            sum += march[loss];
        }
        CHECK(test::allocations == before);
        CHECK(march.factorisations() == factors);
        CHECK(fine);
        CHECK(std::isfinite(sum));
        CHECK(march.steps() == turns);
        CHECK(std::abs(march.time() - 2.0 * static_cast<double>(turns)) <= 1e-6);
        CHECK(march[lost] > 0.0);
        CHECK(march.balance().balanced());
        CHECK(march.total().balanced());
    }
}

TEST_CASE("inputs reach the same steady state as the body set to them") {
    for (int dim = 1; dim <= 2; ++dim) {
        Body body = dim == 1 ? wall() : block();
        March march{body, initial(35.0), Theta{.theta = 1.0, .step = 1e7}};
        march.set(march.drive(power), 800.0);
        march.set(march.drive(air), 5.0);
        if (dim == 2) march.set(march.drive(plate), 60.0);
        for (int i = 0; i < 8; ++i) CHECK(march.advance().ok());
        body.set(power, 800.0).set(air, 5.0);
        if (dim == 2) {
            body.set(plate, 60.0);
            body.replace("top", Flux{.into = 0.0});
        }
        const Field rest = steady(body);
        for (const Quantity& q : {mean_in("core"), mean_in("shell"), heat_out_through(dim == 1 ? "outer" : "right")})
            CHECK(std::abs(march[q] - rest[q]) <= 1e-7 * std::abs(rest[q]));
        CHECK(march.field().balance().balanced());
        CHECK(body.value(power) == 800.0);
        CHECK(march.value(power) == 800.0);
    }
}

TEST_CASE("a value that cannot be used is kept out and told in the next step alone") {
    March march{wall(), initial(20.0), Theta{.theta = 0.5, .step = 1.0}};
    const Input heater = march.drive(power);
    const Input coefficient = march.drive(film);
    CHECK(march.advance().ok());
    march.set(heater, 700.0);
    march.set(heater, std::nan(""));
    const Step kept = march.advance();
    CHECK(!kept.ok());
    CHECK(kept.completed());
    CHECK(kept.verdict() == Verdict::input_kept);
    CHECK(march.value(power) == 700.0);
    CHECK(march.advance().ok());
    march.set(coefficient, -1.0);
    CHECK(march.advance().verdict() == Verdict::input_kept);
    CHECK(march.value(film) == 12.0);
    march.set(Input(), 1.0);
    CHECK(march.advance().verdict() == Verdict::input_kept);
    CHECK(std::isnan(march[Probe()]));
    const Step good = march.advance();
    good.require();
    CHECK(good.residual() <= 1e-9 * march.balance().gross);
    CHECK(std::abs(good.left_over()) <= 1e-9 * march.balance().gross);
}

TEST_CASE("a driven film coefficient is factored once per value") {
    March march{wall(), initial(80.0), Theta{.theta = 0.5, .step = 5.0}};
    const Input coefficient = march.drive(film);
    for (int i = 0; i < 20; ++i) CHECK(march.advance().ok());
    const Index before = march.factorisations();
    march.set(coefficient, 40.0);
    for (int i = 0; i < 20; ++i) CHECK(march.advance().ok());
    CHECK(march.factorisations() == before + 1);
    CHECK(march.balance().balanced());
    CHECK(march.total().balanced());
    // the loss follows the coefficient at once
    const double surface = march[mean_on("outer")];
    CHECK(std::abs(march[heat_out_through("outer")] - 40.0 * (surface - 20.0)) <= 1e-9 * 40.0 * surface);
}

TEST_CASE("advance_to lands on the asked time, calls observers on theirs, and stops when told") {
    March march{wall(), initial(20.0), Theta{.theta = 0.5, .step = 2.0}};
    int seen = 0;
    double last = 0.0;
    march.observe(7.0, [&](const March& m) {
        ++seen;
        last = m.time();
    });
    march.advance_to(30.5);
    CHECK(march.time() == 30.5);
    CHECK(seen == 4);
    CHECK(last == 28.0);
    test::check_refused([&] { march.advance_to(100.0, [](const March& m) { return m.time() < 50.0; }); },
                        ErrorCode::cancelled, "advance_to", "cancelled");
    CHECK(march.time() >= 50.0);
    CHECK(march.time() < 53.0);
    march.advance_to(100.0);
    CHECK(march.time() == 100.0);
    CHECK(march.total().balanced());
}
