#include <array>
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/describe/law.hpp>
#include <vector>

using namespace tepor;

namespace {

/// A batch of three points.
struct Batch {
    std::array<double, 3> temperature{20.0, 350.0, 900.0};
    std::array<double, 3> fluid{15.0, 25.0, 35.0};
    std::array<double, 3> x{0.1, 0.2, 0.3};
    std::array<double, 3> y{1.0, 2.0, 3.0};
    std::vector<double> parameters;
    double time = 4.0;

    [[nodiscard]] LawPoints points(bool with_fluid = true) const {
        return {3,    temperature.data(), with_fluid ? fluid.data() : nullptr, x.data(), y.data(),
                time, parameters.data()};
    }
};

struct Answer {
    std::array<double, 3> value{};
    std::array<double, 3> slope{};
};

Answer ask(const Law& law, const Batch& batch, bool with_fluid = true) {
    Answer a;
    CHECK(law.function().evaluate(batch.points(with_fluid), a.value.data(), a.slope.data()) == 0);
    return a;
}

/// All lanes against central differences of the values.
void check_lanes(const Law& law, Batch batch, double relative) {
    const auto lanes = static_cast<std::size_t>(law_parameter_lane) + law.parameters().size();
    std::vector<double> derivative(3 * lanes);
    CHECK(law.function().derivatives(batch.points(), derivative.data()) == 0);
    for (std::size_t lane = 0; lane < lanes; ++lane) {
        const auto moved = [&](double by) {
            Batch b = batch;
            for (std::size_t i = 0; i < 3; ++i) {
                if (lane == law_temperature_lane) b.temperature[i] += by;
                if (lane == law_fluid_lane) b.fluid[i] += by;
                if (lane == law_x_lane) b.x[i] += by;
                if (lane == law_y_lane) b.y[i] += by;
            }
            if (lane >= law_parameter_lane) b.parameters[lane - law_parameter_lane] += by;
            return ask(law, b).value;
        };
        const double h = 1e-5;
        const auto up = moved(h);
        const auto down = moved(-h);
        for (std::size_t i = 0; i < 3; ++i) {
            CAPTURE(lane);
            CAPTURE(i);
            const double slope = (up[i] - down[i]) / (2.0 * h);
            CHECK(std::abs(derivative[lane * 3 + i] - slope) <= relative * (1.0 + std::abs(slope)));
        }
    }
}

const Parameter current{"current", 800.0};
const Parameter scale{"scale", 2.0};

} // namespace

TEST_CASE("a generic law has values and exact slopes by temperature") {
    const Law l = law([](const auto& s) { return 1.5 * exp(0.002 * s.temperature) + s.x * s.y; });
    CHECK(l.exact_slope());
    const Batch batch;
    const Answer a = ask(l, batch);
    for (std::size_t i = 0; i < 3; ++i) {
        const double e = 1.5 * std::exp(0.002 * batch.temperature[i]);
        CHECK(std::abs(a.value[i] - (e + batch.x[i] * batch.y[i])) <= 1e-13 * e);
        CHECK(std::abs(a.slope[i] - 0.002 * e) <= 1e-15 * e);
    }
}

TEST_CASE("a generic law knows its derivatives by temperature, fluid, place and each parameter") {
    Batch batch;
    batch.parameters = {800.0, 2.0};
    const Law l = law({current, scale}, [](const auto& s, auto amps, auto f) {
        return f * amps * amps * 1e-6 * (1.0 + 0.004 * s.temperature) +
               pow(abs(s.temperature - s.fluid) + 1.0, 0.25) * s.x + sqrt(s.y);
    });
    CHECK(l.parameters().size() == 2);
    CHECK(l.parameters()[0] == current);
    check_lanes(l, batch, 1e-7);
}

TEST_CASE("a law of plain doubles takes its slopes by differences, good to ten digits of a smooth law") {
    Batch batch;
    batch.parameters = {2.0};
    const Law l = law({scale}, [](const Spot& s, double f) { return f * std::exp(0.001 * s.temperature) + s.x; });
    CHECK(!l.exact_slope());
    const Answer a = ask(l, batch);
    for (std::size_t i = 0; i < 3; ++i) {
        const double slope = 0.002 * std::exp(0.001 * batch.temperature[i]);
        CHECK(std::abs(a.slope[i] - slope) <= 1e-9 * slope);
    }
    check_lanes(l, batch, 1e-6);
}

TEST_CASE("a law of plain doubles may bring its own slope") {
    const Law l = law([](const Spot& s) { return Sloped{s.temperature * s.temperature, -7.0}; });
    const Answer a = ask(l, Batch{});
    CHECK(a.value[1] == 350.0 * 350.0);
    CHECK(a.slope[1] == -7.0); // taken at its word
}

TEST_CASE("a law inside the body sees a fluid of zero") {
    const Law l = law([](const auto& s) { return s.temperature + 1000.0 * s.fluid; });
    CHECK(ask(l, Batch{}, false).value[0] == 20.0);
    CHECK(ask(l, Batch{}, true).value[0] == 15020.0);
}

TEST_CASE("a law of place keeps the body linear, whether it takes a place or a point") {
    const Law generic = of_place([](const auto& p) { return 5e4 * exp(-p.x / 0.02); });
    const Law place = of_place([](const Place& p) { return p.x + p.time; });
    const Law point = of_place([](const Point& p) { return p.x * p.y; });
    for (const Law* l : {&generic, &place, &point}) {
        CHECK(!l->uses().temperature);
        CHECK(l->uses().place);
    }
    CHECK(!generic.uses().time); // integrated once, also when marching
    CHECK(place.uses().time);
    CHECK(!point.uses().time);
    CHECK(std::abs(ask(generic, Batch{}).value[0] - 5e4 * std::exp(-5.0)) <= 1e-9);
    CHECK(ask(place, Batch{}).value[0] == 4.1);
    CHECK(ask(point, Batch{}).value[2] == 0.3 * 3.0);
    Batch batch;
    batch.parameters = {2.0};
    check_lanes(of_place({scale}, [](const auto& p, auto f) { return f * p.x * p.y; }), batch, 1e-8);
}

TEST_CASE("a function of time uses nothing else") {
    const Law l = of_time([](double t) { return 20.0 + 5.0 * t; });
    CHECK(!l.uses().temperature);
    CHECK(!l.uses().place);
    CHECK(l.uses().time);
    CHECK(ask(l, Batch{}).value[0] == 40.0);
}

TEST_CASE("a law under a name is the same function") {
    const Law l = law([](const auto& s) { return 2.0 * s.temperature; });
    CHECK(l.name() == "own law");
    CHECK(l.named("brick").name() == "brick");
    CHECK(&l.named("brick").function() == &l.function());
}

TEST_CASE("an unqualified abs in a generic law is never the integer one") {
    const Law l = law([](const auto& s) { return abs(s.temperature - 20.4); });
    CHECK(std::abs(ask(l, Batch{}).value[0] - 0.4) <= 1e-12);
}

TEST_CASE("a generic law of place and time reads both, with slopes by place") {
    const Law l = of_place_and_time([](const auto& p) { return p.x + 2.0 * p.time; });
    CHECK(l.uses().time);
    CHECK(l.uses().place);
    CHECK(!l.uses().temperature);
    CHECK(std::abs(ask(l, Batch{}).value[0] - (ask(of_place([](const auto& p) { return p.x; }), Batch{}).value[0] +
                                               ask(of_time([](double t) { return 2.0 * t; }), Batch{}).value[0])) <=
          1e-12);
    Batch batch;
    batch.parameters = {2.0};
    check_lanes(of_place_and_time({scale}, [](const auto& p, auto f) { return f * p.x * p.y * (1.0 + p.time); }), batch,
                1e-8);
}
