// Gradients of marches in which the stored heat is not linear in temperature, and of runs that do not fit the memory stated.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/gradient_march.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/tape.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;

namespace {

const Parameter k{"k", 2.0}, thick{"thick", 0.03}, h{"h", 60.0}, hot{"hot", 150.0}, rho{"rho", 2000.0},
    c_cold{"c cold", 800.0}, c_warm{"c warm", 1500.0}, rise{"rise", 4e-4}, melting{"melting", 9e4},
    solidus{"solidus", 70.0}, liquidus{"liquidus", 95.0}, wall_T{"wall T", 120.0};

struct Case {
    Body body;
    std::vector<Parameter> parameters;
};

/// Slope of every parameter against runs at other values.
template <class Scheme, class Value>
void against_differences(const Body& body, const std::vector<Parameter>& parameters, const Scheme& scheme,
                         const Gradient& slope, const Value& value, double tolerance, double relative_step = 1e-4) {
    for (const Parameter& p : parameters) {
        CAPTURE(p.name());
        const double step = relative_step * p.value();
        double v[4];
        for (int i = 0; i < 4; ++i) {
            Body other = body;
            other.set(p, p.value() + (i < 2 ? (i == 0 ? 1.0 : -1.0) : (i == 2 ? 2.0 : -2.0)) * step);
            March march{other, initial(25.0), scheme};
            v[i] = value(march);
        }
        const double exact = (8.0 * (v[0] - v[1]) - (v[2] - v[3])) / (12.0 * step);
        INFO("gradient ", slope[p], ", differences ", exact);
        CHECK(std::abs(slope[p] - exact) <= tolerance * (std::abs(exact) + 1e-3 * std::abs(slope.value() / p.value())));
    }
}

/// Specific heat by a table with Parameters in one part, by a law in the other.
template <class E>
Case warming() {
    Body body{
        layers<E>({{.region = "a", .thickness = thick, .cells = 4}, {.region = "b", .thickness = 0.02, .cells = 3}},
                  Cylindrical{}, {.start = 0.02})};
    body.in("a", Material{.conductivity = k,
                          .density = rho,
                          .specific_heat = table({{0.0, 700.0}, {60.0, c_cold}, {90.0, c_warm}, {400.0, 900.0}})});
    body.in("b", Material{.conductivity = 5.0,
                          .density = law([](const auto& s) { return 3000.0 - 0.2 * s.temperature; }),
                          .specific_heat = law({rise}, [](const auto& s, auto b) {
                              return 500.0 * (1.0 + b * s.temperature) * (1.0 + 2.0 * s.x);
                          })});
    body.between("a", "b", Contact{.conductance = 400.0});
    body.on("outer", Film{.coefficient = h, .fluid = hot});
    body.on("inner", FixedTemperature{wall_T});
    return {std::move(body), {k, thick, rho, c_cold, c_warm, rise, h, hot, wall_T}};
}

/// A block that melts over a range, beside one that does not.
Case melting_block() {
    Body body{layers<Segment<1>>(
        {{.region = "a", .thickness = thick, .cells = 6}, {.region = "b", .thickness = 0.02, .cells = 3}})};
    body.in("a", Material{.conductivity = k,
                          .density = rho,
                          .specific_heat = c_cold,
                          .latent = {.heat = melting, .solidus = solidus, .liquidus = liquidus}});
    body.in("b", Material{.conductivity = 5.0, .density = 3000.0, .specific_heat = 500.0});
    body.on("inner", Film{.coefficient = h, .fluid = hot});
    return {std::move(body), {k, thick, rho, c_cold, melting, solidus, liquidus, h, hot}};
}

} // namespace

TEST_CASE_TEMPLATE("capacities that depend on temperature count with the slope of the heat content", E, Segment<1>,
                   Segment<2>) {
    const Case test = warming<E>();
    const Quantity q = mean_in("b");
    const Theta theta{.theta = 0.5, .step = 30.0, .tolerance = 1e-14};
    March march{test.body, initial(25.0), theta};
    march.record();
    march.advance_to(240.0);
    const Gradient end = gradient(march, q);
    CHECK(end.value() == march[q]);
    const auto value = [&](March& m) {
        m.advance_to(240.0);
        return m[q];
    };
    against_differences(test.body, test.parameters, theta, end, value, 2e-6);
    const Quantity in = heat_in_through("inner");
    const Gradient passed = gradient_of_integral(march, in);
    const auto sum = [&](March& m) {
        const Integral one = m.integral(in);
        m.advance_to(240.0);
        return m[one];
    };
    against_differences(test.body, test.parameters, theta, passed, sum, 2e-6);
    // the same steps of TR-BDF2 whatever the values
    const Adaptive steps{.tolerance = 1e6, .first_step = 30.0, .largest_step = 30.0, .newton_tolerance = 1e-14};
    March adaptive{test.body, initial(25.0), steps};
    adaptive.record();
    adaptive.advance_to(240.0);
    against_differences(test.body, test.parameters, steps, gradient(adaptive, q), value, 2e-6);
}

TEST_CASE_TEMPLATE("stored heat counts with its own dependence on density, specific heat and shape", E, Segment<1>,
                   Segment<2>) {
    const Case test = warming<E>();
    const Theta theta{.theta = 1.0, .step = 30.0, .tolerance = 1e-14};
    for (const char* region : {"a", "b"}) {
        const Quantity q = stored_in(region);
        March march{test.body, initial(25.0), theta};
        march.record();
        march.advance_to(120.0);
        against_differences(
            test.body, test.parameters, theta, gradient(march, q),
            [&](March& m) {
                m.advance_to(120.0);
                return m[q];
            },
            2e-6);
    }
}

TEST_CASE("what melts over a range has derivatives by its latent heat, solidus and liquidus too") {
    const Case test = melting_block();
    const Quantity q = mean_in("b");
    for (const double theta : {0.5, 1.0}) {
        CAPTURE(theta);
        const Theta steps{.theta = theta, .step = 20.0, .tolerance = 1e-14};
        March march{test.body, initial(25.0), steps};
        march.record();
        march.advance_to(900.0);
        CHECK(march.molten_in("a") > 0.1);
        CHECK(march.molten_in("a") < 0.9);
        against_differences(
            test.body, test.parameters, steps, gradient(march, q),
            [&](March& m) {
                m.advance_to(900.0);
                return m[q];
            },
            2e-6, 1e-6);
    }
    const Adaptive steps{.tolerance = 1e6, .first_step = 20.0, .largest_step = 20.0, .newton_tolerance = 1e-14};
    March march{test.body, initial(25.0), steps};
    march.record();
    march.advance_to(900.0);
    against_differences(
        test.body, test.parameters, steps, gradient(march, q),
        [&](March& m) {
            m.advance_to(900.0);
            return m[q];
        },
        2e-6, 1e-6);
}

TEST_CASE("what melts at one temperature has derivatives while its nodes are held there") {
    Body body{layers<Segment<1>>({{.region = "ice", .thickness = thick, .cells = 6}})};
    body.in("ice", Material{.conductivity = k,
                            .density = rho,
                            .specific_heat = c_cold,
                            .latent = {.heat = melting, .solidus = 70.0, .liquidus = 70.0}});
    body.on("inner", Film{.coefficient = h, .fluid = hot});
    const Quantity q = mean_in("ice");
    for (const double theta : {0.5, 1.0}) {
        CAPTURE(theta);
        const Theta steps{.theta = theta, .step = 20.0, .tolerance = 1e-14};
        March march{body, initial(25.0), steps};
        march.record();
        march.advance_to(900.0);
        CHECK(march.molten_in("ice") > 0.2);
        CHECK(march.molten_in("ice") < 0.9);
        against_differences(
            body, {k, thick, rho, c_cold, melting, h, hot}, steps, gradient(march, q),
            [&](March& m) {
                m.advance_to(900.0);
                return m[q];
            },
            1e-5, 1e-6);
    }
    Body moving{layers<Segment<1>>({{.region = "ice", .thickness = 0.02, .cells = 2}})};
    moving.in("ice", Material{.conductivity = k,
                              .density = 2000.0,
                              .specific_heat = 800.0,
                              .latent = {.heat = 1e5, .solidus = solidus, .liquidus = solidus}});
    moving.on("outer", Film{.coefficient = h, .fluid = hot});
    March march{moving, initial(20.0), Theta{.theta = 1.0, .step = 10.0}};
    march.record();
    march.advance().require();
    test::check_refused([&] { (void)gradient(march, at(0.01)); }, ErrorCode::not_supported, "ice",
                        "melts at one temperature");
    March other{body, initial(20.0), Theta{.theta = 1.0, .step = 10.0}};
    other.record();
    other.advance().require();
    test::check_refused([&] { (void)gradient(other, stored_in("ice")); }, ErrorCode::not_supported,
                        stored_in("ice").label(), "in part latent");
    // latent heat that was driven on the way
    March driven{body, initial(20.0), Theta{.theta = 1.0, .step = 10.0}};
    const Input heat = driven.drive(melting);
    driven.record();
    driven.advance().require();
    driven.set(heat, 1.1 * melting.value());
    driven.advance().require();
    test::check_refused([&] { (void)gradient(driven, at(0.01)); }, ErrorCode::not_supported, "ice",
                        "drive what acts on the body instead");
}

TEST_CASE("a run that does not fit the memory stated gives the same gradient from checkpoints") {
    const Case warm = warming<Segment<1>>();
    const Case melt = melting_block();
    Body plain{layers<Segment<1>>({{.region = "a", .thickness = thick, .cells = 8}})};
    plain.in("a", Material{.conductivity = k, .density = rho, .specific_heat = c_cold});
    plain.on("outer", Film{.coefficient = h, .fluid = hot});
    plain.also_on("outer", Film{.coefficient = 10.0, .fluid = schedule({{0, 20.0}, {70.0, 90.0}, {130.0, 40.0}})});
    const auto compare = [](const Body& body, const auto& scheme, const Quantity& q,
                            const std::vector<Parameter>& parameters) {
        March whole{body, initial(25.0), scheme};
        whole.record();
        whole.advance_to(3000.0);
        March little{body, initial(25.0), scheme};
        little.record(0.55 * static_cast<double>(whole.tape()->bytes()) / 1048576.0);
        little.advance_to(3000.0);
        CHECK(whole.tape()->stride == 1);
        CHECK(little.tape()->stride >= 2);
        CHECK(little.tape()->bytes() <= little.tape()->most_bytes);
        const Gradient a = gradient(whole, q);
        const Gradient b = gradient(little, q);
        CHECK(a.value() == b.value());
        for (const Parameter& p : parameters) {
            CAPTURE(p.name());
            CHECK(std::abs(a[p] - b[p]) <= 1e-12 * std::abs(a[p]));
        }
        const Gradient c = gradient_of_integral(whole, q);
        const Gradient d = gradient_of_integral(little, q);
        CHECK(std::abs(c.value() - d.value()) <= 1e-13 * std::abs(c.value()));
        for (const Parameter& p : parameters) CHECK(std::abs(c[p] - d[p]) <= 1e-12 * std::abs(c[p]));
        const double early = whole.tape()->legs[whole.tape()->legs.size() / 2].to;
        CHECK(std::abs(gradient(whole, q, early)[parameters[0]] - gradient(little, q, early)[parameters[0]]) <=
              1e-12 * std::abs(a[parameters[0]]));
    };
    const Theta theta{.theta = 0.5, .step = 20.0};
    const Adaptive adaptive{.tolerance = 0.02, .largest_step = 40.0};
    for (const Case* test : {&warm, &melt}) {
        compare(test->body, theta, mean_in("b"), test->parameters);
        compare(test->body, adaptive, mean_in("b"), test->parameters);
    }
    compare(plain, theta, mean_in("a"), {k, thick, rho, h, hot});
    compare(plain, adaptive, mean_in("a"), {k, thick, rho, h, hot});
}

TEST_CASE("sums of products over a run give what runs at other values and on moved meshes show") {
    const Parameter across{"across", 3.0}, joint{"joint", 500.0}, sink{"sink", 8.0}, around{"around", 15.0},
        power{"power", 400.0}, spot{"spot", 3.0}, held{"held", 60.0}, tall{"c", 700.0};
    Tiles drawing;
    drawing.add("block", {0.0, 0.0}, {0.06, 0.04});
    drawing.add("plate", {0.06, 0.0}, {0.09, 0.04});
    const Mesh<Triangle<2>> mesh = tiles<Triangle<2>>(drawing, {.size = 0.02});
    const auto make = [&](const Mesh<Triangle<2>>& on) {
        Body body{on};
        body.in("block", Material{.conductivity = tensor(k, 0.4, across), .density = rho, .specific_heat = tall});
        body.in("plate", Material{.conductivity =
                                      of_place({across}, [](const auto& p, auto a) { return a * (1.0 + 20.0 * p.x); }),
                                  .density = 4000.0,
                                  .specific_heat = 600.0});
        body.in("block", Generation{.total = power});
        body.in("plate", SideFilm{.coefficient = sink, .fluid = around, .thickness = 0.02});
        body.between("block", "plate", Contact{.conductance = joint});
        body.on("left", FixedTemperature{held});
        body.on("top", Film{.coefficient = h, .fluid = around});
        body.on("bottom", Flux{.into = schedule({{0.0, 2000.0}, {100.0, 500.0}})});
        body.at({0.075, 0.012}, LocalHeat{.total = spot, .radius = 0.001});
        return body;
    };
    const Quantity q = at({0.052, 0.031});
    for (const double theta : {0.5, 1.0}) {
        const Theta steps{.theta = theta, .step = 25.0};
        const auto run = [&](const Body& of, double more, bool record) {
            March march{of, initial(25.0), steps};
            const Input heater = march.drive(power);
            if (record) march.record();
            for (int i = 0; i < 12; ++i) {
                march.set(heater, 400.0 + 20.0 * (i % 3) + more);
                march.advance().require();
            }
            return march;
        };
        const Body body = make(mesh);
        const Gradient slope = gradient(run(body, 0.0, true), q);
        const double weight[4] = {8.0, -8.0, -1.0, 1.0};
        const double at[4] = {1.0, -1.0, 2.0, -2.0};
        for (const Parameter& p : {k, across, joint, sink, around, power, spot, held, tall, rho, h}) {
            CAPTURE(p.name());
            const double step = 1e-3 * p.value();
            double exact = 0.0;
            for (int i = 0; i < 4; ++i) {
                Body other = body;
                if (!(p == power)) other.set(p, p.value() + at[i] * step);
                exact += weight[i] / (12.0 * step) * run(other, p == power ? at[i] * step : 0.0, false)[q];
            }
            CHECK(std::abs(slope[p] - exact) <= 1e-7 * (std::abs(exact) + 1e-3 * std::abs(slope.value() / p.value())));
        }
        for (std::size_t n = 0; n < mesh.nodes.size(); ++n) {
            // local heat stays where it is when the mesh moves, but moves with its cell in the gradient
            if (distance(mesh.nodes[n], {0.075, 0.012}) < 0.025) continue;
            for (int d = 0; d < 2; ++d) {
                CAPTURE(mesh.nodes[n].x);
                CAPTURE(mesh.nodes[n].y);
                const double step = 1e-5;
                double exact = 0.0;
                for (int i = 0; i < 4; ++i) {
                    Mesh<Triangle<2>> moved = mesh;
                    (d == 0 ? moved.nodes[n].x : moved.nodes[n].y) += at[i] * step;
                    exact += weight[i] / (12.0 * step) * run(make(moved), 0.0, false)[q];
                }
                const double by_node = d == 0 ? slope.nodes()[n].x : slope.nodes()[n].y;
                CHECK(std::abs(by_node - exact) <= 1e-6 * (std::abs(exact) + std::abs(slope.value())));
            }
        }
    }
}
