// Gradients of marches against dense steps in complex numbers, against marches at other values, and their refusals.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/gradient_march.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tests/support/everything.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using namespace tepor::test::everything;
using test::Complex;

namespace {

/// Value at the end of "mean in right", and integrals of two heats, over one damped step and one plain one.
struct Results {
    Complex mean, radiated, reaction, warmth;
};

template <class E>
Results complex_march(test::ComplexBody<E>& body, double dt, bool lumped) {
    std::vector<Complex> T(body.fixed.size(), 20.0);
    body.T = T;
    Results out{0.0, 0.0, 0.0, 0.0};
    const Complex volume = body.over_region(1, [](const test::ComplexSpot&) { return Complex(1.0); });
    // two damped steps of two halves each, then one plain step
    for (int leg = 0; leg < 5; ++leg) {
        const double theta = leg < 4 ? 1.0 : 0.5;
        const double h = leg < 4 ? 0.5 * dt : dt;
        std::vector<Complex> early = T;
        for (std::size_t u = 0; u < T.size(); ++u)
            if (body.fixed[u]) early[u] = body.fixed_value[u];
        const std::vector<Complex> r = body.step(T, h, theta, lumped);
        T = body.T;
        for (std::size_t u = 0; u < r.size(); ++u)
            if (body.fixed[u]) out.reaction -= r[u];
        for (std::size_t u = 0; u < T.size(); ++u) body.T[u] = theta * T[u] + (1.0 - theta) * early[u];
        out.radiated += h * body.over_face(1, [&](const test::ComplexSpot& s) { return body.outflow(1, s); });
        out.warmth += h * body.over_region(1, [](const test::ComplexSpot& s) { return s.T; }) / volume;
        body.T = T;
    }
    out.mean = body.over_region(1, [](const test::ComplexSpot& s) { return s.T; }) / volume;
    return out;
}

template <class E>
void compare(Frame frame, Capacity capacity, const std::vector<std::size_t>& which) {
    const Mesh<E> mesh = mesh_of<E>(frame);
    const Body body = body_of<E>(mesh);
    const double dt = 4000.0;
    March march{body, initial(20.0), Theta{.theta = 0.5, .step = dt, .capacity = capacity, .tolerance = 1e-14}};
    march.record();
    const Integral radiated = march.integral(heat_out_through("right side"));
    for (int i = 0; i < 3; ++i) march.advance().require();
    const Gradient mean = gradient(march, mean_in("right"));
    const Gradient heat = gradient_of_integral(march, heat_out_through("right side"));
    const Gradient reaction = gradient_of_integral(march, heat_out_through("left side"));
    const Gradient warmth = gradient_of_integral(march, mean_in("right"));
    const bool lumped = capacity == Capacity::lumped;
    std::vector<Complex> p;
    for (const Parameter& parameter : data()) p.emplace_back(parameter.value());
    const auto run = [&](const std::vector<Complex>& at, std::size_t node, std::size_t d, double h) {
        test::ComplexBody<E> other(mesh);
        if (h > 0.0) other.places[node][d] += Complex(0.0, h);
        describe(other, at);
        return complex_march(other, dt, lumped);
    };
    const Results base = run(p, 0, 0, 0.0);
    const auto near = [](double a, double b) { return std::abs(a - b) <= 1e-9 * (1.0 + std::abs(b)); };
    CHECK(near(mean.value(), base.mean.real()));
    CHECK(near(heat.value(), base.radiated.real()));
    CHECK(near(heat.value(), march[radiated]));
    CHECK(near(reaction.value(), base.reaction.real()));
    CHECK(near(warmth.value(), base.warmth.real()));
    constexpr double h = 1e-40;
    // an effect that is small beside the quantity itself is known to the rounding of the quantity
    const auto agree = [&](double a, double exact, double size) {
        INFO("gradient ", a, ", complex step ", exact, ", size ", size);
        CHECK(std::abs(a - exact) <= 1e-10 * std::abs(exact) + 1e-11 * std::abs(size));
    };
    for (const std::size_t j : which) {
        CAPTURE(data()[j].name());
        std::vector<Complex> moved = p;
        moved[j] += Complex(0.0, h);
        const Results r = run(moved, 0, 0, 0.0);
        const double scale = 1.0 / std::abs(p[j].real());
        agree(mean[data()[j]], r.mean.imag() / h, scale * mean.value());
        agree(heat[data()[j]], r.radiated.imag() / h, scale * heat.value());
        agree(reaction[data()[j]], r.reaction.imag() / h, scale * reaction.value());
        agree(warmth[data()[j]], r.warmth.imag() / h, scale * warmth.value());
    }
    for (const std::size_t n : {std::size_t(0), mesh.nodes.size() / 2})
        for (std::size_t d = 0; d < static_cast<std::size_t>(E::dim); ++d) {
            CAPTURE(n);
            CAPTURE(d);
            const Results r = run(p, n, d, h);
            const auto by = [&](const Gradient& g) { return d == 0 ? g.nodes()[n].x : g.nodes()[n].y; };
            agree(by(mean), r.mean.imag() / h, mean.value());
            agree(by(heat), r.radiated.imag() / h, heat.value());
            agree(by(reaction), r.reaction.imag() / h, reaction.value());
        }
}

} // namespace

TEST_CASE("gradients of a theta march agree with the complex step for data and node positions") {
    const std::vector<std::size_t> line = {k0,   beta, grade,      k_hot, emissivity, around, held, total,
                                           amps, sink, sink_fluid, plate, joint,      rho,    heat, c_right};
    compare<Segment<1>>(Planar{.area = 0.7}, Capacity::lumped, line);
    compare<Segment<2>>(Cylindrical{}, Capacity::consistent, line);
    compare<Triangle<1>>(Planar{.depth = 0.7}, Capacity::lumped,
                         {k0, k_across, film, fluid, into, held, total, joint, spot, rho, heat, c_right});
    compare<Quadrilateral<1>>(Cylindrical{}, Capacity::consistent, {beta, film, held, rho, heat});
}

namespace {

const Parameter k{"k", 2.0}, thick{"thick", 0.05}, power{"power", 3e5}, h{"h", 40.0}, hot{"hot", 150.0},
    warm{"warm", 800.0}, joint_h{"joint h", 300.0}, wall_T{"wall T", 60.0};

/// Linear: two layers, contact, film, source, a schedule, a prescribed face.
Body linear_body(bool nonlinear) {
    Body body{layers<Segment<1>>(
        {{.region = "a", .thickness = thick, .cells = 4}, {.region = "b", .thickness = 0.03, .cells = 3}},
        Cylindrical{}, {.start = 0.02})};
    body.in("a", Material{.conductivity = k, .density = 2000, .specific_heat = warm});
    body.in("b", Material{.conductivity = 5.0, .density = 3000, .specific_heat = 500});
    body.in("a", Generation{.per_volume = power});
    body.between("a", "b", Contact{.conductance = joint_h});
    body.on("inner", FixedTemperature{wall_T});
    body.on("outer", Film{.coefficient = h, .fluid = hot});
    body.also_on("outer", Film{.coefficient = 10.0, .fluid = schedule({{0, 20.0}, {70.0, 90.0}, {130.0, 40.0}})});
    if (nonlinear) body.on("outer", Radiation{.emissivity = 0.9, .surroundings = 20.0});
    return body;
}

const std::vector<Parameter> asked_for = {k, thick, power, h, hot, warm, joint_h, wall_T};

template <class Scheme, class Value>
void against_differences(bool nonlinear, const Scheme& scheme, const Gradient& slope, const Value& value,
                         double tolerance) {
    for (const Parameter& p : asked_for) {
        CAPTURE(p.name());
        const double step = 1e-3 * p.value();
        double v[4];
        for (int i = 0; i < 4; ++i) {
            Body other = linear_body(nonlinear);
            other.set(p, p.value() + (i < 2 ? (i == 0 ? 1.0 : -1.0) : (i == 2 ? 2.0 : -2.0)) * step);
            March march{other, initial(25.0), scheme};
            v[i] = value(march);
        }
        const double exact = (8.0 * (v[0] - v[1]) - (v[2] - v[3])) / (12.0 * step);
        CHECK(std::abs(slope[p] - exact) <= tolerance * (std::abs(exact) + 1e-4 * std::abs(slope.value() / p.value())));
    }
}

} // namespace

TEST_CASE("gradients of linear and nonlinear marches agree with marches at other values") {
    for (const bool nonlinear : {false, true}) {
        const Theta theta{.theta = 0.5, .step = 20.0, .tolerance = 1e-13};
        March march{linear_body(nonlinear), initial(25.0), theta};
        march.record();
        march.advance_to(200.0);
        const Quantity q = at(0.05);
        const Gradient end = gradient(march, q);
        CHECK(std::abs(end.value() - march[q]) <= 1e-12 * std::abs(end.value()));
        against_differences(
            nonlinear, theta, end,
            [&](March& m) {
                m.advance_to(200.0);
                return m[q];
            },
            1e-7);
        const Gradient early = gradient(march, q, 100.0);
        against_differences(
            nonlinear, theta, early,
            [&](March& m) {
                m.advance_to(100.0);
                return m[q];
            },
            1e-7);
        const Quantity in = heat_in_through("inner");
        const Gradient passed = gradient_of_integral(march, in);
        against_differences(
            nonlinear, theta, passed,
            [&](March& m) {
                const Integral sum = m.integral(in);
                m.advance_to(200.0);
                return m[sum];
            },
            1e-7);
    }
}

TEST_CASE("gradients of a march of TR-BDF2 steps agree with the same steps at other values") {
    // steps cut to a grid by the first and largest step, so that other values take the same ones
    const Adaptive steps{.tolerance = 1e6, .first_step = 10.0, .largest_step = 10.0, .newton_tolerance = 1e-13};
    for (const bool nonlinear : {false, true}) {
        March march{linear_body(nonlinear), initial(25.0), steps};
        march.record();
        march.advance_to(100.0);
        const Quantity q = mean_in("a");
        against_differences(
            nonlinear, steps, gradient(march, q),
            [&](March& m) {
                m.advance_to(100.0);
                return m[q];
            },
            1e-7);
        const Quantity in = heat_in_through("inner");
        const Gradient passed = gradient_of_integral(march, in);
        against_differences(
            nonlinear, steps, passed,
            [&](March& m) {
                const Integral sum = m.integral(in);
                m.advance_to(100.0);
                return m[sum];
            },
            1e-7);
    }
}

TEST_CASE("a peak has the gradient of its instant, and says when it lies at an end") {
    Body body{layers<Segment<1>>({{.region = "a", .thickness = 0.02, .cells = 4}})};
    body.in("a", Material{.conductivity = k, .density = 2000, .specific_heat = 800});
    body.on("outer", Film{.coefficient = h, .fluid = 20.0});
    body.on("inner", Flux{.into = schedule({{0, 8000.0}, {300.0, 0.0}})});
    March march{body, initial(20.0), Theta{.theta = 1.0, .step = 10.0}};
    march.record();
    march.advance_to(600.0);
    const PeakGradient peak = gradient_of_peak(march, mean_on("outer"));
    CHECK_FALSE(peak.one_sided);
    CHECK(peak.time >= 300.0);
    CHECK(peak.time <= 400.0);
    CHECK(std::abs(peak.gradient[h] - gradient(march, mean_on("outer"), peak.time)[h]) <= 1e-12);
    CHECK(peak.gradient[h] < 0.0);
    March rising{body, initial(20.0), Theta{.theta = 1.0, .step = 10.0}};
    rising.record();
    rising.advance_to(200.0);
    CHECK(gradient_of_peak(rising, mean_on("outer")).one_sided);
    // the heated surface is hottest when its heat is switched off
    const PeakGradient switched = gradient_of_peak(march, mean_on("inner"));
    CHECK(switched.time == 300.0);
    CHECK(switched.one_sided);
}

TEST_CASE("a driven input counts by a shift of all its values") {
    Body body = linear_body(false);
    March march{body, initial(25.0), Theta{.theta = 0.5, .step = 20.0}};
    const Input heater = march.drive(power);
    march.record();
    const auto drive = [&](March& m, Input in, double shift) {
        for (int i = 0; i < 8; ++i) {
            m.set(in, 2e5 + 3e4 * i + shift);
            m.advance().require();
        }
    };
    drive(march, heater, 0.0);
    const Gradient slope = gradient(march, at(0.05));
    March other{body, initial(25.0), Theta{.theta = 0.5, .step = 20.0}};
    const Input same = other.drive(power);
    drive(other, same, 1e4);
    CHECK(std::abs(slope[power] - (other[at(0.05)] - march[at(0.05)]) / 1e4) <= 1e-9 * slope[power]);
}

TEST_CASE("gradients of marches refuse what was not recorded or has no derivative") {
    Body body = linear_body(false);
    March march{body, initial(25.0), Theta{.theta = 0.5, .step = 20.0}};
    march.advance().require();
    test::check_refused([&] { (void)gradient(march, at(0.05)); }, ErrorCode::missing, "record", "say march.record()");
    march.record(1e-4);
    march.advance().require();
    march.advance().require();
    march.advance().require();
    test::check_refused([&] { (void)gradient(march, at(0.05)); }, ErrorCode::too_large, "record",
                        "not even checkpoints");
    march.record();
    march.advance().require();
    test::check_refused([&] { (void)gradient(march, at(0.05), 7.0); }, ErrorCode::no_answer, at(0.05).label(),
                        "no step of the march ended");
    test::check_refused([&] { (void)gradient(march, heat_out_through("inner")); }, ErrorCode::not_supported,
                        heat_out_through("inner").label(), "gradient_of_integral");
    test::check_refused([&] { march.record(-1.0); }, ErrorCode::bad_value, "megabytes", "> 0");
}
