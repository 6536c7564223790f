// Gradients over exact cells: every parameter against differences of whole solves, for quantities at and between nodes.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/gradient.hpp>
#include <tepor/element/exact_segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/difference_of_solves.hpp>
#include <vector>

using namespace tepor;

namespace {

const Parameter k0{"k0", 1.4};
const Parameter growth{"growth", 3.0};
const Parameter amount{"amount", 8000.0};
const Parameter film{"film", 14.0};
const Parameter gas{"gas", 300.0};
const Parameter joint{"joint", 180.0};
const Parameter width{"width", 0.12};
const Parameter k_fin{"k fin", 25.0};
const Parameter loss{"loss", 9.0};

Body stack_of(Frame frame) {
    const bool planar = frame.power() == 0;
    Body body(layers<ExactSegment>({{.region = "inner", .thickness = width}, {.region = "outer", .thickness = 0.2}},
                                   frame, {.start = planar ? 0.0 : 0.05}));
    body.in("inner", Material{.conductivity = of_place(
                                  {k0, growth}, [](const auto& p, auto k, auto g) { return k * exp(g * p.x); })});
    body.in("inner",
            Generation{.per_volume = of_place({amount}, [](const auto& p, auto a) { return a * (1.0 + p.x); })});
    body.in("outer", Material{.conductivity = k_fin});
    if (planar) body.in("outer", SideFilm{.coefficient = loss, .fluid = 20.0, .thickness = 0.02});
    body.between("inner", "outer", Contact{.conductance = joint});
    body.on("inner", Film{.coefficient = film, .fluid = gas});
    body.on("outer", FixedTemperature{40.0});
    return body;
}

} // namespace

TEST_CASE("over exact cells the gradient agrees with differences of whole solves, between the nodes too") {
    for (const Frame& frame : {Frame(Planar{.area = 0.6}), Frame(Cylindrical{}), Frame(Spherical{})}) {
        CAPTURE(frame.power());
        Body body = stack_of(frame);
        const double a = frame.power() == 0 ? 0.0 : 0.05;
        const std::vector<Quantity> quantities = {heat_out_through("outer"), at(a + 0.07),     at(a + 0.25, "outer"),
                                                  mean_in("inner"),          mean_in("outer"), hottest_in("inner")};
        std::vector<Parameter> parameters = {k0, growth, amount, film, gas, joint, width, k_fin};
        if (frame.power() == 0) parameters.push_back(loss);
        const Field field = steady(body);
        for (const Quantity& quantity : quantities) {
            const Gradient slope = gradient(field, quantity);
            for (const Parameter& p : parameters) {
                CAPTURE(p.name());
                CAPTURE(quantity.label());
                const double h = 1e-3 * p.value();
                double difference = 0.0;
                const double weight[2] = {2.0 / 3.0, -1.0 / 12.0};
                for (int i = 0; i < 2; ++i)
                    for (const double sign : {1.0, -1.0}) {
                        body.set(p, p.value() + sign * (i + 1) * h);
                        difference += sign * weight[i] * steady(body)[quantity] / h;
                    }
                body.set(p, p.value());
                const double scale = std::abs(field[quantity]) / p.value();
                CHECK(std::abs(slope[p] - difference) <= 2e-9 * scale);
            }
        }
    }
}

TEST_CASE("over exact cells a film law that turns at its fluid's temperature keeps its slope near there, and a steep "
          "law its own") {
    const Parameter oven{"oven", 900.0}, strength{"strength", 30.0}, k_cold{"k cold", 0.11}, rise{"rise", 0.012};
    Body body(layers<ExactSegment>({{.region = "lining", .thickness = 0.1, .cells = 3}}));
    body.in("lining", Material{.conductivity = law({k_cold, rise}, [](const auto& s, auto k, auto r) {
                                   return k * exp(r * s.temperature);
                               })});
    body.on("inner", Film{.coefficient =
                              law({strength}, [](const auto& s,
                                                 auto c) { return c * pow(abs(s.temperature - s.fluid) + 1.0, 0.25); }),
                          .fluid = oven});
    body.on("outer", Film{.coefficient = 9.0, .fluid = 20.0});
    for (const double hot : {30.0, 120.0, 400.0}) { // 1 % of it is more than the fluid is off the face
        body.set(oven, hot);
        const Field field = steady(body);
        for (const Quantity& quantity : {mean_on("inner"), heat_out_through("outer"), at(0.04)}) {
            const Gradient slope = gradient(field, quantity);
            for (const Parameter& p : {oven, strength, k_cold, rise}) {
                CAPTURE(hot);
                CAPTURE(p.name());
                CAPTURE(quantity.label());
                const double difference = test::difference_of_solves(body, quantity, p, 1e-6);
                CHECK(std::abs(slope[p] - difference) <=
                      1e-6 * (std::abs(difference) + std::abs(field[quantity]) / body.value(p)));
            }
        }
    }
}
