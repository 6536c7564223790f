#pragma once
// Patch fluxes of order 2: the divergence is built into the dofs, so that each patch is a free minimisation.

#include <cmath>
#include <tepor/flux/fan.hpp>
#include <tepor/flux/given_trace.hpp>
#include <tepor/flux/sweep.hpp>
#include <tepor/flux/tables2.hpp>

namespace tepor::detail {

/// One cell seen from the vertex of its patch.
struct FanPart2 {
    double r[3];      ///< balance of the hat against 1, and against the coordinates of the two other vertices
    double bubble[8]; ///< row of the bubble: with M_0..2, N_0..2, then right-hand side and 1 / diagonal
    double sum;       ///< S_j
    double area;
    double gxx, gxy, gyy; ///< B^T B
    double factor;        ///< 1 / (J k)
    double load[9];       ///< right-hand side of the nine fields: -integral of psi grad T . s
};

inline void prepare_part(const FluxWork& work, FanCell f, const FluxTables2& t, FanPart2& p) noexcept {
    const FluxProblem& problem = work.problem;
    const MeshData& mesh = *problem.mesh;
    const Id i0 = f.corner, i1 = FanWalk::next_corner(i0), i2 = FanWalk::next_corner(i1);
    const Id* node = mesh.cells.data() + 6 * as_size(f.cell);
    const Id* dof = problem.dof.data() + 6 * as_size(f.cell);
    const Point a = mesh.nodes[as_size(node[i0])];
    const Point t1 = stretched(problem, f.cell, mesh.nodes[as_size(node[i1])] - a),
                t2 = stretched(problem, f.cell, mesh.nodes[as_size(node[i2])] - a);
    const double k = problem.conductivity[as_size(f.cell)];
    const double j = cross(t1, t2);
    p.area = 0.5 * j;
    p.gxx = dot(t1, t1), p.gxy = dot(t1, t2), p.gyy = dot(t2, t2);
    p.factor = 1.0 / (j * k);
    // Differences from the vertex: the gradient does not feel the level, and loses no digits to it.
    const double level = work.temperature[dof[i0]];
    const double u1 = work.temperature[dof[i1]] - level, u2 = work.temperature[dof[i2]] - level;
    const double u3 = work.temperature[dof[3 + i0]] - level, u4 = work.temperature[dof[3 + i1]] - level,
                 u5 = work.temperature[dof[3 + i2]] - level;
    // reference gradient at the three vertices
    const double gx0 = 4.0 * u3 - u1, gx1 = 3.0 * u1 - 4.0 * u3, gx2 = 4.0 * (u4 - u5) - u1;
    const double gy0 = 4.0 * u5 - u2, gy1 = 4.0 * (u4 - u3) - u2, gy2 = 3.0 * u2 - 4.0 * u5;
    // k grad T . grad psi = h . reference gradient / J, with h = -k (G^-1 J) (1, 1)
    const double hx = -k / j * (p.gyy - p.gxy), hy = -k / j * (p.gxx - p.gxy);
    const double sx = gx0 + gx1 + gx2, sy = gy0 + gy1 + gy2;
    p.r[0] = -(hx * sx + hy * sy) / 6.0;
    p.r[1] = -(hx * (sx + gx1) + hy * (sy + gy1)) / 24.0;
    p.r[2] = -(hx * (sx + gx2) + hy * (sy + gy2)) / 24.0;
    if (work.loads.per_cell > 0) {
        const double* pair = work.loads.load.data() + 6 * as_size(f.cell);
        p.r[0] += pair[i0] + pair[3 + i0] + pair[3 + i2];
        p.r[1] += pair[3 + i0];
        p.r[2] += pair[3 + i2];
    } else {
        const double source = j * problem.source[as_size(f.cell)];
        p.r[0] += source / 6.0;
        p.r[1] += source / 24.0;
        p.r[2] += source / 24.0;
    }
    // psi grad T has degree 2: its values at the vertex and at the middles of the sides that meet there
    const double x3 = 0.25 * (gx0 + gx1), x5 = 0.25 * (gx0 + gx2), y3 = 0.25 * (gy0 + gy1), y5 = 0.25 * (gy0 + gy2);
    for (int i = 0; i < 9; ++i)
        p.load[i] = -(t.load[i][0][0] * gx0 + t.load[i][0][1] * x3 + t.load[i][0][2] * x5 + t.load[i][1][0] * gy0 +
                      t.load[i][1][1] * y3 + t.load[i][1][2] * y5);
}

/// Adds the energy of cell j to the fan: fields 7 and 8 carry -r, the bubble is eliminated on the spot.
inline void assemble_part(FanPart2& p, double after, const FluxTables2& t, FanSystem<2>& system, int j) noexcept {
    double a[7][7], right[7];
    const double gxx = p.factor * p.gxx, gxy = p.factor * p.gxy, gyy = p.factor * p.gyy;
    const auto entry = [&](int i, int l) { return gxx * t.xx[i][l] + gxy * t.xy[i][l] + gyy * t.yy[i][l]; };
    for (int i = 0; i < 7; ++i) {
        for (int l = 0; l <= i; ++l) a[i][l] = entry(i, l);
        right[i] = p.load[i] + entry(i, 7) * p.r[1] + entry(i, 8) * p.r[2];
    }
    const double inverse = 1.0 / a[6][6];
    for (int i = 0; i < 6; ++i) p.bubble[i] = a[6][i];
    p.bubble[6] = right[6];
    p.bubble[7] = inverse;
    for (int i = 0; i < 6; ++i) {
        const double f = a[6][i] * inverse;
        for (int l = 0; l <= i; ++l) a[i][l] -= f * a[6][l];
        right[i] -= f * right[6];
    }
    for (int i = 0; i < 6; ++i) { // known parts of M_0 = m + S_j and N_0 = m + S_{j+1}
        right[i] -= a[i][0] * p.sum;
        right[i] -= (i >= 3 ? a[i][3] : a[3][i]) * after;
    }
    auto& e = system[j];
    auto& g = system[j + 1];
    for (int i = 0; i < 2; ++i) {
        for (int l = 0; l < 2; ++l) {
            e.diagonal[i][l] += i >= l ? a[1 + i][1 + l] : a[1 + l][1 + i];
            g.diagonal[i][l] += i >= l ? a[4 + i][4 + l] : a[4 + l][4 + i];
            e.next[i][l] = a[4 + l][1 + i];
        }
        e.total[i] += a[1 + i][0] + a[3][1 + i];
        g.total[i] += a[4 + i][0] + a[4 + i][3];
        e.right[i] += right[1 + i];
        g.right[i] += right[4 + i];
    }
    system.total += a[0][0] + 2.0 * a[3][0] + a[3][3];
    system.total_right += right[0] + right[3];
}

TEPOR_INLINE void sweep_order2(const FluxWork& work, double* outflow, double* bubble) {
    const FluxProblem& problem = work.problem;
    const FluxTables2& tables = flux_tables2();
    const Index cells = problem.mesh->cell_count();
    FanWalk walk(work.neighbours, cells);
    FanSystem<2> system;
    std::vector<FanCell> fan;
    std::vector<FanPart2> part;
    const auto listed = [&](Id behind) -> const FluxSide* {
        return behind <= -2 ? &problem.sides[as_size(-2 - behind)] : nullptr;
    };
    for (Index c0 = 0; c0 < cells; ++c0)
        for (Id i0 = 0; i0 < 3; ++i0) {
            bool ring = false;
            Id first = -1, last = -1;
            if (!walk.next(as_id(c0), i0, fan, ring, first, last)) continue;
            const int n = static_cast<int>(fan.size());
            if (part.size() < fan.size()) part.resize(fan.size());
            double sum = 0.0, whole = 0.0;
            for (int j = 0; j < n; ++j) {
                prepare_part(work, fan[as_size(j)], tables, part[as_size(j)]);
                sum += part[as_size(j)].r[0];
                whole += part[as_size(j)].area;
            }
            FanSystem<2>::End begin, end;
            bool m_known = false;
            double m = 0.0, left_over = 0.0;
            if (ring) {
                left_over = sum;
            } else {
                if (const FluxSide* side = listed(first); !side || side->kind != SideKind::fixed) {
                    const GivenTrace2 g(side ? work.moments[as_size(-2 - first)] : SideMoments{}, true);
                    begin.known = m_known = true;
                    begin.x[0] = -g.moment[1];
                    begin.x[1] = -g.moment[2];
                    m = -g.moment[0];
                }
                if (const FluxSide* side = listed(last); !side || side->kind != SideKind::fixed) {
                    const GivenTrace2 g(side ? work.moments[as_size(-2 - last)] : SideMoments{}, false);
                    end.known = true;
                    end.x[0] = g.moment[1];
                    end.x[1] = g.moment[2];
                    if (m_known)
                        left_over = m + sum - g.moment[0];
                    else
                        m = g.moment[0] - sum;
                    m_known = true;
                }
            }
            const double spread = left_over / whole;
            system.reset(n);
            sum = 0.0;
            for (int j = 0; j < n; ++j) {
                FanPart2& p = part[as_size(j)];
                p.sum = sum;
                p.r[0] -= spread * p.area;
                p.r[1] -= spread * p.area / 3.0;
                p.r[2] -= spread * p.area / 3.0;
                sum += p.r[0];
                assemble_part(p, sum, tables, system, j);
            }
            const double total = system.solve(ring, begin, end, m_known, m);
            for (int j = 0; j < n; ++j) {
                const FanCell f = fan[as_size(j)];
                const FanPart2& p = part[as_size(j)];
                const auto& e = system[j];
                const auto& g = system[j + 1];
                const double enter = total + p.sum;
                // in a ring the last edge is the first: the very same numbers, though sum is zero only up to rounding
                const double leave = total + (j + 1 < n ? part[as_size(j) + 1].sum : ring ? 0.0 : sum);
                double* out = outflow + 9 * as_size(f.cell);
                double* begin_side = out + 3 * as_size(f.corner);
                double* end_side = out + 3 * as_size(FanWalk::next_corner(FanWalk::next_corner(f.corner)));
                begin_side[0] -= enter;
                begin_side[1] -= e.x[0];
                begin_side[2] -= e.x[1];
                end_side[0] += leave;
                end_side[1] -= g.x[0];
                end_side[2] += g.x[1];
                bubble[f.cell] +=
                    p.bubble[7] * (p.bubble[6] - p.bubble[0] * enter - p.bubble[1] * e.x[0] - p.bubble[2] * e.x[1] -
                                   p.bubble[3] * leave - p.bubble[4] * g.x[0] - p.bubble[5] * g.x[1]);
            }
        }
}

} // namespace tepor::detail
