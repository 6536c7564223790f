// Compact models: closed forms, the symmetric form, and every kind of input and output.

#include <algorithm>
#include <cmath>
#include <complex>
#include <doctest/doctest.h>
#include <tepor/answers/compact.hpp>
#include <tepor/answers/gradient.hpp>
#include <tepor/mesh/layers.hpp>
#include <tests/support/two_alloy_plate.hpp>

using namespace tepor;
using namespace tepor::test::two_alloys;

TEST_CASE("time constants of a two-layer slab with films are those of its transcendental equation") {
    // T1 = cos(s1 x) + h1/(k1 s1) sin(s1 x), flux and temperature passed on, -k2 T2' = h2 T2 at the end.
    // Source: Ozisik, Heat Conduction, 2nd ed., chapter 8 (composite media).
    const double L1 = 0.03, L2 = 0.05, k1 = 1.2, k2 = 0.15, c1 = 2.1e6, c2 = 0.6e6, h1 = 15.0, h2 = 8.0;
    const Parameter hot{"hot", 80.0}, cold{"cold", 10.0};
    Body slab{layers<Segment<3>>(
        {{.region = "a", .thickness = L1, .cells = 16}, {.region = "b", .thickness = L2, .cells = 20}})};
    slab.in("a", Material{.conductivity = k1, .density = 2100, .specific_heat = 1000});
    slab.in("b", Material{.conductivity = k2, .density = 600, .specific_heat = 1000});
    slab.on("inner", Film{.coefficient = h1, .fluid = hot});
    slab.on("outer", Film{.coefficient = h2, .fluid = cold});
    const auto mismatch = [&](double rate) {
        const double s1 = std::sqrt(rate * c1 / k1), s2 = std::sqrt(rate * c2 / k2);
        const double T = std::cos(s1 * L1) + h1 / (k1 * s1) * std::sin(s1 * L1);
        const double q = k1 * (-s1 * std::sin(s1 * L1) + h1 / k1 * std::cos(s1 * L1));
        const double T2 = T * std::cos(s2 * L2) + q / (k2 * s2) * std::sin(s2 * L2);
        const double q2 = -k2 * s2 * T * std::sin(s2 * L2) + q * std::cos(s2 * L2);
        return q2 + h2 * T2;
    };
    std::vector<double> exact;
    double step = 1e-6;
    for (double a = 1e-7; exact.size() < 5; a += step)
        if (mismatch(a) * mismatch(a + step) < 0.0) {
            double low = a, high = a + step;
            for (int i = 0; i < 100; ++i) {
                const double middle = 0.5 * (low + high);
                (mismatch(low) * mismatch(middle) <= 0.0 ? high : low) = middle;
            }
            exact.push_back(1.0 / low);
        }
    const StateSpace model = compact(slab, {.inputs = {hot, cold},
                                            .outputs = {at(0.0), at(0.02), at(0.06), at(0.08)},
                                            .sample_time = 20.0,
                                            .tolerance = 1e-7,
                                            .passive = true});
    std::vector<double> times;
    for (Index i = 0; i < model.order; ++i) times.push_back(-1.0 / model.Ac[detail::as_size(i * model.order + i)]);
    std::sort(times.rbegin(), times.rend());
    REQUIRE(times.size() >= 5);
    for (std::size_t i = 0; i < 5; ++i) {
        CAPTURE(i);
        CHECK(std::abs(times[i] - exact[i]) <= 2e-6 * exact[i]);
    }
    for (const double t : times) CHECK(t > 0.0);
}

TEST_CASE("the frequency response of a slab is that of its closed form") {
    // insulated at x = 0, film to a swinging fluid at x = L: T(0) / Tf = 1 / (cosh qL + (k q / h) sinh qL), q^2 = i w c / k.
    // Source: Carslaw & Jaeger, 2nd ed., section 3.6 (method).
    const double L = 0.1, k = 1.5, c = 1.8e6, h = 30.0;
    const Parameter fluid{"fluid", 20.0};
    Body slab{layers<Segment<3>>({{.region = "a", .thickness = L, .cells = 12}})};
    slab.in("a", Material{.conductivity = k, .density = 1800, .specific_heat = 1000});
    slab.on("outer", Film{.coefficient = h, .fluid = fluid});
    const StateSpace model = compact(
        slab,
        {.inputs = {fluid}, .outputs = {at(0.0), heat_in_through("outer")}, .sample_time = 60.0, .tolerance = 1e-5});
    for (const double w : {1e-6, 1e-5, 1e-4, 3e-4, 1e-3, 1e-2}) {
        CAPTURE(w);
        const std::complex<double> q = std::sqrt(std::complex<double>(0.0, w * c / k));
        const std::complex<double> down = std::cosh(q * L) + k * q / h * std::sinh(q * L);
        const std::complex<double> exact = 1.0 / down;
        const std::complex<double> heat = h * (1.0 - std::cosh(q * L) / down);
        const StateSpace::Gain g = model.gain(0, 0, w);
        const StateSpace::Gain f = model.gain(1, 0, w);
        CHECK(std::abs(std::complex<double>(g.re, g.im) - exact) <= model.error_bound + 1e-6);
        CHECK(std::abs(std::complex<double>(f.re, f.im) - heat) <= model.error_bound + 1e-4);
    }
}

TEST_CASE("the passive form agrees with the balanced one within both bounds") {
    const Body body = plate(0.01);
    CompactOptions options = plate_options();
    const StateSpace balanced = compact(body, options);
    options.passive = true;
    const StateSpace passive = compact(body, options);
    CHECK(passive.order > balanced.order);
    for (Index i = 0; i < passive.order; ++i)
        for (Index j = 0; j < passive.order; ++j) {
            const double a = passive.Ac[detail::as_size(i * passive.order + j)];
            CHECK((i == j ? a < 0.0 : a == 0.0));
        }
    for (const double w : {0.0, 1e-3, 1e-2, 0.1, 1.0}) {
        const StateSpace::Gain a = balanced.gain(2, 2, w);
        const StateSpace::Gain b = passive.gain(2, 2, w);
        CHECK(std::hypot(a.re - b.re, a.im - b.im) * 40.0 <= balanced.error_bound + passive.error_bound);
    }
    // bounded answers over a long run: all steps contract
    StateSpace run = balanced;
    std::vector<double> u = run.u0;
    u[0] += 100.0;
    for (int k = 0; k < 200000; ++k) (void)run.advance(u);
    CHECK(std::abs(run.y()[0] - run.y0[0] - 100.0 * run.steady_gain(0, 0)) <= 1e-6);
}

TEST_CASE("heats, contacts, laws and prescribed temperatures work as inputs and outputs") {
    const Parameter held{"held", 90.0}, flux{"flux", 200.0}, power{"power", 5.0}, rise{"rise", 0.01};
    Tiles drawing;
    drawing.add("block", {0.0, 0.0}, {0.04, 0.04});
    drawing.add("cap", {0.04, 0.0}, {0.06, 0.04});
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.01})};
    body.in("block", Material{.conductivity = 3.0, .density = 2000, .specific_heat = 900});
    body.in("cap", Material{.conductivity = 20.0, .density = 4000, .specific_heat = 500});
    body.in("cap", Generation{.total = power});
    body.between("block", "cap", Contact{.conductance = 400.0});
    body.on("left", FixedTemperature{held});
    body.on("bottom", Flux{.into = flux});
    body.on("right",
            Film{.coefficient = law({rise}, [](const auto& s, auto b) { return 10.0 + b * (s.temperature - s.fluid); }),
                 .fluid = 15.0});
    CompactOptions options{
        .inputs = {held, flux, power},
        .outputs = {at({0.05, 0.02}), heat_out_through("right"), heat_from("block", "cap"), mean_in("block")},
        .sample_time = 5.0,
        .tolerance = 1e-4};
    const StateSpace model = compact(body, options);
    CHECK(model.linearised);
    const Field field = steady(body, {.tolerance = 1e-13});
    for (std::size_t i = 0; i < options.outputs.size(); ++i) {
        const Gradient slope = gradient(field, options.outputs[i]);
        for (std::size_t j = 0; j < options.inputs.size(); ++j) {
            CAPTURE(options.outputs[i].label());
            CAPTURE(options.inputs[j].name());
            CHECK(std::abs(model.steady_gain(static_cast<Index>(i), static_cast<Index>(j)) -
                           slope[options.inputs[j]]) <= 1e-8 * (1e-3 + std::abs(slope[options.inputs[j]])));
        }
    }
    // the heat through a held face, driven from elsewhere
    options.inputs = {flux, power};
    options.outputs = {heat_out_through("left")};
    const StateSpace reaction = compact(body, options);
    const Gradient slope = gradient(field, options.outputs[0]);
    CHECK(std::abs(reaction.steady_gain(0, 0) - slope[flux]) <= 1e-8 * std::abs(slope[flux]));
    CHECK(std::abs(reaction.steady_gain(0, 1) - slope[power]) <= 1e-8 * std::abs(slope[power]));
}
