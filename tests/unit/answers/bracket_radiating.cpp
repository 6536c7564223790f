// Brackets of bodies with radiating faces: closed forms inside on every mesh, rates, balances, and what is refused.

#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/answers/bracket.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/section.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tests/support/bracket_checks.hpp>

using namespace tepor;
using test::holds, test::rate;

namespace {

bool meet(const Bracket& a, const Bracket& b) {
    return std::max(a.lower, b.lower) <= std::min(a.upper, b.upper);
}

/// Zero of a rising function on [a, b], to rounding.
template <class F>
double zero(F f, double a, double b) {
    for (int i = 0; i < 200; ++i) {
        const double m = 0.5 * (a + b);
        (f(m) < 0.0 ? a : b) = m;
    }
    return 0.5 * (a + b);
}

double emitted(double emissivity, double kelvin, double surroundings) {
    return emissivity * 5.670374419e-8 * (std::pow(kelvin, 4) - std::pow(surroundings, 4)); // CODATA 2018
}

template <class E>
constexpr double width() {
    return E::order == 1 ? 2e-3 : 2e-5;
}

/// Plate 0.1 x 0.02 m of k = 30: one end held, films on its flat sides of 3 mm, the other end radiating.
template <class E>
Body fin(double film_at_tip) {
    Section section;
    section.add("fin", rectangle({0, 0}, {0.1, 0.02}));
    section.face("base", {0, 0}, {0, 0.02});
    section.face("tip", {0.1, 0}, {0.1, 0.02});
    Body body{triangulate<E>(section, {.size = 0.02}, Planar{.depth = 1.0})};
    body.in("fin", Material{.conductivity = 30.0});
    body.in("fin", SideFilm{.coefficient = 20.0, .fluid = 40.0, .thickness = 0.006});
    body.on("base", FixedTemperature{800.0});
    body.on("tip", Radiation{.emissivity = 0.8, .surroundings = 25.0});
    if (film_at_tip > 0.0) body.on("tip", Film{.coefficient = film_at_tip, .fluid = 30.0});
    return body;
}

/// The same in closed form: theta = a cosh m(L - x) + b sinh m(L - x) above the fluid (D. R. Harper and W. B. Brown, NACA
/// Report 158 (1922); F. P. Incropera et al., section 3.6), b from the balance of the tip.
struct ExactFin {
    double m, a, b;
    explicit ExactFin(double film) : m(std::sqrt(2.0 * 20.0 / (0.006 * 30.0))), a(0.0), b(0.0) {
        const auto slope = [&](double tip) {
            return (emitted(0.8, 40.0 + tip + 273.15, 298.15) + film * (40.0 + tip - 30.0)) / (30.0 * m);
        };
        a = zero([&](double tip) { return tip * std::cosh(0.1 * m) + slope(tip) * std::sinh(0.1 * m) - 760.0; }, 0.0,
                 760.0);
        b = slope(a);
    }
    [[nodiscard]] double at(double x) const {
        return 40.0 + a * std::cosh(m * (0.1 - x)) + b * std::sinh(m * (0.1 - x));
    }
    [[nodiscard]] double flow(double x) const {
        return 0.02 * 30.0 * m * (a * std::sinh(m * (0.1 - x)) + b * std::cosh(m * (0.1 - x)));
    }
    [[nodiscard]] double mean() const {
        return 40.0 + (a * std::sinh(0.1 * m) + b * (std::cosh(0.1 * m) - 1.0)) / (0.1 * m);
    }
};

/// Wall 0.3 x 0.6 m, insulation bridged by metal: film 8 to 900 K inside, radiation of 0.9 to 300 K outside.
template <class E>
Body wall() {
    Section section;
    section.add("masonry", rectangle({0, 0}, {0.3, 0.6}));
    section.add("insulation", rectangle({0.1, 0}, {0.2, 0.6}));
    section.add("bridge", rectangle({0.1, 0.2}, {0.2, 0.3}));
    section.face("inner", {0, 0}, {0, 0.6});
    section.face("outer", {0.3, 0}, {0.3, 0.6});
    Body body{triangulate<E>(section, {.size = 0.1}), TemperatureScale::kelvin};
    body.in("masonry", Material{.conductivity = 0.8});
    body.in("insulation", Material{.conductivity = 0.035});
    body.in("bridge", Material{.conductivity = 50.0});
    body.on("inner", Film{.coefficient = 8.0, .fluid = 900.0});
    body.on("outer", Radiation{.emissivity = 0.9, .surroundings = 300.0});
    return body;
}

std::string refusal(const Body& body, const Quantity& quantity) {
    try {
        static_cast<void>(bracket(body, quantity));
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

TEST_CASE_TEMPLATE("fin with a radiating tip: its closed form is inside, for heat, means and a point", E, Triangle<1>,
                   Triangle<2>) {
    for (const double film : {0.0, 15.0}) {
        CAPTURE(film);
        const ExactFin exact(film);
        const Body body = fin<E>(film);
        const BracketOptions options{.relative_width = width<E>()};
        const Bracket tip = bracket(body, heat_out_through("tip"), options);
        CHECK(tip.reached);
        holds(tip, exact.flow(0.1), 1e-9);
        CHECK(rate(tip) <= (E::order == 1 ? -0.9 : -1.8));
        for (const auto& [quantity, value] :
             {std::pair{heat_in_through("base"), exact.flow(0.0)}, std::pair{mean_on("tip"), exact.at(0.1)},
              std::pair{mean_in("fin"), exact.mean()}}) {
            const std::string asked = quantity.label(); // clang 14 does not capture structured bindings
            CAPTURE(asked);
            const Bracket b = bracket(body, quantity, options);
            CHECK(b.reached);
            holds(b, value, 1e-9);
        }
        holds(bracket(body, mean_around({0.06, 0.01}, 0.0001), options), exact.at(0.06), 1e-5);
    }
}

TEST_CASE_TEMPLATE("bridged wall with a radiating face: bracketed from both sides, and the heat of both faces agrees",
                   E, Triangle<1>, Triangle<2>) {
    const Body body = wall<E>();
    const BracketOptions options{.relative_width = 10 * width<E>()};
    const Bracket out = bracket(body, heat_out_through("outer"), options);
    CHECK(out.reached);
    holds(out, 360.186, 0.21); // certified before, on a mesh of 5.6e3 unknowns
    CHECK(rate(out) <= (E::order == 1 ? -0.9 : -1.8));
    const Bracket in = bracket(body, heat_in_through("inner"), options);
    CHECK(in.reached);
    CHECK(meet(in, out));
    // the other order of element says the same of the hot spot behind the bridge
    const Bracket spot = bracket(body, at({0.15, 0.25}), options);
    const Bracket other = bracket(wall<Triangle<E::order == 1 ? 2 : 1>>(), at({0.15, 0.25}), options);
    CHECK(spot.reached);
    CHECK(meet(spot, other));
}

TEST_CASE("one dimension: furnace wall and pipe with radiating outsides, to rounding") {
    Body slab{layers<Segment<1>>(
        {{.region = "brick", .thickness = 0.23, .cells = 3}, {.region = "insulation", .thickness = 0.1, .cells = 2}})};
    slab.in("brick", Material{.conductivity = 1.4}).in("insulation", Material{.conductivity = 0.12});
    slab.between("brick", "insulation", Contact{.resistance = 0.01});
    slab.on("inner", Film{.coefficient = 60.0, .fluid = 1100.0});
    slab.on("outer", Radiation{.emissivity = 0.85, .surroundings = 22.0});
    slab.on("outer", Film{.coefficient = 6.0, .fluid = 22.0});
    // resistances in series up to the skin, whose balance is one equation: common practice
    const double r = 1.0 / 60.0 + 0.23 / 1.4 + 0.01 + 0.1 / 0.12;
    const double skin =
        zero([&](double t) { return emitted(0.85, t + 273.15, 295.15) + 6.0 * (t - 22.0) - (1100.0 - t) / r; }, 22.0,
             1100.0);
    const Bracket loss = bracket(slab, heat_out_through("outer"), {.relative_width = 1e-8});
    CHECK(loss.reached);
    holds(loss, (1100.0 - skin) / r, 1e-9);
    holds(bracket(slab, mean_on("outer"), {.relative_width = 1e-8}), skin, 1e-9);

    Body pipe{layers<Segment<1>>({{.region = "lagging", .thickness = 0.05, .cells = 2}}, Cylindrical{.length = 3.0},
                                 {.start = 0.05}),
              TemperatureScale::kelvin};
    pipe.in("lagging", Material{.conductivity = 0.06});
    pipe.on("inner", FixedTemperature{600.0});
    pipe.on("outer", Radiation{.emissivity = 0.9, .surroundings = 290.0});
    const double lag = std::log(2.0) / (2.0 * pi * 0.06 * 3.0), area = 2.0 * pi * 0.1 * 3.0;
    const double out = zero([&](double t) { return area * emitted(0.9, t, 290.0) - (600.0 - t) / lag; }, 290.0, 600.0);
    const Bracket heat = bracket(pipe, heat_out_through("outer"), {.relative_width = 1e-4});
    CHECK(heat.reached);
    CHECK(heat.passes.size() > 2);
    holds(heat, (600.0 - out) / lag, 1e-8);
}

TEST_CASE("where the range of a radiating body's temperature is not known, its bracket is refused by name") {
    Body heated = wall<Triangle<1>>();
    heated.in("masonry", Generation{.per_volume = 10.0});
    CHECK(says(refusal(heated, heat_out_through("outer")), "generation in \"masonry\""));
    Body given = wall<Triangle<1>>();
    given.on("inner", Flux{.into = 5.0});
    CHECK(says(refusal(given, heat_out_through("outer")), "flux through \"inner\""));
    Body local = wall<Triangle<1>>();
    local.at({0.05, 0.1}, LocalHeat{.total = 5.0, .radius = 0.01});
    CHECK(says(refusal(local, mean_on("outer")), "leaves open which temperatures"));
    CHECK(says(refusal(wall<Triangle<1>>(), conductance_between("inner", "outer")), "fourth power"));
    Body grey = wall<Triangle<1>>();
    grey.replace("outer",
                 Radiation{.emissivity = table({{300, 0.5}, {900, 0.9}}, Outside::hold), .surroundings = 300.0});
    CHECK(says(refusal(grey, heat_out_through("outer")), "depends on the temperature"));
    Section section;
    section.add("a", rectangle({0, 0}, {1, 1}));
    section.face("hot", {0, 0}, {1, 0});
    section.rest("rest");
    Body round{triangulate<Triangle<1>>(section, {.size = 0.4}, Cylindrical{})};
    round.in("a", Material{.conductivity = 1.0});
    round.on("hot", FixedTemperature{500.0}).on("rest", Radiation{.emissivity = 0.9, .surroundings = 20.0});
    CHECK(says(refusal(round, heat_out_through("rest")), "radiation in r-z"));
}
