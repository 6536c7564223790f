#pragma once
// The flux a temperature field itself sends through one side, weighted with a shape function of the side.

#include <tepor/field/functional.hpp>
#include <tepor/quadrature/rules.hpp>

namespace tepor::detail {

/// Integral over the side of -k grad T . n N_j [W]; with `row`, factor times its derivative by T is added there.
inline double edge_flux(const Model& model, const Values& values, const Functional::EdgeFlux& edge, const double* T,
                        TimeSpan time, double* row) {
    const CellKernels& kernel = *model.kernels;
    const RegionModel& region = model.regions[as_size(model.region_of_cell(edge.side.cell))];
    const Id* ids = model.cell(edge.side.cell);
    const Point* place = model.places_of(values);
    const int n = kernel.nodes;
    double ends[2][2] = {{0.0, 0.0}, {0.0, 0.0}};
    const bool line = kernel.dim == 1;
    kernel.reference_node(kernel.side_node(edge.side.side, 0), ends[0]);
    kernel.reference_node(kernel.side_node(edge.side.side, line ? 0 : 1), ends[1]);
    const Point from = place[ids[kernel.side_node(edge.side.side, 0)]];
    const Point to = place[ids[kernel.side_node(edge.side.side, line ? 0 : 1)]];
    const Rule<1> rule = line_rule(2 * kernel.order + 2);
    const int local = kernel.side_node(edge.side.side, edge.node);
    const Frame& frame = model.mesh->frame;
    double total = 0.0;
    for (Index q = 0; q < (line ? 1 : rule.size()); ++q) {
        const double s = line ? 0.0 : rule.point(q)[0];
        ModelPlace at;
        at.cell = edge.side.cell;
        for (int d = 0; d < 2; ++d) at.xi[d] = ends[0][d] + s * (ends[1][d] - ends[0][d]);
        double shape[max_cell_nodes];
        double gx[max_cell_nodes];
        double gy[max_cell_nodes];
        const Point p = shapes_at(model, values, at, shape, gx, gy);
        double t = 0.0;
        double tx = 0.0;
        double ty = 0.0;
        for (int i = 0; i < n; ++i) {
            t += shape[i] * T[ids[i]];
            tx += gx[i] * T[ids[i]];
            ty += gy[i] * T[ids[i]];
        }
        double k[3] = {0.0, 0.0, 0.0};
        double slope[3] = {0.0, 0.0, 0.0};
        for (int m = 0; m < region.conductivities; ++m)
            if (const Fault fault =
                    region.k[m].evaluate(values.slots.data(), time, {1, &t, nullptr, &p.x, &p.y}, &k[m], &slope[m]))
                raise(fault);
        if (region.conductivities == 1) {
            k[1] = k[0];
            slope[1] = slope[0];
        }
        // outward normal times length: the side runs with the cell on its left (straight sides)
        Point normal{to.y - from.y, from.x - to.x};
        double weight = line ? 1.0 : rule.weight(q);
        if (line) normal = {edge.side.side == 0 ? -1.0 : 1.0, 0.0};
        double measure = frame.factor(kernel.dim);
        for (int power = 0; power < frame.power(); ++power) measure *= p.x;
        weight *= measure * shape[local];
        const double fx = k[0] * tx + k[2] * ty;
        const double fy = k[1] * ty + k[2] * tx;
        total -= weight * (fx * normal.x + fy * normal.y);
        if (!row) continue;
        for (int j = 0; j < n; ++j) {
            const double dfx = k[0] * gx[j] + k[2] * gy[j] + shape[j] * (slope[0] * tx + slope[2] * ty);
            const double dfy = k[1] * gy[j] + k[2] * gx[j] + shape[j] * (slope[1] * ty + slope[2] * tx);
            row[ids[j]] -= edge.factor * weight * (dfx * normal.x + dfy * normal.y);
        }
    }
    return total;
}

} // namespace tepor::detail
