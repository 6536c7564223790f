// Brackets: the exact value inside on every mesh, the widths and rates they reach, and what is refused by name.

#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/answers/bracket.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/field/field.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/section.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/bracket_checks.hpp>

using namespace tepor;
using test::holds, test::rate;

namespace {

/// Square of side `a` with its whole edge as the face "edge".
Section square(double a) {
    Section section;
    section.add("solid", rectangle({0, 0}, {a, a}));
    section.face("edge", {0, 0}, {a, 0});
    section.face("edge", {a, 0}, {a, a});
    section.face("edge", {a, a}, {0, a});
    section.face("edge", {0, a}, {0, 0});
    return section;
}

/// Square duct of ratio 2: "outside" at 0, "inside" at 1.
template <class E>
Body duct(double source) {
    Section section;
    section.add("solid", rectangle({0, 0}, {2, 2}));
    section.cut(rectangle({0.5, 0.5}, {1.5, 1.5}), "inside");
    for (const auto& [a, b] : {std::pair{Point{0, 0}, Point{2, 0}}, std::pair{Point{2, 0}, Point{2, 2}},
                               std::pair{Point{2, 2}, Point{0, 2}}, std::pair{Point{0, 2}, Point{0, 0}}})
        section.face("outside", a, b);
    Body body{triangulate<E>(section, {.size = 0.3})};
    body.in("solid", Material{.conductivity = 1.0});
    if (source != 0.0) body.in("solid", Generation{.per_volume = source});
    body.on("inside", FixedTemperature{1.0});
    body.on("outside", FixedTemperature{0.0});
    return body;
}

/// Wall 0.3 x 0.6 m with insulation bridged by metal, films 8 and 25.
template <class E>
Body wall() {
    Section section;
    section.add("masonry", rectangle({0, 0}, {0.3, 0.6}));
    section.add("insulation", rectangle({0.1, 0}, {0.2, 0.6}));
    section.add("bridge", rectangle({0.1, 0.2}, {0.2, 0.3}));
    section.face("inner", {0, 0}, {0, 0.6});
    section.face("outer", {0.3, 0}, {0.3, 0.6});
    Body body{triangulate<E>(section, {.size = 0.1})};
    body.in("masonry", Material{.conductivity = 0.8});
    body.in("insulation", Material{.conductivity = 0.035});
    body.in("bridge", Material{.conductivity = 50.0});
    body.on("inner", Film{.coefficient = 8.0, .fluid = 20.0});
    body.on("outer", Film{.coefficient = 25.0, .fluid = -5.0});
    return body;
}

template <class E>
constexpr double width() {
    return E::order == 1 ? 1e-3 : 1e-5;
}

template <class Act>
std::string refusal(Act act) {
    try {
        act();
    } catch (const Error& error) {
        CHECK(error.code() == ErrorCode::not_certifiable);
        return error.what();
    }
    return "nothing was refused";
}

bool says(const std::string& text, const char* words) {
    return text.find(words) != std::string::npos;
}

} // namespace

TEST_CASE_TEMPLATE("square duct: heat and conductance bracketed at the optimal rate in spite of the corners", E,
                   Triangle<1>, Triangle<2>) {
    // F. Bowman, Proc. London Math. Soc. 39 (1935) 211: 10.2340925693680517
    const Body body = duct<E>(0.0);
    const BracketOptions options{.relative_width = width<E>()};
    for (const Quantity& quantity :
         {heat_in_through("inside"), heat_out_through("outside"), conductance_between("inside", "outside")}) {
        CAPTURE(quantity.label());
        const Bracket b = bracket(body, quantity, options);
        CHECK(b.reached);
        holds(b, 10.2340925693680517, 1e-12);
        CHECK(rate(b) <= (E::order == 1 ? -0.95 : -1.9));
        CHECK(b.unknowns <= (E::order == 1 ? 3500 : 5000));
    }
}

TEST_CASE_TEMPLATE("square duct with a source: heat through the hot face", E, Triangle<1>, Triangle<2>) {
    holds(bracket(duct<E>(3.0), heat_in_through("inside"), {.relative_width = width<E>()}), 6.799707,
          1.7e-5); // certified before, +- 1.7e-5
}

TEST_CASE_TEMPLATE("bridged wall: conductance and heat flow with sources", E, Triangle<1>, Triangle<2>) {
    Body body = wall<E>();
    const Bracket g = bracket(body, conductance_between("inner", "outer"), {.relative_width = width<E>()});
    CHECK(g.reached);
    holds(g, 0.66203985, 2.6e-6); // certified before: 0.6620373 .. 0.6620424
    CHECK(rate(g) <= (E::order == 1 ? -0.95 : -1.9));
    body.in("masonry", Generation{.per_volume = 100.0});
    const Bracket q = bracket(body, heat_out_through("outer"), {.relative_width = width<E>()});
    CHECK(q.reached);
    holds(q, 23.11373, 6.6e-5);
    // what enters and what is generated leaves: 100 W/m3 in 0.2 x 0.6 m2
    const Bracket in = bracket(body, heat_in_through("inner"), {.relative_width = 10 * width<E>()});
    CHECK(std::abs(in.value + 12.0 - q.value) <= in.width() + q.width());
}

TEST_CASE_TEMPLATE("square with a source: point temperature, mean, spot and edge", E, Triangle<1>, Triangle<2>) {
    Body body{triangulate<E>(square(1.0), {.size = 0.3})};
    body.in("solid", Material{.conductivity = 2.0});
    body.in("solid", Generation{.per_volume = 2.0});
    body.on("edge", FixedTemperature{0.0});
    const BracketOptions options{.relative_width = width<E>()};
    // sine series: H. S. Carslaw and J. C. Jaeger, Conduction of Heat in Solids, 2nd ed., section 5.4
    holds(bracket(body, at({0.4, 0.45}), options), 0.0705543307, 5e-11);
    holds(bracket(body, mean_in("solid"), options), 0.03514425373878841, 1e-14);
    holds(bracket(body, heat_out_through("edge"), options), 2.0, 1e-12);
    // mean over a disc of radius r: T(x0) - f r^2/(8 k) (mean value property with a constant source)
    holds(bracket(body, mean_around({0.4, 0.45}, 0.2), options), 0.0705543307 - 0.005, 5e-11);
    holds(bracket(body, generated_in("solid"), options), 2.0, 1e-13);
    holds(bracket(body, mean_on("edge"), options), 0.0, 1e-13);
}

TEST_CASE_TEMPLATE("the temperature on a straight insulated edge is bracketed with half a disc", E, Triangle<1>,
                   Triangle<2>) {
    // half of the unit square with a source, cut along its insulated middle line: the point (0.5, 0.45) lies on it
    Section section;
    section.add("solid", rectangle({0, 0}, {0.5, 1}));
    section.face("edge", {0, 0}, {0.5, 0});
    section.face("edge", {0.5, 1}, {0, 1});
    section.face("edge", {0, 1}, {0, 0});
    Body half{triangulate<E>(section, {.size = 0.3})};
    half.in("solid", Material{.conductivity = 1.0});
    half.in("solid", Generation{.per_volume = 1.0});
    half.on("edge", FixedTemperature{0.0});
    Body whole{triangulate<E>(square(1.0), {.size = 0.3})};
    whole.in("solid", Material{.conductivity = 1.0});
    whole.in("solid", Generation{.per_volume = 1.0});
    whole.on("edge", FixedTemperature{0.0});
    const Bracket a = bracket(half, at({0.5, 0.45}), {.relative_width = width<E>()});
    const Bracket b = bracket(whole, at({0.5, 0.45}), {.relative_width = width<E>()});
    CHECK(a.reached);
    CHECK(std::max(a.lower, b.lower) <= std::min(a.upper, b.upper)); // the same number
}

TEST_CASE_TEMPLATE("checkerboard of conductivities 1 and 10: the square root of their product is inside", E,
                   Triangle<1>, Triangle<2>) {
    // J. B. Keller, J. Math. Phys. 5 (1964) 548
    Section section;
    section.add("one", rectangle({0, 0}, {1, 1}));
    section.add("ten", rectangle({0.5, 0}, {1, 0.5}));
    section.add("ten", rectangle({0, 0.5}, {0.5, 1}));
    section.face("left", {0, 0}, {0, 1});
    section.face("right", {1, 0}, {1, 1});
    Body body{triangulate<E>(section, {.size = 0.3})};
    body.in("one", Material{.conductivity = 1.0});
    body.in("ten", Material{.conductivity = 10.0});
    body.on("left", FixedTemperature{1.0});
    body.on("right", FixedTemperature{0.0});
    const Bracket b =
        bracket(body, conductance_between("left", "right"), {.relative_width = E::order == 1 ? 3e-3 : 5e-5});
    CHECK(b.reached);
    holds(b, std::sqrt(10.0), 1e-14);
    CHECK(b.unknowns <= 3000);
    CHECK(rate(b) <= (E::order == 1 ? -0.95 : -1.9));
}

TEST_CASE("contacts, side films, local heat and orthotropic conductors are bracketed together, and nested") {
    Section section;
    section.add("plate", rectangle({0, 0}, {0.2, 0.1}));
    section.add("block", rectangle({0.2, 0}, {0.3, 0.1}));
    section.face("base", {0, 0}, {0, 0.1});
    section.face("tip", {0.3, 0}, {0.3, 0.1});
    const auto make = [&](auto element) {
        using E = decltype(element);
        Body body{triangulate<E>(section, {.size = 0.03}, Planar{.depth = 0.5})};
        body.in("plate", Material{.conductivity = orthotropic(40.0, 10.0)});
        body.in("block", Material{.conductivity = 5.0});
        body.in("block", SideFilm{.coefficient = 30.0, .fluid = 20.0, .thickness = 0.004});
        body.between("plate", "block", Contact{.conductance = 400.0});
        body.on("base", Flux{.into = 8000.0});
        body.on("tip", Film{.coefficient = 100.0, .fluid = 15.0});
        body.at({0.1, 0.05}, LocalHeat{.total = 30.0, .radius = 0.01});
        return body;
    };
    const Body one = make(Triangle<1>{}), two = make(Triangle<2>{});
    for (const Quantity& quantity :
         {heat_out_through("tip"), heat_from("plate", "block"), mean_on("base"), mean_in("block"), mean_on("tip")}) {
        CAPTURE(quantity.label());
        const Bracket a = bracket(one, quantity, {.relative_width = 1e-3}),
                      b = bracket(two, quantity, {.relative_width = 1e-5});
        CHECK(a.reached);
        CHECK(b.reached);
        CHECK(std::max(a.lower, b.lower) <= std::min(a.upper, b.upper));
        for (std::size_t i = 1; i < b.passes.size(); ++i)
            CHECK(b.passes[i].lower >=
                  b.passes[i - 1].lower - 0.3 * b.passes[i - 1].upper + 0.3 * b.passes[i - 1].lower);
        if (quantity.kind() == Quantity::Kind::heat_from) {
            // 8000 W/m2 over 0.1 x 0.5 m2 and 30 W have no other way
            CHECK(std::abs(b.value - 430.0) <= 1e-7);
        }
    }
}

TEST_CASE("one dimension: wall of two layers with films, contact and source, bracketed to rounding") {
    std::vector<Layer> stack{{.region = "a", .thickness = 0.2, .cells = 2},
                             {.region = "b", .thickness = 0.1, .cells = 1}};
    Body slab{layers<Segment<1>>(stack)};
    slab.in("a", Material{.conductivity = 1.5}).in("b", Material{.conductivity = 0.3});
    slab.in("a", Generation{.per_volume = 1000.0});
    slab.between("a", "b", Contact{.conductance = 200.0});
    slab.on("inner", Film{.coefficient = 50.0, .fluid = 900.0}).on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    // resistances in series, the source entering at its own: common practice
    const double after = 0.1 / 0.3 + 1.0 / 200.0 + 1.0 / 12.0, before = 1.0 / 50.0 + 0.2 / 1.5;
    const double in =
        (875.0 - 200.0 * after - 1000.0 * 0.02 / 1.5) / (before + after); // drop by the source in "a": f L^2/(2 k)
    const Bracket out = bracket(slab, heat_out_through("outer"), {.relative_width = 1e-10});
    CHECK(out.reached);
    holds(out, in + 200.0, 1e-9);
    holds(bracket(slab, heat_from("a", "b"), {.relative_width = 1e-10}), in + 200.0, 1e-9);
    holds(bracket(slab, mean_on("outer"), {.relative_width = 1e-10}), 25.0 + (in + 200.0) / 12.0, 1e-9);
    Body ball{layers<Segment<2>>({{.region = "a", .thickness = 0.1, .cells = 4}}, Spherical{})};
    ball.in("a", Material{.conductivity = 2.0});
    ball.in("a", Generation{.per_volume = 6e4});
    ball.on("outer", FixedTemperature{10.0});
    // T = 10 + f (R^2 - r^2)/(6 k), mean f R^2/(15 k) above the surface: H. S. Carslaw and J. C. Jaeger, section 9.1
    holds(bracket(ball, mean_in("a"), {.relative_width = 1e-9}), 10.0 + 6e4 * 0.01 / 30.0, 1e-9);
}

TEST_CASE("body of revolution: mean temperature and heat flow of a finite cylinder, order 1") {
    Section section;
    section.add("solid", rectangle({0, 0}, {1, 1}));
    section.face("cold", {0, 0}, {1, 0}, {1, 1});
    section.face("cold", {1, 1}, {0, 1});
    Body body{triangulate<Triangle<1>>(section, {.size = 0.3}, Cylindrical{})};
    body.in("solid", Material{.conductivity = 1.0});
    body.in("solid", Generation{.per_volume = 1.0});
    body.on("cold", FixedTemperature{0.0});
    // sines along the axis: H. S. Carslaw and J. C. Jaeger, Conduction of Heat in Solids, 2nd ed., section 8.3
    double mean = 0.0;
    for (int n = 1; n < 4000; n += 2) {
        const double m = n * pi;
        const double ratio = m < 600.0 ? std::cyl_bessel_i(1.0, m) / std::cyl_bessel_i(0.0, m) : 1.0 - 0.5 / m;
        mean += 16.0 / (m * m * m * m) * (0.5 - ratio / m);
    }
    const Bracket inside = bracket(body, mean_in("solid"), {.relative_width = 2e-3});
    CHECK(inside.reached);
    holds(inside, mean, 1e-12);
    CHECK(rate(inside) <= -0.9);
    holds(bracket(body, heat_out_through("cold"), {.relative_width = 2e-3}), pi, 1e-12);
    CHECK(says(refusal([&] { static_cast<void>(bracket(body, at({0.5, 0.5}))); }), "r-z"));
}

TEST_CASE("a curved section is bracketed as its polygon, and says so") {
    // eccentric annulus: S = 2 pi/acosh((D^2 + d^2 - 4 z^2)/(2 D d)); the polygon tends to it from below or above
    Section section;
    section.face("outside", section.add("ring", circle({0, 0}, 0.1)));
    section.cut(circle({0.03, 0}, 0.04), "inside");
    const double exact = 0.04 * 2.0 * pi / std::acosh((0.04 + 0.0064 - 0.0036) / (2 * 0.2 * 0.08));
    double last = 1e300;
    for (const double size : {0.02, 0.005}) {
        Body body{triangulate<Triangle<2>>(section, {.size = size})};
        body.in("ring", Material{.conductivity = 0.04});
        body.on("inside", FixedTemperature{150.0}).on("outside", FixedTemperature{30.0});
        const Bracket b = bracket(body, conductance_between("inside", "outside"), {.relative_width = 1e-4});
        CHECK(b.reached);
        CHECK(says(b.remark, "polygon"));
        const double off = std::abs(b.value - exact);
        CHECK(off <= 0.3 * last);
        last = off;
    }
    CHECK(last <= 2e-3 * exact);
}

TEST_CASE("a bracket stops at its budget and says that the width was not reached") {
    const Body body = duct<Triangle<1>>(0.0);
    const Bracket b = bracket(body, heat_in_through("inside"), {.relative_width = 1e-6, .max_unknowns = 500});
    CHECK_FALSE(b.reached);
    CHECK(b.unknowns <= 500);
    CHECK(b.passes.size() > 3);
    holds(b, 10.2340925693680517, 1e-12);
    const Bracket quick = bracket(body, heat_in_through("inside"), {.relative_width = 1e-9, .max_seconds = 1e-9});
    CHECK(quick.passes.size() == 1);
    holds(quick, 10.2340925693680517, 1e-12);
    CHECK_THROWS_AS(static_cast<void>(bracket(body, heat_in_through("inside"), {.relative_width = -1.0})), Error);
    CHECK_THROWS_AS(static_cast<void>(bracket(body, heat_in_through("inside"), {.max_unknowns = 0})), Error);
}

TEST_CASE("what has no bound is refused by name") {
    const auto base = [] {
        Body body{triangulate<Triangle<2>>(square(1.0), {.size = 0.4})};
        return body;
    };
    const auto asked = [](const Body& body, const Quantity& quantity) {
        return refusal([&] { static_cast<void>(bracket(body, quantity)); });
    };
    {
        Body body = base();
        body.in("solid", Material{.conductivity = table({{0, 1.0}, {100, 2.0}}, Outside::hold)});
        body.on("edge", FixedTemperature{20.0});
        CHECK(says(asked(body, mean_in("solid")), "conductivity of"));
        CHECK(says(asked(body, mean_in("solid")), "depends on the temperature"));
    }
    {
        Body body = base();
        body.in("solid", Material{.conductivity = 1.0});
        body.on("edge", Radiation{.emissivity = 0.5, .surroundings = 25.0});
        body.in("solid", Generation{.per_volume = 100.0});
        CHECK(says(asked(body, heat_out_through("edge")), "radiates"));
    }
    {
        Body body = base();
        body.in("solid", Material{.conductivity = 1.0});
        body.on("edge", FixedTemperature{of_place([](Point p) { return p.x; })});
        CHECK(says(asked(body, mean_in("solid")), "depends on place"));
    }
    {
        Body body = base();
        body.in("solid", Material{.conductivity = 1.0});
        body.on("edge", Film{.coefficient = 5.0, .fluid = 25.0});
        body.in("solid", Generation{.per_volume = 100.0});
        CHECK(says(asked(body, hottest_in("solid")), "extreme"));
        CHECK(says(asked(body, at({0.0, 0.5})), "one material"));
    }
    {
        Tiles drawing;
        drawing.add("solid", {0, 0}, {1, 1});
        Body body{tiles<Quadrilateral<1>>(drawing, {.size = 0.25})};
        body.in("solid", Material{.conductivity = 1.0});
        body.on("left", FixedTemperature{20.0});
        CHECK(says(asked(body, mean_in("solid")), "quadrilaterals"));
    }
}
