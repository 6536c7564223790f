#pragma once
// The defect `k grad Th + s` of one cell from side moments: values for order 1, orthonormal coefficients for order 2.

#include <algorithm>
#include <cmath>
#include <tepor/flux/equilibrated.hpp>
#include <tepor/flux/sweep.hpp>
#include <tepor/flux/tables2.hpp>

namespace tepor::detail {

/// Order 1: the vertex values of k grad Th + s and what the cell's balance leaves over.
struct Defect1 {
    double x[3], y[3];
    double area, k;
    double left_over; ///< integral of the source minus the outflow
    double traffic;   ///< sum of absolute contributions to left_over
    double size;      ///< bound of |k grad Th| + |s|

    /// Integral of w.v/k for the defects w and v of the same cell.
    static double product(const Defect1& w, const Defect1& v) noexcept {
        double sum = 0.0, wx = 0.0, wy = 0.0, vx = 0.0, vy = 0.0;
        for (int i = 0; i < 3; ++i) {
            sum += w.x[i] * v.x[i] + w.y[i] * v.y[i];
            wx += w.x[i], wy += w.y[i], vx += v.x[i], vy += v.y[i];
        }
        return w.area / (12.0 * w.k) * (sum + wx * vx + wy * vy);
    }
};

inline Defect1 defect_order1(const FluxWork& work, const double* outflow, Index c) noexcept {
    const FluxProblem& problem = work.problem;
    const Id* node = problem.mesh->cells.data() + 3 * as_size(c);
    const Id* dof = problem.dof.data() + 3 * as_size(c);
    const double* out = outflow + 6 * as_size(c);
    const Point a = problem.mesh->nodes[as_size(node[0])];
    const Point t1 = stretched(problem, as_id(c), problem.mesh->nodes[as_size(node[1])] - a),
                t2 = stretched(problem, as_id(c), problem.mesh->nodes[as_size(node[2])] - a);
    const Point edge[3] = {t1, t2 - t1, {-t2.x, -t2.y}}; // along the sides, counter-clockwise
    Defect1 d;
    d.k = problem.conductivity[as_size(c)];
    const double twice = cross(t1, t2), inverse = 1.0 / twice;
    d.area = 0.5 * twice;
    const double u1 = work.temperature[dof[1]] - work.temperature[dof[0]];
    const double u2 = work.temperature[dof[2]] - work.temperature[dof[0]];
    const double gx = d.k * inverse * (u1 * t2.y - u2 * t1.y), gy = d.k * inverse * (u2 * t1.x - u1 * t2.x);
    d.size = std::abs(gx) + std::abs(gy);
    d.traffic = 0.0;
    double leaving = 0.0;
    for (int i = 0; i < 3; ++i) {
        // Two outflows meet at vertex i: s = (enter t_2 - leave t_1)/(2 |T|) with t_1, t_2 away from the vertex
        const int before = i == 0 ? 2 : i - 1;
        const double enter = -out[2 * i], leave = out[2 * before + 1];
        const double sx = inverse * (-enter * edge[before].x - leave * edge[i].x);
        const double sy = inverse * (-enter * edge[before].y - leave * edge[i].y);
        d.x[i] = gx + sx;
        d.y[i] = gy + sy;
        d.size = std::max(d.size, std::abs(gx) + std::abs(gy) + std::abs(sx) + std::abs(sy));
        leaving += 0.5 * (out[2 * i] + out[2 * i + 1]);
        d.traffic += 0.5 * (std::abs(out[2 * i]) + std::abs(out[2 * i + 1]));
    }
    double load = 0.0;
    if (work.loads.per_cell > 0) {
        for (std::size_t i = 0; i < 3; ++i) load += work.loads.load[3 * as_size(c) + i];
    } else {
        load = d.area * problem.source[as_size(c)];
    }
    d.left_over = load - leaving;
    d.traffic += std::abs(load);
    return d;
}

/// Order 2: the defect pulled back to the unit triangle, as coefficients of the orthonormal basis of FluxTables2.
struct Defect2 {
    double x[6], y[6];
    double gxx, gxy, gyy; ///< B^T B / (J k)
    double left_over, traffic;
    double size_squared; ///< bound of the squared energies of both parts

    static double product(const Defect2& w, const Defect2& v) noexcept {
        double xx = 0.0, xy = 0.0, yy = 0.0;
        for (int k = 0; k < 6; ++k) {
            xx += w.x[k] * v.x[k];
            xy += w.x[k] * v.y[k] + w.y[k] * v.x[k];
            yy += w.y[k] * v.y[k];
        }
        return w.gxx * xx + w.gxy * xy + w.gyy * yy;
    }
};

/// The coefficients of the flux alone from its moments, its bubble and the integrals of the source against 1, x and y; also what
/// the balance leaves over. Returns a bound of the size of what was added up.
inline double flux_fields(const double* out, double bubble, const double (&load)[3], Defect2& d) noexcept {
    const FluxTables2& t = flux_tables2();
    d.left_over = load[0] - out[0] - out[3] - out[6];
    d.traffic = std::abs(load[0]) + std::abs(out[0]) + std::abs(out[3]) + std::abs(out[6]);
    double dofs[12];
    for (int i = 0; i < 9; ++i) dofs[i] = out[i];
    // Green: integral of s.grad x = outflow weighted with x - (divergence against x); what is left over spreads evenly.
    dofs[9] = 0.5 * (out[0] + out[1] + out[3] - out[4]) - (load[1] - d.left_over / 3.0);
    dofs[10] = 0.5 * (out[3] + out[4] + out[6] - out[7]) - (load[2] - d.left_over / 3.0);
    dofs[11] = bubble;
    for (int m = 0; m < 6; ++m) d.x[m] = d.y[m] = 0.0;
    double size = 0.0;
    for (int i = 0; i < 12; ++i) {
        for (int m = 0; m < 6; ++m) {
            d.x[m] += dofs[i] * t.dual[i][0][m];
            d.y[m] += dofs[i] * t.dual[i][1][m];
        }
        size += std::abs(dofs[i]) * t.size[i];
    }
    return size;
}

inline Defect2 defect_order2(const FluxWork& work, const Equilibrated& flux, Index c) noexcept {
    const FluxProblem& problem = work.problem;
    const FluxTables2& t = flux_tables2();
    const Id* node = problem.mesh->cells.data() + 6 * as_size(c);
    const Id* dof = problem.dof.data() + 6 * as_size(c);
    const double* out = flux.outflow.data() + 9 * as_size(c);
    const Point a = problem.mesh->nodes[as_size(node[0])];
    const Point t1 = stretched(problem, as_id(c), problem.mesh->nodes[as_size(node[1])] - a),
                t2 = stretched(problem, as_id(c), problem.mesh->nodes[as_size(node[2])] - a);
    const double k = problem.conductivity[as_size(c)];
    const double j = cross(t1, t2);
    const double gxx = dot(t1, t1), gxy = dot(t1, t2), gyy = dot(t2, t2);
    double load[3]; // integrals of the source against 1, x, y
    if (work.loads.per_cell > 0) {
        const double* pair = work.loads.load.data() + 6 * as_size(c);
        load[0] = pair[0] + pair[1] + pair[2] + 2.0 * (pair[3] + pair[4] + pair[5]);
        load[1] = pair[1] + pair[3] + pair[4];
        load[2] = pair[2] + pair[4] + pair[5];
    } else {
        load[0] = 0.5 * j * problem.source[as_size(c)];
        load[1] = load[2] = load[0] / 3.0;
    }
    Defect2 d;
    double size = flux_fields(out, flux.bubble[as_size(c)], load, d);
    const double level = work.temperature[dof[0]];
    double u[6];
    for (int i = 1; i < 6; ++i) u[i] = work.temperature[dof[i]] - level;
    const double gx[3] = {4.0 * u[3] - u[1], 3.0 * u[1] - 4.0 * u[3], 4.0 * (u[4] - u[5]) - u[1]};
    const double gy[3] = {4.0 * u[5] - u[2], 4.0 * (u[4] - u[3]) - u[2], 3.0 * u[2] - 4.0 * u[5]};
    for (int v = 0; v < 3; ++v) { // J k G^-1 times the reference gradient: linear, so only three coefficients
        const double fx = k / j * (gyy * gx[v] - gxy * gy[v]), fy = k / j * (gxx * gy[v] - gxy * gx[v]);
        for (int m = 0; m < 3; ++m) {
            d.x[m] += fx * t.linear[v][m];
            d.y[m] += fy * t.linear[v][m];
        }
        size += std::abs(fx) + std::abs(fy);
    }
    const double factor = 1.0 / (j * k);
    d.gxx = factor * gxx, d.gxy = factor * gxy, d.gyy = factor * gyy;
    d.size_squared = (d.gxx + d.gyy) * size * size;
    return d;
}

} // namespace tepor::detail
