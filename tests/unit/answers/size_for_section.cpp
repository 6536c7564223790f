// Sizing on a drawn section with a contact and a Parameter inside a law, and how its reasons read there.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/size_for.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

const Parameter power{"power", 300.0};
const Parameter joint{"joint", 500.0};
const Parameter growth{"growth", 1e-3};

/// A rod in a block: a circle with a joint around it, a conductivity with a Parameter inside its law, film and radiation on top.
Body rod_in_block(double height = 0.03) {
    Section section;
    section.add("block", rectangle({0.0, 0.0}, {0.08, 0.06}));
    section.add("rod", circle({0.04, height}, 0.008));
    section.face("top", {0.0, 0.06}, {0.08, 0.06});
    Body body{triangulate<Triangle<2>>(section, {.size = 0.01})};
    body.in("block", Material{.conductivity = law(
                                  {growth}, [](const auto& s, auto b) { return 3.0 * (1.0 + b * s.temperature); })});
    body.in("rod", Material{.conductivity = 16.0});
    body.in("rod", Generation{.total = power});
    body.between("block", "rod", Contact{.conductance = joint});
    body.on("top", Film{.coefficient = 20.0, .fluid = 25.0});
    body.on("top", Radiation{.emissivity = 0.9, .surroundings = 25.0});
    return body;
}

const Quantity hottest = hottest_in("rod");
const Quantity top = mean_on("top");

} // namespace

TEST_CASE("power, joint and a Parameter inside a law are sized on a section within eight solves") {
    const Body body = rod_in_block();
    struct Wanted {
        Parameter parameter;
        Quantity quantity;
        Target target;
        SizeOptions options;
    };
    const double now = steady(body)[hottest];
    for (const Wanted& w : {Wanted{power, hottest, at_most(180.0), {}}, Wanted{power, top, 80.0, {}},
                            Wanted{joint, hottest, at_most(now - 2.0), {}},
                            Wanted{growth, hottest, now + 3.0, {.from = 1e-5, .to = 5e-3}}}) {
        CAPTURE(w.parameter.name());
        const Sized sized = size_for(body, w.parameter, w.quantity, w.target, w.options);
        CAPTURE(sized.message);
        REQUIRE(bool(sized));
        CHECK(sized.solves <= 8);
        Body other = body;
        other.set(w.parameter, sized.value);
        CHECK(std::abs(steady(other)[w.quantity] - w.target.value) <= 1e-4);
        if (w.target.limit()) CHECK(sized.reached <= w.target.value);
    }
    CHECK(body.value(power) == 300.0);
    // what leaves in the steady state is the power, whatever the joint: the slope is zero everywhere
    const Sized no = size_for(body, joint, heat_out_through("top"), 500.0);
    CHECK(no.reason == SizeReason::unreachable);
    CHECK(no.message.find("does not reach 500") != std::string::npos);
}

TEST_CASE("the place of a rod is sized through the drawing, two parameters meet two targets on a section") {
    const double deep = steady(rod_in_block(0.02))[hottest];
    const double shallow = steady(rod_in_block(0.045))[hottest];
    REQUIRE(deep > shallow + 1.0);
    const double wanted = 0.5 * (deep + shallow);
    // every value is another mesh: the quantity carries its noise, and the tolerance must not ask for less
    const Sized place = size_for([](double y) { return rod_in_block(y); }, hottest, at_most(wanted),
                                 SizeOptions{.from = 0.015, .to = 0.048, .tolerance = 1e-4});
    CAPTURE(place.message);
    REQUIRE(bool(place));
    CHECK(place.solves <= 12);
    CHECK(place.value > 0.02);
    CHECK(place.value < 0.045);
    CHECK(place.reached <= wanted);
    const SizedTogether both = size_for(rod_in_block(), {{power}, {joint}}, {{top, 80.0}, {hottest, 170.0}});
    CAPTURE(both.message);
    REQUIRE(bool(both));
    CHECK(std::abs(both.reached[0] - 80.0) <= 1e-5);
    CHECK(std::abs(both.reached[1] - 170.0) <= 1e-5);
    CHECK(both.solves <= 8);
}
