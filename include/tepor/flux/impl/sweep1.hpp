#pragma once
// Patch fluxes of order 1: per cell the energy is |T|/(12 k) (sum |w_i|^2 + |sum w_i|^2) of its vertex values w_i.

#include <cmath>
#include <tepor/flux/fan.hpp>
#include <tepor/flux/sweep.hpp>

namespace tepor::detail {

/// Given outflow of a listed side times the hat of one of its ends, as the linear function with the same moments.
struct GivenTrace1 {
    double at_vertex; ///< value at the end that carries the hat
    double at_other;

    GivenTrace1(const SideMoments& g, bool hat_at_start) noexcept {
        const double i0 = hat_at_start ? g[0] - g[1] : g[1];
        const double i1 = hat_at_start ? g[1] - g[2] : g[2];
        const double start = 4.0 * i0 - 6.0 * i1, end = 6.0 * i1 - 2.0 * i0;
        at_vertex = hat_at_start ? start : end;
        at_other = hat_at_start ? end : start;
    }
};

TEPOR_INLINE void sweep_order1(const FluxWork& work, double* outflow) {
    const FluxProblem& problem = work.problem;
    const MeshData& mesh = *problem.mesh;
    const Index cells = mesh.cell_count();
    FanWalk walk(work.neighbours, cells);
    FanSystem<1> system;
    std::vector<FanCell> fan;
    struct CellPart {
        double area, r;        // area, balance r_j
        double px, py, dx, dy; // 2 |T| k grad T; edge from v_j to v_{j+1}
        double weight;         // 1/(48 k |T|)
        double t1x, t1y, t2x, t2y;
        double sum; // S_j: what has been added to the crossing flux up to edge j
    };
    std::vector<CellPart> part;
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
                const FanCell f = fan[as_size(j)];
                const Id i1 = FanWalk::next_corner(f.corner), i2 = FanWalk::next_corner(i1);
                const Id* node = mesh.cells.data() + 3 * as_size(f.cell);
                const Id* dof = problem.dof.data() + 3 * as_size(f.cell);
                const Point a = mesh.nodes[as_size(node[f.corner])];
                const Point t1 = stretched(problem, f.cell, mesh.nodes[as_size(node[i1])] - a),
                            t2 = stretched(problem, f.cell, mesh.nodes[as_size(node[i2])] - a);
                const double k = problem.conductivity[as_size(f.cell)];
                const double u1 = work.temperature[dof[i1]] - work.temperature[dof[f.corner]];
                const double u2 = work.temperature[dof[i2]] - work.temperature[dof[f.corner]];
                CellPart& p = part[as_size(j)];
                const double twice = cross(t1, t2);
                p.area = 0.5 * twice;
                p.weight = 1.0 / (24.0 * k * twice);
                p.t1x = t1.x, p.t1y = t1.y, p.t2x = t2.x, p.t2y = t2.y;
                p.dx = t2.x - t1.x, p.dy = t2.y - t1.y;
                p.px = k * (u1 * t2.y - u2 * t1.y); // 2 |T| grad T = u1 (t2.y, -t2.x) - u2 (t1.y, -t1.x)
                p.py = k * (u2 * t1.x - u1 * t2.x);
                // grad lambda_a = (-d.y, d.x)/(2 |T|)
                const double slope = 0.5 * (-p.px * p.dy + p.py * p.dx) / twice;
                const double load = work.loads.per_cell > 0 ? work.loads.load[3 * as_size(f.cell) + as_size(f.corner)]
                                                            : p.area * problem.source[as_size(f.cell)] / 3.0;
                p.r = load - slope;
                sum += p.r;
                whole += p.area;
            }
            // What is given on the two ends of an open fan; entering flux counts positive across edge 0, leaving across edge n.
            FanSystem<1>::End begin, end;
            double begin_other = 0.0, end_other = 0.0;
            bool m_known = false;
            double m = 0.0, left_over = 0.0;
            if (ring) {
                left_over = sum;
            } else {
                if (const FluxSide* side = listed(first); !side || side->kind != SideKind::fixed) {
                    const GivenTrace1 g(side ? work.moments[as_size(-2 - first)] : SideMoments{}, true);
                    begin.known = true;
                    begin.x[0] = -g.at_vertex;
                    begin_other = -g.at_other;
                    m_known = true;
                    m = 0.5 * (begin.x[0] + begin_other);
                }
                if (const FluxSide* side = listed(last); !side || side->kind != SideKind::fixed) {
                    const GivenTrace1 g(side ? work.moments[as_size(-2 - last)] : SideMoments{}, false);
                    end.known = true;
                    end.x[0] = g.at_vertex;
                    end_other = g.at_other;
                    const double leaving = 0.5 * (end.x[0] + end_other);
                    if (m_known)
                        left_over = m + sum - leaving;
                    else
                        m = leaving - sum;
                    m_known = true;
                }
            }
            const double spread = left_over / whole;
            system.reset(n);
            sum = 0.0;
            for (int j = 0; j < n; ++j) {
                CellPart& p = part[as_size(j)];
                p.sum = sum;
                sum += p.r - spread * p.area;
                const double c = p.weight;
                const double l11 = p.t1x * p.t1x + p.t1y * p.t1y, l22 = p.t2x * p.t2x + p.t2y * p.t2y;
                const double l12 = p.t1x * p.t2x + p.t1y * p.t2y;
                const double dd = l11 + l22 - 2.0 * l12;
                const double both = 2.0 * (p.sum + sum);
                const double qx = p.px + both * p.dx, qy = p.py + both * p.dy;
                auto& e = system[j];
                auto& g = system[j + 1];
                const double diagonal = c * (l11 + l22 + dd);
                e.diagonal[0][0] += diagonal;
                g.diagonal[0][0] += diagonal;
                e.next[0][0] = -2.0 * c * l12;
                e.total[0] += c * (4.0 * (l12 - l11) - 2.0 * dd);
                g.total[0] += c * (4.0 * (l12 - l22) - 2.0 * dd);
                system.total += 24.0 * c * dd;
                e.right[0] += c * (2.0 * dd * p.sum - (p.t2x * p.px + p.t2y * p.py) - (p.t1x * qx + p.t1y * qy));
                g.right[0] += c * (2.0 * dd * sum + (p.t1x * p.px + p.t1y * p.py) + (p.t2x * qx + p.t2y * qy));
                system.total_right -= c * (2.0 * dd * both + 4.0 * (p.dx * qx + p.dy * qy));
            }
            const double total = system.solve(ring, begin, end, m_known, m);
            for (int j = 0; j < n; ++j) {
                const FanCell f = fan[as_size(j)];
                double* out = outflow + 6 * as_size(f.cell);
                // in a ring the last edge is the first: the very same numbers, though sum is zero only up to rounding
                const double after = j + 1 < n ? part[as_size(j) + 1].sum : ring ? 0.0 : sum;
                const double enter = system[j].x[0], leave = system[j + 1].x[0];
                double* begin_side = out + 2 * as_size(f.corner);
                double* end_side = out + 2 * as_size(FanWalk::next_corner(FanWalk::next_corner(f.corner)));
                begin_side[0] -= enter;
                begin_side[1] -= 2.0 * (total + part[as_size(j)].sum) - enter;
                end_side[1] += leave;
                end_side[0] += 2.0 * (total + after) - leave;
            }
        }
}

} // namespace tepor::detail
