#pragma once
// Small dense quadratic programs with linear constraints, for patches without a closed form.

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor::detail {

/// A dense convex quadratic with linear constraints that may repeat each other: x = fixed where known.
class SmallProgram {
  public:
    void reset(int n) {
        n_ = n;
        h.assign(as_size(n * n), 0.0);
        g.assign(as_size(n), 0.0);
        x.assign(as_size(n), 0.0);
        known.assign(as_size(n), 0);
        rows.clear();
    }
    double& at(int i, int j) { return h[as_size(i * n_ + j)]; }
    /// A constraint row: n coefficients and the right-hand side.
    std::vector<double>& row() {
        rows.emplace_back(as_size(n_) + 1, 0.0);
        return rows.back();
    }

    void solve() {
        const std::size_t n = as_size(n_);
        // Gauss-Jordan with full pivoting on the rows; what is zero to rounding is a repetition.
        std::vector<int> pivot_of(n, -1);
        double largest = 0.0;
        for (auto& row : rows)
            for (std::size_t j = 0; j < n; ++j) {
                if (known[j]) row[n] -= row[j] * x[j], row[j] = 0.0;
                largest = std::max(largest, std::abs(row[j]));
            }
        std::vector<char> used(rows.size(), 0);
        for (;;) {
            std::size_t best_row = 0, best = 0;
            double size = 1e-9 * largest;
            for (std::size_t i = 0; i < rows.size(); ++i)
                for (std::size_t j = 0; j < n && !used[i]; ++j)
                    if (std::abs(rows[i][j]) > size) size = std::abs(rows[i][j]), best_row = i, best = j;
            if (size <= 1e-9 * largest || rows.empty()) break;
            used[best_row] = 1;
            pivot_of[best] = static_cast<int>(best_row);
            const double scale = 1.0 / rows[best_row][best];
            for (double& v : rows[best_row]) v *= scale;
            for (std::size_t i = 0; i < rows.size(); ++i) {
                if (i == best_row || rows[i][best] == 0.0) continue;
                const double factor = rows[i][best];
                for (std::size_t j = 0; j <= n; ++j) rows[i][j] -= factor * rows[best_row][j];
            }
        }
        // x = base + columns of `map` times the remaining unknowns
        std::vector<std::size_t> free;
        for (std::size_t j = 0; j < n; ++j)
            if (!known[j] && pivot_of[j] < 0) free.push_back(j);
        const std::size_t m = free.size();
        std::vector<double> map(n * m, 0.0), base(n, 0.0);
        for (std::size_t j = 0; j < n; ++j) {
            if (known[j]) base[j] = x[j];
            if (pivot_of[j] < 0) continue;
            const auto& row = rows[as_size(pivot_of[j])];
            base[j] = row[n];
            for (std::size_t q = 0; q < m; ++q) map[j * m + q] = -row[free[q]];
        }
        for (std::size_t q = 0; q < m; ++q) map[free[q] * m + q] = 1.0;
        std::vector<double> hm(n * m, 0.0), reduced(m * m, 0.0), right(m, 0.0), rest(n, 0.0);
        for (std::size_t i = 0; i < n; ++i) {
            rest[i] = g[i];
            for (std::size_t j = 0; j < n; ++j) {
                rest[i] -= h[i * n + j] * base[j];
                for (std::size_t q = 0; q < m; ++q) hm[i * m + q] += h[i * n + j] * map[j * m + q];
            }
        }
        for (std::size_t p = 0; p < m; ++p)
            for (std::size_t i = 0; i < n; ++i) {
                right[p] += map[i * m + p] * rest[i];
                for (std::size_t q = 0; q <= p; ++q) reduced[p * m + q] += map[i * m + p] * hm[i * m + q];
            }
        for (std::size_t p = 0; p < m; ++p) { // Cholesky in place
            for (std::size_t q = 0; q <= p; ++q) {
                double sum = reduced[p * m + q];
                for (std::size_t s = 0; s < q; ++s) sum -= reduced[p * m + s] * reduced[q * m + s];
                reduced[p * m + q] = p == q ? std::sqrt(sum) : sum / reduced[q * m + q];
            }
            for (std::size_t s = 0; s < p; ++s) right[p] -= reduced[p * m + s] * right[s];
            right[p] /= reduced[p * m + p];
        }
        for (std::size_t p = m; p-- > 0;) {
            for (std::size_t s = p + 1; s < m; ++s) right[p] -= reduced[s * m + p] * right[s];
            right[p] /= reduced[p * m + p];
        }
        for (std::size_t j = 0; j < n; ++j) {
            x[j] = base[j];
            for (std::size_t q = 0; q < m; ++q) x[j] += map[j * m + q] * right[q];
        }
    }

    std::vector<double> h, g, x;
    std::vector<char> known;
    std::vector<std::vector<double>> rows;

  private:
    int n_ = 0;
};

} // namespace tepor::detail
