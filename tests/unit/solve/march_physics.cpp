// Marching where properties, films and sources depend on temperature, and where things melt.
#include "../../support/refused.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

/// A block of almost one temperature: 1 m2, 10 mm, heated by 1000 W, nothing leaves.
template <class E>
Body pot(Latent latent, Value heat = 2000.0) {
    Body body{layers<E>({{.region = "wax", .thickness = 0.01, .cells = 4}})};
    body.in("wax", Material{.conductivity = 1e4, .density = 800.0, .specific_heat = heat, .latent = latent});
    body.in("wax", Generation{.total = 1000.0});
    return body;
}

/// Two materials with a contact, one melting, under a schedule, radiation and a film: 2D.
Body casting() {
    Tiles drawing;
    drawing.add("melt", {0.0, 0.0}, {0.04, 0.04});
    drawing.add("mould", {0.04, 0.0}, {0.06, 0.04});
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.008}, Planar{.depth = 0.3})};
    body.in("melt", Material{.conductivity = table({{0, 180}, {600, 160}, {700, 90}}, Outside::hold),
                             .density = 2600.0,
                             .specific_heat = table({{0, 900}, {500, 1050}, {700, 1150}}, Outside::hold),
                             .latent = {.heat = 389000.0, .solidus = 560.0, .liquidus = 610.0}});
    body.in("mould", Material{.conductivity = 1.5, .density = 1600.0, .specific_heat = 1000.0});
    body.between("melt", "mould", Contact{.conductance = 1500.0});
    body.on("left", Film{.coefficient = 400.0, .fluid = schedule({{0.0, 30.0}, {95.0, 60.0}})});
    body.on("right", Radiation{.emissivity = 0.8, .surroundings = 25.0});
    return body;
}

} // namespace

TEST_CASE("a body with k(T), c(T), radiation and a film law settles in its steady state") {
    Body body{layers<Segment<1>>({{.region = "brick", .thickness = 0.2, .cells = 12}})};
    body.in("brick", Material{.conductivity = table({{0, 0.8}, {1200, 1.5}}),
                              .density = 2000.0,
                              .specific_heat = law([](const auto& s) { return 850.0 + 0.2 * s.temperature; })});
    body.on("inner", Film{.coefficient = 60.0, .fluid = 1000.0});
    body.on("outer", Radiation{.emissivity = 0.9, .surroundings = 20.0});
    body.on("outer",
            Film{.coefficient = law([](const auto& s) { return 1.5 * pow(abs(s.temperature - s.fluid) + 1e-3, 0.25); }),
                 .fluid = 20.0});
    March march{body, initial(20.0), Theta{.theta = 1.0, .step = 3600.0}};
    for (int i = 0; i < 120; ++i) {
        const Step step = march.advance();
        CHECK(step.ok());
        CHECK(step.passes() <= 12);
        const Balance balance = march.balance();
        CHECK(balance.balanced());
        CHECK(std::abs(balance.left_over) <= 1e-8 * balance.gross);
    }
    CHECK(march.total().balanced());
    const Field rest = steady(body);
    CHECK(std::abs(march[mean_in("brick")] - rest[mean_in("brick")]) <= 1e-6 * rest[mean_in("brick")]);
    CHECK(std::abs(march[heat_out_through("outer")] / rest[heat_out_through("outer")] - 1.0) <= 1e-6);
}

TEST_CASE("specific heat from a table takes up exactly the heat put in, whatever the step") {
    // c rises from 1000 at 0 to 3000 J/(kg K) at 100 degC: 8 kg take up 8 (1000 T + 10 T^2) J from 0 to T
    for (const double step : {1.0, 30.0, 400.0}) {
        const Body body = pot<Segment<1>>({}, table({{0, 1000}, {100, 3000}}));
        March march{body, initial(0.0), Theta{.theta = 0.5, .step = step}};
        const double stop = 1200.0;
        march.advance_to(stop);
        const double energy = 1000.0 * stop;
        const double exact = (-1000.0 + std::sqrt(1e6 + 40.0 * energy / 8.0)) / 20.0;
        CHECK(std::abs(march[mean_in("wax")] - exact) <= 1e-7 * exact);
        CHECK(std::abs(march[stored_in("wax")] / energy - 1.0) <= 1e-7);
        CHECK(std::abs(march.total().stored / energy - 1.0) <= 1e-7);
    }
}

TEST_CASE("melting takes its exact time within one step, with and without a range, at any step") {
    // 8 kg, 2000 J/(kg K) from 20 to 50 degC and 200 kJ/kg: 480 s to the melting point, 1600 s to melt
    for (const double width : {0.0, 4.0})
        for (const double step : {1.0, 7.0, 60.0})
            for (int order = 1; order <= 2; ++order) {
                const Latent latent{.heat = 200000.0, .solidus = 50.0, .liquidus = 50.0 + width};
                const Body body = order == 1 ? pot<Segment<1>>(latent) : pot<Segment<2>>(latent);
                March march{body, initial(20.0), Theta{.theta = 1.0, .step = step}};
                const double done = 480.0 + 1600.0 + width * 16.0;
                double molten_at = 0.0;
                while (march.time() < done + 3.0 * step && molten_at == 0.0) {
                    CHECK(march.advance().ok());
                    if (march.molten_in("wax") >= 1.0) molten_at = march.time();
                }
                CAPTURE(width);
                CAPTURE(step);
                CAPTURE(order);
                CHECK(molten_at >= done - 1e-6 * done);
                CHECK(molten_at <= done + step * (1.0 + 1e-9));
                march.advance_to(3000.0);
                const double after = 50.0 + width + (3000.0 - done) / 16.0;
                CHECK(std::abs(march[mean_in("wax")] - after) <= 1e-6 * after);
                CHECK(std::abs(march.total().left_over) <= 1e-9 * march.total().gross);
                CHECK(std::abs(march[stored_in("wax")] - (3e6 + 16000.0 * 20.0)) <= 1e-6 * 3e6);
            }
}

TEST_CASE("a casting in its mould keeps its heat account through melting range, contact and schedule") {
    const Body body = casting();
    for (int kind = 0; kind < 3; ++kind) {
        March march = kind < 2 ? March(body, initial(650.0), Theta{.theta = kind == 0 ? 0.5 : 1.0, .step = 10.0})
                               : March(body, initial(650.0), Adaptive{.tolerance = 0.5});
        const double before = march[stored_in("melt")] + march[stored_in("mould")];
        const Integral left = march.integral(heat_out_through("left"));
        const Integral right = march.integral(heat_out_through("right"));
        double last = 1.0;
        while (march.time() < 300.0) {
            march.advance_to(march.time() + 50.0);
            CAPTURE(kind);
            CHECK(march.molten_in("melt") <= last);
            last = march.molten_in("melt");
            const Balance step = march.balance();
            CHECK(std::abs(step.left_over) <= 1e-8 * step.gross);
        }
        CHECK(last < 0.9);
        const double lost = before - march[stored_in("melt")] - march[stored_in("mould")];
        CHECK(std::abs(march[left] + march[right] - lost) <= 1e-7 * lost);
        const Balance total = march.total();
        CHECK(std::abs(total.left_over) <= 1e-8 * total.gross);
        CHECK(std::abs(total.stored + lost) <= 1e-7 * lost);
    }
}

TEST_CASE("a law that fails is told by name, place and time, and the last good state is kept") {
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.1, .cells = 5}})};
    body.in("bar", Material{.conductivity = 10.0, .density = 8000.0, .specific_heat = 500.0});
    body.in("bar", Generation{.per_volume = law([](const Spot& s) {
                                                return s.temperature > 60.0 ? std::nan("") : 1e6;
                                            }).named("heater law")});
    March march{body, initial(20.0), Theta{.theta = 1.0, .step = 10.0}};
    while (march.advance().ok())
        if (march.time() > 1000.0) break;
    const double stood = march.time();
    CHECK(stood > 100.0);
    CHECK(stood < 170.0);
    const Step failed = march.advance();
    CHECK(failed.verdict() == Verdict::bad_law);
    CHECK(!failed.completed());
    CHECK(march.time() == stood);
    CHECK(march[mean_in("bar")] <= 60.0);
    test::check_refused([&] { failed.require(); }, ErrorCode::bad_law, "heater law", "in cell");
    test::check_refused([&] { march.advance_to(stood + 10.0); }, ErrorCode::bad_law, "heater law", "time");
}

TEST_CASE("a march that leaves a table says which, and keeps the last good state") {
    const Body body = pot<Segment<1>>({}, table({{0, 2000}, {50, 2100}}));
    March march{body, initial(20.0), Theta{.theta = 1.0, .step = 20.0}};
    Verdict verdict = Verdict::ok;
    for (int i = 0; i < 100 && verdict == Verdict::ok; ++i) verdict = march.advance().verdict();
    CHECK(verdict == Verdict::outside_table);
    CHECK(march[hottest_in("wax")] <= 50.0 + 1e-6);
    test::check_refused([&] { march.advance_to(1e4); }, ErrorCode::outside_table, "specific heat of \"wax\"",
                        "the table covers 0 to 50");
}

TEST_CASE("a fixed number of Newton passes is kept and reports its residual") {
    const Body body = casting();
    double residual[3] = {};
    for (const int passes : {1, 2, 4}) {
        March march{body, initial(650.0), Theta{.theta = 1.0, .step = 5.0, .newton_passes = passes}};
        const Step step = march.advance();
        CHECK(step.ok());
        CHECK(step.passes() == passes);
        residual[passes / 2] = step.residual();
    }
    CHECK(residual[0] > 0.0);
    CHECK(residual[1] < residual[0]);
    CHECK(residual[2] < residual[1]);
}

TEST_CASE("the same body marched by Theta and by Adaptive agrees within their errors") {
    const Body body = casting();
    March fine{body, initial(650.0), Theta{.theta = 0.5, .step = 0.5}};
    March adaptive{body, initial(650.0), Adaptive{.tolerance = 0.02}};
    fine.advance_to(120.0);
    adaptive.advance_to(120.0);
    CHECK(std::abs(fine[mean_in("melt")] - adaptive[mean_in("melt")]) <= 0.5);
    CHECK(std::abs(fine.molten_in("melt") - adaptive.molten_in("melt")) <= 2e-3);
    CHECK(adaptive.steps() < fine.steps());
}
