#pragma once
// Cell by cell from differences of nodal values: the level of the temperature costs no digits.

#include <algorithm>
#include <cmath>
#include <tepor/flux/flux_load.hpp>
#include <tepor/flux/impl/loads.hpp>
#include <tepor/flux/weak_form.hpp>

namespace tepor {

namespace detail {

/// Integral of k grad T . grad z over a cell, in r-z times the radius.
inline double conduction_product(const FluxProblem& problem, Index c, const double* temperature,
                                 const double* z) noexcept {
    const MeshData& mesh = *problem.mesh;
    const Id* node = mesh.cell(c);
    const Id* dof = problem.dof.data() + as_size(c) * as_size(mesh.nodes_per_cell);
    const Point a = mesh.nodes[as_size(node[0])];
    const Point t1 = stretched(problem, as_id(c), mesh.nodes[as_size(node[1])] - a);
    const Point t2 = stretched(problem, as_id(c), mesh.nodes[as_size(node[2])] - a);
    const double j = cross(t1, t2);
    double u[6] = {}, v[6] = {};
    for (int i = 1; i < mesh.nodes_per_cell; ++i) {
        u[i] = temperature[dof[i]] - temperature[dof[0]];
        v[i] = z[dof[i]] - z[dof[0]];
    }
    const double gxx = dot(t1, t1), gxy = dot(t1, t2), gyy = dot(t2, t2);
    const double k = problem.conductivity[as_size(c)];
    // reference gradients (p, q): k/J (gyy p p' - gxy (p q' + q p') + gxx q q') per reference area
    const auto product = [&](double p, double q, double r, double s) {
        return gyy * p * r - gxy * (p * s + q * r) + gxx * q * s;
    };
    if (mesh.order == 1) {
        double radius = 1.0;
        if (mesh.frame.power() > 0) {
            radius = 0.0;
            for (int i = 0; i < 3; ++i) radius += mesh.nodes[as_size(node[i])].x / 3.0;
        }
        return 0.5 * radius * k / j * product(u[1], u[2], v[1], v[2]);
    }
    double sum = 0.0; // gradients are linear: the middles of the sides integrate their product exactly
    for (const auto& middle : {std::pair{0.5, 0.0}, std::pair{0.5, 0.5}, std::pair{0.0, 0.5}}) {
        const double x = middle.first;
        const double y = middle.second;
        const double l = 1.0 - x - y;
        const auto gx = [&](const double* w) {
            return (4 * x - 1) * w[1] + 4 * (l - x) * w[3] + 4 * y * w[4] - 4 * y * w[5];
        };
        const auto gy = [&](const double* w) {
            return (4 * y - 1) * w[2] + 4 * (l - y) * w[5] + 4 * x * w[4] - 4 * x * w[3];
        };
        sum += product(gx(u), gy(u), gx(v), gy(v));
    }
    return sum * k / (6.0 * j);
}

/// Integral of the product of two functions along a side in 1 direction, from their start, middle and end (r0, r1: radii).
inline double side_product(const std::array<double, 3>& a, const std::array<double, 3>& b, double r0, double r1,
                           double length) noexcept {
    if (r0 == 1.0 && r1 == 1.0) // quadratics: exact
        return length / 30.0 *
               (4.0 * (a[0] * b[0] + a[2] * b[2]) + 16.0 * a[1] * b[1] +
                2.0 * (a[1] * (b[0] + b[2]) + b[1] * (a[0] + a[2])) - (a[0] * b[2] + a[2] * b[0]));
    return length / 12.0 * // linear functions times the radius
           (a[0] * b[0] * (3.0 * r0 + r1) + (a[0] * b[2] + a[2] * b[0]) * (r0 + r1) + a[2] * b[2] * (r0 + 3.0 * r1));
}

} // namespace detail

TEPOR_INLINE Summed weak_form(const FluxProblem& problem, const double* temperature, const double* z) {
    using namespace detail;
    const MeshData& mesh = *problem.mesh;
    Summed sum;
    const Id last = problem.dof.empty() ? 0 : *std::max_element(problem.dof.begin(), problem.dof.end());
    const std::vector<double> load = flux_load(problem, last + 1);
    for (std::size_t i = 0; i < load.size(); ++i) sum.add(load[i] * z[i]);
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const double sink = problem.sink.empty() ? 0.0 : problem.sink[as_size(c)];
        const Id* dof = problem.dof.data() + as_size(c) * as_size(mesh.nodes_per_cell);
        if (mesh.dim == 1) {
            const LineCell first(problem, temperature, c), second(problem, z, c);
            first.points([&](double w, double x, double rn) {
                double t = 0.0, v = 0.0, ts = 0.0, vs = 0.0;
                first.temperature(x, t, ts);
                second.temperature(x, v, vs);
                sum.add(-w * rn * first.k * ts * vs);
                if (sink != 0.0) sum.add(-w * rn * sink * t * v);
            });
            continue;
        }
        sum.add(-conduction_product(problem, c, temperature, z));
        if (sink == 0.0) continue;
        const double area = triangle_area(mesh, c);
        if (mesh.order == 1) {
            double t = 0.0, v = 0.0, tv = 0.0;
            for (int i = 0; i < 3; ++i) t += temperature[dof[i]], v += z[dof[i]], tv += temperature[dof[i]] * z[dof[i]];
            sum.add(-sink * area / 12.0 * (t * v + tv));
        } else {
            const PairTables& tables = pair_tables();
            for (int i = 0; i < 6; ++i)
                for (int l = 0; l < 6; ++l) sum.add(-sink * area * tables.mass[i][l] * temperature[dof[i]] * z[dof[l]]);
        }
    }
    for (const FluxSide& side : problem.sides) {
        if (side.kind == SideKind::fixed || side.film == 0.0) continue;
        if (mesh.dim == 1) {
            const auto at = [&](const double* w, CellSide where) {
                return w[problem.dof[as_size(where.cell) * as_size(mesh.nodes_per_cell) + as_size(where.side)]];
            };
            double t = at(temperature, side.side);
            if (side.kind == SideKind::contact) t -= at(temperature, problem.sides[as_size(side.partner)].side);
            const double area =
                radius_power(mesh.frame.power(), mesh.nodes[as_size(mesh.cell(side.side.cell)[side.side.side])].x);
            sum.add(-area * side.film * t * at(z, side.side));
            continue;
        }
        double r0 = 1.0, r1 = 1.0;
        const double length = side_length(mesh, side.side, r0, r1);
        auto t = values_along(problem, temperature, side.side);
        if (side.kind == SideKind::contact) {
            const auto other = values_along(problem, temperature, problem.sides[as_size(side.partner)].side);
            for (std::size_t n = 0; n < 3; ++n) t[n] -= other[2 - n];
        }
        sum.add(-side.film * side_product(t, values_along(problem, z, side.side), r0, r1, length));
    }
    return sum;
}

TEPOR_INLINE double conduction_energy(const FluxProblem& problem, const double* temperature) {
    using namespace detail;
    double sum = 0.0;
    for (Index c = 0; c < problem.mesh->cell_count(); ++c) {
        if (problem.mesh->dim == 2) {
            sum += conduction_product(problem, c, temperature, temperature);
            continue;
        }
        const LineCell cell(problem, temperature, c);
        cell.points([&](double w, double x, double rn) {
            double value = 0.0, slope = 0.0;
            cell.temperature(x, value, slope);
            sum += w * rn * cell.k * slope * slope;
        });
    }
    return sum;
}

} // namespace tepor
