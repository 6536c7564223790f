// The text of brackets, bounds and estimates: what stands in them, word by word where people rely on it.

#include <doctest/doctest.h>
#include <sstream>
#include <string>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/section.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/output/certainty.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

bool has(const std::string& text, const std::string& words) {
    INFO(text);
    CHECK(text.find(words) != std::string::npos);
    return text.find(words) != std::string::npos;
}

} // namespace

TEST_CASE("a bracket prints its interval, whether it was reached, and every pass") {
    Bracket b;
    b.lower = 10.25, b.value = 10.5, b.upper = 10.75;
    b.cells = 40, b.unknowns = 99, b.reached = true;
    b.passes = {{20, 55, 9.0, 12.0, 0.001}, {40, 99, 10.25, 10.75, 0.002}};
    const std::string text = to_text(b);
    CHECK(has(text, "guaranteed: 10.25 <= 10.5 <= 10.75, 0.5 wide"));
    CHECK(has(text, "as narrow as asked: 40 cells, 99 unknowns, 2 passes"));
    CHECK(has(text, "55"));
    CHECK(text.find("polygon") == std::string::npos);
    b.reached = false;
    b.remark = "of the polygon: curved sides are replaced by their chords";
    std::ostringstream out;
    out << b;
    CHECK(has(out.str(), "not as narrow as asked, the budget is spent"));
    CHECK(has(fmt::format("{}", b), "of the polygon"));
}

TEST_CASE("an error bound prints its size beside the field's and where it sits") {
    ErrorBound bound;
    bound.total = 0.5, bound.field_energy = 10.0, bound.residual = 1e-9, bound.rounding = 2e-12;
    bound.per_cell = {0.1, 0.4, 0.2, 0.1};
    const std::string text = to_text(bound);
    CHECK(has(text, "at most 0.5 (W K)^(1/2), 0.05 of the field's 10"));
    CHECK(has(text, "left over by the solver 1e-09, rounding 2e-12"));
    CHECK(has(text, "1 of 4 cells hold half of its square")); // 0.16 of 0.22
}

TEST_CASE("an estimate says that it is none") {
    Estimate e;
    e.value = 3.25, e.likely_error = 0.01, e.order = 2.0;
    e.passes = {{8, 9, 3.0, 0.001}};
    CHECK(has(to_text(e), "3.25, likely within 0.01 (an estimate, not a bound)"));
    CHECK(has(to_text(e), "not as accurate as asked"));
    CHECK(has(to_text(e), "the error falls as h^2"));
}

TEST_CASE("the report of a bracket of a body holds the numbers of the bracket") {
    Section section;
    section.add("solid", rectangle({0, 0}, {1, 1}));
    section.rest("edge");
    Body body{triangulate<Triangle<2>>(section, {.size = 0.3})};
    body.in("solid", Material{.conductivity = 1.0}).in("solid", Generation{.per_volume = 1.0});
    body.on("edge", FixedTemperature{0.0});
    const Bracket b = bracket(body, mean_in("solid"), {.relative_width = 1e-3});
    CHECK(has(to_text(b), fmt::format("{} cells", b.cells)));
    CHECK(has(to_text(steady(body).error_bound()), "cells hold half"));
}
