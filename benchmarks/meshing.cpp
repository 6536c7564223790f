// Meshing: triangles per second of triangulate(), verify(), refinement and point location.
//
// The drawing is a plate with round regions and bores, so that arcs, interfaces and grading are part of the work. Sizes are
// chosen for about 1e4, 1e5 and 1e6 triangles.

#include <benchmark/benchmark.h>
#include <random>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/bisect.hpp>
#include <tepor/mesh/locate.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/mesh/verify.hpp>

namespace {
using namespace tepor;

Section plate() {
    Section section;
    section.add("plate", rectangle({0.0, 0.0}, {1.0, 1.0}));
    for (int i = 0; i < 4; ++i)
        for (int j = 0; j < 4; ++j) {
            const Point m{0.125 + 0.25 * i, 0.125 + 0.25 * j};
            if ((i + j) % 2 == 0)
                section.add("insert", circle(m, 0.06));
            else
                section.cut(circle(m, 0.04), "bore");
        }
    section.face("base", {0.0, 0.0}, {1.0, 0.0});
    return section;
}

const Meshing options[] = {{.size = 0.0155}, {.size = 0.00489}, {.size = 0.001545}};

template <int P>
void triangulation(benchmark::State& state) {
    const Section section = plate();
    Index cells = 0;
    for (auto _ : state) {
        const auto mesh = triangulate<Triangle<P>>(section, options[state.range(0)]);
        cells = mesh.cell_count();
        benchmark::DoNotOptimize(mesh.nodes.data());
    }
    state.counters["triangles"] = static_cast<double>(cells);
    state.counters["triangles/s"] =
        benchmark::Counter(static_cast<double>(cells), benchmark::Counter::kIsIterationInvariantRate);
}
BENCHMARK(triangulation<1>)->DenseRange(0, 2)->Unit(benchmark::kMillisecond);
BENCHMARK(triangulation<2>)->DenseRange(0, 2)->Unit(benchmark::kMillisecond);

const Mesh<Triangle<1>>& large() {
    static const Mesh<Triangle<1>> mesh = triangulate<Triangle<1>>(plate(), options[2]);
    return mesh;
}

void verification(benchmark::State& state) {
    for (auto _ : state) benchmark::DoNotOptimize(static_cast<bool>(verify(large())));
}
BENCHMARK(verification)->Unit(benchmark::kMillisecond);

void uniform_refinement(benchmark::State& state) {
    const auto mesh = triangulate<Triangle<1>>(plate(), {.size = 0.0031});
    for (auto _ : state) benchmark::DoNotOptimize(refined(mesh).nodes.data());
}
BENCHMARK(uniform_refinement)->Unit(benchmark::kMillisecond);

/// One cell in ten of 1e6 marked.
void bisection(benchmark::State& state) {
    std::vector<Index> cells;
    for (Index c = 0; c < large().cell_count(); c += 10) cells.push_back(c);
    for (auto _ : state) benchmark::DoNotOptimize(bisected(large(), std::span<const Index>(cells)).mesh.nodes.data());
}
BENCHMARK(bisection)->Unit(benchmark::kMillisecond);

void locator_build(benchmark::State& state) {
    for (auto _ : state) benchmark::DoNotOptimize(Locator(large()).find({0.3, 0.3}).cell);
}
BENCHMARK(locator_build)->Unit(benchmark::kMillisecond);

void locator_find(benchmark::State& state) {
    const Locator locator(large());
    std::mt19937 random(1);
    std::uniform_real_distribution<double> unit(0.0, 1.0);
    for (auto _ : state) benchmark::DoNotOptimize(locator.find({unit(random), unit(random)}).cell);
}
BENCHMARK(locator_find)->Unit(benchmark::kNanosecond);

} // namespace

BENCHMARK_MAIN();
