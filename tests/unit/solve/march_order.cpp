// Orders in time and space, ringing, maximum principle, exact energy of schedules.
#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <map>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/solve/march.hpp>
#include <utility>
#include <vector>

using namespace tepor;

namespace {

/// T = 20 + 30 (sin(pi x) + x / 2) exp(-t) on 0..1 with k = 0.3, rho c = 2, its source and end temperatures.
double exact(double x, double t) {
    return 20.0 + 30.0 * (std::sin(pi * x) + 0.5 * x) * std::exp(-t);
}
template <class E>
Body manufactured(Index cells) {
    Body body{layers<E>({{.region = "bar", .thickness = 1.0, .cells = cells}}), BodyOptions{.extra_degree = 3}};
    body.in("bar", Material{.conductivity = 0.3, .density = 0.02, .specific_heat = 100.0});
    body.in("bar", Generation{.per_volume = of_place([](const Place& p) {
                                  const double decay = std::exp(-p.time);
                                  return 30.0 * decay *
                                         (-2.0 * (std::sin(pi * p.x) + 0.5 * p.x) + 0.3 * pi * pi * std::sin(pi * p.x));
                              })});
    body.on("inner", FixedTemperature{.temperature = 20.0});
    body.on("outer", FixedTemperature{.temperature = of_time([](double t) { return exact(1.0, t); })});
    return body;
}
/// Largest nodal error at t = 1.
template <class Scheme>
double error_of(const Body& body, const Scheme& scheme) {
    March march{body, initial(of_place([](Point p) { return exact(p.x, 0.0); })), scheme};
    march.advance_to(1.0);
    const Field field = march.field();
    const std::vector<double> T = field.node_temperatures();
    const std::vector<Point> places = field.node_places();
    double worst = 0.0;
    for (std::size_t i = 0; i < T.size(); ++i) worst = std::max(worst, std::abs(T[i] - exact(places[i].x, 1.0)));
    return worst;
}
/// Against the same mesh marched with a very small step: the error of time alone.
template <class Scheme>
double time_error(const Body& body, const Scheme& scheme) {
    const Initial start = initial(of_place([](Point p) { return exact(p.x, 0.0); }));
    static const std::vector<double> reference = [&] {
        March march{body, start, Theta{.theta = 0.5, .step = 1.0 / 4096.0, .damped_start = false}};
        march.advance_to(1.0);
        return march.field().temperature();
    }();
    March march{body, start, scheme};
    march.advance_to(1.0);
    const Field field = march.field();
    double worst = 0.0;
    for (std::size_t i = 0; i < reference.size(); ++i)
        worst = std::max(worst, std::abs(field.temperature()[i] - reference[i]));
    return worst;
}
/// T = 20 + 30 cos(pi x) exp(-y - t / 2) on the unit square in 2D with k = 0.3 + 0.1 y, rho c = 2: no heat passes x = 0 and x = 1,
/// a film below, the temperature given above.
double exact_2d(Point p, double t) {
    return 20.0 + 30.0 * std::cos(pi * p.x) * std::exp(-p.y - 0.5 * t);
}
template <class E>
Body manufactured_2d(Index cells) {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {1.0, 1.0});
    drawing.split_x({.from = 0.0, .to = 1.0, .cells = cells}).split_y({.from = 0.0, .to = 1.0, .cells = cells});
    Body body{tiles<E>(drawing), BodyOptions{.extra_degree = 2}};
    body.in("plate", Material{.conductivity = of_place([](const auto& p) { return 0.3 + 0.1 * p.y; }),
                              .density = 0.02,
                              .specific_heat = 100.0});
    body.in("plate", Generation{.per_volume = of_place([](const Place& p) {
                                    // rho c T_t - k_y T_y - k (T_xx + T_yy), all multiples of wave
                                    const double wave = exact_2d({p.x, p.y}, p.time) - 20.0;
                                    return wave * (-1.0 + 0.1 - (0.3 + 0.1 * p.y) * (1.0 - pi * pi));
                                })});
    // heat that leaves below: k T_y = -0.3 wave = 5 (T - fluid)
    body.on("bottom", Film{.coefficient = 5.0, .fluid = of_place([](const Place& p) {
                                                   return 20.0 + 1.06 * (exact_2d({p.x, 0.0}, p.time) - 20.0);
                                               })});
    body.on("top", FixedTemperature{.temperature = of_place([](const Place& p) {
                                        return exact_2d({p.x, 1.0}, p.time);
                                    })});
    return body;
}
/// Error at t = 1, root of the mean square over the nodes.
template <class E>
double error_2d(Index cells, double step, double theta = 0.5) {
    March march{manufactured_2d<E>(cells), initial(of_place([](Point p) { return exact_2d(p, 0.0); })),
                Theta{.theta = theta, .step = step, .damped_start = false}};
    march.advance_to(1.0);
    CHECK(march.balance().balanced());
    const Field field = march.field();
    const std::vector<double> T = field.node_temperatures();
    const std::vector<Point> places = field.node_places();
    double sum = 0.0;
    for (std::size_t i = 0; i < T.size(); ++i) sum += std::pow(T[i] - exact_2d(places[i], 1.0), 2);
    return std::sqrt(sum / static_cast<double>(T.size()));
}
double order(double coarse, double fine, double ratio = 2.0) {
    return std::log(coarse / fine) / std::log(ratio);
}

} // namespace

TEST_CASE("theta 1/2 is of order 2 in time, damped or not, and theta 1 of order 1") {
    const Body body = manufactured<Segment<1>>(24);
    const auto ratio = [&](double theta, bool damped, double step) {
        const double coarse = time_error(body, Theta{.theta = theta, .step = step, .damped_start = damped});
        const double fine = time_error(body, Theta{.theta = theta, .step = 0.5 * step, .damped_start = damped});
        return order(coarse, fine);
    };
    CHECK(std::abs(ratio(0.5, false, 1.0 / 32.0) - 2.0) < 0.1);
    CHECK(std::abs(ratio(0.5, true, 1.0 / 64.0) - 2.0) < 0.15);
    CHECK(std::abs(ratio(1.0, true, 1.0 / 64.0) - 1.0) < 0.1);
    CHECK(time_error(body, Theta{.theta = 0.5, .step = 1.0 / 64.0}) < 2e-3);
}

TEST_CASE("step and mesh refined together: h^2 + dt^2 at order 1, h^3 + dt^2 at order 2") {
    const double coarse = error_of(manufactured<Segment<1>>(8), Theta{.theta = 0.5, .step = 1.0 / 16.0});
    const double fine = error_of(manufactured<Segment<1>>(16), Theta{.theta = 0.5, .step = 1.0 / 32.0});
    CHECK(order(coarse, fine) > 1.85);
    CHECK(fine < 0.05);
    const double second = error_of(manufactured<Segment<2>>(4), Theta{.theta = 0.5, .step = 1.0 / 32.0});
    const double finer = error_of(manufactured<Segment<2>>(16), Theta{.theta = 0.5, .step = 1.0 / 256.0});
    CHECK(order(second, finer, 4.0) > 2.8); // dt falls by 8 = 4^(3/2)
}

TEST_CASE("the same in 2D, with a film, a conductivity of place and a temperature that varies along a face") {
    const double coarse = error_2d<Triangle<1>>(8, 0.125);
    const double fine = error_2d<Triangle<1>>(16, 0.0625);
    CHECK(std::abs(order(coarse, fine) - 2.0) < 0.15);
    CHECK(fine < 0.05);
    // both parts count: a tenth of the step alone, or a finer mesh alone, does not give it
    CHECK(error_2d<Triangle<1>>(8, 0.0125) > 0.5 * coarse);
    const double second = error_2d<Quadrilateral<2>>(4, 0.125);
    const double finer = error_2d<Quadrilateral<2>>(16, 0.015625); // dt falls by 8 = 4^(3/2)
    CHECK(order(second, finer, 4.0) > 2.8);
    const double triangle = error_2d<Triangle<2>>(4, 0.125);
    const double finer_triangle = error_2d<Triangle<2>>(16, 0.015625);
    CHECK(order(triangle, finer_triangle, 4.0) > 2.8);
    // theta 1: first order in time on a mesh that is fine enough
    CHECK(std::abs(order(error_2d<Quadrilateral<2>>(8, 0.125, 1.0), error_2d<Quadrilateral<2>>(8, 0.0625, 1.0)) - 1.0) <
          0.1);
}

TEST_CASE("half lumped, half consistent capacity is of order 4 at the nodes of a uniform mesh") {
    const auto at_nodes = [](Index cells, Capacity capacity) {
        return error_of(manufactured<Segment<1>>(cells),
                        Theta{.theta = 0.5, .step = 1.0 / 2048.0, .capacity = capacity, .damped_start = false});
    };
    CHECK(order(at_nodes(6, Capacity::blended), at_nodes(12, Capacity::blended)) > 3.7);
    CHECK(std::abs(order(at_nodes(6, Capacity::lumped), at_nodes(12, Capacity::lumped)) - 2.0) < 0.2);
    CHECK(std::abs(order(at_nodes(6, Capacity::consistent), at_nodes(12, Capacity::consistent)) - 2.0) < 0.2);
}

TEST_CASE("the error of Adaptive follows its tolerance over four decades, as tolerance^(2/3) or better") {
    const Body body = manufactured<Segment<1>>(24);
    std::vector<double> error;
    Index steps = 0;
    for (const double tolerance : {1e-1, 1e-2, 1e-3, 1e-4, 1e-5}) {
        error.push_back(time_error(body, Adaptive{.tolerance = tolerance}));
        CHECK(error.back() <= 4.0 * std::pow(tolerance, 2.0 / 3.0));
        if (error.size() > 1) CHECK(error.back() < error[error.size() - 2]);
        March march{body, initial(20.0), Adaptive{.tolerance = tolerance}};
        march.advance_to(1.0);
        CHECK(march.steps() > steps);
        steps = march.steps();
        CHECK(march.factorisations() < 3 * march.steps() / 2 + 25);
    }
    CHECK(error.front() / error.back() > 300.0);
}

TEST_CASE("TR-BDF2 is of order 2: doubling the fixed step gives four times the error") {
    const Body body = manufactured<Segment<1>>(24);
    const auto fixed = [](double step) { return Adaptive{.tolerance = 1e3, .first_step = step, .largest_step = step}; };
    CHECK(std::abs(order(time_error(body, fixed(1.0 / 16.0)), time_error(body, fixed(1.0 / 32.0))) - 2.0) < 0.15);
}

TEST_CASE("a stepped surface does not ring and passes the right heat soon after") {
    // cell Fourier number a dt / h^2 = 25; limits common practice, no source
    const double h = 1e-3;
    const double diffusivity = 1e-6;
    const double step = 25.0 * h * h / diffusivity;
    Body body{layers<Segment<1>>({{.region = "slab", .thickness = 0.1, .cells = 100}})};
    body.in("slab", Material{.conductivity = 2.0, .density = 2000.0, .specific_heat = 1000.0});
    body.on("inner", FixedTemperature{.temperature = 100.0});
    March march{body, initial(0.0), Theta{.theta = 0.5, .step = step}};
    const Quantity into = heat_in_through("inner");
    const Integral taken = march.integral(into);
    const auto flux = [&](double t) { return 2.0 * 100.0 / std::sqrt(pi * diffusivity * t); };
    const auto heat = [&](double t) { return 2.0 * t * flux(t); };
    double near_before = 0.0;
    double before = 0.0;
    for (int i = 1; i <= 12; ++i) {
        CHECK(march.advance().ok());
        const double near = march[at(3.0 * h)];
        CHECK(near >= near_before - 1e-9); // no swing back
        near_before = near;
        const double t = march.time();
        const double mean = (march[taken] - before) / step;
        before = march[taken];
        CAPTURE(i);
        if (i >= 5) CHECK(std::abs(march[into] / flux(t) - 1.0) <= 0.01);
        if (i >= 6) CHECK(std::abs(mean / ((heat(t) - heat(t - step)) / step) - 1.0) <= 0.01);
    }
    // without the damped start the same march swings
    March bare{body, initial(0.0), Theta{.theta = 0.5, .step = step, .damped_start = false}};
    double swing = 0.0;
    double last = 0.0;
    for (int i = 0; i < 8; ++i) {
        CHECK(bare.advance().ok());
        swing = std::min(swing, bare[at(h)] - last);
        last = bare[at(h)];
    }
    CHECK(swing < -10.0);
}

namespace {

/// A plate held at 300 degC on one side, cooled to 0 degC on another, from 100 degC.
Body cooled(const Mesh<Triangle<1>>& mesh) {
    Body body{mesh, BodyOptions{.lumped_faces = true}};
    body.in("plate", Material{.conductivity = 20.0, .density = 8000.0, .specific_heat = 500.0});
    body.on("left", FixedTemperature{.temperature = 300.0});
    body.on("top", Film{.coefficient = 2000.0, .fluid = 0.0});
    return body;
}

} // namespace

TEST_CASE("backward Euler with lumped capacity and faces keeps the maximum principle at any step") {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.1, 0.06});
    drawing.split_x({.from = 0.0, .to = 0.1, .cells = 10}).split_y({.from = 0.0, .to = 0.06, .cells = 6});
    Section section;
    section.add("plate", rectangle({0.0, 0.0}, {0.1, 0.06}));
    section.cut(circle({0.06, 0.03}, 0.012), "hole");
    section.face("left", {0.0, 0.0}, {0.0, 0.06});
    section.face("top", {0.0, 0.06}, {0.1, 0.06});
    const Mesh<Triangle<1>> delaunay = triangulate<Triangle<1>>(section, {.size = 0.012});
    // what is promised: opposite angles of an inner side sum to 180 degrees at most, none that faces a face is obtuse
    {
        std::map<std::pair<Id, Id>, double> cotangents;
        for (Index c = 0; c < delaunay.cell_count(); ++c)
            for (int k = 0; k < 3; ++k) {
                const Id a = delaunay.cell(c)[(k + 1) % 3];
                const Id b = delaunay.cell(c)[(k + 2) % 3];
                const Point p = delaunay.nodes[static_cast<std::size_t>(delaunay.cell(c)[k])];
                const Point u = delaunay.nodes[static_cast<std::size_t>(a)] - p;
                const Point v = delaunay.nodes[static_cast<std::size_t>(b)] - p;
                cotangents[std::minmax(a, b)] += dot(u, v) / cross(u, v);
            }
        for (const auto& side : cotangents) CHECK(side.second >= -1e-12);
    }
    for (const Mesh<Triangle<1>>& mesh : {tiles<Triangle<1>>(drawing, {.diagonals = Diagonals::crossed}), delaunay}) {
        const Body body = cooled(mesh);
        for (double step = 1e-6; step < 1e7; step *= 10.0) {
            March march{body, initial(100.0), Theta{.theta = 1.0, .step = step}};
            for (int i = 0; i < 5; ++i) {
                CHECK(march.advance().ok());
                const Field field = march.field();
                CHECK(field.hottest().temperature <= 300.0 * (1.0 + 1e-12));
                CHECK(field.coldest().temperature >= 0.0);
            }
            if (step > 1e-3) continue;
            // consistent capacity undershoots at a small step
            March other{body, initial(100.0), Theta{.theta = 1.0, .step = step, .capacity = Capacity::consistent}};
            for (int i = 0; i < 5; ++i) CHECK(other.advance().below_minimum());
            CHECK(other.field().coldest().temperature < 100.0 - 1e-3);
        }
    }
}

TEST_CASE("a schedule delivers its exact energy whatever the step, pulses shorter than it included") {
    // 500 W for 7 s, then 2 kW for 0.4 s, then a ramp: 3500 + 800 + 2500 J
    const double exact_energy = 500.0 * 7.0 + 2000.0 * 0.4;
    for (const double step : {0.3, 5.0, 40.0, 1000.0})
        for (int kind = 0; kind < 3; ++kind) {
            Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.02, .cells = 6}})};
            body.in("bar", Material{.conductivity = 40.0, .density = 7800.0, .specific_heat = 500.0});
            body.in("bar", Generation{.total = schedule({{3.0, 0.0}, {3.1, 500.0}, {10.1, 2000.0}, {10.5, 0.0}})});
            body.on("outer", Flux{.into = schedule({{20.0, 0.0}, {25.0, 1000.0}, {30.0, 0.0}}, Between::ramps)});
            March march = kind < 2 ? March(body, initial(20.0), Theta{.theta = kind == 0 ? 0.5 : 1.0, .step = step})
                                   : March(body, initial(20.0), Adaptive{.tolerance = step * 1e-3});
            const double before = march[stored_in("bar")];
            const Integral made = march.integral(generated_in("bar"));
            march.advance_to(1000.0);
            const double taken = march[stored_in("bar")] - before;
            CAPTURE(step);
            CAPTURE(kind);
            CHECK(std::abs(taken - exact_energy - 5000.0) <= 1e-9 * taken);
            CHECK(std::abs(march[made] - exact_energy) <= 1e-9 * taken);
            CHECK(march.total().balanced());
        }
}
