// What a march may be driven by beside loads, laws of place, exact cells, and steps that have no solution.
#include "../../support/refused.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/element/exact_segment.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/transient_reference.hpp>
#include <vector>

using namespace tepor;

namespace {

const Parameter density{"density", 2000.0};
const Parameter heat{"specific heat", 900.0};

/// Two materials with a contact, the left one of driven capacity.
Body pair(const Latent& latent = {}) {
    Tiles drawing;
    drawing.add("core", {0.0, 0.0}, {0.03, 0.04});
    drawing.add("shell", {0.03, 0.0}, {0.05, 0.04});
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.008}, Planar{.depth = 0.5})};
    body.in("core", Material{.conductivity = 30.0, .density = density, .specific_heat = heat, .latent = latent});
    body.in("shell", Material{.conductivity = 2.0, .density = 2500.0, .specific_heat = 900.0});
    body.between("core", "shell", Contact{.conductance = 500.0});
    body.in("core", Generation{.total = 200.0});
    body.on("right", Film{.coefficient = 40.0, .fluid = 20.0});
    return body;
}

} // namespace

TEST_CASE("a driven density or specific heat acts from the next step on like a body made with it") {
    for (const Capacity capacity : {Capacity::lumped, Capacity::consistent}) {
        const Theta theta{.theta = 0.5, .step = 10.0, .capacity = capacity, .damped_start = false};
        Body body = pair();
        March march{body, initial(20.0), theta};
        const Input rho = march.drive(density);
        const Input c = march.drive(heat);
        const Probe loss = march.watch(heat_out_through("right"));
        march.advance_to(200.0);
        const Field middle = march.field();
        CHECK(middle.balance().balanced());
        march.set(rho, 3000.0);
        march.set(c, 500.0);
        for (int i = 0; i < 10; ++i) {
            CHECK(march.advance().ok());
            CHECK(march.balance().balanced());
        }
        body.set(density, 3000.0).set(heat, 500.0);
        March fresh{body, initial(middle), theta};
        fresh.advance_to(300.0);
        const std::vector<double> a = march.field().temperature();
        const std::vector<double> b = fresh.field().temperature();
        for (std::size_t i = 0; i < a.size(); ++i) CHECK(std::abs(a[i] - b[i]) <= 1e-11 * a[i]);
        CHECK(march.total().balanced());
        // the instant knows the new capacity too: rates of storage and reactions
        const Balance now = march.field().balance();
        CHECK(now.balanced());
        CHECK(std::abs(now.stored - fresh.field().balance().stored) <= 1e-9 * now.gross);
        CHECK(std::abs(march[loss] - fresh[heat_out_through("right")]) <= 1e-9 * now.gross);
    }
}

TEST_CASE("what has melted keeps its share when the density is driven, and the heat account closes") {
    const Latent latent{.heat = 30000.0, .solidus = 45.0, .liquidus = 45.0};
    March march{pair(latent), initial(20.0), Theta{.theta = 1.0, .step = 20.0}};
    const Input rho = march.drive(density);
    while (march.molten_in("core") < 0.3) CHECK(march.advance().ok());
    const double share = march.molten_in("core");
    march.set(rho, 4000.0);
    CHECK(march.advance().ok());
    CHECK(march.molten_in("core") > share);
    CHECK(march.molten_in("core") < share + 0.1);
    for (int i = 0; i < 20; ++i) {
        CHECK(march.advance().ok());
        const Balance step = march.balance();
        CHECK(std::abs(step.left_over) <= 1e-8 * step.gross);
    }
    CHECK(std::abs(march.total().left_over) <= 1e-8 * march.total().gross);
    CHECK(march.molten_in("core") <= 1.0);
}

TEST_CASE("a film coefficient and a source by laws of place are integrated once, like numbers") {
    const auto with = [](const Value& film, const Value& fluid, const Value& source) {
        Tiles drawing;
        drawing.add("plate", {0.0, 0.0}, {0.06, 0.04});
        Body body{tiles<Triangle<1>>(drawing, {.size = 0.01})};
        body.in("plate", Material{.conductivity = of_place([](const auto& p) { return 10.0 + 50.0 * p.y; }),
                                  .density = 7850.0,
                                  .specific_heat = 470.0});
        body.in("plate", Generation{.per_volume = source});
        body.on("top", Film{.coefficient = film, .fluid = fluid});
        return body;
    };
    const Body body = with(of_place([](const auto& p) { return 20.0 + 1000.0 * p.x; }),
                           of_place([](const auto& p) { return 15.0 + 100.0 * p.x; }),
                           of_place([](const auto& p) { return 1e5 * exp(-30.0 * p.x); }));
    const Theta theta{.theta = 0.5, .step = 5.0};
    March march{body, initial(20.0), theta};
    const Index factors = march.factorisations();
    for (int i = 0; i < 40; ++i) CHECK(march.advance().passes() == 0);
    CHECK(march.factorisations() == factors);
    CHECK(march.total().balanced());
    // the same laws, which say that they may read the time, sampled and iterated step by step
    March sampled{with(of_place([](const Place& p) { return 20.0 + 1000.0 * p.x; }),
                       of_place([](const Place& p) { return 15.0 + 100.0 * p.x; }),
                       of_place([](const Place& p) { return 1e5 * std::exp(-30.0 * p.x); })),
                  initial(20.0), theta};
    for (int i = 0; i < 40; ++i) CHECK(sampled.advance().ok());
    const std::vector<double> a = march.field().temperature();
    const std::vector<double> b = sampled.field().temperature();
    for (std::size_t i = 0; i < a.size(); ++i) CHECK(std::abs(a[i] - b[i]) <= 1e-9 * a[i]);
    march.advance_to(1e6);
    const Field rest = steady(body);
    CHECK(std::abs(march[hottest_in("plate")] - rest[hottest_in("plate")]) <= 1e-6);
}

TEST_CASE("exact cells march: the series of a stepped slab, and the exact steady state at the end") {
    Body slab{layers<ExactSegment>({{.region = "solid", .thickness = 0.02, .cells = 40}})};
    slab.in("solid", Material{.conductivity = 2.0, .density = 2000.0, .specific_heat = 1000.0});
    slab.on("outer", FixedTemperature{.temperature = 120.0});
    March march{slab, initial(20.0), Theta{.theta = 0.5, .step = 1.0}};
    for (const test::Shock& exact : test::shock) {
        march.advance_to(exact.time);
        CAPTURE(exact.time);
        CHECK(march.balance().balanced());
        if (exact.time < 40.0) continue;
        CHECK(std::abs(march[at(0.0)] - exact.centre) <= 0.02);
        CHECK(std::abs(march[at(0.01)] - exact.quarter) <= 0.02);
        CHECK(std::abs(march[heat_in_through("outer")] / exact.flux - 1.0) <= 2e-3);
    }
    CHECK(march.total().balanced());
    // a pipe of two layers, k of place, a source, a contact: lumped and consistent, from cold to rest
    for (const Capacity capacity : {Capacity::lumped, Capacity::consistent}) {
        Body pipe{layers<ExactSegment>(
            {{.region = "pipe", .thickness = 0.01, .cells = 3}, {.region = "shell", .thickness = 0.04, .cells = 5}},
            Cylindrical{.length = 2.0}, {.start = 0.02})};
        pipe.in("pipe", Material{.conductivity = 16.0, .density = 7900.0, .specific_heat = 500.0});
        pipe.in("shell", Material{.conductivity = of_place([](const auto& p) { return 0.05 * exp(5.0 * p.x); }),
                                  .density = 120.0,
                                  .specific_heat = 900.0});
        pipe.in("pipe", Generation{.per_volume = of_place([](const auto& p) { return 2e5 * p.x; })});
        pipe.between("pipe", "shell", Contact{.conductance = 80.0});
        pipe.on("inner", Film{.coefficient = 30.0, .fluid = 90.0});
        pipe.on("outer", Film{.coefficient = 8.0, .fluid = 20.0});
        March warm{pipe, initial(20.0), Theta{.theta = 0.5, .step = 60.0, .capacity = capacity}};
        warm.advance_to(3600.0);
        CHECK(warm.balance().balanced());
        CHECK(warm.factorisations() == 1);
        const double early = warm[mean_in("shell")];
        warm.advance_to(40.0 * 3600.0);
        const Field rest = steady(pipe);
        CHECK(early < rest[mean_in("shell")] - 1.0);
        const std::vector<double> T = warm.field().node_temperatures();
        const std::vector<double> exact = rest.node_temperatures();
        for (std::size_t i = 0; i < T.size(); ++i) CHECK(std::abs(T[i] - exact[i]) <= 1e-8 * exact[i]);
        CHECK(std::abs(warm[heat_out_through("outer")] / rest[heat_out_through("outer")] - 1.0) <= 1e-8);
        CHECK(warm.total().balanced());
    }
}

TEST_CASE("a source that runs away is followed by Adaptive, and refused where a fixed step has no answer") {
    // rho c dT/dt = q exp((T - 20) / 10), nothing leaves: T = 20 - 10 ln(1 - t / 1000 s), from rho c 10 / q = 1000 s
    Body body{layers<Segment<1>>({{.region = "pot", .thickness = 0.01, .cells = 3}})};
    body.in("pot", Material{.conductivity = 1.0, .density = 1000.0, .specific_heat = 1000.0});
    body.in("pot",
            Generation{.per_volume = law([](const auto& s) { return 1e4 * exp((s.temperature - 20.0) / 10.0); })});
    March adaptive{body, initial(20.0), Adaptive{.tolerance = 1e-3, .first_step = 600.0}};
    adaptive.advance_to(900.0);
    CHECK(adaptive.rejections() > 0);
    CHECK(std::abs(adaptive[mean_in("pot")] - (20.0 + 10.0 * std::log(10.0))) <= 0.05);
    // backward Euler from 20 degC: x = dt exp(x) / 1000 has a root for dt <= 1000 / e s alone
    March fixed{body, initial(20.0), Theta{.theta = 1.0, .step = 360.0}};
    CHECK(fixed.advance().ok());
    const double stood = fixed[mean_in("pot")];
    CHECK(stood > 20.0);
    const Step failed = fixed.advance();
    CHECK(!failed.completed());
    CHECK((failed.verdict() == Verdict::not_converged || failed.verdict() == Verdict::singular));
    CHECK(fixed.time() == 360.0);
    CHECK(fixed[mean_in("pot")] == stood);
    try {
        fixed.advance_to(720.0);
        FAIL_CHECK("not refused");
    } catch (const Error& error) {
        const std::string message = error.what();
        CAPTURE(message);
        CHECK(message.find("t = 360 s") != std::string::npos);
        CHECK(message.find("shorter step") != std::string::npos);
        CHECK(message.find("last good step") != std::string::npos);
    }
    CHECK(fixed.time() == 360.0);
}
