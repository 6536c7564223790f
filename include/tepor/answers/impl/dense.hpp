#pragma once
// Small dense matrices for compact models: products, LU, the matrix exponential, singular values by one-sided Jacobi.

#include <algorithm>
#include <cmath>
#include <tepor/base/numbers.hpp>
#include <utility>
#include <vector>

namespace tepor::detail {

/// Row by row.
struct Dense {
    std::size_t rows = 0;
    std::size_t cols = 0;
    std::vector<double> data;

    Dense() = default;
    Dense(std::size_t r, std::size_t c) : rows(r), cols(c), data(r * c, 0.0) {}
    double& operator()(std::size_t i, std::size_t j) { return data[i * cols + j]; }
    double operator()(std::size_t i, std::size_t j) const { return data[i * cols + j]; }

    [[nodiscard]] Dense block(std::size_t i0, std::size_t j0, std::size_t r, std::size_t c) const {
        Dense out(r, c);
        for (std::size_t i = 0; i < r; ++i)
            for (std::size_t j = 0; j < c; ++j) out(i, j) = (*this)(i0 + i, j0 + j);
        return out;
    }
};

inline Dense product(const Dense& a, const Dense& b) {
    Dense out(a.rows, b.cols);
    for (std::size_t i = 0; i < a.rows; ++i)
        for (std::size_t k = 0; k < a.cols; ++k) {
            const double f = a(i, k);
            for (std::size_t j = 0; j < b.cols; ++j) out(i, j) += f * b(k, j);
        }
    return out;
}
inline Dense transposed(const Dense& a) {
    Dense out(a.cols, a.rows);
    for (std::size_t i = 0; i < a.rows; ++i)
        for (std::size_t j = 0; j < a.cols; ++j) out(j, i) = a(i, j);
    return out;
}
/// a + factor b
inline Dense sum(Dense a, double factor, const Dense& b) {
    for (std::size_t i = 0; i < a.data.size(); ++i) a.data[i] += factor * b.data[i];
    return a;
}

/// A^-1 B by elimination with row pivots.
inline Dense solve(Dense A, Dense B) {
    const std::size_t n = A.rows;
    for (std::size_t k = 0; k < n; ++k) {
        std::size_t p = k;
        for (std::size_t i = k; i < n; ++i)
            if (std::abs(A(i, k)) > std::abs(A(p, k))) p = i;
        if (p != k) {
            for (std::size_t j = 0; j < n; ++j) std::swap(A(k, j), A(p, j));
            for (std::size_t j = 0; j < B.cols; ++j) std::swap(B(k, j), B(p, j));
        }
        for (std::size_t i = k + 1; i < n; ++i) {
            const double f = A(i, k) / A(k, k);
            if (f == 0.0) continue;
            for (std::size_t j = k; j < n; ++j) A(i, j) -= f * A(k, j);
            for (std::size_t j = 0; j < B.cols; ++j) B(i, j) -= f * B(k, j);
        }
    }
    for (std::size_t k = n; k-- > 0;)
        for (std::size_t j = 0; j < B.cols; ++j) {
            double s = B(k, j);
            for (std::size_t i = k + 1; i < n; ++i) s -= A(k, i) * B(i, j);
            B(k, j) = s / A(k, k);
        }
    return B;
}

/// e^A: the diagonal Pade approximant of degree 8 after scaling to a norm below 1/2, then squaring. Its relative error there
/// is below 1e-18. Source: Higham, Functions of Matrices (2008), section 10.3.
inline Dense exponential(Dense A) {
    const std::size_t n = A.rows;
    double norm = 0.0;
    for (std::size_t i = 0; i < n; ++i) {
        double row = 0.0;
        for (std::size_t j = 0; j < n; ++j) row += std::abs(A(i, j));
        norm = std::max(norm, row);
    }
    int squarings = 0;
    while (std::ldexp(norm, -squarings) > 0.5) ++squarings;
    for (double& v : A.data) v = std::ldexp(v, -squarings);
    Dense power(n, n);
    Dense even(n, n);
    Dense odd(n, n);
    for (std::size_t i = 0; i < n; ++i) power(i, i) = even(i, i) = 1.0;
    double c = 1.0;
    constexpr int degree = 8;
    for (int k = 1; k <= degree; ++k) {
        c *= static_cast<double>(degree - k + 1) / (static_cast<double>(2 * degree - k + 1) * k);
        power = product(power, A);
        Dense& to = k % 2 == 0 ? even : odd;
        to = sum(std::move(to), c, power);
    }
    Dense out = solve(sum(even, -1.0, odd), sum(even, 1.0, odd));
    for (int s = 0; s < squarings; ++s) out = product(out, out);
    return out;
}

/// A = U diag(s) V^T with s falling: one-sided Jacobi (Hestenes 1958), exact to rounding of every column's own size.
/// A is overwritten by U diag(s).
struct Singular {
    Dense U, V;
    std::vector<double> s;
};
inline Singular singular_values(Dense A) {
    const std::size_t m = A.rows;
    const std::size_t n = A.cols;
    A = transposed(A); // columns become rows: stride one
    Dense V(n, n);
    for (std::size_t i = 0; i < n; ++i) V(i, i) = 1.0;
    for (int sweep = 0; sweep < 60; ++sweep) {
        bool rotated = false;
        for (std::size_t p = 0; p + 1 < n; ++p)
            for (std::size_t q = p + 1; q < n; ++q) {
                double a = 0.0;
                double b = 0.0;
                double c = 0.0;
                for (std::size_t i = 0; i < m; ++i) {
                    a += A(p, i) * A(p, i);
                    b += A(q, i) * A(q, i);
                    c += A(p, i) * A(q, i);
                }
                if (std::abs(c) <= 1e-15 * std::sqrt(a * b) || c == 0.0) continue;
                rotated = true;
                const double zeta = (b - a) / (2.0 * c);
                const double t = (zeta >= 0.0 ? 1.0 : -1.0) / (std::abs(zeta) + std::sqrt(1.0 + zeta * zeta));
                const double cs = 1.0 / std::sqrt(1.0 + t * t);
                const double sn = cs * t;
                const auto turn = [&](Dense& M, std::size_t length) {
                    for (std::size_t i = 0; i < length; ++i) {
                        const double x = M(p, i);
                        const double y = M(q, i);
                        M(p, i) = cs * x - sn * y;
                        M(q, i) = sn * x + cs * y;
                    }
                };
                turn(A, m);
                turn(V, n);
            }
        if (!rotated) break;
    }
    Singular out;
    std::vector<std::pair<double, std::size_t>> order;
    for (std::size_t j = 0; j < n; ++j) {
        double a = 0.0;
        for (std::size_t i = 0; i < m; ++i) a += A(j, i) * A(j, i);
        order.emplace_back(-std::sqrt(a), j);
    }
    std::sort(order.begin(), order.end());
    out.U = Dense(m, n);
    out.V = Dense(n, n);
    for (std::size_t k = 0; k < n; ++k) {
        const std::size_t j = order[k].second;
        const double s = -order[k].first;
        out.s.push_back(s);
        for (std::size_t i = 0; i < m; ++i) out.U(i, k) = s > 0.0 ? A(j, i) / s : 0.0;
        for (std::size_t i = 0; i < n; ++i) out.V(i, k) = V(j, i);
    }
    return out;
}

} // namespace tepor::detail
