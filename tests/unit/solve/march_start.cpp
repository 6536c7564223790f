// Where a march starts, and that it does not matter how its run is divided.
#include "../../support/refused.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>
#include <vector>

using namespace tepor;

namespace {

/// Two materials with a contact and a schedule; with `melting` the core melts between 60 and 70 degC.
Body plate(bool melting, double size = 0.008) {
    Tiles drawing;
    drawing.add("core", {0.0, 0.0}, {0.03, 0.04});
    drawing.add("shell", {0.03, 0.0}, {0.05, 0.04});
    Body body{tiles<Triangle<1>>(drawing, {.size = size}, Planar{.depth = 0.5})};
    Material core{.conductivity = 45.0, .density = 7850.0, .specific_heat = 470.0};
    if (melting) core.latent = {.heat = 30000.0, .solidus = 60.0, .liquidus = 70.0};
    body.in("core", core);
    body.in("shell", Material{.conductivity = 2.0, .density = 2500.0, .specific_heat = 900.0});
    body.between("core", "shell", Contact{.conductance = 500.0});
    body.on("right", Film{.coefficient = 12.0, .fluid = 20.0});
    body.on("top", Flux{.into = schedule({{0.0, 6000.0}, {2600.0, 0.0}})});
    return body;
}

double worst(const std::vector<double>& a, const std::vector<double>& b) {
    double most = 0.0;
    for (std::size_t i = 0; i < a.size(); ++i) most = std::max(most, std::abs(a[i] - b[i]));
    return most;
}

} // namespace

TEST_CASE("a march starts from a number, a law of place, a steady result and the field of another mesh") {
    const Body body = plate(false);
    const Theta theta{.theta = 0.5, .step = 5.0};
    CHECK(March(body, initial(33.0), theta)[at({0.02, 0.01})] == 33.0);
    const double slope = 400.0;
    March by_law{body, initial(of_place([=](Point p) { return 20.0 + slope * p.x; })), theta};
    CHECK(std::abs(by_law[at({0.05, 0.02})] - 40.0) <= 1e-12);
    CHECK(std::abs(by_law[mean_in("core")] - 26.0) <= 1e-12);
    // the steady state stays, and the jump of the contact is kept
    const Field rest = steady(body, {.time = 0.0});
    March still{body, initial(rest), theta};
    for (int i = 0; i < 20; ++i) CHECK(still.advance().ok());
    CHECK(worst(still.field().temperature(), rest.temperature()) <= 1e-9 * rest.hottest().temperature);
    CHECK(rest.at({0.03, 0.02}, "core") - rest.at({0.03, 0.02}, "shell") > 1.0);
    // another mesh of the same drawing: read at the places of the nodes, either side of the contact from its own
    const Field coarse = steady(plate(false, 0.02), {.time = 0.0});
    March other{body, initial(coarse), theta};
    for (const char* side : {"core", "shell"})
        CHECK(std::abs(other[at({0.03, 0.0}, side)] - coarse.at({0.03, 0.0}, side)) <= 1e-9);
    CHECK(other.time() == 0.0);
    // a field knows its time
    still.advance_to(321.0);
    CHECK(March(body, initial(still.field()), theta).time() == 321.0);
    const Body elsewhere = [] {
        Tiles drawing;
        drawing.add("core", {0.0, 0.0}, {0.5, 0.5});
        Body b{tiles<Triangle<1>>(drawing, {.size = 0.25})};
        b.in("core", Material{.conductivity = 1.0, .density = 1000.0, .specific_heat = 1000.0});
        return b;
    }();
    test::check_refused([&] { March m(elsewhere, initial(coarse), theta); }, ErrorCode::outside, "(0.25, 0)",
                        "outside region \"core\"");
}

TEST_CASE("how a run is divided does not matter: bits for linear bodies, the solver's tolerance for others") {
    for (const bool melting : {false, true}) {
        const Body body = plate(melting);
        const Theta theta{.theta = 0.5, .step = 20.0};
        March whole{body, initial(20.0), theta};
        const Integral lost = whole.integral(heat_out_through("right"));
        whole.advance_to(3000.0);

        March steps{body, initial(20.0), theta};
        const Integral lost_in_steps = steps.integral(heat_out_through("right"));
        while (steps.time() < 2999.0) CHECK(steps.advance().ok());

        March pieces{body, initial(20.0), theta};
        const Integral lost_in_pieces = pieces.integral(heat_out_through("right"));
        for (const double stop : {20.0, 460.0, 1000.0, 2600.0, 3000.0}) pieces.advance_to(stop);

        // through a checkpoint in the middle of everything (for the melting body: of the melting)
        March first{body, initial(20.0), theta};
        (void)first.integral(heat_out_through("right"));
        first.advance_to(1400.0);
        if (melting) {
            CHECK(first.molten_in("core") > 0.05);
            CHECK(first.molten_in("core") < 0.95);
        }
        March second{body, Checkpoint(first.checkpoint().bytes()), theta};
        const Integral lost_in_second = second.integral(heat_out_through("right"));
        second.advance_to(3000.0);

        struct Run {
            March* march;
            Integral lost;
        };
        for (const Run& run :
             {Run{&steps, lost_in_steps}, Run{&pieces, lost_in_pieces}, Run{&second, lost_in_second}}) {
            CAPTURE(melting);
            CHECK(run.march->time() == whole.time());
            const double apart = worst(run.march->field().temperature(), whole.field().temperature());
            CHECK(apart <= (melting ? 1e-7 : 0.0));
            CHECK(std::abs((*run.march)[run.lost] - whole[lost]) <= (melting ? 1e-7 * whole[lost] : 0.0));
            if (melting) CHECK(std::abs(run.march->molten_in("core") - whole.molten_in("core")) <= 1e-8);
        }
        CHECK(whole[mean_in("core")] > 45.0);
    }
}

TEST_CASE("the time to reach a value is the root of the line between two steps, to rounding") {
    const Body body = plate(false);
    const Quantity inside = mean_in("core");
    March march{body, initial(20.0), Theta{.theta = 0.5, .step = 30.0}};
    const double at = march.time_to_reach(inside, 31.0);
    CHECK(at > march.time() - 30.0);
    CHECK(at <= march.time());
    March again{body, initial(20.0), Theta{.theta = 0.5, .step = 30.0}};
    again.advance_to(march.time() - 30.0);
    const double before = again[inside];
    again.advance_to(march.time());
    const double after = again[inside];
    const double exact = march.time() - 30.0 + 30.0 * (31.0 - before) / (after - before);
    CHECK(std::abs(at - exact) <= 1e-12 * exact);
    // downwards too
    march.advance_to(3000.0);
    const double top = march[inside];
    const double down = march.time_to_reach(inside, top - 3.0);
    CHECK(down > 3000.0);
    CHECK(march[inside] <= top - 3.0);
}
