// Plates and bodies of revolution drawn at random, over many orders of magnitude: slopes against differences of whole solves, and
// brackets against what a mesh far finer gives.

#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/answers/bracket.hpp>
#include <tepor/answers/gradient.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/difference_of_solves.hpp>
#include <tests/support/draw.hpp>
#include <tests/support/scale.hpp>
#include <vector>

using namespace tepor;
using test::Draw;

namespace {

/// A rectangle with another inside.
struct Drawn {
    Tiles tiles;
    double least; ///< the shorter side [m]

    explicit Drawn(Draw& draw) {
        const double width = draw.of_magnitude(0.05, 0.5), height = width * draw.between(0.5, 2.0);
        tiles.add("base", {0.0, 0.0}, {width, height});
        tiles.add("core", {0.3 * width, 0.3 * height}, {0.6 * width, 0.7 * height});
        least = std::min(width, height);
    }
};

/// A body whose every number is a Parameter.
class Driven {
  public:
    explicit Driven(unsigned seed) : draw_(seed), drawn_(draw_) {}

    template <Element E>
    Body body() {
        const bool round = draw_.one_in(3);
        const Frame frame = round ? Frame{Cylindrical{}} : Frame{Planar{.depth = draw_.of_magnitude(0.1, 3.0)}};
        Body body{tiles<E>(drawn_.tiles, {.size = drawn_.least / 5.0}, frame)};
        for (const char* name : {"base", "core"}) {
            body.in(name, material());
            if (draw_.one_in(2))
                body.in(name, Generation{.per_volume = any(1.0, 1e4)});
            else
                body.in(name, Generation{.total = law({any(1.0, 30.0)}, [](const auto& s, auto q) {
                                             return q * (1.0 + 1e-3 * s.temperature);
                                         })});
        }
        if (draw_.one_in(2)) body.between("base", "core", Contact{.conductance = any(10.0, 1e4)});
        body.on("right", Film{.coefficient = any(1.0, 300.0), .fluid = level()});
        if (draw_.one_in(2))
            body.on("right", Radiation{.emissivity = parameter(draw_.between(0.05, 0.95)), .surroundings = level()});
        if (draw_.one_in(2))
            body.on("top", FixedTemperature{level()});
        else
            body.on("top", Film{.coefficient = law({any(1.0, 50.0)},
                                                   [](const auto& s, auto c) {
                                                       return c * pow(abs(s.temperature - s.fluid) + 1.0, 0.25);
                                                   }),
                                .fluid = level()});
        if (draw_.one_in(2)) body.on("bottom", Flux{.into = any(10.0, 3000.0)});
        return body;
    }

    std::vector<Parameter> parameters;

  private:
    Parameter parameter(double value) {
        parameters.emplace_back("p" + std::to_string(parameters.size()), value);
        return parameters.back();
    }
    Parameter any(double low, double high) { return parameter(draw_.of_magnitude(low, high)); }
    Parameter level() { return parameter(draw_.between(0.0, 500.0)); }

    Material material() {
        const double k = draw_.of_magnitude(0.1, 50.0);
        switch (draw_.up_to(4)) {
        case 0:
            return {.conductivity = law({parameter(k)}, [](const auto& s, auto k0) {
                        return k0 * (1.0 + 1e-3 * s.temperature + 1e-6 * s.temperature * s.temperature);
                    })};
        case 1:
            return {.conductivity = of_place({parameter(k), parameter(2.0)}, [](const auto& p, auto k0, auto g) {
                        return k0 * exp(g * p.x + 0.5 * p.y);
                    })};
        case 2:
            return {.conductivity =
                        table({{-500.0, parameter(k)}, {100.0, parameter(1.3 * k)}, {2000.0, parameter(0.6 * k)}},
                              Outside::hold)};
        default: return {.conductivity = orthotropic(parameter(k), parameter(1.7 * k))};
        }
    }

    Draw draw_;
    Drawn drawn_;
};

template <Element E>
Body plain(unsigned seed, double finer) {
    Draw draw{seed};
    const Drawn drawn{draw};
    const bool round = draw.one_in(4);
    const Frame frame = round ? Frame{Cylindrical{}} : Frame{Planar{.depth = draw.of_magnitude(0.1, 3.0)}};
    Body body{tiles<E>(drawn.tiles, {.size = drawn.least / (6.0 * finer)}, frame)};
    for (const char* name : {"base", "core"}) {
        const double k = draw.of_magnitude(0.1, 50.0), other = k * draw.between(0.5, 2.0);
        if (!round && draw.one_in(3))
            body.in(name, Material{.conductivity = orthotropic(k, other)});
        else
            body.in(name, Material{.conductivity = k});
        if (draw.one_in(2)) body.in(name, Generation{.per_volume = draw.of_magnitude(1.0, 1e5)});
    }
    if (draw.one_in(3)) body.between("base", "core", Contact{.conductance = draw.of_magnitude(10.0, 1e4)});
    body.on("right", Film{.coefficient = draw.of_magnitude(1.0, 300.0), .fluid = draw.between(0.0, 500.0)});
    if (draw.one_in(2)) body.on("top", FixedTemperature{draw.between(0.0, 500.0)});
    if (!round && draw.one_in(3))
        body.on("left", Film{.coefficient = draw.of_magnitude(1.0, 300.0), .fluid = draw.between(0.0, 500.0)});
    if (draw.one_in(2)) body.on("bottom", Flux{.into = draw.between(10.0, 3000.0)});
    return body;
}

} // namespace

TEST_CASE_TEMPLATE("every slope of a plate drawn at random is that of differences", E, Triangle<1>, Triangle<2>,
                   Quadrilateral<1>, Quadrilateral<2>) {
    const unsigned count = static_cast<unsigned>(test::scaled(12));
    for (unsigned seed = 0; seed < count; ++seed) {
        Driven driven{seed};
        Body body = driven.body<E>();
        const Field field = steady(body);
        for (const Quantity& quantity :
             {heat_out_through("right"), mean_on("top"), mean_in("core"), hottest_in("base")}) {
            const Gradient slope = gradient(field, quantity);
            for (const Parameter& p : driven.parameters) {
                CAPTURE(seed);
                CAPTURE(quantity.label());
                CAPTURE(p.name());
                const double difference = test::difference_of_solves(body, quantity, p, 1e-5);
                // the noise of the difference: a balance good to 1e-10
                const double scale = std::max(std::abs(difference), 1e-4 * std::abs(field[quantity]) / body.value(p));
                CHECK(std::abs(slope[p] - difference) <= 1e-4 * scale);
            }
        }
    }
}

TEST_CASE_TEMPLATE("a bracket on a plate drawn at random holds what a far finer mesh gives", E, Triangle<1>,
                   Triangle<2>) {
    const unsigned count = static_cast<unsigned>(test::scaled(30));
    for (unsigned seed = 0; seed < count; ++seed) {
        Body body = plain<E>(seed, 1.0);
        if (E::order > 1 && body.model()->mesh->frame.power() > 0) continue; // no bounds there
        const Field fine = steady(plain<Triangle<2>>(seed, 6.0)), half = steady(plain<Triangle<2>>(seed, 3.0));
        for (const Quantity& quantity :
             {heat_out_through("right"), mean_in("core"), mean_on("right"), mean_in("base")}) {
            CAPTURE(seed);
            CAPTURE(quantity.label());
            const double value = fine[quantity];
            if (std::abs(value) < 1e-6) continue; // no heat enters: no share of it bounds a width
            const Bracket both = bracket(body, quantity, {.relative_width = 0.05});
            const double own =
                3.0 * std::abs(value - half[quantity]) + 1e-9 * std::abs(value); // error of the fine mesh
            CHECK(both.lower - own <= value);
            CHECK(value <= both.upper + own);
            CHECK(both.upper - both.lower <= 0.051 * std::max(std::abs(both.lower), std::abs(both.upper)));
        }
    }
}
