// Fits of steady readings: recovery, coverage of the intervals, inseparable groups, bounds, predictions, refusals.

#include <cmath>
#include <cstdint>
#include <doctest/doctest.h>
#include <tepor/answers/fit.hpp>
#include <tepor/answers/impl/chi_square.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/refused.hpp>
#include <tests/support/scale.hpp>

using namespace tepor;

namespace {

/// Normal numbers from a fixed generator: the same everywhere (Box & Muller 1958 on a 64-bit linear congruence by Knuth).
class Noise {
  public:
    explicit Noise(std::uint64_t seed) : state_(seed * 2654435761U + 1) {}
    double uniform() {
        state_ = state_ * 6364136223846793005U + 1442695040888963407U;
        return (static_cast<double>(state_ >> 11) + 0.5) / 9007199254740992.0;
    }
    double normal() { return std::sqrt(-2.0 * std::log(uniform())) * std::cos(2.0 * pi * uniform()); }

  private:
    std::uint64_t state_;
};

const Parameter gas{"gas", 800.0};
const Parameter k{"conductivity", 0.5};
const Parameter h{"film", 12.0};
const Parameter grey{"emissivity", 0.6};
const Parameter layer{"layer", 0.2};
const Quantity loss = heat_out_through("outer");
const Quantity shell = mean_on("outer");

Body wall() {
    Body body{layers<Segment<1>>({{.region = "lining", .thickness = layer, .cells = 4}})};
    body.in("lining", Material{.conductivity = k});
    body.on("inner", Film{.coefficient = 50.0, .fluid = gas});
    body.on("outer", Film{.coefficient = h, .fluid = 20.0});
    body.on("outer", Radiation{.emissivity = grey, .surroundings = 20.0});
    return body;
}

/// Readings of a body as it is, with noise of their uncertainty.
std::vector<Reading> read(const Body& truth, const std::vector<Reading>& asked, Noise* noise) {
    std::vector<Reading> out = asked;
    for (Reading& r : out) {
        Body body = truth;
        for (const Condition& c : r.conditions) body.set(c.parameter, c.value);
        r.value = steady(body)[r.quantity] + (noise ? r.uncertainty * noise->normal() : 0.0);
    }
    return out;
}

} // namespace

TEST_CASE("readings without noise give back the parameters they were made with") {
    Body truth = wall();
    truth.set(k, 0.8).set(h, 9.0).set(grey, 0.85);
    const std::vector<Reading> readings = read(truth,
                                               {{loss, 0.0, 10.0},
                                                {shell, 0.0, 0.5},
                                                {at(0.1), 0.0, 1.0},
                                                {shell, 0.0, 0.5, {{gas, 300.0}}},
                                                {loss, 0.0, 5.0, {{gas, 300.0}}},
                                                {shell, 0.0, 0.5, {{gas, 1200.0}}}},
                                               nullptr);
    const Fitted found = fit(wall(), {{k}, {h}, {grey}}, readings);
    CHECK(std::abs(found[k].value - 0.8) <= 1e-7);
    CHECK(std::abs(found[h].value - 9.0) <= 1e-5);
    CHECK(std::abs(found[grey].value - 0.85) <= 1e-6);
    CHECK(found.chi_square() <= 1e-9);
    CHECK(found.degrees_of_freedom() == 3);
    CHECK(found.goodness() >= 1.0 - 1e-9);
    CHECK(found.on_bounds().empty());
    CHECK(found[k].low < 0.8);
    CHECK(found[k].high > 0.8);
}

TEST_CASE("the covariance is the inverse of the information of the readings") {
    // one conductivity from one heat: u(k) = u(q) / |dq/dk|
    Body truth = wall();
    truth.set(k, 0.6);
    const std::vector<Reading> readings = read(truth, {{loss, 0.0, 7.0}}, nullptr);
    const Fitted found = fit(wall(), {{k}}, readings);
    const double step = 1e-4;
    Body above = truth;
    above.set(k, 0.6 + step);
    Body below = truth;
    below.set(k, 0.6 - step);
    const double slope = (steady(above)[loss] - steady(below)[loss]) / (2.0 * step);
    CHECK(std::abs(found[k].uncertainty - 7.0 / slope) <= 1e-5 * 7.0 / slope);
    CHECK(std::abs(found[k].high - found[k].value - 1.959964 * found[k].uncertainty) <= 1e-5 * found[k].uncertainty);
    // what was read is predicted with the uncertainty it was read with
    const Estimated again = found.predict(loss);
    CHECK(std::abs(again.value - readings[0].value) <= 1e-5);
    CHECK(std::abs(again.uncertainty - 7.0) <= 1e-4);
    // twice the same reading halves the variance
    const Fitted twice = fit(wall(), {{k}}, {readings[0], readings[0]});
    CHECK(std::abs(twice[k].uncertainty * std::sqrt(2.0) - found[k].uncertainty) <= 1e-6 * found[k].uncertainty);
}

TEST_CASE("95 % intervals of noisy readings cover the truth in 95 +- 2 of 100 cases, predictions too") {
    Body truth = wall();
    truth.set(k, 0.7).set(h, 10.0).set(grey, 0.7);
    const std::vector<Reading> asked = {{loss, 0.0, 12.0},
                                        {shell, 0.0, 1.0},
                                        {at(0.05), 0.0, 2.0},
                                        {at(0.15), 0.0, 2.0},
                                        {shell, 0.0, 0.3, {{gas, 150.0}}},
                                        {loss, 0.0, 2.0, {{gas, 150.0}}},
                                        {shell, 0.0, 2.0, {{gas, 1400.0}}},
                                        {loss, 0.0, 25.0, {{gas, 1400.0}}}};
    const std::vector<Reading> exact = read(truth, asked, nullptr);
    Body hot = truth;
    hot.set(gas, 1000.0);
    const double hot_loss = steady(hot)[loss];
    const long sets = test::scaled(1000, 40);
    int covered[3] = {0, 0, 0};
    int predicted = 0;
    double chi = 0.0;
    for (long s = 0; s < sets; ++s) {
        Noise noise(static_cast<std::uint64_t>(s) + 1);
        std::vector<Reading> readings = exact;
        for (Reading& r : readings) r.value += r.uncertainty * noise.normal();
        const Fitted found = fit(wall(), {{k}, {h}, {grey}}, readings);
        const double real[3] = {0.7, 10.0, 0.7};
        for (std::size_t j = 0; j < 3; ++j) {
            const Estimated e = found[found.parameters()[j]];
            covered[j] += e.low <= real[j] && real[j] <= e.high ? 1 : 0;
        }
        const Estimated p = found.predict(loss, {{gas, 1000.0}});
        predicted += p.low <= hot_loss && hot_loss <= p.high ? 1 : 0;
        chi += found.chi_square();
    }
    const double slack = sets >= 1000 ? 0.02 : 0.15;
    for (const int c : covered) {
        CAPTURE(c);
        CHECK(std::abs(static_cast<double>(c) / static_cast<double>(sets) - 0.95) <= slack);
    }
    CAPTURE(predicted);
    CHECK(std::abs(static_cast<double>(predicted) / static_cast<double>(sets) - 0.95) <= slack);
    CHECK(std::abs(chi / static_cast<double>(sets) - 5.0) <= (sets >= 1000 ? 0.4 : 2.0)); // 8 readings, 3 parameters
}

TEST_CASE(
    "a film and an emissivity from one level are refused by name, and a prior or a second level tells them apart") {
    Body truth = wall();
    const std::vector<Reading> one_level =
        read(truth, {{loss, 0.0, 10.0}, {shell, 0.0, 0.5}, {at(0.1), 0.0, 1.0}}, nullptr);
    test::check_refused(
        [&] {
            (void)fit(wall(), {{h}, {grey}}, one_level);
        },
        ErrorCode::no_answer, "film, emissivity", "do not tell apart {film, emissivity}");
    test::check_refused(
        [&] {
            (void)fit(wall(), {{k}, {h}, {grey}}, one_level);
        },
        ErrorCode::no_answer, "film, emissivity", "give a prior");
    const Fitted with_prior = fit(wall(), {{h}, {.parameter = grey, .prior = Prior{0.6, 0.05}}}, one_level);
    CHECK(std::abs(with_prior[h].value - 12.0) <= 1e-4);
    CHECK(std::abs(with_prior[grey].uncertainty - 0.05) <= 1e-4); // the readings add nothing to the prior
    CHECK(with_prior[h].uncertainty > 0.1);
    std::vector<Reading> two = one_level;
    two.push_back(read(truth, {{shell, 0.0, 0.5, {{gas, 1500.0}}}}, nullptr)[0]);
    CHECK(fit(wall(), {{h}, {grey}}, two)[h].uncertainty < 5.0);
}

TEST_CASE("larger groups and parameters nobody sees are named, those that are seen are not") {
    Body truth = wall();
    const std::vector<Reading> readings = read(truth, {{loss, 0.0, 10.0}, {shell, 0.0, 0.5}}, nullptr);
    // layer / conductivity act through their ratio; film and emissivity through their sum
    test::check_refused(
        [&] {
            (void)fit(wall(), {{k}, {layer}}, readings);
        },
        ErrorCode::no_answer, "conductivity, layer", "{conductivity, layer}");
    test::check_refused(
        [&] {
            (void)fit(wall(), {{k}, {layer}, {h}, {grey}}, readings);
        },
        ErrorCode::no_answer, "conductivity, layer; film, emissivity", "{conductivity, layer}, {film, emissivity}");
    // three films beside each other on one face of one temperature
    const Parameter a{"a", 2.0}, b{"b", 3.0}, c{"c", 4.0}, seen{"seen", 5.0};
    Body body{layers<Segment<1>>({{.region = "x", .thickness = 0.1, .cells = 2}})};
    body.in("x", Material{.conductivity = seen});
    body.on("inner", FixedTemperature{100.0});
    body.on("outer", Film{.coefficient = a, .fluid = 0.0});
    body.also_on("outer", Film{.coefficient = b, .fluid = 0.0});
    body.also_on("outer", Film{.coefficient = c, .fluid = 0.0});
    const std::vector<Reading> three = read(body, {{loss, 0.0, 1.0}, {shell, 0.0, 0.1}}, nullptr);
    test::check_refused(
        [&] {
            (void)fit(body, {{a}, {b}, {c}, {seen}}, three);
        },
        ErrorCode::no_answer, "a, b, c", "{a, b, c}");
    // the shell of a wall held at a temperature tells nothing of its conductivity
    Body held{layers<Segment<1>>({{.region = "x", .thickness = 0.1, .cells = 2}})};
    held.in("x", Material{.conductivity = seen});
    held.on("inner", FixedTemperature{100.0});
    held.on("outer", FixedTemperature{0.0});
    test::check_refused(
        [&] {
            (void)fit(held, {{seen}}, {{shell, 0.0, 0.1}});
        },
        ErrorCode::no_answer, "seen", "say nothing about seen");
}

TEST_CASE("bounds are kept and said") {
    Body truth = wall();
    truth.set(k, 0.9);
    const std::vector<Reading> readings = read(truth, {{loss, 0.0, 10.0}, {shell, 0.0, 0.5}}, nullptr);
    const Fitted found = fit(wall(), {{.parameter = k, .from = 0.1, .to = 0.8}}, readings);
    CHECK(found.values()[0] == 0.8);
    REQUIRE(found.on_bounds().size() == 1);
    CHECK(found.on_bounds()[0] == k);
    CHECK(found.chi_square() > 1.0);
    CHECK(found.goodness() < 0.05);
}

TEST_CASE("a section with a contact and a Parameter in a law is fitted from probes") {
    const Parameter joint{"joint", 300.0}, rise{"rise", 1e-3};
    Tiles drawing;
    drawing.add("block", {0.0, 0.0}, {0.1, 0.1});
    drawing.add("plate", {0.1, 0.0}, {0.15, 0.1});
    Body body{tiles<Triangle<2>>(drawing, {.size = 0.025})};
    body.in("block", Material{.conductivity =
                                  law({rise}, [](const auto& s, auto b) { return 2.0 * (1.0 + b * s.temperature); })});
    body.in("plate", Material{.conductivity = 15.0});
    body.between("block", "plate", Contact{.conductance = joint});
    body.on("left", FixedTemperature{300.0});
    body.on("right", Film{.coefficient = 60.0, .fluid = 20.0});
    body.on("top", Film{.coefficient = 20.0, .fluid = 20.0});
    Body truth = body;
    truth.set(joint, 180.0).set(rise, 2.5e-3);
    const std::vector<Reading> readings = read(truth,
                                               {{at({0.05, 0.05}), 0.0, 0.3},
                                                {at({0.09, 0.05}), 0.0, 0.3},
                                                {at({0.12, 0.02}), 0.0, 0.3},
                                                {at({0.02, 0.08}), 0.0, 0.3}},
                                               nullptr);
    const Fitted found = fit(body, {{joint}, {rise}}, readings);
    CHECK(std::abs(found[joint].value - 180.0) <= 1e-4);
    CHECK(std::abs(found[rise].value - 2.5e-3) <= 1e-9);
}

TEST_CASE("a fit refuses what it cannot use and says why") {
    const Body body = wall();
    const Parameter stranger{"stranger", 1.0};
    const std::vector<Reading> readings = {{loss, 1000.0, 10.0}};
    test::check_refused([&] { (void)fit(body, {}, readings); }, ErrorCode::missing, "", "at least one parameter");
    test::check_refused([&] { (void)fit(body, {{k}}, {}); }, ErrorCode::missing, "", "one reading");
    test::check_refused([&] { (void)fit(body, {{stranger}}, readings); }, ErrorCode::unused, "stranger",
                        "no statement");
    test::check_refused(
        [&] {
            (void)fit(body, {{k}, {k}}, readings);
        },
        ErrorCode::contradiction, "conductivity", "twice");
    test::check_refused(
        [&] {
            (void)fit(body, {{k}}, {{loss, 1000.0, 0.0}});
        },
        ErrorCode::bad_value, loss.label(), "uncertainty > 0");
    test::check_refused([&] { (void)fit(body, {{.parameter = k, .from = 2.0, .to = 1.0}}, readings); },
                        ErrorCode::bad_value, "conductivity", "from < to");
    test::check_refused(
        [&] {
            (void)fit(body, {{.parameter = k, .prior = Prior{1.0, 0.0}}}, readings);
        },
        ErrorCode::bad_value, "conductivity", "expected > 0");
    test::check_refused(
        [&] {
            (void)fit(body, {{gas}}, {{loss, 1000.0, 10.0, {{gas, 700.0}}}});
        },
        ErrorCode::contradiction, "gas", "both a condition");
    test::check_refused([&] { (void)fit(body, {{k}}, readings, {.weakest = 0.0}); }, ErrorCode::bad_value, "FitOptions",
                        "must be positive");
    const Fitted found = fit(body, {{k}}, readings);
    test::check_refused([&] { (void)found[h]; }, ErrorCode::unused, "film", "was not fitted");
}

TEST_CASE("the tail of the chi-square distribution agrees with tabled values") {
    // Source: Abramowitz & Stegun, table 26.8
    CHECK(std::abs(detail::chi_square_tail(3.84146, 1.0) - 0.05) <= 1e-6);
    CHECK(std::abs(detail::chi_square_tail(9.23635, 5.0) - 0.10) <= 1e-6);
    CHECK(std::abs(detail::chi_square_tail(0.554300, 5.0) - 0.99) <= 1e-6);
    CHECK(std::abs(detail::chi_square_tail(29.5883, 10.0) - 0.001) <= 1e-7);
}
