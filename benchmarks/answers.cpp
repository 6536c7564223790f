// Design answers: the gradient against the value alone, marches with their gradients, compact models and their step.

#include <benchmark/benchmark.h>
#include <tepor/answers/compact.hpp>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/gradient_march.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

const Parameter heater_a{"heater a", 40.0}, heater_b{"heater b", 40.0}, heater_c{"heater c", 40.0};
const Parameter ambient{"ambient", 20.0}, bronze{"bronze", 60.0}, film{"film", 50.0};

/// The plate of two alloys, 0.2 x 0.1 m; 0.001 m makes 20,301 unknowns.
Body plate(double size) {
    Tiles drawing;
    drawing.add("bronze", {0.0, 0.0}, {0.12, 0.1});
    drawing.add("steel", {0.12, 0.0}, {0.2, 0.1});
    drawing.add("a", {0.02, 0.02}, {0.04, 0.04});
    drawing.add("b", {0.08, 0.06}, {0.10, 0.08});
    drawing.add("c", {0.16, 0.04}, {0.18, 0.06});
    Body body{tiles<Triangle<1>>(drawing, {.size = size}, Planar{.depth = 0.01})};
    for (const char* region : {"bronze", "a", "b"})
        body.in(region, Material{.conductivity = bronze, .density = 8700, .specific_heat = 380});
    for (const char* region : {"steel", "c"})
        body.in(region, Material{.conductivity = 16.0, .density = 7900, .specific_heat = 500});
    body.in("a", Generation{.total = heater_a});
    body.in("b", Generation{.total = heater_b});
    body.in("c", Generation{.total = heater_c});
    for (const char* face : {"left", "right", "bottom", "top"})
        body.on(face, Film{.coefficient = film, .fluid = ambient});
    return body;
}

const Quantity probe = at({0.11, 0.05});

CompactOptions options() {
    return {.inputs = {heater_a, heater_b, heater_c, ambient},
            .outputs = {at({0.03, 0.03}), probe, at({0.17, 0.08}), mean_in("steel")},
            .sample_time = 1.0,
            .tolerance = 1e-3,
            .input_scale = {40.0, 40.0, 40.0, 10.0}};
}

/// A new conductivity each time, so that no factor is found again.
void steady_value(benchmark::State& state) {
    Body body = plate(0.001);
    double k = 60.0;
    for (auto _ : state) {
        body.set(bronze, k += 1e-3);
        benchmark::DoNotOptimize(steady(body)[probe]);
    }
}
BENCHMARK(steady_value)->Unit(benchmark::kMillisecond);

void steady_value_and_gradient(benchmark::State& state) {
    Body body = plate(0.001);
    double k = 60.0;
    for (auto _ : state) {
        body.set(bronze, k += 1e-3);
        benchmark::DoNotOptimize(gradient(steady(body), probe).nodes().data());
    }
}
BENCHMARK(steady_value_and_gradient)->Unit(benchmark::kMillisecond);

void march_100_steps(benchmark::State& state) {
    const Body body = plate(0.002);
    for (auto _ : state) {
        March march{body, initial(20.0), Theta{.theta = 0.5, .step = 2.0}};
        for (int i = 0; i < 100; ++i) march.advance().require();
        benchmark::DoNotOptimize(march[probe]);
    }
}
BENCHMARK(march_100_steps)->Unit(benchmark::kMillisecond);

void march_100_steps_and_gradient(benchmark::State& state) {
    const Body body = plate(0.002);
    for (auto _ : state) {
        March march{body, initial(20.0), Theta{.theta = 0.5, .step = 2.0}};
        march.record();
        for (int i = 0; i < 100; ++i) march.advance().require();
        benchmark::DoNotOptimize(gradient(march, probe).nodes().data());
    }
}
BENCHMARK(march_100_steps_and_gradient)->Unit(benchmark::kMillisecond);

/// The same with a heater driven by a controller: a new power at every step.
void march_driven(benchmark::State& state, bool with_gradient) {
    const Body body = plate(0.002);
    for (auto _ : state) {
        March march{body, initial(20.0), Theta{.theta = 0.5, .step = 2.0}};
        const Input input = march.drive(heater_a);
        if (with_gradient) march.record();
        for (int i = 0; i < 100; ++i) {
            march.set(input, 40.0 + 0.1 * i);
            march.advance().require();
        }
        if (with_gradient)
            benchmark::DoNotOptimize(gradient(march, probe).nodes().data());
        else
            benchmark::DoNotOptimize(march[probe]);
    }
}
BENCHMARK_CAPTURE(march_driven, forward, false)->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(march_driven, and_gradient, true)->Unit(benchmark::kMillisecond);

void compact_plate(benchmark::State& state) {
    const Body body = plate(0.001);
    Index factorisations = 0;
    Index order = 0;
    double bound = 0.0;
    for (auto _ : state) {
        const StateSpace model = compact(body, options());
        factorisations = model.factorisations;
        order = model.order;
        bound = model.error_bound / model.peak_gain;
    }
    state.counters["factorisations"] = static_cast<double>(factorisations);
    state.counters["states"] = static_cast<double>(order);
    state.counters["unknowns"] = static_cast<double>(body.model()->unknowns);
    state.counters["bound_per_peak"] = bound;
}
BENCHMARK(compact_plate)->Unit(benchmark::kMillisecond);

void compact_step(benchmark::State& state) {
    CompactOptions wanted = options();
    wanted.order = 18;
    wanted.tolerance = 1e-5;
    StateSpace model = compact(plate(0.005), wanted);
    const double u[4] = {45.0, 38.0, 41.0, 22.0};
    double y[4];
    for (auto _ : state) {
        model.advance(u, y);
        benchmark::DoNotOptimize(y[0]);
    }
}
BENCHMARK(compact_step)->Unit(benchmark::kNanosecond);

} // namespace

BENCHMARK_MAIN();
