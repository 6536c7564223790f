// The text of answers: numbers and words people look for.

#include <doctest/doctest.h>
#include <sstream>
#include <tepor/mesh/layers.hpp>
#include <tepor/output/answers.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

const Parameter k{"conductivity", 0.5}, h{"film", 10.0};

Body wall() {
    Body body{layers<Segment<1>>({{.region = "wall", .thickness = 0.1, .cells = 4}})};
    body.in("wall", Material{.conductivity = k, .density = 1000, .specific_heat = 900});
    body.on("inner", FixedTemperature{100.0});
    body.on("outer", Film{.coefficient = h, .fluid = 20.0});
    return body;
}

bool has(const std::string& text, const std::string& words) {
    return text.find(words) != std::string::npos;
}

} // namespace

TEST_CASE("a table of sensitivities ranks by relative size") {
    // q = 80 / (0.1 / k + 1 / h) = 266.667; k counts (0.1/k)/(0.3) = 2/3, h 1/3
    const std::string text = to_text(gradient(steady(wall()), heat_out_through("outer")));
    CHECK(has(text, "heat out through \"outer\" = 266.667 W"));
    CHECK(has(text, "0.6667"));
    CHECK(has(text, "0.3333"));
    CHECK(text.find("conductivity") < text.find("film"));
}

TEST_CASE("a sizing prints its answer or the reason there is none") {
    std::ostringstream out;
    out << size_for(wall(), k, heat_out_through("outer"), 200.0);
    CHECK(has(out.str(), "\"conductivity\" = 0.333333"));
    CHECK(has(fmt::format("{}", size_for(wall(), k, heat_out_through("outer"), 1e4)), "no single answer: "));
}

TEST_CASE("a fit prints intervals, bounds and agreement") {
    const Quantity q = heat_out_through("outer");
    const std::string text = to_text(fit(wall(), {{.parameter = k, .from = 0.1, .to = 0.4}}, {{q, 266.667, 2.0}}));
    CHECK(has(text, "95 %"));
    CHECK(has(text, "\"conductivity\" ended on its bound"));
    CHECK(has(text, "chi-square"));
}

TEST_CASE("a compact model prints its states, bound and gains") {
    const Parameter fluid{"fluid", 20.0};
    Body body = wall();
    body.replace("outer", Film{.coefficient = h, .fluid = fluid});
    const std::string text =
        to_text(compact(body, {.inputs = {fluid}, .outputs = {mean_on("outer")}, .sample_time = 60.0}));
    CHECK(has(text, "states, step 60 s, 1 inputs, 1 outputs"));
    CHECK(has(text, "0.666667")); // steady gain 0.2 / 0.3
}
