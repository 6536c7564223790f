#pragma once
// Patch fluxes of order 1: per cell the energy is |T|/(12 k) (sum |w_i|^2 + |sum w_i|^2) of its vertex values w_i.
//
// Dot products of the sides are cotangents of the angles times 2 |T|, and k grad T meets a side in the difference of two nodal
// values, so that a patch needs three cotangents and the conductivity of each cell, and no coordinates. All is scaled by 24.

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

/// What the patches need of a cell.
struct FanCell1 {
    double cot[3]; ///< of the angles at its vertices, where the cell is isotropic
    double k;
    double area;
};

inline std::vector<FanCell1> fan_cells(const FluxProblem& problem) {
    const MeshData& mesh = *problem.mesh;
    std::vector<FanCell1> out(as_size(mesh.cell_count()));
    for (std::size_t c = 0; c < out.size(); ++c) {
        const Id* node = mesh.cells.data() + 3 * c;
        const Point a = mesh.nodes[as_size(node[0])];
        const Point t1 = stretched(problem, as_id(c), mesh.nodes[as_size(node[1])] - a),
                    t2 = stretched(problem, as_id(c), mesh.nodes[as_size(node[2])] - a);
        const double twice = cross(t1, t2), inverse = 1.0 / twice;
        const Point d = t2 - t1;
        out[c] = {
            {inverse * dot(t1, t2), -inverse * dot(t1, d), inverse * dot(t2, d)}, problem.conductivity[c], 0.5 * twice};
    }
    return out;
}

inline void set(FanSystem<1>::Edge& e, double diagonal, double next, double by_total, double right) noexcept {
    e.diagonal[0][0] = diagonal;
    e.next[0][0] = next;
    e.first[0][0] = 0.0;
    e.total[0] = by_total;
    e.right[0] = right;
}

TEPOR_INLINE void sweep_order1(const FluxWork& work, double* outflow) {
    const FluxProblem& problem = work.problem;
    const Index cells = problem.mesh->cell_count();
    const std::vector<FanCell1> table = fan_cells(problem);
    FanWalk walk(work.neighbours, cells);
    FanSystem<1> system;
    std::vector<FanCell> fan;
    struct CellPart {
        double r;          // balance r_j
        double area;       // of the cell
        double rise;       // u_1 + u_2 above the vertex
        double climb;      // u_2 - u_1
        double at, c1, c2; // cotangents over k: at the vertex, at v_j, at v_{j+1}
        double sum;        // S_j: what has been added to the crossing flux up to edge j
    };
    std::vector<CellPart> part;
    const auto listed = [&](Id behind) -> const FluxSide* {
        return behind <= -2 ? &problem.sides[as_size(-2 - behind)] : nullptr;
    };
    const bool spread_loads = work.loads.per_cell > 0;
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
                const FanCell1& cell = table[as_size(f.cell)];
                const Id* dof = problem.dof.data() + 3 * as_size(f.cell);
                const double u0 = work.temperature[dof[f.corner]];
                const double u1 = work.temperature[dof[i1]] - u0, u2 = work.temperature[dof[i2]] - u0;
                const double inverse = 1.0 / cell.k;
                CellPart& p = part[as_size(j)];
                p.area = cell.area;
                p.rise = u1 + u2;
                p.climb = u2 - u1;
                p.at = inverse * cell.cot[f.corner];
                p.c1 = inverse * cell.cot[i1];
                p.c2 = inverse * cell.cot[i2];
                const double load = spread_loads ? work.loads.load[3 * as_size(f.cell) + as_size(f.corner)]
                                                 : cell.area * problem.source[as_size(f.cell)] / 3.0;
                // less the integral of k grad T . grad lambda
                p.r = load + 0.5 * cell.k * (u1 * cell.cot[i2] + u2 * cell.cot[i1]);
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
            system.start(n);
            sum = 0.0;
            double diagonal = 0.0, by_total = 0.0, right = 0.0; // of the cell before the edge
            for (int j = 0; j < n; ++j) {
                CellPart& p = part[as_size(j)];
                p.sum = sum;
                sum += p.r - spread * p.area;
                const double both = 2.0 * (p.sum + sum), dd = p.c1 + p.c2, own = 2.0 * (p.at + dd);
                set(system[j], diagonal + own, -2.0 * p.at, by_total - 6.0 * p.c1 - 2.0 * p.c2,
                    right + 2.0 * dd * p.sum + both * p.c1 - p.rise);
                diagonal = own;
                by_total = -6.0 * p.c2 - 2.0 * p.c1;
                right = 2.0 * dd * sum + both * p.c2 + p.rise;
                system.total += 24.0 * dd;
                system.total_right -= 6.0 * dd * both + 4.0 * p.climb;
            }
            set(system[n], diagonal, 0.0, by_total, right);
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
