#pragma once
// Dense patch systems in r-z: energies by quadrature with 1/r, the axis as linear constraints.

#include <algorithm>
#include <array>
#include <cmath>
#include <tepor/flux/fan.hpp>
#include <tepor/flux/given_trace.hpp>
#include <tepor/flux/impl/small_program.hpp>
#include <tepor/flux/round.hpp>
#include <tepor/flux/tables2.hpp>
#include <tepor/quadrature/triangle_rules.hpp>

namespace tepor::detail {

/// A triangle of the section with its radii, seen from one of its corners.
struct RoundCell {
    Point t1, t2;
    double j, k;
    double r[3]; ///< exactly zero on the axis

    RoundCell(const FluxProblem& problem, Index c, Id corner) {
        const MeshData& mesh = *problem.mesh;
        const Id* node = mesh.cell(c);
        Point p[3];
        for (int i = 0; i < 3; ++i) p[i] = mesh.nodes[as_size(node[(corner + i) % 3])];
        t1 = p[1] - p[0], t2 = p[2] - p[0];
        j = cross(t1, t2);
        k = problem.conductivity[as_size(c)];
        const double largest = std::max({p[0].x, p[1].x, p[2].x});
        for (int i = 0; i < 3; ++i) r[i] = p[i].x <= 1e-12 * largest ? 0.0 : p[i].x;
    }

    [[nodiscard]] bool side_on_axis(int s) const noexcept { return r[s] == 0.0 && r[s == 2 ? 0 : s + 1] == 0.0; }

    /// Calls f(weight, l1, l2, radius): points on the unit triangle that integrate 1/r times polynomials, folded onto a vertex on
    /// the axis, where 1/r then cancels against the Jacobian.
    template <class F>
    void points(F f) const {
        static const std::array<Rule<2>, 3> rules{collapsed_triangle_rule(9), collapsed_triangle_rule(13),
                                                  collapsed_triangle_rule(19)};
        const double high = std::max({r[0], r[1], r[2]}), low = std::min({r[0], r[1], r[2]});
        const int folded = static_cast<int>(std::min_element(r, r + 3) - r);
        const Rule<2>& rule = rules[low == 0.0 || high > 1.8 * low ? 2 : high > 1.15 * low ? 1 : 0];
        for (Index q = 0; q < rule.size(); ++q) {
            const auto x = rule.point(q); // the rule is folded onto its vertex 1
            double l[3];
            l[folded] = x[0];
            l[(folded + 1) % 3] = x[1];
            l[(folded + 2) % 3] = 1.0 - x[0] - x[1];
            f(rule.weight(q), l[1], l[2], l[0] * r[0] + l[1] * r[1] + l[2] * r[2]);
        }
    }
};

/// The orthonormal basis of FluxTables2 at a point, through the P2 shape functions.
inline void basis_at(const FluxTables2& t, double l1, double l2, double (&value)[6]) noexcept {
    const double l0 = 1.0 - l1 - l2;
    const double n[6] = {l0 * (2 * l0 - 1), l1 * (2 * l1 - 1), l2 * (2 * l2 - 1),
                         4 * l0 * l1,       4 * l1 * l2,       4 * l2 * l0};
    for (int k = 0; k < 6; ++k) {
        value[k] = 0.0;
        for (int i = 0; i < 6; ++i) value[k] += n[i] * t.at_node[i][k];
    }
}

TEPOR_INLINE SourceLoads round_loads(const FluxProblem& problem) {
    const MeshData& mesh = *problem.mesh;
    SourceLoads out;
    out.per_cell = 6;
    out.load.resize(6 * as_size(mesh.cell_count()));
    constexpr int a[6] = {0, 1, 2, 0, 1, 2}, b[6] = {0, 1, 2, 1, 2, 0};
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const RoundCell cell(problem, c, 0);
        // integral of lambda_a lambda_b lambda_i: area/60 times (number of each)! products, 1, 2 or 6
        for (int p = 0; p < 6; ++p) {
            double sum = 0.0;
            for (int i = 0; i < 3; ++i) {
                const int same = (a[p] == b[p] ? 1 : 0) + (i == a[p] ? 1 : 0) + (i == b[p] ? 1 : 0);
                sum += cell.r[i] * (same == 0 ? 1.0 : same == 1 ? 2.0 : 6.0);
            }
            out.load[6 * as_size(c) + as_size(p)] = problem.source[as_size(c)] * cell.j / 120.0 * sum;
        }
    }
    return out;
}

/// What one cell adds to its patch: the quadratic form of its seven free fields and the balances.
struct RoundPart {
    RoundCell cell;
    double r[3];        ///< balances as in FanPart2
    double a[7][7];     ///< energies of fields 0..6
    double load[7];     ///< their right-hand sides
    double with[2][7];  ///< energies of fields 7 and 8 with them
    int axis_side = -1; ///< side on the axis: 0, 1, 2
};

inline RoundPart round_part(const FluxWork& work, FanCell f, const FluxTables2& t) {
    RoundPart p{RoundCell(work.problem, f.cell, f.corner), {}, {}, {}, {}, -1};
    const RoundCell& cell = p.cell;
    for (int s = 0; s < 3; ++s)
        if (cell.side_on_axis(s)) p.axis_side = s;
    const Id i0 = f.corner, i1 = FanWalk::next_corner(i0), i2 = FanWalk::next_corner(i1);
    const Id* dof = work.problem.dof.data() + 3 * as_size(f.cell);
    const double gx = work.temperature[dof[i1]] - work.temperature[dof[i0]],
                 gy = work.temperature[dof[i2]] - work.temperature[dof[i0]];
    const double gxx = dot(cell.t1, cell.t1), gxy = dot(cell.t1, cell.t2), gyy = dot(cell.t2, cell.t2);
    // k grad T . grad psi, times J; then against r, r lambda_1 and r lambda_2
    const double slope = -cell.k / cell.j * ((gyy - gxy) * gx + (gxx - gxy) * gy);
    const double sum = cell.r[0] + cell.r[1] + cell.r[2];
    const double* pair = work.loads.load.data() + 6 * as_size(f.cell);
    p.r[0] = pair[i0] + pair[3 + i0] + pair[3 + i2] - slope * sum / 6.0;
    p.r[1] = pair[3 + i0] - slope * (sum + cell.r[1]) / 24.0;
    p.r[2] = pair[3 + i2] - slope * (sum + cell.r[2]) / 24.0;
    double full[9][9] = {};
    cell.points([&](double w, double l1, double l2, double radius) {
        double basis[6], x[9], y[9];
        basis_at(t, l1, l2, basis);
        for (int i = 0; i < 9; ++i) {
            x[i] = y[i] = 0.0;
            for (int m = 0; m < 6; ++m) x[i] += t.patch[i][0][m] * basis[m], y[i] += t.patch[i][1][m] * basis[m];
        }
        const double weight = w / (cell.j * cell.k * radius);
        for (int i = 0; i < 9; ++i) {
            const double px = weight * (gxx * x[i] + gxy * y[i]), py = weight * (gxy * x[i] + gyy * y[i]);
            for (int l = 0; l <= i; ++l) full[i][l] += px * x[l] + py * y[l];
        }
    });
    for (int i = 0; i < 7; ++i) {
        for (int l = 0; l <= i; ++l) p.a[i][l] = p.a[l][i] = full[i][l];
        p.with[0][i] = full[7][i];
        p.with[1][i] = full[8][i];
        // psi grad T: full at the vertex, half at the middles of the two sides that meet there
        p.load[i] = -(t.load[i][0][0] * gx + 0.5 * (t.load[i][0][1] + t.load[i][0][2]) * gx + t.load[i][1][0] * gy +
                      0.5 * (t.load[i][1][1] + t.load[i][1][2]) * gy);
    }
    return p;
}

/// A given trace in r-z: zero at an end on the axis, as the exact one, by a share that cancels between the two hats.
inline GivenTrace2 round_trace(const SideMoments& g, bool hat_at_start, double radius_here,
                               double radius_there) noexcept {
    GivenTrace2 trace(g, hat_at_start);
    if (radius_here == 0.0)
        trace.moment[2] -= (trace.moment[0] - 3.0 * trace.moment[1] + 5.0 * trace.moment[2]) / 5.0;
    else if (radius_there == 0.0)
        trace.moment[2] -= (trace.moment[0] + 3.0 * trace.moment[1] + 5.0 * trace.moment[2]) / 5.0;
    return trace;
}

TEPOR_INLINE void sweep_round(const FluxWork& work, double* outflow, double* bubble) {
    const FluxProblem& problem = work.problem;
    const FluxTables2& tables = flux_tables2();
    FanWalk walk(work.neighbours, problem.mesh->cell_count());
    SmallProgram program;
    std::vector<FanCell> fan;
    std::vector<RoundPart> part;
    const auto listed = [&](Id behind) -> const FluxSide* {
        return behind <= -2 ? &problem.sides[as_size(-2 - behind)] : nullptr;
    };
    for (Index c0 = 0; c0 < problem.mesh->cell_count(); ++c0)
        for (Id i0 = 0; i0 < 3; ++i0) {
            bool ring = false;
            Id first = -1, last = -1;
            if (!walk.next(as_id(c0), i0, fan, ring, first, last)) continue;
            const int n = static_cast<int>(fan.size());
            part.clear();
            double sum = 0.0, whole = 0.0;
            for (const FanCell f : fan) {
                part.push_back(round_part(work, f, tables));
                sum += part.back().r[0];
                whole += part.back().cell.j;
            }
            // Unknowns: 0 is m; edge j has 1 + 2 j and 2 + 2 j; bubbles follow. In a ring edge n is edge 0.
            const auto edge = [&](int j) { return 1 + 2 * (ring && j == n ? 0 : j); };
            const int bubbles = 1 + 2 * (ring ? n : n + 1);
            program.reset(bubbles + n);
            double left_over = 0.0;
            if (ring) {
                left_over = sum;
            } else {
                const auto know = [&](int i, double v) {
                    program.known[as_size(i)] = 1;
                    program.x[as_size(i)] = v;
                };
                double m = 0.0;
                bool m_known = false;
                if (const FluxSide* side = listed(first); !side || side->kind != SideKind::fixed) {
                    const RoundCell& c = part.front().cell;
                    const GivenTrace2 g =
                        round_trace(side ? work.moments[as_size(-2 - first)] : SideMoments{}, true, c.r[0], c.r[1]);
                    know(edge(0), -g.moment[1]);
                    know(edge(0) + 1, -g.moment[2]);
                    m = -g.moment[0];
                    m_known = true;
                }
                if (const FluxSide* side = listed(last); !side || side->kind != SideKind::fixed) {
                    const RoundCell& c = part.back().cell;
                    const GivenTrace2 g =
                        round_trace(side ? work.moments[as_size(-2 - last)] : SideMoments{}, false, c.r[0], c.r[2]);
                    know(edge(n), g.moment[1]);
                    know(edge(n) + 1, g.moment[2]);
                    if (m_known)
                        left_over = m + sum - g.moment[0];
                    else
                        m = g.moment[0] - sum;
                    m_known = true;
                }
                if (m_known) know(0, m);
            }
            const double spread = left_over / whole;
            std::vector<double> before(as_size(n) + 1, 0.0);
            for (int j = 0; j < n; ++j) {
                RoundPart& p = part[as_size(j)];
                const double share = spread * p.cell.j;
                p.r[0] -= share;
                p.r[1] -= share / 3.0;
                p.r[2] -= share / 3.0;
                before[as_size(j) + 1] = ring && j + 1 == n ? 0.0 : before[as_size(j)] + p.r[0];
                const int who[7] = {0, edge(j), edge(j) + 1, 0, edge(j + 1), edge(j + 1) + 1, bubbles + j};
                const double given[7] = {before[as_size(j)], 0.0, 0.0, before[as_size(j) + 1], 0.0, 0.0, 0.0};
                for (int i = 0; i < 7; ++i) {
                    double right = p.load[i] + p.with[0][i] * p.r[1] + p.with[1][i] * p.r[2];
                    for (int l = 0; l < 7; ++l) {
                        program.at(who[i], who[l]) += p.a[i][l];
                        right -= p.a[i][l] * given[l];
                    }
                    program.g[as_size(who[i])] += right;
                }
                if (p.axis_side < 0) continue;
                const int s = p.axis_side;
                for (const int node : {s, s == 2 ? 0 : s + 1, 3 + s})
                    for (int component = 0; component < 2; ++component) {
                        auto& row = program.row();
                        const auto value = [&](int field) {
                            double v = 0.0;
                            for (int m = 0; m < 6; ++m)
                                v += tables.patch[field][component][m] * tables.at_node[node][m];
                            return v;
                        };
                        for (int i = 0; i < 7; ++i) {
                            row[as_size(who[i])] += value(i);
                            row.back() -= value(i) * given[i];
                        }
                        row.back() += value(7) * p.r[1] + value(8) * p.r[2];
                    }
            }
            program.solve();
            for (int j = 0; j < n; ++j) {
                const FanCell f = fan[as_size(j)];
                const auto x = [&](int i) { return program.x[as_size(i)]; };
                double* out = outflow + 9 * as_size(f.cell);
                double* begin_side = out + 3 * as_size(f.corner);
                double* end_side = out + 3 * as_size(FanWalk::next_corner(FanWalk::next_corner(f.corner)));
                begin_side[0] -= x(0) + before[as_size(j)];
                begin_side[1] -= x(edge(j));
                begin_side[2] -= x(edge(j) + 1);
                end_side[0] += x(0) + before[as_size(j) + 1];
                end_side[1] -= x(edge(j + 1));
                end_side[2] += x(edge(j + 1) + 1);
                bubble[f.cell] += x(bubbles + j);
            }
        }
}

TEPOR_INLINE Defect2 defect_round(const FluxWork& work, const Equilibrated& flux, Index c) {
    const FluxTables2& t = flux_tables2();
    const RoundCell cell(work.problem, c, 0);
    const double* out = flux.outflow.data() + 9 * as_size(c);
    const double* pair = work.loads.load.data() + 6 * as_size(c);
    const double load[3] = {pair[0] + pair[1] + pair[2] + 2.0 * (pair[3] + pair[4] + pair[5]),
                            pair[1] + pair[3] + pair[4], pair[2] + pair[4] + pair[5]};
    Defect2 d;
    double size = flux_fields(out, flux.bubble[as_size(c)], load, d);
    const Id* dof = work.problem.dof.data() + 3 * as_size(c);
    const double gx = work.temperature[dof[1]] - work.temperature[dof[0]],
                 gy = work.temperature[dof[2]] - work.temperature[dof[0]];
    const double gxx = dot(cell.t1, cell.t1), gxy = dot(cell.t1, cell.t2), gyy = dot(cell.t2, cell.t2);
    for (int v = 0; v < 3; ++v) {
        const double fx = cell.r[v] * cell.k / cell.j * (gyy * gx - gxy * gy),
                     fy = cell.r[v] * cell.k / cell.j * (gxx * gy - gxy * gx);
        for (int m = 0; m < 3; ++m) d.x[m] += fx * t.linear[v][m], d.y[m] += fy * t.linear[v][m];
        size += std::abs(fx) + std::abs(fy);
    }
    const double factor = 1.0 / (cell.j * cell.k);
    d.gxx = factor * gxx, d.gxy = factor * gxy, d.gyy = factor * gyy;
    d.size_squared = (d.gxx + d.gyy) * size * size * 3.0 / (cell.r[0] + cell.r[1] + cell.r[2]);
    return d;
}

TEPOR_INLINE double round_product(const FluxProblem& problem, Index c, const Defect2& w, const Defect2& v) {
    const FluxTables2& t = flux_tables2();
    const RoundCell cell(problem, c, 0);
    double sum = 0.0;
    cell.points([&](double weight, double l1, double l2, double radius) {
        double basis[6], a[4] = {};
        basis_at(t, l1, l2, basis);
        for (int m = 0; m < 6; ++m) {
            a[0] += w.x[m] * basis[m], a[1] += w.y[m] * basis[m];
            a[2] += v.x[m] * basis[m], a[3] += v.y[m] * basis[m];
        }
        sum += weight / radius * (w.gxx * a[0] * a[2] + w.gxy * (a[0] * a[3] + a[1] * a[2]) + w.gyy * a[1] * a[3]);
    });
    return sum;
}

TEPOR_INLINE bool vanishes_on_axis(const FluxProblem& problem, Index c, const Defect2& d, double size) {
    const FluxTables2& t = flux_tables2();
    const RoundCell cell(problem, c, 0);
    for (int s = 0; s < 3; ++s) {
        if (!cell.side_on_axis(s)) continue;
        for (const int node : {s, s == 2 ? 0 : s + 1, 3 + s}) {
            double x = 0.0, y = 0.0;
            for (int m = 0; m < 6; ++m) x += d.x[m] * t.at_node[node][m], y += d.y[m] * t.at_node[node][m];
            if (!(std::abs(x) + std::abs(y) <= size)) return false;
        }
    }
    return true;
}

} // namespace tepor::detail
