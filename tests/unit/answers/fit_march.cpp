// Fits of readings over time: conductivity and heat capacity from a known flux, the pair refused without one, coverage.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/fit_march.hpp>
#include <tepor/answers/gradient_march.hpp>
#include <tepor/answers/impl/march_fit_model.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;

namespace {

const Parameter k{"conductivity", 1.0}, c{"specific heat", 700.0}, h{"film", 20.0}, thick{"thickness", 0.04};

Body slab(bool by_flux) {
    Body body{layers<Segment<1>>({{.region = "slab", .thickness = thick, .cells = 16}})};
    body.in("slab", Material{.conductivity = k, .density = 2000, .specific_heat = c});
    if (by_flux)
        body.on("inner", Flux{.into = 3000.0});
    else
        body.on("inner", FixedTemperature{80.0});
    return body;
}

std::vector<TimedReading> read(const Body& truth, const Theta& steps, std::vector<TimedReading> readings) {
    for (TimedReading& r : readings) {
        March march{truth, initial(20.0), steps};
        double before = march[r.quantity];
        while (march.time() < r.time - 1e-9) {
            before = march[r.quantity];
            march.advance().require();
        }
        const double share = march.time() > 0.0 ? (march.time() - r.time) / steps.step : 0.0;
        r.value = (1.0 - share) * march[r.quantity] + share * before;
    }
    return readings;
}

} // namespace

TEST_CASE("a slab driven by a known heat flux gives its conductivity and its heat capacity") {
    Body truth = slab(true);
    truth.set(k, 1.7).set(c, 950.0);
    const Theta steps{.theta = 0.5, .step = 20.0};
    std::vector<TimedReading> readings;
    for (int i = 1; i <= 10; ++i) {
        readings.push_back({mean_on("inner"), 55.0 * i, 0.0, 0.2}); // between steps, too
        readings.push_back({mean_on("outer"), 60.0 * i, 0.0, 0.2});
    }
    readings = read(truth, steps, readings);
    const Fitted found = fit(slab(true), initial(20.0), steps, {{k}, {c}}, readings);
    CHECK(std::abs(found[k].value - 1.7) <= 1e-6);
    CHECK(std::abs(found[c].value - 950.0) <= 1e-3);
    CHECK(found.chi_square() <= 1e-8);
    CHECK(found[k].uncertainty < 0.05);
    // what was read is predicted, beyond the readings too, with an interval that grows with what the parameters leave open
    for (const double t : {300.0, 600.0, 815.0}) {
        const TimedReading real = read(truth, steps, {{mean_on("outer"), t, 0.0, 0.2}})[0];
        const Estimated told = found.predict_at(mean_on("outer"), t);
        CHECK(std::abs(told.value - real.value) <= 1e-5);
        CHECK(told.uncertainty > 0.0);
        CHECK(told.uncertainty < 0.2);
        CHECK(told.low < real.value);
        CHECK(real.value < told.high);
    }
    CHECK(found.predict_at(mean_on("outer"), 815.0).uncertainty >
          found.predict_at(mean_on("outer"), 300.0).uncertainty);
    test::check_refused([&] { (void)found.predict_at(mean_on("outer"), -1.0); }, ErrorCode::outside,
                        mean_on("outer").label(), "before the march starts");
    test::check_refused(
        [&] {
            (void)found.predict_at(mean_on("outer"), 60.0, {{k, 2.0}});
        },
        ErrorCode::contradiction, "conductivity", "cannot be a condition");
    // the same from steps of controlled error, which land on the readings
    const Fitted adaptive = fit(slab(true), initial(20.0), Adaptive{.tolerance = 1e-4}, {{k}, {c}},
                                read(truth, Theta{.theta = 0.5, .step = 0.5}, readings));
    CHECK(std::abs(adaptive[k].value - 1.7) <= 2e-3);
    CHECK(std::abs(adaptive[c].value - 950.0) <= 0.5);
}

TEST_CASE("slopes by forward sensitivities and by the adjoint are the same, and what melts takes the adjoint") {
    const Theta steps{.theta = 0.5, .step = 20.0};
    const std::vector<FitBy> by = {{k}, {c}, {thick}};
    const std::vector<TimedReading> readings = {
        {mean_on("inner"), 55.0, 0.0, 1.0}, {mean_on("outer"), 200.0, 0.0, 1.0}, {at(0.03), 20.0, 20.0, 1.0}};
    const Initial start = initial(20.0);
    const Body body = slab(true);
    using Timed = detail::MarchFitModel;
    std::vector<double> y[2];
    std::vector<double> slope[2];
    const Timed::Way ways[2] = {Timed::Way::forward, Timed::Way::adjoint};
    for (int w = 0; w < 2; ++w)
        REQUIRE(Timed(body, start, steps, by, readings, ways[w]).evaluate({1.2, 800.0, 0.05}, y[w], slope[w]));
    for (std::size_t i = 0; i < 3; ++i) CHECK(std::abs(y[0][i] - y[1][i]) <= 1e-12 * y[0][i]);
    for (std::size_t i = 0; i < 9; ++i)
        CHECK(std::abs(slope[0][i] - slope[1][i]) <= 1e-9 * (1e-6 + std::abs(slope[0][i])));
    CHECK(std::abs(slope[0][0]) > 1e-3);
    const Parameter latent{"latent", 8e4};
    Body wax{layers<Segment<1>>({{.region = "wax", .thickness = 0.02, .cells = 8}})};
    wax.in("wax", Material{.conductivity = 0.4,
                           .density = 900,
                           .specific_heat = c,
                           .latent = {.heat = latent, .solidus = 45.0, .liquidus = 55.0}});
    wax.on("inner", Film{.coefficient = 150.0, .fluid = 90.0});
    Body truth = wax;
    truth.set(latent, 1.5e5).set(c, 2100.0);
    std::vector<TimedReading> warming;
    for (int i = 1; i <= 12; ++i) {
        warming.push_back({at(0.005), 100.0 * i, 0.0, 0.1});
        warming.push_back({mean_on("outer"), 100.0 * i, 0.0, 0.1});
    }
    const Theta fine{.theta = 1.0, .step = 20.0, .tolerance = 1e-12};
    const Fitted found = fit(wax, initial(20.0), fine, {{latent}, {c}}, read(truth, fine, warming));
    CHECK(std::abs(found[latent].value - 1.5e5) <= 1.0);
    CHECK(std::abs(found[c].value - 2100.0) <= 0.1);
}

TEST_CASE("with temperatures alone conductivity and heat capacity are refused by name") {
    Body truth = slab(false);
    truth.set(k, 1.7).set(c, 950.0);
    const Theta steps{.theta = 0.5, .step = 20.0};
    std::vector<TimedReading> readings;
    for (int i = 1; i <= 10; ++i) readings.push_back({mean_on("outer"), 60.0 * i, 0.0, 0.2});
    readings = read(truth, steps, readings);
    test::check_refused(
        [&] {
            (void)fit(slab(false), initial(20.0), steps, {{k}, {c}}, readings);
        },
        ErrorCode::no_answer, "conductivity, specific heat", "do not tell apart");
    const Fitted one = fit(slab(false), initial(20.0), steps, {{k}},
                           read(
                               [] {
                                   Body b = slab(false);
                                   b.set(k, 1.7);
                                   return b;
                               }(),
                               steps, readings));
    CHECK(std::abs(one[k].value - 1.7) <= 1e-6);
}

TEST_CASE("forward sensitivities are the adjoint's, thickness and prescribed temperatures included") {
    const Parameter held{"held", 60.0}, joint{"joint", 200.0}, beta{"beta", 1e-3};
    Body body{layers<Segment<2>>(
        {{.region = "a", .thickness = thick, .cells = 3}, {.region = "b", .thickness = 0.02, .cells = 2}},
        Cylindrical{}, {.start = 0.03})};
    body.in("a", Material{.conductivity = law({beta}, [](const auto& s, auto b) { return 2.0 + b * s.temperature; }),
                          .density = 2000,
                          .specific_heat = c});
    body.in("b", Material{.conductivity = k, .density = 1500, .specific_heat = 900});
    body.between("a", "b", Contact{.conductance = joint});
    body.on("inner", FixedTemperature{held});
    body.on("outer", Film{.coefficient = h, .fluid = 20.0});
    const Theta steps{.theta = 0.5, .step = 30.0, .tolerance = 1e-13};
    March march{body, initial(20.0), steps};
    march.record();
    for (int i = 0; i < 8; ++i) march.advance().require();
    const std::vector<Parameter> all = {thick, c, k, h, held, joint, beta};
    // a fit at the truth stops at once; its covariance holds the slopes: one reading, one parameter
    const Quantity q = mean_in("b");
    const Gradient slope = gradient(march, q);
    for (const Parameter& p : all) {
        CAPTURE(p.name());
        const Fitted found = fit(body, initial(20.0), steps, {{p}}, {{q, 240.0, march[q], 1e-6}});
        CHECK(std::abs(found[p].uncertainty - 1e-6 / std::abs(slope[p])) <= 1e-7 * found[p].uncertainty);
    }
}

TEST_CASE("a section with contact and a Parameter in a law is fitted from its cooling") {
    const Parameter joint{"joint", 300.0}, rise{"rise", 1e-3};
    Tiles drawing;
    drawing.add("block", {0.0, 0.0}, {0.04, 0.02});
    drawing.add("plate", {0.04, 0.0}, {0.06, 0.02});
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.01})};
    body.in("block",
            Material{.conductivity = law({rise}, [](const auto& s, auto b) { return 2.0 * (1.0 + b * s.temperature); }),
                     .density = 2000,
                     .specific_heat = 800});
    body.in("plate", Material{.conductivity = 15.0, .density = 4000, .specific_heat = c});
    body.between("block", "plate", Contact{.conductance = joint});
    body.on("right", Film{.coefficient = 60.0, .fluid = 20.0});
    Body truth = body;
    truth.set(joint, 180.0).set(c, 600.0).set(rise, 3e-3);
    const Theta steps{.theta = 1.0, .step = 10.0, .tolerance = 1e-12};
    std::vector<TimedReading> readings;
    for (int i = 1; i <= 6; ++i)
        for (const Quantity& q : {at({0.01, 0.01}), at({0.03, 0.01}), at({0.05, 0.01})}) {
            March march{truth, initial(200.0), steps};
            march.advance_to(30.0 * i);
            readings.push_back({q, 30.0 * i, march[q], 0.1});
        }
    const Fitted found = fit(body, initial(200.0), steps, {{joint}, {c}, {rise}}, readings);
    CHECK(std::abs(found[joint].value - 180.0) <= 1e-3);
    CHECK(std::abs(found[c].value - 600.0) <= 1e-3);
    CHECK(std::abs(found[rise].value - 3e-3) <= 1e-7);
}

TEST_CASE("a fit over time refuses readings it cannot make") {
    const Theta steps{.theta = 1.0, .step = 10.0};
    test::check_refused(
        [&] {
            (void)fit(slab(true), initial(20.0), steps, {{k}}, {{mean_on("outer"), -5.0, 20.0, 1.0}});
        },
        ErrorCode::outside, mean_on("outer").label(), "before the march starts");
    test::check_refused(
        [&] {
            (void)fit(slab(false), initial(20.0), steps, {{k}}, {{heat_out_through("inner"), 50.0, 20.0, 1.0}});
        },
        ErrorCode::not_supported, heat_out_through("inner").label(), "rate of change");
}
