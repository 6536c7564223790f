// The guaranteed bound beside the solve it judges, and a bracket's loop of passes beside its single solves.
//
// A square of four materials with films, heat and a prescribed side on an unstructured mesh. "assembly and direct solve" is what
// a pass of the bracket pays before its bound: slope, factor, one right-hand side. "steady" starts from the description and takes
// the solver it likes best. Per unknown, so that sizes compare.

#include <benchmark/benchmark.h>
#include <tepor/answers/bracket.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/flux/model_problem.hpp>
#include <tepor/mesh/section.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/steady.hpp>
#include <vector>

namespace {
using namespace tepor;

Section square() {
    Section section;
    section.add("steel", rectangle({0.0, 0.0}, {1.0, 1.0}));
    section.add("brick", rectangle({0.5, 0.0}, {1.0, 0.5}));
    section.add("wool", rectangle({0.0, 0.5}, {0.5, 1.0}));
    section.add("pipe", circle({0.5, 0.5}, 0.1));
    section.face("left", {0.0, 0.0}, {0.0, 1.0});
    section.face("right", {1.0, 0.0}, {1.0, 1.0});
    section.face("top", {0.0, 1.0}, {1.0, 1.0});
    return section;
}

template <int P>
Body body(Index unknowns) {
    const double size = 1.07 * P / std::sqrt(static_cast<double>(unknowns));
    Body out{triangulate<Triangle<P>>(square(), {.size = size})};
    out.in("steel", Material{.conductivity = 50.0});
    out.in("brick", Material{.conductivity = 0.8});
    out.in("wool", Material{.conductivity = 0.04});
    out.in("pipe", Material{.conductivity = 15.0}).in("pipe", Generation{.per_volume = 1e5});
    out.on("left", FixedTemperature{20.0});
    out.on("right", Film{.coefficient = 25.0, .fluid = 5.0}).on("top", Film{.coefficient = 8.0, .fluid = 60.0});
    return out;
}

void per_unknown(benchmark::State& state, Index unknowns) {
    state.counters["unknowns"] = static_cast<double>(unknowns);
    state.counters["per unknown"] = benchmark::Counter(
        static_cast<double>(unknowns), benchmark::Counter::kIsIterationInvariantRate | benchmark::Counter::kInvert);
}

/// Slope, factor, right-hand side and one solve, as a pass of the bracket has them.
template <int P>
void assembly_and_direct_solve(benchmark::State& state) {
    const Body described = body<P>(state.range(0));
    const std::shared_ptr<const Model> model = described.model();
    const Values values = described.values();
    std::vector<double> T(detail::as_size(model->unknowns), 0.0);
    model->prescribe(values, {}, T.data());
    for (auto _ : state) {
        Engine engine(model);
        Pass pass;
        pass.T = T.data();
        pass.matrix = &engine.matrix;
        pass.residual = engine.residual.data();
        assemble(*model, values, engine.work, pass);
        if (!engine.factor(Purpose::many_solves) || !engine.direct()) state.SkipWithError("no direct factor");
        static_cast<void>(engine.solve(engine.residual.data(), 0.0));
        benchmark::DoNotOptimize(engine.residual.data());
    }
    per_unknown(state, model->unknowns);
}
BENCHMARK(assembly_and_direct_solve<1>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);
BENCHMARK(assembly_and_direct_solve<2>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);

/// From the description to the field.
template <int P>
void steady_from_description(benchmark::State& state) {
    const Body described = body<P>(state.range(0));
    const auto mesh = described.shared_mesh();
    Index unknowns = 0;
    for (auto _ : state) {
        const Field field = steady(described.on_mesh(mesh));
        unknowns = field.model().unknowns;
        benchmark::DoNotOptimize(field.temperature().data());
    }
    per_unknown(state, unknowns);
}
BENCHMARK(steady_from_description<1>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);
BENCHMARK(steady_from_description<2>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);

template <int P>
void equilibrated_flux(benchmark::State& state) {
    const Field field = steady(body<P>(state.range(0)));
    const ModelProblem posed = model_problem(field.model(), field.values());
    for (auto _ : state) benchmark::DoNotOptimize(equilibrate(posed.problem, field.temperature().data()).bound());
    per_unknown(state, field.model().unknowns);
}
BENCHMARK(equilibrated_flux<1>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);
BENCHMARK(equilibrated_flux<2>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);

template <int P>
void error_bound_of_field(benchmark::State& state) {
    const Field field = steady(body<P>(state.range(0)));
    for (auto _ : state) benchmark::DoNotOptimize(field.error_bound().total);
    per_unknown(state, field.model().unknowns);
}
BENCHMARK(error_bound_of_field<1>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);
BENCHMARK(error_bound_of_field<2>)->Arg(10'000)->Arg(100'000)->Unit(benchmark::kMillisecond);

/// A whole bracket: passes on growing meshes, two solves and two fluxes each.
template <int P>
void bracket_to_a_width(benchmark::State& state) {
    const Body described = body<P>(500);
    Bracket last;
    for (auto _ : state) {
        last = bracket(described, heat_out_through("right"), {.relative_width = P == 1 ? 5e-3 : 1e-5});
        benchmark::DoNotOptimize(last.upper);
    }
    state.counters["passes"] = static_cast<double>(last.passes.size());
    Index sum = 0;
    for (const BracketPass& pass : last.passes) sum += pass.unknowns;
    per_unknown(state, sum);
}
BENCHMARK(bracket_to_a_width<1>)->Unit(benchmark::kMillisecond);
BENCHMARK(bracket_to_a_width<2>)->Unit(benchmark::kMillisecond);

} // namespace

BENCHMARK_MAIN();
