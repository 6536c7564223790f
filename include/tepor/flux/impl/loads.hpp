#pragma once
// Closed-form moments of polynomials along sides and over triangles.

#include <cmath>
#include <tepor/flux/loads.hpp>

namespace tepor::detail {

/// Moments of the polynomial with values g0, gm, g1 at t = 0, 1/2, 1 against t^m, times `scale`, added to `to`.
inline void add_moments(SideMoments& to, double g0, double gm, double g1, double scale) noexcept {
    const double b = -3.0 * g0 + 4.0 * gm - g1; // g = g0 + b t + c t^2
    const double c = 2.0 * g0 - 4.0 * gm + 2.0 * g1;
    for (int m = 0; m < 4; ++m) to[as_size(m)] += scale * (g0 / (m + 1) + b / (m + 2) + c / (m + 3));
}

TEPOR_INLINE std::vector<SideMoments> side_moments(const FluxProblem& problem, const double* temperature) {
    std::vector<SideMoments> moments(problem.sides.size(), SideMoments{});
    for (std::size_t i = 0; i < moments.size(); ++i) {
        const FluxSide& side = problem.sides[i];
        if (side.kind == SideKind::fixed) continue;
        double r0 = 1.0, r1 = 1.0;
        const double length = side_length(*problem.mesh, side.side, r0, r1);
        std::array<double, 3> g{side.flux, side.flux, side.flux};
        if (side.film != 0.0) {
            auto t = values_along(problem, temperature, side.side);
            if (side.kind == SideKind::contact) {
                const auto other = values_along(problem, temperature, problem.sides[as_size(side.partner)].side);
                for (std::size_t n = 0; n < 3; ++n) t[n] -= other[2 - n];
            }
            for (std::size_t n = 0; n < 3; ++n) g[n] += side.film * (t[n] - side.fluid);
        }
        add_moments(moments[i], r0 * g[0], 0.5 * (r0 + r1) * g[1], r1 * g[2], length);
        if (side.trace >= 0)
            for (std::size_t m = 0; m < 4; ++m) moments[i][m] += length * problem.traces[as_size(side.trace)].moment[m];
    }
    return moments;
}

/// Integral of lambda_0^i lambda_1^j lambda_2^k over a triangle of area 1.
constexpr double barycentric_integral(int i, int j, int k) noexcept {
    const auto factorial = [](int n) {
        double f = 1.0;
        for (int m = 2; m <= n; ++m) f *= m;
        return f;
    };
    return 2.0 * factorial(i) * factorial(j) * factorial(k) / factorial(i + j + k + 2);
}

/// Tables for area 1 of order 2: pair (a, b) in the order 00, 11, 22, 01, 12, 20, which is also that of the nodes.
struct PairTables {
    double shape[6][6]; ///< integral of lambda_a lambda_b N_j
    double mass[6][6];  ///< integral of N_i N_j

    PairTables() {
        constexpr int a[6] = {0, 1, 2, 0, 1, 2}, b[6] = {0, 1, 2, 1, 2, 0};
        const auto with_shape = [&](int i, int j, int k, int n) { // times shape function n
            int e[3] = {i, j, k};
            ++e[a[n]];
            double sum = 0.0;
            if (n < 3) sum -= barycentric_integral(e[0], e[1], e[2]); // N = 2 lambda^2 - lambda
            ++e[b[n]];
            return sum + (n < 3 ? 2.0 : 4.0) * barycentric_integral(e[0], e[1], e[2]); // N = 4 lambda_a lambda_b
        };
        for (int p = 0; p < 6; ++p)
            for (int n = 0; n < 6; ++n) {
                int e[3] = {0, 0, 0};
                ++e[a[p]];
                ++e[b[p]];
                shape[p][n] = with_shape(e[0], e[1], e[2], n);
            }
        for (int n = 0; n < 6; ++n)
            for (int p = 0; p < 6; ++p) {
                const int v = a[p];
                int e[3] = {0, 0, 0};
                ++e[v];
                mass[p][n] = p < 3 ? 2.0 * shape[p][n] - with_shape(e[0], e[1], e[2], n) : 4.0 * shape[p][n];
            }
    }
};

inline const PairTables& pair_tables() {
    static const PairTables tables;
    return tables;
}

/// Squared norm over a triangle of area 1 of a P1 field minus its mean, or of a P2 field minus its projection on degree 1.
inline double lost_squared(int order, const double (&u)[6]) noexcept {
    if (order == 1) {
        const double mean = (u[0] + u[1] + u[2]) / 3.0;
        double sum = 0.0;
        for (int i = 0; i < 3; ++i) sum += (u[i] - mean) * (u[i] - mean);
        return sum / 12.0;
    }
    const PairTables& t = pair_tables();
    double m[3] =
        {}; // moments against lambda_a, then the vertex values of the projection: inverse of (1 + delta_ab)/12
    for (int p = 0; p < 6; ++p)
        for (int n = 0; n < 6; ++n) {
            const double part = t.shape[p][n] * u[n];
            if (p < 3)
                m[p] += part;
            else {
                m[p - 3] += part;
                m[p == 5 ? 0 : p - 2] += part;
            }
        }
    double v[6];
    for (int a = 0; a < 3; ++a) v[a] = 12.0 * m[a] - 3.0 * (m[0] + m[1] + m[2]);
    for (int a = 0; a < 3; ++a) v[3 + a] = 0.5 * (v[a] + v[a == 2 ? 0 : a + 1]);
    for (int n = 0; n < 6; ++n) v[n] = u[n] - v[n];
    double sum = 0.0;
    for (int i = 0; i < 6; ++i)
        for (int j = 0; j < 6; ++j) sum += v[i] * t.mass[i][j] * v[j];
    return std::fmax(sum, 0.0);
}

TEPOR_INLINE SourceLoads source_loads(const FluxProblem& problem, const double* temperature) {
    SourceLoads out;
    if (problem.sink.empty() && problem.spread.empty() && problem.stretch.empty())
        return out; // area times source will do
    const MeshData& mesh = *problem.mesh;
    const Index cells = mesh.cell_count();
    const int order = mesh.order;
    out.per_cell = order == 1 ? 3 : 6;
    out.load.assign(as_size(cells) * as_size(out.per_cell), 0.0);
    if (!problem.sink.empty() || !problem.spread.empty()) out.lost.assign(as_size(cells), 0.0);
    for (Index c = 0; c < cells; ++c) {
        const double area = triangle_area(mesh, c);
        double* load = out.load.data() + as_size(c) * as_size(out.per_cell);
        const double sink = problem.sink.empty() ? 0.0 : problem.sink[as_size(c)];
        double f[6];
        const double constant =
            problem.source[as_size(c)] + (sink != 0.0 ? sink * problem.sink_temperature[as_size(c)] : 0.0);
        const Id* dof = problem.dof.data() + as_size(c) * as_size(mesh.nodes_per_cell);
        for (int n = 0; n < out.per_cell; ++n) f[n] = constant - (sink != 0.0 ? sink * temperature[dof[n]] : 0.0);
        if (order == 1) {
            const double sum = f[0] + f[1] + f[2];
            for (int a = 0; a < 3; ++a) load[a] = area / 12.0 * (sum + f[a]);
        } else {
            const PairTables& t = pair_tables();
            for (int p = 0; p < 6; ++p)
                for (int n = 0; n < 6; ++n) load[p] += area * t.shape[p][n] * f[n];
        }
        if (sink != 0.0) out.lost[as_size(c)] = std::sqrt(area * lost_squared(order, f));
    }
    for (const SpreadSource& w : problem.spread) {
        double* load = out.load.data() + as_size(w.cell) * as_size(out.per_cell);
        if (order == 1) {
            load[0] += w.moment[0] + w.moment[3] + w.moment[5];
            load[1] += w.moment[1] + w.moment[3] + w.moment[4];
            load[2] += w.moment[2] + w.moment[4] + w.moment[5];
        } else {
            for (int p = 0; p < 6; ++p) load[p] += w.moment[p];
        }
        out.lost[as_size(w.cell)] += std::sqrt(w.lost_squared);
    }
    return out;
}

} // namespace tepor::detail
