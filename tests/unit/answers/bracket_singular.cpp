// Brackets on the L: in spite of its corner the width of a quantity falls as the -1st and -2nd power of the unknowns.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/bracket.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/section.hpp>
#include <tepor/mesh/triangulate.hpp>

using namespace tepor;

TEST_CASE_TEMPLATE("L with a source: means over the whole and over a part, at the optimal rate", E, Triangle<1>,
                   Triangle<2>) {
    Section section;
    section.add("solid", rectangle({0, 0}, {2, 2}));
    section.add("part", rectangle({1, 0.5}, {1.5, 1}));
    section.cut(rectangle({1, 1}, {2, 2}));
    section.rest("edge");
    Body body{triangulate<E>(section, {.size = 0.4})};
    body.in("solid", Material{.conductivity = 1.0}).in("part", Material{.conductivity = 1.0});
    body.in("solid", Generation{.per_volume = 1.0}).in("part", Generation{.per_volume = 1.0});
    body.on("edge", FixedTemperature{0.0});
    // certified before: mean over the part 0.0841970647 +- 1.5e-7
    const Bracket b = bracket(body, mean_in("part"), {.relative_width = E::order == 1 ? 4e-3 : 4e-5});
    CHECK(b.reached);
    for (const BracketPass& pass : b.passes) {
        CAPTURE(pass.unknowns);
        CHECK(pass.lower <= 0.0841970647 + 1.5e-7);
        CHECK(pass.upper >= 0.0841970647 - 1.5e-7);
    }
    const BracketPass &first = b.passes[b.passes.size() / 2], &last = b.passes.back();
    const double rate = std::log((last.upper - last.lower) / (first.upper - first.lower)) /
                        std::log(static_cast<double>(last.unknowns) / static_cast<double>(first.unknowns));
    MESSAGE("L, order ", E::order, ": rate of the width ", rate, ", ", last.unknowns, " unknowns");
    CHECK(rate <= (E::order == 1 ? -0.95 : -1.9));
    // certified before: 3.6e-6 of the value from 8.9e3 unknowns of order 2, which at that rate is 4e-5 from 2.7e3
    CHECK(b.unknowns <= (E::order == 1 ? 4600 : 3800));
    // all heat made inside leaves through the edge: 3 W
    const Bracket out = bracket(body, heat_out_through("edge"), {.relative_width = 1e-6});
    CHECK(out.lower <= 3.0);
    CHECK(out.upper >= 3.0);
}
