// Newton's method: how fast it ends, what it says when it cannot, and how few passes a cold start takes.
#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/refused.hpp>
#include <vector>

using namespace tepor;
using test::check_refused;

namespace {

Body bar(double thickness = 0.1, Index cells = 8, double k = 2.0) {
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = thickness, .cells = cells}})};
    if (k > 0.0) body.in("bar", Material{.conductivity = k});
    return body;
}

/// e_{k+1} <= C e_k^2 with e the distance to the converged field, over the last three iterates above the rounding floor.
/// The iterates are had by stopping early: start, and each pass count from 1 on.
void check_quadratic(const Body& body, double start, double most_C) {
    SteadyOptions options;
    options.start = start;
    const Field last = steady(body, options);
    const std::size_t passes = last.passes().size() - 1;
    REQUIRE(passes >= 3);
    // the step taken in pass k is e_k up to e_{k+1}
    std::vector<double> e;
    for (std::size_t k = 0; k < passes; ++k) {
        CAPTURE(k);
        e.push_back(last.passes()[k].step);
    }
    const double floor = 1e-9;
    std::vector<double> above;
    for (const double v : e)
        if (v > floor) above.push_back(v);
    REQUIRE(above.size() >= 3);
    for (std::size_t k = above.size() - 2; k < above.size(); ++k) {
        CAPTURE(k);
        CAPTURE(above[k - 1]);
        CAPTURE(above[k]);
        CHECK(above[k] <= most_C * above[k - 1] * above[k - 1]);
    }
    CHECK(last.passes()[passes - 1].damping == 1.0);
}

} // namespace

TEST_CASE("with conductivity of temperature the last iterates square their error") {
    Body body = bar(0.1, 8, 0.0);
    body.in("bar", Material{.conductivity = law([](const auto& s) { return 1.0 + 0.01 * s.temperature; })});
    body.in("bar", Generation{.per_volume = 1e5});
    body.on("inner", FixedTemperature{500.0}).on("outer", Film{.coefficient = 50.0, .fluid = 20.0});
    check_quadratic(body, 20.0, 0.02);
}

TEST_CASE("with radiation the last iterates square their error") {
    Body body = bar();
    body.on("inner", Flux{.into = 20000.0});
    body.on("outer", Radiation{.emissivity = 0.9, .surroundings = 20.0});
    check_quadratic(body, 20.0, 0.01);
}

TEST_CASE("with a source law the last iterates square their error") {
    Body body = bar();
    body.in("bar", Generation{.per_volume = law([](const auto& s) { return 5e5 * exp(-0.01 * s.temperature); })});
    body.on("inner", FixedTemperature{20.0}).on("outer", Film{.coefficient = 5.0, .fluid = 20.0});
    check_quadratic(body, 20.0, 0.02);
}

TEST_CASE("a cold radiating plate of 0.5 to 100 kW/m2 with film 0, 5, 10 takes at most 16 passes") {
    std::size_t most = 0;
    for (const double power : {500.0, 2000.0, 10000.0, 40000.0, 100000.0})
        for (const double film : {0.0, 5.0, 10.0})
            for (const double k : {1.0, 30.0}) {
                Body plate = bar(0.01, 4, k);
                plate.on("inner", Flux{.into = power});
                plate.on("outer", Radiation{.emissivity = 0.85, .surroundings = 20.0});
                if (film > 0.0) plate.on("outer", Film{.coefficient = film, .fluid = 20.0});
                const Field field = steady(plate);
                const double T = field.at(0.01);
                const double out =
                    film * (T - 20.0) +
                    0.85 * stefan_boltzmann * (std::pow(T + zero_celsius, 4) - std::pow(20.0 + zero_celsius, 4));
                CAPTURE(power);
                CAPTURE(film);
                CHECK(std::abs(out - power) <= 1e-8 * power);
                CHECK(std::abs(field.at(0.0) - T - power * 0.01 / k) <= 1e-6 * (1.0 + power * 0.01 / k));
                CHECK(field.balance().balanced());
                const std::size_t passes = field.passes().size() - 1;
                CHECK(passes <= 16);
                most = std::max(most, passes);
            }
    CHECK(most >= 3); // it does take some
}

TEST_CASE("a source that runs away is an error with the history and the worst place, short of it there is a field") {
    // a slab of half thickness L that generates q exp(b (T - Ts)) holds while b q L^2 / k <= 0.878
    // (Frank-Kamenetskii 1938; Carslaw & Jaeger, sec. 15.1, the number from memory)
    const auto body = [](double delta) {
        Body b = bar(0.1, 24);
        const double q = delta * 2.0 / (0.02 * 0.05 * 0.05);
        b.in("bar",
             Generation{.per_volume = law([q](const auto& s) { return q * exp(0.02 * (s.temperature - 20.0)); })});
        b.on("inner", FixedTemperature{20.0}).on("outer", FixedTemperature{20.0});
        return b;
    };
    const Field held = steady(body(0.87));
    // the hottest place at the limit: b (T - Ts) = 1.187 (the same sources)
    CHECK(0.02 * (held.at(0.05) - 20.0) > 1.0);
    CHECK(0.02 * (held.at(0.05) - 20.0) < 1.187);
    CHECK(held.balance().balanced());
    for (const double delta : {0.9, 3.0}) {
        try {
            (void)steady(body(delta));
            FAIL_CHECK("a field was returned");
        } catch (const Error& error) {
            const std::string message = error.what();
            CAPTURE(message);
            // either a pivot is lost on the way or the passes run out
            const bool known = error.code() == ErrorCode::not_converged || error.code() == ErrorCode::singular;
            CHECK(known);
            for (const char* words : {"by pass", "(0.05", "runs away", "SteadyOptions::start"})
                CHECK(message.find(words) != std::string::npos);
        }
    }
}

TEST_CASE("a source that outgrows its film at the start only is warmed past that place") {
    // copper under current in still air, from the air's own temperature where the film carries next to nothing away:
    // at rest q(T) r / 2 = h(T) (T - T air), by bisection here
    const double radius = 0.01, heat = 1.1e5, air = 35.0;
    const auto film = [](double rise) { return 3.4 * std::pow(rise + 1e-3, 0.25); };
    double low = 0.0, high = 1000.0;
    for (int i = 0; i < 200; ++i) {
        const double rise = 0.5 * (low + high);
        const double surplus = heat * (1.0 + 0.0039 * (air + rise - 20.0)) * 0.5 * radius - film(rise) * rise;
        (surplus > 0.0 ? low : high) = rise;
    }
    for (const double start : {35.0, 20.0, 36.0, 200.0}) {
        Body wire{
            layers<Segment<2>>({{.region = "copper", .thickness = radius, .cells = 4}}, Cylindrical{.length = 1.0})};
        wire.in("copper", Material{.conductivity = 4e3});
        wire.in("copper", Generation{.per_volume = law([heat](const auto& s) {
                                         return heat * (1.0 + 0.0039 * (s.temperature - 20.0));
                                     })});
        wire.on("outer", Film{.coefficient = law(
                                  [](const auto& s) { return 3.4 * pow(abs(s.temperature - s.fluid) + 1e-3, 0.25); }),
                              .fluid = air});
        const Field field = steady(wire, {.start = start});
        CAPTURE(start);
        CHECK(field.at(radius) - air == doctest::Approx(low).epsilon(1e-5));
        CHECK(field.balance().balanced());
        CHECK(field.passes().size() <= 20);
    }
}

TEST_CASE("too few passes are an error that shows them") {
    Body body = bar();
    body.on("inner", Flux{.into = 20000.0}).on("outer", Radiation{.emissivity = 0.9, .surroundings = 20.0});
    SteadyOptions options;
    options.most_passes = 2;
    check_refused([&] { (void)steady(body, options); }, ErrorCode::not_converged, "",
                  "the passes ran out; worst at (0, 0)");
}

TEST_CASE("a linear body takes one solve, a start of one's own is only a start") {
    Body body = bar();
    body.on("inner", Flux{.into = 100.0}).on("outer", FixedTemperature{20.0});
    const Field cold = steady(body);
    CHECK(cold.passes().size() == 2);
    SteadyOptions options;
    options.start = 5000.0;
    const Field hot = steady(body, options);
    options.start.reset();
    options.from = &cold;
    const Field again = steady(body, options);
    for (const double x : {0.0, 0.03, 0.1}) {
        CHECK(std::abs(hot.at(x) - cold.at(x)) <= 1e-10);
        CHECK(std::abs(again.at(x) - cold.at(x)) <= 1e-10);
    }
    const Field other = steady(bar(0.1, 5).on("outer", FixedTemperature{20.0}));
    options.from = &other;
    check_refused([&] { (void)steady(body, options); }, ErrorCode::bad_value, "from", "this body");
}
