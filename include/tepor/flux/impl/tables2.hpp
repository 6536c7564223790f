#pragma once
// Builds the tables of the order-2 flux from monomials: exact integrals, one 12 x 12 elimination.

#include <cmath>
#include <tepor/flux/tables2.hpp>
#include <utility>

namespace tepor::detail {

/// Monomials 1, x, y, x^2, x y, y^2 by their exponents.
inline constexpr int monomial_x[6] = {0, 1, 0, 2, 1, 0};
inline constexpr int monomial_y[6] = {0, 0, 1, 0, 1, 2};

/// Integral of x^i y^j over the unit triangle: i! j! / (i + j + 2)!.
constexpr double monomial_integral(int i, int j) noexcept {
    double value = 1.0; // i! j! / (i + j + 2)! without large factorials
    for (int m = 1; m <= j; ++m) value *= static_cast<double>(m) / (i + m);
    return value / ((i + j + 1.0) * (i + j + 2.0));
}

/// Integral over side `side` of the outflow of the monomial field (component, m) times the Legendre polynomial l.
inline double side_functional(int side, int l, int component, int m) {
    constexpr double corner[4][2] = {{0, 0}, {1, 0}, {0, 1}, {0, 0}};
    // three Gauss points on [0,1]: exact to degree 5; DLMF section 3.5(v)
    const double root = std::sqrt(0.15);
    const double at[3] = {0.5 - root, 0.5, 0.5 + root};
    const double weight[3] = {5.0 / 18, 8.0 / 18, 5.0 / 18};
    const double dx = corner[side + 1][0] - corner[side][0];
    const double dy = corner[side + 1][1] - corner[side][1];
    const double normal = component == 0 ? dy : -dx;
    double sum = 0.0;
    for (int q = 0; q < 3; ++q) {
        const double t = at[q];
        const double x = corner[side][0] + t * dx, y = corner[side][1] + t * dy;
        const double legendre = l == 0 ? 1.0 : l == 1 ? 2 * t - 1 : 6 * t * t - 6 * t + 1;
        sum += weight[q] * legendre * normal * std::pow(x, monomial_x[m]) * std::pow(y, monomial_y[m]);
    }
    return sum;
}

/// Integral of monomial m times x^i y^j.
inline double with_monomial(int m, int i, int j) noexcept {
    return monomial_integral(monomial_x[m] + i, monomial_y[m] + j);
}

inline double dof_functional(int dof, int component, int m) {
    if (dof < 9) return side_functional(dof / 3, dof % 3, component, m);
    if (dof < 11) return component == dof - 9 ? with_monomial(m, 0, 0) : 0.0;
    // against (1 - 3 y, 3 x - 1) = sum over i of lambda_i grad lambda_{i+1} - lambda_{i+1} grad lambda_i
    return component == 0 ? with_monomial(m, 0, 0) - 3 * with_monomial(m, 0, 1)
                          : 3 * with_monomial(m, 1, 0) - with_monomial(m, 0, 0);
}

/// In-place inverse with row pivoting; the tables' matrices are small and well conditioned.
template <std::size_t N>
void invert_small(double (&a)[N][N]) {
    double inverse[N][N] = {};
    for (std::size_t i = 0; i < N; ++i) inverse[i][i] = 1.0;
    for (std::size_t k = 0; k < N; ++k) {
        std::size_t p = k;
        for (std::size_t i = k + 1; i < N; ++i)
            if (std::abs(a[i][k]) > std::abs(a[p][k])) p = i;
        for (std::size_t j = 0; j < N; ++j) {
            std::swap(a[k][j], a[p][j]);
            std::swap(inverse[k][j], inverse[p][j]);
        }
        const double pivot = 1.0 / a[k][k];
        for (std::size_t j = 0; j < N; ++j) {
            a[k][j] *= pivot;
            inverse[k][j] *= pivot;
        }
        for (std::size_t i = 0; i < N; ++i) {
            if (i == k || a[i][k] == 0.0) continue;
            const double f = a[i][k];
            for (std::size_t j = 0; j < N; ++j) {
                a[i][j] -= f * a[k][j];
                inverse[i][j] -= f * inverse[k][j];
            }
        }
    }
    for (std::size_t i = 0; i < N; ++i)
        for (std::size_t j = 0; j < N; ++j) a[i][j] = inverse[i][j];
}

inline FluxTables2 build_flux_tables2() {
    FluxTables2 t{};
    // Gram matrix of the monomials = L L^T; a polynomial with monomial coefficients p has basis coefficients L^T p.
    double l[6][6] = {};
    for (int i = 0; i < 6; ++i)
        for (int j = 0; j <= i; ++j) {
            double sum = with_monomial(i, monomial_x[j], monomial_y[j]);
            for (int k = 0; k < j; ++k) sum -= l[i][k] * l[j][k];
            l[i][j] = i == j ? std::sqrt(sum) : sum / l[j][j];
        }
    const auto basis = [&](const double* p, double* c) {
        for (int k = 0; k < 6; ++k) {
            c[k] = 0.0;
            for (int i = k; i < 6; ++i) c[k] += l[i][k] * p[i];
        }
    };
    double v[12][12]; // functional of each monomial field; its inverse holds the dual fields as columns
    for (int d = 0; d < 12; ++d)
        for (int m = 0; m < 12; ++m) v[d][m] = dof_functional(d, m / 6, m % 6);
    invert_small(v);
    for (int d = 0; d < 12; ++d)
        for (int c = 0; c < 2; ++c) {
            double p[6];
            for (int m = 0; m < 6; ++m) p[m] = v[6 * c + m][d];
            basis(p, t.dual[d][c]);
            for (int k = 0; k < 6; ++k) t.size[d] += t.dual[d][c][k] * t.dual[d][c][k];
        }
    for (double& size : t.size) size = std::sqrt(size);
    // Patch fields: dof 9 is -(M_0 + M_1)/2, dof 10 is (N_0 + N_1)/2 beside the divergence part; side 2 runs towards vertex 0,
    // which flips the sign of odd moments.
    const auto add = [&](int field, int dof, double factor) {
        for (int c = 0; c < 2; ++c)
            for (int k = 0; k < 6; ++k) t.patch[field][c][k] += factor * t.dual[dof][c][k];
    };
    for (int i = 0; i < 3; ++i) add(i, i, -1.0);
    for (int i = 0; i < 3; ++i) add(3 + i, 6 + i, i == 1 ? -1.0 : 1.0);
    for (int i = 0; i < 2; ++i) {
        add(i, 9, -0.5);
        add(3 + i, 10, 0.5);
    }
    add(6, 11, 1.0);
    add(7, 9, 1.0);
    add(8, 10, 1.0);
    for (int i = 0; i < FluxTables2::fields; ++i)
        for (int j = 0; j < FluxTables2::fields; ++j)
            for (int k = 0; k < 6; ++k) {
                t.xx[i][j] += t.patch[i][0][k] * t.patch[j][0][k];
                t.yy[i][j] += t.patch[i][1][k] * t.patch[j][1][k];
                t.xy[i][j] += t.patch[i][0][k] * t.patch[j][1][k] + t.patch[i][1][k] * t.patch[j][0][k];
            }
    // Shape functions in monomials, nodes: vertices, then the middles of sides 0, 1, 2.
    constexpr double shape[6][6] = {{1, -3, -3, 2, 4, 2}, {0, -1, 0, 2, 0, 0}, {0, 0, -1, 0, 0, 2},
                                    {0, 4, 0, -4, -4, 0}, {0, 0, 0, 0, 4, 0},  {0, 0, 4, 0, -4, -4}};
    for (int n = 0; n < 6; ++n) basis(shape[n], t.shape[n]);
    for (int n = 0; n < 6; ++n)
        for (int k = 0; k < 6; ++k) t.at_node[k][n] = t.shape[n][k]; // N_n = sum of shape[n][k] times basis k
    invert_small(t.at_node);
    constexpr double linear[3][6] = {{1, -1, -1, 0, 0, 0}, {0, 1, 0, 0, 0, 0}, {0, 0, 1, 0, 0, 0}};
    for (int n = 0; n < 3; ++n) basis(linear[n], t.linear[n]);
    constexpr int node[3] = {0, 3, 5};
    for (int i = 0; i < FluxTables2::fields; ++i)
        for (int c = 0; c < 2; ++c)
            for (int n = 0; n < 3; ++n)
                for (int k = 0; k < 6; ++k) t.load[i][c][n] += t.patch[i][c][k] * t.shape[node[n]][k];
    return t;
}

TEPOR_INLINE const FluxTables2& flux_tables2() {
    static const FluxTables2 tables = build_flux_tables2();
    return tables;
}

} // namespace tepor::detail
