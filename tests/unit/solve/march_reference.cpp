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
