// Marching against exact solutions of transient conduction.
#include "../../support/transient_reference.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>

using namespace tepor;

namespace {

const Material solid{.conductivity = 2.0, .density = 2000.0, .specific_heat = 1000.0};

Frame frame_of(int n) {
    if (n == 1) return Cylindrical{};
    if (n == 2) return Spherical{};
    return Planar{};
}

} // namespace

TEST_CASE("slab, cylinder and sphere cool by the series of their Biot number") {
    for (int frame = 0; frame < 3; ++frame)
        for (const double biot : {0.1, 1.0, 10.0}) {
            Body body{layers<Segment<1>>({{.region = "solid", .thickness = 0.02, .cells = 60}}, frame_of(frame))};
            body.in("solid", solid);
            body.on("outer", Film{.coefficient = biot * 100.0, .fluid = 20.0});
            March march{body, initial(200.0), Theta{.theta = 0.5, .step = 2.0}};
            const Probe centre = march.watch(at(0.0));
            const Probe surface = march.watch(mean_on("outer"));
            const Quantity held = stored_in("solid");
            const Integral lost = march.integral(heat_out_through("outer"));
            const double at_start = march[held];
            for (const test::Cooling& exact : test::cooling) {
                if (exact.frame != frame || exact.biot != biot || exact.fourier > 5.0) continue;
                march.advance_to(400.0 * exact.fourier);
                CAPTURE(frame);
                CAPTURE(biot);
                CAPTURE(exact.fourier);
                const double tolerance = exact.fourier < 0.1 ? 0.3 : 0.1;
                CHECK(std::abs(march[centre] - exact.centre) <= tolerance);
                CHECK(std::abs(march[surface] - exact.surface) <= tolerance);
                const double whole = at_start * 180.0 / 200.0; // above the fluid's temperature
                CHECK(std::abs(march[lost] / whole - exact.given_up) <= 1.5e-3);
                CHECK(std::abs(at_start - march[held] - march[lost]) <= 1e-10 * at_start);
                CHECK(march.total().balanced());
            }
            CHECK(march.factorisations() == 1);
        }
}

TEST_CASE("a slab whose surface is stepped keeps to the series and to its bounds") {
    Body body{layers<Segment<1>>({{.region = "solid", .thickness = 0.02, .cells = 40}})};
    body.in("solid", solid);
    body.on("outer", FixedTemperature{.temperature = 120.0});
    March march{body, initial(20.0), Theta{.theta = 0.5, .step = 1.0}};
    for (const test::Shock& exact : test::shock) {
        march.advance_to(exact.time);
        CAPTURE(exact.time);
        const Field field = march.field();
        if (exact.time >= 40.0) {
            CHECK(std::abs(field.at(0.0) - exact.centre) <= 0.02);
            CHECK(std::abs(field.at(0.01) - exact.quarter) <= 0.02);
            CHECK(std::abs(field[mean_in("solid")] - exact.mean) <= 0.02);
            CHECK(std::abs(march[heat_in_through("outer")] / exact.flux - 1.0) <= 2e-3);
        }
        CHECK(field.coldest().temperature >= 20.0 - 1e-9);
        CHECK(field.hottest().temperature <= 120.0 + 1e-9);
        CHECK(march.balance().balanced());
        CHECK(march.total().balanced());
    }
}

TEST_CASE("a thin slab cools by the lumped exponential") {
    Body body{layers<Segment<1>>({{.region = "solid", .thickness = 0.002, .cells = 4}})};
    body.in("solid", Material{.conductivity = 100.0, .density = 5000.0, .specific_heat = 400.0});
    body.on("outer", Film{.coefficient = 50.0, .fluid = 25.0});
    March march{body, initial(150.0), Theta{.theta = 0.5, .step = 0.2}};
    for (const test::Thin& exact : test::thin) {
        march.advance_to(exact.time);
        CHECK(std::abs(march[at(0.0)] - exact.centre) <= 1e-3);
        CHECK(std::abs(march[mean_on("outer")] - exact.surface) <= 1e-3);
        CHECK(std::abs((march[at(0.0)] - march[mean_on("outer")]) - (exact.centre - exact.surface)) <= 1e-4);
    }
}

TEST_CASE("a thick wall warms like a semi-infinite solid under a held surface, a flux and a film") {
    const auto mesh = [] {
        return layers<Segment<1>>({{.region = "near", .thickness = 0.1, .cells = 50},
                                   {.region = "far", .thickness = 0.4, .cells = 40, .grading = finer_at_start(10)}});
    };
    const Material stone{.conductivity = 1.6, .density = 2000.0, .specific_heat = 1000.0};
    for (int kind = 0; kind < 3; ++kind) {
        Body body{mesh()};
        body.in("near", stone).in("far", stone);
        if (kind == 0) body.on("inner", FixedTemperature{.temperature = 100.0});
        if (kind == 1) body.on("inner", Flux{.into = 2000.0});
        if (kind == 2) body.on("inner", Film{.coefficient = 50.0, .fluid = 100.0});
        March march{body, initial(20.0), Theta{.theta = 0.5, .step = 20.0}};
        for (const test::Deep& exact : test::deep) {
            march.advance_to(exact.time);
            const double expected = kind == 0 ? exact.held : (kind == 1 ? exact.flux : exact.film);
            CAPTURE(kind);
            CAPTURE(exact.time);
            CAPTURE(exact.x);
            CHECK(std::abs(march[at(exact.x)] - expected) <= 0.05);
        }
        CHECK(march.total().balanced());
        if (kind > 0) continue;
        March again{body, initial(20.0), Theta{.theta = 0.5, .step = 20.0}};
        const Integral taken = again.integral(heat_in_through("inner"));
        for (const test::DeepHeat& exact : test::deep_heat) {
            again.advance_to(exact.time);
            CHECK(std::abs(again[heat_in_through("inner")] / exact.flux - 1.0) <= 2e-3);
            CHECK(std::abs(again[taken] / exact.since_start - 1.0) <= 2e-3);
        }
    }
}

TEST_CASE("a bar follows a sinusoidal end temperature, NAFEMS T3") {
    // Source: NAFEMS, The Standard NAFEMS Benchmarks, 1990, test T3: 36.60 degC (from memory); the series gives 36.60312.
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.1, .cells = 50}})};
    body.in("bar", Material{.conductivity = 35.0, .density = 7200.0, .specific_heat = 440.5});
    body.on("inner", FixedTemperature{.temperature = 0.0});
    body.on("outer",
            FixedTemperature{.temperature = of_time([](double t) { return 100.0 * std::sin(pi * t / 40.0); })});
    March march{body, initial(0.0), Theta{.theta = 0.5, .step = 0.25}};
    march.advance_to(32.0);
    CHECK(std::abs(march[at(0.08)] - 36.60312) <= 0.05);
    CHECK(march.balance().balanced());
    CHECK(march.total().balanced());
    Body fine{layers<Segment<2>>({{.region = "bar", .thickness = 0.1, .cells = 20}})};
    fine.in("bar", Material{.conductivity = 35.0, .density = 7200.0, .specific_heat = 440.5});
    fine.on("inner", FixedTemperature{.temperature = 0.0});
    fine.on("outer",
            FixedTemperature{.temperature = of_time([](double t) { return 100.0 * std::sin(pi * t / 40.0); })});
    March adaptive{fine, initial(0.0), Adaptive{.tolerance = 1e-4}};
    adaptive.advance_to(32.0);
    CHECK(std::abs(adaptive[at(0.08)] - 36.60312) <= 2e-3);
}

TEST_CASE("a rectangular bar cools by the product of two slabs") {
    Tiles drawing;
    drawing.add("bar", {0.0, 0.0}, {0.02, 0.03});
    drawing.split_x({.from = 0.0, .to = 0.02, .cells = 20}).split_y({.from = 0.0, .to = 0.03, .cells = 30});
    Body body{tiles<Quadrilateral<1>>(drawing)};
    body.in("bar", solid);
    for (const char* face : {"right", "top"}) body.on(face, Film{.coefficient = 100.0, .fluid = 20.0});
    March march{body, initial(200.0), Theta{.theta = 0.5, .step = 5.0}};
    const double whole = march[stored_in("bar")] * 180.0 / 200.0;
    const double at_start = march[stored_in("bar")];
    for (const test::Bar& exact : test::bar) {
        march.advance_to(exact.time);
        CAPTURE(exact.time);
        CHECK(std::abs(march[at({0.0, 0.0})] - exact.centre) <= 0.1);
        CHECK(std::abs(march[at({0.02, 0.0})] - exact.side) <= 0.1);
        CHECK(std::abs(march[at({0.0, 0.03})] - exact.end) <= 0.1);
        CHECK(std::abs(march[at({0.02, 0.03})] - exact.edge) <= 0.1);
        CHECK(std::abs(march[mean_in("bar")] - exact.mean) <= 0.1);
        CHECK(std::abs((at_start - march[stored_in("bar")]) / whole - exact.given_up) <= 1e-3);
        CHECK(march.total().balanced());
    }
}

TEST_CASE("a finite cylinder cools by the product of cylinder and slab") {
    Tiles drawing;
    drawing.add("rod", {0.0, 0.0}, {0.02, 0.03});
    drawing.split_x({.from = 0.0, .to = 0.02, .cells = 28}).split_y({.from = 0.0, .to = 0.03, .cells = 42});
    Body body{tiles<Quadrilateral<1>>(drawing, {}, Cylindrical{})};
    body.in("rod", solid);
    body.on("right", Film{.coefficient = 100.0, .fluid = 20.0});
    body.on("top", Film{.coefficient = 200.0, .fluid = 20.0});
    March march{body, initial(200.0), Theta{.theta = 0.5, .step = 5.0}};
    for (const test::Cylinder& exact : test::cylinder) {
        march.advance_to(exact.time);
        CAPTURE(exact.time);
        CHECK(std::abs(march[at({0.0, 0.0})] - exact.centre) <= 0.1);
        CHECK(std::abs(march[at({0.02, 0.0})] - exact.side) <= 0.1);
        CHECK(std::abs(march[at({0.0, 0.03})] - exact.end) <= 0.1);
        CHECK(std::abs(march[at({0.02, 0.03})] - exact.edge) <= 0.1);
        CHECK(std::abs(march[mean_in("rod")] - exact.mean) <= 0.1);
    }
}

TEST_CASE("freezing and melting follow the solution of Neumann") {
    // Source: Carslaw & Jaeger, 1959, section 11.2
    struct Case {
        double k, rho, c, latent, melting, surface, cell, length, step;
        Phase phase;
        struct Row {
            double time, front, heat;
        } rows[3];
    };
    const Case cases[] = {{2.22,
                           917.0,
                           2050.0,
                           334000.0,
                           0.0,
                           -10.0,
                           0.002,
                           0.16,
                           300.0,
                           Phase::liquid,
                           {{3600.0, 0.0226163157226, 7138392.8521},
                            {36000.0, 0.0715190699648, 22573580.2457},
                            {86400.0, 0.110796866764, 34970840.1423}}},
                          {0.2,
                           800.0,
                           2200.0,
                           200000.0,
                           50.0,
                           100.0,
                           0.0005,
                           0.05,
                           30.0,
                           Phase::solid,
                           {{600.0, 0.00799914015836, 1618288.02745},
                            {3600.0, 0.019593811769, 3963979.9241},
                            {14400.0, 0.039187623538, 7927959.8482}}}};
    for (const Case& one : cases) {
        Body body{layers<Segment<1>>(
            {{.region = "bath", .thickness = one.length, .cells = static_cast<Index>(one.length / one.cell + 0.5)}})};
        body.in("bath", Material{.conductivity = one.k,
                                 .density = one.rho,
                                 .specific_heat = one.c,
                                 .latent = {.heat = one.latent, .solidus = one.melting, .liquidus = one.melting}});
        body.on("inner", FixedTemperature{.temperature = one.surface});
        March march{body, initial(one.melting, one.phase), Theta{.theta = 1.0, .step = one.step}};
        const Integral heat = march.integral(heat_in_through("inner"));
        for (const Case::Row& row : one.rows) {
            march.advance_to(row.time);
            const double molten = march.molten_in("bath");
            const double front = one.length * (one.phase == Phase::liquid ? 1.0 - molten : molten);
            CAPTURE(row.time);
            CAPTURE(front);
            CHECK(std::abs(front - row.front) <= one.cell);
            CHECK(std::abs(std::abs(march[heat]) / row.heat - 1.0) <= 0.01);
        }
        const Balance total = march.total();
        CHECK(std::abs(total.left_over) <= 1e-8 * total.gross);
    }
}
