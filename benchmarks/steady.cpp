// Steady solves and assembly against what one would write by hand, and against triplets, all in one run.
//
// 1D: a million linear cells with conductivity and source of place, from a changed parameter to the field, against fused
// sweeps that assemble and eliminate as they go, from one end and from both. 2D: the numeric assembly of linear triangles at about 1e5 unknowns,
// against Eigen's triplets and against a scatter with a ready map and the same arithmetic. The copy of 256 MB beside them
// tells what the memory of the machine gives.

#include <Eigen/Sparse>
#include <algorithm>
#include <benchmark/benchmark.h>
#include <cstring>
#include <tepor/body/assemble.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <vector>

namespace {
using namespace tepor;

constexpr Index line_cells = 1'000'000;

void memory_copy(benchmark::State& state) {
    const std::size_t bytes = std::size_t{1} << 28U;
    std::vector<char> from(bytes, 1);
    std::vector<char> to(bytes, 2);
    for (auto _ : state) {
        std::memcpy(to.data(), from.data(), bytes);
        benchmark::DoNotOptimize(to.data());
        benchmark::ClobberMemory();
    }
    state.SetBytesProcessed(static_cast<std::int64_t>(state.iterations()) * 2 * static_cast<std::int64_t>(bytes));
}
BENCHMARK(memory_copy)->Unit(benchmark::kMillisecond);

/// -(k T')' = f on (0, 1), T(0) = 0, film 10 to 0 at x = 1: assembled and eliminated in one sweep, then substituted back.
void line_by_hand(benchmark::State& state) {
    const Index n = line_cells;
    std::vector<double> x(detail::as_size(n + 1));
    for (Index i = 0; i <= n; ++i) x[detail::as_size(i)] = static_cast<double>(i) / static_cast<double>(n);
    std::vector<double> ratio(detail::as_size(n + 1));
    std::vector<double> T(detail::as_size(n + 1));
    double scale = 1.0;
    const double g[2] = {0.21132486540518712, 0.78867513459481288};
    for (auto _ : state) {
        scale += 0.001;
        const auto k = [scale](double at) { return scale * (1.0 + 0.5 * at); };
        const auto f = [](double at) { return 100.0 * at * (1.0 - at); };
        double pivot = 0.0; // of the node to the left, its own cell's share still missing
        double right = 0.0;
        for (Index c = 0; c < n; ++c) {
            const auto i = detail::as_size(c);
            const double h = x[i + 1] - x[i];
            const double a = x[i] + g[0] * h;
            const double b = x[i] + g[1] * h;
            const double conductance = 0.5 * (k(a) + k(b)) / h;
            const double fa = 0.5 * h * f(a);
            const double fb = 0.5 * h * f(b);
            if (c == 0) { // the first node is held at 0
                pivot = conductance;
                right = g[0] * fa + g[1] * fb;
                continue;
            }
            pivot += conductance;
            right += g[1] * fa + g[0] * fb;
            const double r = conductance / pivot;
            ratio[i] = r;
            T[i] = right / pivot;
            right = g[0] * fa + g[1] * fb + r * right;
            pivot = conductance - r * conductance;
        }
        T[detail::as_size(n)] = right / (pivot + 10.0);
        for (Index c = n - 1; c > 0; --c)
            T[detail::as_size(c)] += ratio[detail::as_size(c)] * T[detail::as_size(c + 1)];
        benchmark::DoNotOptimize(T.data());
    }
    state.counters["ns/cell"] = benchmark::Counter(
        1e-9 * static_cast<double>(n), benchmark::Counter::kIsIterationInvariantRate | benchmark::Counter::kInvert);
}
BENCHMARK(line_by_hand)->Unit(benchmark::kMillisecond);

/// The same eliminated from both ends at once, so that two chains hide each other's latency.
void line_by_hand_two_ended(benchmark::State& state) {
    const Index n = line_cells;
    std::vector<double> x(detail::as_size(n + 1));
    for (Index i = 0; i <= n; ++i) x[detail::as_size(i)] = static_cast<double>(i) / static_cast<double>(n);
    std::vector<double> ratio(detail::as_size(n + 1));
    std::vector<double> T(detail::as_size(n + 1));
    double scale = 1.0;
    const double g[2] = {0.21132486540518712, 0.78867513459481288};
    for (auto _ : state) {
        scale += 0.001;
        const auto cell = [&](std::size_t i, double& conductance, double& to_left, double& to_right) {
            const auto k = [scale](double at) { return scale * (1.0 + 0.5 * at); };
            const auto f = [](double at) { return 100.0 * at * (1.0 - at); };
            const double h = x[i + 1] - x[i];
            const double a = x[i] + g[0] * h;
            const double b = x[i] + g[1] * h;
            conductance = 0.5 * (k(a) + k(b)) / h;
            const double fa = 0.5 * h * f(a);
            const double fb = 0.5 * h * f(b);
            to_left = g[1] * fa + g[0] * fb;
            to_right = g[0] * fa + g[1] * fb;
        };
        double c = 0.0;
        double l = 0.0;
        double r = 0.0;
        cell(0, c, l, r); // the first node is held at 0
        double pivot_left = c;
        double load_left = r;
        cell(detail::as_size(n - 1), c, l, r);
        double inverse = 1.0 / (10.0 + c);
        ratio[detail::as_size(n)] = c * inverse;
        T[detail::as_size(n)] = r * inverse;
        double pivot_right = c - c * c * inverse;
        double load_right = l + c * inverse * r;
        const Index m = n / 2;
        Index i = 1;
        Index j = n - 1;
        while (true) {
            // nodes i and j hold all but their inner cell's share
            if (i < m) {
                cell(detail::as_size(i), c, l, r);
                const double p = 1.0 / (pivot_left + c);
                const double y = load_left + l;
                ratio[detail::as_size(i)] = c * p;
                T[detail::as_size(i)] = y * p;
                pivot_left = c - c * (c * p);
                load_left = r + c * p * y;
                ++i;
            }
            if (j > m) {
                cell(detail::as_size(j - 1), c, l, r);
                const double p = 1.0 / (pivot_right + c);
                const double y = load_right + r;
                ratio[detail::as_size(j)] = c * p;
                T[detail::as_size(j)] = y * p;
                pivot_right = c - c * (c * p);
                load_right = l + c * p * y;
                --j;
            }
            if (i >= m && j <= m) break;
        }
        double up = (load_left + load_right) / (pivot_left + pivot_right);
        double down = up;
        T[detail::as_size(m)] = up;
        Index a = m - 1;
        Index b = m + 1;
        for (; a > 0 && b <= n; --a, ++b) {
            up = T[detail::as_size(a)] += ratio[detail::as_size(a)] * up;
            down = T[detail::as_size(b)] += ratio[detail::as_size(b)] * down;
        }
        for (; a > 0; --a) up = T[detail::as_size(a)] += ratio[detail::as_size(a)] * up;
        for (; b <= n; ++b) down = T[detail::as_size(b)] += ratio[detail::as_size(b)] * down;
        benchmark::DoNotOptimize(T.data());
    }
    state.counters["ns/cell"] = benchmark::Counter(
        1e-9 * static_cast<double>(n), benchmark::Counter::kIsIterationInvariantRate | benchmark::Counter::kInvert);
}
BENCHMARK(line_by_hand_two_ended)->Unit(benchmark::kMillisecond);

Body line_body(const Parameter& scale) {
    Body body{layers<Segment<1>>({{.region = "slab", .thickness = 1.0, .cells = line_cells}})};
    body.in("slab",
            Material{.conductivity = of_place({scale}, [](const auto& p, auto s) { return s * (1.0 + 0.5 * p.x); })});
    body.in("slab", Generation{.per_volume = of_place([](const auto& p) { return 100.0 * p.x * (1.0 - p.x); })});
    body.on("inner", FixedTemperature{0.0}).on("outer", Film{.coefficient = 10.0, .fluid = 0.0});
    return body;
}

/// A changed parameter, then the field: a new one each time, or one that is used again.
void line_steady(benchmark::State& state, bool again) {
    const Parameter scale{"scale", 1.0};
    Body body = line_body(scale);
    double value = 1.0;
    Field kept;
    for (auto _ : state) {
        value += 0.001;
        body.set(scale, value);
        if (again) {
            steady(body, kept);
            benchmark::DoNotOptimize(kept.temperature().data());
        } else {
            const Field field = steady(body);
            benchmark::DoNotOptimize(field.temperature().data());
        }
    }
    state.counters["ns/cell"] =
        benchmark::Counter(1e-9 * static_cast<double>(line_cells),
                           benchmark::Counter::kIsIterationInvariantRate | benchmark::Counter::kInvert);
}
BENCHMARK_CAPTURE(line_steady, new_field, false)->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(line_steady, same_field, true)->Unit(benchmark::kMillisecond);

/// A wall of three layers of one cell each, constant conductivity: a changed value, then the field.
void wall_of_three(benchmark::State& state) {
    const Parameter gas{"gas", 1200.0};
    const Parameter backing{"backing", 0.2};
    const bool load = state.range(0) == 0;
    Body wall{layers<Segment<1>>({{.region = "brick", .thickness = 0.23},
                                  {.region = "backing", .thickness = 0.1},
                                  {.region = "casing", .thickness = 0.006}})};
    wall.in("brick", Material{.conductivity = 1.3}).in("backing", Material{.conductivity = backing});
    wall.in("casing", Material{.conductivity = 48.0});
    wall.on("inner", Film{.coefficient = 90.0, .fluid = gas}).on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    Field kept;
    double value = 0.0;
    for (auto _ : state) {
        value += 1e-6;
        load ? wall.set(gas, 1200.0 + value) : wall.set(backing, 0.2 + value);
        steady(wall, kept);
        benchmark::DoNotOptimize(kept.temperature().data());
    }
}
BENCHMARK(wall_of_three)->Arg(0)->Arg(1);

const Mesh<Triangle<1>>& plane() {
    static const Mesh<Triangle<1>> mesh = [] {
        Tiles drawing;
        drawing.add("plate", {0.0, 0.0}, {1.0, 1.0});
        return tiles<Triangle<1>>(drawing, {.size = 1.0 / 316.0}, Planar{});
    }();
    return mesh;
}

/// Element matrix of a linear triangle with conductivity k at its middle.
void triangle_matrix(const Point* p, double* m) {
    const double bx[3] = {p[1].y - p[2].y, p[2].y - p[0].y, p[0].y - p[1].y};
    const double by[3] = {p[2].x - p[1].x, p[0].x - p[2].x, p[1].x - p[0].x};
    const double twice = bx[0] * by[1] - bx[1] * by[0];
    const double k = (1.0 + 0.5 * (p[0].x + p[1].x + p[2].x) / 3.0) / (2.0 * twice);
    int at = 0;
    for (int i = 0; i < 3; ++i)
        for (int j = 0; j <= i; ++j) m[at++] = k * (bx[i] * bx[j] + by[i] * by[j]);
}

void per_unknown(benchmark::State& state, Index unknowns) {
    state.counters["ns/unknown"] =
        benchmark::Counter(1e-9 * static_cast<double>(unknowns),
                           benchmark::Counter::kIsIterationInvariantRate | benchmark::Counter::kInvert);
}

void plane_triplets(benchmark::State& state) {
    const MeshData& mesh = plane();
    for (auto _ : state) {
        std::vector<Eigen::Triplet<double>> triplets;
        triplets.reserve(detail::as_size(9 * mesh.cell_count()));
        for (Index c = 0; c < mesh.cell_count(); ++c) {
            const Id* ids = mesh.cell(c);
            const Point p[3] = {mesh.nodes[detail::as_size(ids[0])], mesh.nodes[detail::as_size(ids[1])],
                                mesh.nodes[detail::as_size(ids[2])]};
            double m[6];
            triangle_matrix(p, m);
            for (int i = 0; i < 3; ++i)
                for (int j = 0; j < 3; ++j)
                    triplets.emplace_back(ids[i], ids[j], i > j ? m[i * (i + 1) / 2 + j] : m[j * (j + 1) / 2 + i]);
        }
        Eigen::SparseMatrix<double> matrix(mesh.node_count(), mesh.node_count());
        matrix.setFromTriplets(triplets.begin(), triplets.end());
        benchmark::DoNotOptimize(matrix.valuePtr());
    }
    per_unknown(state, mesh.node_count());
}
BENCHMARK(plane_triplets)->Unit(benchmark::kMillisecond);

Body plane_body() {
    Body body{plane()};
    body.in("plate", Material{.conductivity = of_place([](const auto& p) { return 1.0 + 0.5 * p.x; })});
    body.on("left", FixedTemperature{0.0});
    return body;
}

/// The model's own numbering and map, conductivity at the middle of a triangle. The geometry of 64 triangles at a time, so that
/// it vectorises, then their entries to their places.
void plane_scatter_by_hand(benchmark::State& state) {
    const Body body = plane_body();
    const Model& model = *body.model();
    SparseMatrix matrix;
    prepare_matrix(model, matrix);
    constexpr int width = 64;
    double x[3][width] = {};
    double y[3][width] = {};
    double m[6][width];
    for (auto _ : state) {
        double* to = matrix.lower.data();
        std::fill(matrix.lower.begin(), matrix.lower.end(), 0.0);
        const auto cells = static_cast<Index>(model.user_cell.size());
        const Id* ids = model.cell_unknowns.data();
        const Id* map = model.scatter.data();
        const Point* place = model.places.data();
        for (Index first = 0; first < cells; first += width) {
            const int count = static_cast<int>(std::min<Index>(width, cells - first));
            for (int c = 0; c < count; ++c, ids += 3)
                for (int i = 0; i < 3; ++i) {
                    const Point p = place[ids[i]];
                    x[i][c] = p.x;
                    y[i][c] = p.y;
                }
            for (int c = 0; c < width; ++c) {
                const double bx0 = y[1][c] - y[2][c];
                const double bx1 = y[2][c] - y[0][c];
                const double bx2 = y[0][c] - y[1][c];
                const double by0 = x[2][c] - x[1][c];
                const double by1 = x[0][c] - x[2][c];
                const double by2 = x[1][c] - x[0][c];
                const double twice = bx0 * by1 - bx1 * by0;
                const double k = (1.0 + (0.5 / 3.0) * (x[0][c] + x[1][c] + x[2][c])) / (twice + twice);
                const double m10 = k * (bx0 * bx1 + by0 * by1);
                const double m20 = k * (bx0 * bx2 + by0 * by2);
                const double m21 = k * (bx1 * bx2 + by1 * by2);
                m[0][c] = -(m10 + m20);
                m[1][c] = m10;
                m[2][c] = -(m10 + m21);
                m[3][c] = m20;
                m[4][c] = m21;
                m[5][c] = -(m20 + m21);
            }
            for (int c = 0; c < count; ++c, map += 6)
                for (int e = 0; e < 6; ++e) to[map[e]] += m[e][c];
        }
        benchmark::DoNotOptimize(to);
    }
    per_unknown(state, model.unknowns);
}
BENCHMARK(plane_scatter_by_hand)->Unit(benchmark::kMillisecond);

void plane_assembly(benchmark::State& state) {
    const Body body = plane_body();
    const Model& model = *body.model();
    SparseMatrix matrix;
    prepare_matrix(model, matrix);
    Workspace work = model.kernels->workspace();
    const std::vector<double> T(detail::as_size(model.unknowns), 0.0);
    for (auto _ : state) {
        Pass pass;
        pass.T = T.data();
        pass.matrix = &matrix;
        assemble(model, body.values(), work, pass);
        benchmark::DoNotOptimize(matrix.lower.data());
    }
    per_unknown(state, model.unknowns);
}
BENCHMARK(plane_assembly)->Unit(benchmark::kMillisecond);

/// One linear solve, and Newton's method from a cold start: conductivity of temperature and radiation.
void plane_newton(benchmark::State& state, bool nonlinear) {
    Body body{plane()};
    if (nonlinear)
        body.in("plate", Material{.conductivity = table({{0, 1.0}, {400, 1.8}, {1000, 2.4}})});
    else
        body.in("plate", Material{.conductivity = 1.5});
    body.in("plate", Generation{.per_volume = 1000.0}).on("left", FixedTemperature{100.0});
    if (nonlinear)
        body.on("right", Radiation{.emissivity = 0.8, .surroundings = 20.0});
    else
        body.on("right", Film{.coefficient = 12.0, .fluid = 20.0});
    Index passes = 0;
    for (auto _ : state) {
        state.PauseTiming();
        const Body fresh = body.on_mesh(body.shared_mesh()); // nothing is kept from the solve before
        static_cast<void>(fresh.model());
        state.ResumeTiming();
        const Field field = steady(fresh);
        passes = static_cast<Index>(field.passes().size()) - 1;
        benchmark::DoNotOptimize(field.temperature().data());
    }
    state.counters["passes"] = static_cast<double>(passes);
    per_unknown(state, body.mesh().node_count());
}
BENCHMARK_CAPTURE(plane_newton, linear, false)->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(plane_newton, cold_start, true)->Unit(benchmark::kMillisecond);

} // namespace

BENCHMARK_MAIN();
