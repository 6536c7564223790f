#pragma once
// Loads in closed form on straight triangles, by exact quadrature on segments.

#include <tepor/flux/flux_load.hpp>
#include <tepor/flux/line_cell.hpp>
#include <tepor/flux/loads.hpp>

namespace tepor {

namespace detail {

inline void add_cell_loads(const FluxProblem& problem, std::vector<double>& load) {
    const MeshData& mesh = *problem.mesh;
    const bool round = mesh.frame.power() > 0;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id* dof = problem.dof.data() + as_size(c) * as_size(mesh.nodes_per_cell);
        const Id* node = mesh.cell(c);
        double f = problem.source[as_size(c)];
        if (!problem.sink.empty()) f += problem.sink[as_size(c)] * problem.sink_temperature[as_size(c)];
        if (f == 0.0) continue;
        const double third = f * triangle_area(mesh, c) / 3.0;
        if (mesh.order == 2) {
            for (int i = 3; i < 6; ++i) load[as_size(dof[i])] += third;
            continue;
        }
        double r[3] = {1.0, 1.0, 1.0};
        for (int i = 0; i < 3 && round; ++i) r[i] = mesh.nodes[as_size(node[i])].x;
        for (int i = 0; i < 3; ++i) load[as_size(dof[i])] += third * 0.25 * (r[0] + r[1] + r[2] + r[i]);
    }
    for (const SpreadSource& w : problem.spread) {
        const Id* dof = problem.dof.data() + as_size(w.cell) * as_size(mesh.nodes_per_cell);
        const double* m = w.moment;
        const double linear[3] = {m[0] + m[3] + m[5], m[1] + m[3] + m[4], m[2] + m[4] + m[5]};
        for (int i = 0; i < 3; ++i) {
            load[as_size(dof[i])] += mesh.order == 1 ? linear[i] : 2.0 * m[i] - linear[i];
            if (mesh.order == 2) load[as_size(dof[3 + i])] += 4.0 * m[3 + i];
        }
    }
}

inline void add_line_loads(const FluxProblem& problem, std::vector<double>& load) {
    const MeshData& mesh = *problem.mesh;
    const std::vector<double> cold(load.size(), 0.0);
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const LineCell cell(problem, cold.data(), c);
        const Id* dof = problem.dof.data() + as_size(c) * as_size(mesh.nodes_per_cell);
        cell.points([&](double w, double x, double rn) {
            for (int i = 0; i < mesh.nodes_per_cell; ++i)
                load[as_size(dof[i])] += w * rn * cell.source() * cell.shape(i, x);
        });
    }
    for (const FluxSide& side : problem.sides) {
        if (side.kind == SideKind::fixed) continue;
        const Id node = mesh.cell(side.side.cell)[side.side.side];
        const double area = radius_power(mesh.frame.power(), mesh.nodes[as_size(node)].x);
        const double trace = side.trace >= 0 ? problem.traces[as_size(side.trace)].moment[0] : 0.0;
        load[as_size(problem.dof[as_size(side.side.cell) * as_size(mesh.nodes_per_cell) + as_size(side.side.side)])] +=
            area * (side.film * side.fluid - side.flux - trace);
    }
}

} // namespace detail

TEPOR_INLINE std::vector<double> flux_load(const FluxProblem& problem, Index dofs) {
    using namespace detail;
    const MeshData& mesh = *problem.mesh;
    std::vector<double> load(as_size(dofs), 0.0);
    if (mesh.dim == 1) {
        add_line_loads(problem, load);
        return load;
    }
    add_cell_loads(problem, load);
    for (const FluxSide& side : problem.sides) {
        if (side.kind == SideKind::fixed) continue;
        double r0 = 1.0, r1 = 1.0;
        const double length = side_length(mesh, side.side, r0, r1);
        const double in = length * (side.film * side.fluid - side.flux);
        const Id* dof = problem.dof.data() + as_size(side.side.cell) * as_size(mesh.nodes_per_cell);
        const std::size_t start = as_size(dof[side.side.side]),
                          end = as_size(dof[side.side.side == 2 ? 0 : side.side.side + 1]);
        double g[4] = {};
        for (std::size_t m = 0; m < 4 && side.trace >= 0; ++m)
            g[m] = length * problem.traces[as_size(side.trace)].moment[m];
        if (mesh.order == 1) {
            load[start] += in * (2.0 * r0 + r1) / 6.0 - (g[0] - g[1]);
            load[end] += in * (r0 + 2.0 * r1) / 6.0 - g[1];
        } else {
            load[start] += in / 6.0 - (g[0] - 3.0 * g[1] + 2.0 * g[2]);
            load[end] += in / 6.0 - (2.0 * g[2] - g[1]);
            load[as_size(dof[3 + side.side.side])] += in * 4.0 / 6.0 - 4.0 * (g[1] - g[2]);
        }
    }
    return load;
}

} // namespace tepor
