// Exact cells whose coefficients jump or are very steep inside: as exact as with a border there.
#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/exact_segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>
#include <vector>

using namespace tepor;

namespace {

const double border = 0.0707; // where things jump
const double length = 0.2;

/// One layer with all coefficients by place, or two with a border at the jump; `write` says the rest for a region.
template <class Write>
Body one(Frame frame, double start, Write write) {
    Body body(layers<ExactSegment>({{.region = "lining", .thickness = length}}, frame, {.start = start}));
    write(body, "lining");
    return body;
}
template <class Write>
Body two(Frame frame, double start, Write write) {
    Body body(layers<ExactSegment>(
        {{.region = "near", .thickness = border - start}, {.region = "far", .thickness = length + start - border}},
        frame, {.start = start}));
    write(body, "near");
    write(body, "far");
    return body;
}

/// Temperatures, flows, means and the balance of both must agree.
void check_same(const Body& whole, const Body& parts, double start, const char* const inner, double tolerance) {
    const Field field = steady(whole);
    const Field exact = steady(parts);
    const double hottest = exact.hottest().temperature;
    for (double x = start; x <= length + start; x += 0.1 * length)
        CHECK(std::abs(field.at(x) - exact.at(x)) <= tolerance * hottest);
    CHECK(std::abs(field.at(border) - exact.at(border)) <= tolerance * hottest);
    const Balance balance = exact.balance();
    for (const char* face : {inner, "outer"})
        if (face)
            CHECK(std::abs(field[heat_out_through(face)] - exact[heat_out_through(face)]) <= tolerance * balance.gross);
    CHECK(field.balance().balanced());
    CHECK(std::abs(field.balance().generated - balance.generated) <= tolerance * balance.gross);
    CHECK(std::abs(field.balance().gross - balance.gross) <= 0.5 * balance.gross);
    const double power = whole.model()->mesh->frame.power() + 1.0;
    const auto volume = [&](double a, double b) { return std::pow(b, power) - std::pow(a, power); };
    const double mean =
        (exact[mean_in("near")] * volume(start, border) + exact[mean_in("far")] * volume(border, length + start)) /
        volume(start, length + start);
    CHECK(std::abs(field[mean_in("lining")] - mean) <= 10.0 * tolerance * hottest);
    CHECK(std::abs(field.hottest().temperature - hottest) <= 1e-9 * hottest);
}

} // namespace

TEST_CASE("a conductivity and a source that jump inside one exact cell, in every frame, with the solid centre") {
    const auto write = [](Body& body, const char* region) {
        body.in(region, Material{.conductivity = of_place([](Point p) { return p.x < border ? 1.0 + p.x : 0.2; })});
        body.in(region, Generation{.per_volume = of_place([](Point p) { return p.x < border ? 4e4 * p.x : -2e3; })});
    };
    for (const Frame& frame : {Frame(Planar{.area = 2.0}), Frame(Cylindrical{.length = 3.0}), Frame(Spherical{})})
        for (const double start : {0.0, 0.01}) {
            CAPTURE(frame.power());
            CAPTURE(start);
            const bool open = frame.power() == 0 || start > 0.0;
            Body whole = one(frame, start, write);
            Body parts = two(frame, start, write);
            for (Body* body : {&whole, &parts}) {
                if (open) body->on("inner", Film{.coefficient = 30.0, .fluid = 90.0});
                body->on("outer", Film{.coefficient = 12.0, .fluid = 20.0});
            }
            check_same(whole, parts, start, open ? "inner" : nullptr, 1e-12);
        }
}

TEST_CASE("a source a thousand times steeper than the cell is long is integrated to rounding") {
    // k T'' = -q exp(-x / d), T = 100 at 0 and 0 at the end: T = a + b x - q d^2 / k exp(-x / d)
    const double d = 2e-4;
    const double q = 1e8;
    Body body(layers<ExactSegment>({{.region = "lining", .thickness = length}}));
    body.in("lining", Material{.conductivity = 1.0});
    body.in("lining", Generation{.per_volume = of_place([=](const auto& p) { return q * exp(-p.x / d); })});
    body.on("inner", FixedTemperature{100.0});
    body.on("outer", FixedTemperature{0.0});
    const Field field = steady(body);
    const double bump = q * d * d;
    const double a = 100.0 + bump;
    const double b = (bump * std::exp(-length / d) - a) / length;
    const auto exact = [&](double x) { return a + b * x - bump * std::exp(-x / d); };
    for (const double x : {0.5 * d, d, 3.0 * d, 0.01, 0.1}) CHECK(std::abs(field.at(x) - exact(x)) <= 1e-11 * a);
    CHECK(std::abs(field[heat_out_through("outer")] + b) <= 1e-12 * std::abs(b));
    CHECK(std::abs(field[heat_in_through("inner")] - (-b - q * d)) <= 1e-12 * q * d);
    const double mean = (a * length + 0.5 * b * length * length - bump * d) / length;
    CHECK(std::abs(field[mean_in("lining")] - mean) <= 1e-12 * a);
    CHECK(field.balance().balanced());
}

TEST_CASE("conductivities of temperature with a source that jumps, and fins in a stream that changes") {
    const auto hot = [](Body& body, const char* region) {
        body.in(region, Material{.conductivity = table({{0, 0.5}, {2000, 3.0}})});
        body.in(region, Generation{.per_volume = of_place([](Point p) { return p.x < border ? 1e5 : 0.0; })});
    };
    Body whole = one(Planar{}, 0.0, hot);
    Body parts = two(Planar{}, 0.0, hot);
    for (Body* body : {&whole, &parts}) {
        body->on("inner", Film{.coefficient = 30.0, .fluid = 90.0});
        body->on("outer", FixedTemperature{50.0});
    }
    check_same(whole, parts, 0.0, "inner", 1e-10);

    const auto fin = [](Body& body, const char* region) {
        body.in(region, Material{.conductivity = 180.0});
        body.in(region, SideFilm{.coefficient = 60.0,
                                 .fluid = of_place([](Point p) { return p.x < border ? 20.0 : 35.0; }),
                                 .perimeter = 0.1});
    };
    Body whole_fin = one(Planar{.area = 2e-4}, 0.0, fin);
    Body parts_fin = two(Planar{.area = 2e-4}, 0.0, fin);
    for (Body* body : {&whole_fin, &parts_fin}) {
        body->on("inner", FixedTemperature{100.0});
        body->on("outer", Film{.coefficient = 60.0, .fluid = 35.0});
    }
    check_same(whole_fin, parts_fin, 0.0, "inner", 1e-11);
}

TEST_CASE("a staircase of conductivities in one exact cell has its series resistance") {
    // twenty jumps, at places that no bisection of the cell hits
    const auto k = [](double x) { return 1.0 + std::floor(x / 0.00973); };
    Body body(layers<ExactSegment>({{.region = "lining", .thickness = length}}));
    body.in("lining", Material{.conductivity = of_place([=](Point p) { return k(p.x); })});
    body.on("inner", FixedTemperature{100.0});
    body.on("outer", FixedTemperature{0.0});
    double resistance = 0.0;
    for (int i = 0; i < 21; ++i) resistance += (std::min(0.00973 * (i + 1), length) - 0.00973 * i) / (1.0 + i);
    CHECK(std::abs(steady(body)[heat_out_through("outer")] * resistance - 100.0) <= 1e-10);
}

TEST_CASE("divided cells settle in a march to their exact steady state") {
    Body body = one(Cylindrical{}, 0.01, [](Body& b, const char* region) {
        b.in(region, Material{.conductivity = of_place([](Point p) { return p.x < border ? 1.0 : 0.2; }),
                              .density = 1000.0,
                              .specific_heat = 900.0});
        b.on("inner", Film{.coefficient = 30.0, .fluid = 90.0});
        b.on("outer", Film{.coefficient = 12.0, .fluid = 20.0});
    });
    March march{body, initial(20.0), Theta{.theta = 1.0, .step = 1e5}};
    for (int i = 0; i < 40; ++i) CHECK(march.advance().ok());
    const Field rest = steady(body);
    CHECK(std::abs(march[mean_on("outer")] - rest[mean_on("outer")]) <= 1e-9);
    CHECK(march.total().balanced());
}
