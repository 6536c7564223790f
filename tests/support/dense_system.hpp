#pragma once
// Small systems for the solver tests: random sparse matrices, meshes of a square, and a dense elimination to compare with.

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <tepor/base/point.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <utility>
#include <vector>

namespace tepor::test {

/// A small generator of its own, so that tests see the same numbers everywhere (a linear congruential generator).
class Random {
  public:
    explicit Random(std::uint64_t seed) : state_(seed) {}
    /// Uniform in [0, 1).
    double next() {
        state_ = state_ * 6364136223846793005u + 1442695040888963407u;
        return static_cast<double>(state_ >> 11) * 0x1.0p-53;
    }
    double between(double low, double high) { return low + (high - low) * next(); }
    Index below(Index n) { return std::min(n - 1, static_cast<Index>(next() * static_cast<double>(n))); }

  private:
    std::uint64_t state_;
};

/// Dense square matrix by rows.
struct Dense {
    Index n = 0;
    std::vector<double> value;

    double& operator()(Index i, Index j) { return value[detail::as_size(i * n + j)]; }
    double operator()(Index i, Index j) const { return value[detail::as_size(i * n + j)]; }
};

/// The leading n x n block.
inline Dense dense(const SparseMatrix& a, Index n) {
    Dense out{n, std::vector<double>(detail::as_size(n * n), 0.0)};
    for (Index i = 0; i < n; ++i) {
        for (Index p = a.start[detail::as_size(i)]; p < a.start[detail::as_size(i) + 1]; ++p) {
            const Index j = a.column[detail::as_size(p)];
            out(j, i) = a.symmetric() ? a.lower[detail::as_size(p)] : a.upper[detail::as_size(p)];
            out(i, j) = a.lower[detail::as_size(p)];
        }
    }
    return out;
}

/// Solves by Gauss elimination with partial pivoting.
inline std::vector<double> dense_solve(Dense a, std::vector<double> b) {
    const Index n = a.n;
    for (Index k = 0; k < n; ++k) {
        Index best = k;
        for (Index i = k + 1; i < n; ++i) {
            if (std::abs(a(i, k)) > std::abs(a(best, k))) best = i;
        }
        for (Index j = 0; j < n; ++j) std::swap(a(k, j), a(best, j));
        std::swap(b[detail::as_size(k)], b[detail::as_size(best)]);
        for (Index i = k + 1; i < n; ++i) {
            const double f = a(i, k) / a(k, k);
            for (Index j = k; j < n; ++j) a(i, j) -= f * a(k, j);
            b[detail::as_size(i)] -= f * b[detail::as_size(k)];
        }
    }
    for (Index i = n - 1; i >= 0; --i) {
        for (Index j = i + 1; j < n; ++j) b[detail::as_size(i)] -= a(i, j) * b[detail::as_size(j)];
        b[detail::as_size(i)] /= a(i, i);
    }
    return b;
}

/// An entry of a matrix under construction; only one of (row, column) and (column, row) is given.
struct Entry {
    Index row = 0;
    Index column = 0;
    double below = 0.0; ///< value in the lower triangle
    double above = 0.0; ///< value in the upper triangle
};

/// Entries of the strict triangle (any order, repeats are summed) and the diagonal, as a SparseMatrix.
inline SparseMatrix sparse(std::vector<double> diagonal, std::vector<Entry> entries, bool symmetric = true) {
    SparseMatrix out;
    out.rows = static_cast<Index>(diagonal.size());
    for (Entry& e : entries) {
        if (e.row < e.column) std::swap(e.row, e.column);
    }
    std::sort(entries.begin(), entries.end(),
              [](const Entry& a, const Entry& b) { return a.row != b.row ? a.row < b.row : a.column < b.column; });
    out.start.push_back(0);
    std::size_t e = 0;
    for (Index i = 0; i < out.rows; ++i) {
        for (; e < entries.size() && entries[e].row == i; ++e) {
            const Id j = detail::as_id(entries[e].column);
            if (static_cast<Id>(out.column.size()) > out.start.back() && out.column.back() == j) {
                out.lower.back() += entries[e].below;
                if (!symmetric) out.upper.back() += entries[e].above;
                continue;
            }
            out.column.push_back(j);
            out.lower.push_back(entries[e].below);
            if (!symmetric) out.upper.push_back(entries[e].above);
        }
        out.column.push_back(detail::as_id(i));
        out.lower.push_back(diagonal[detail::as_size(i)]);
        if (!symmetric) out.upper.push_back(diagonal[detail::as_size(i)]);
        out.start.push_back(detail::as_id(out.column.size()));
    }
    return out;
}

/// Random matrix with about `links` off-diagonal entries per row within `band` of the diagonal and a dominant diagonal:
/// positive definite when symmetric.
inline SparseMatrix random_matrix(Index n, double links, Index band, Random& random, bool symmetric = true) {
    std::vector<double> diagonal(detail::as_size(n), 0.1);
    std::vector<Entry> entries;
    const Index count = static_cast<Index>(links * static_cast<double>(n));
    for (Index k = 0; k < count && n > 1; ++k) {
        const Index i = 1 + random.below(n - 1);
        const Index j = i - 1 - random.below(std::min(i, band));
        const double value = random.between(-1.0, 0.5);
        const double other = symmetric ? value : random.between(-1.0, 0.5);
        entries.push_back({i, j, value, other});
        diagonal[detail::as_size(i)] += std::max(std::abs(value), std::abs(other));
        diagonal[detail::as_size(j)] += std::max(std::abs(value), std::abs(other));
    }
    return sparse(std::move(diagonal), std::move(entries), symmetric);
}

inline std::vector<double> random_vector(Index n, Random& random) {
    std::vector<double> out(detail::as_size(n));
    for (double& v : out) v = random.between(-1.0, 1.0);
    return out;
}

inline double largest(const std::vector<double>& a) {
    double out = 0.0;
    for (const double v : a) out = std::max(out, std::abs(v));
    return out;
}

inline double largest_difference(const std::vector<double>& a, const std::vector<double>& b) {
    double out = 0.0;
    for (std::size_t i = 0; i < a.size(); ++i) out = std::max(out, std::abs(a[i] - b[i]));
    return out;
}

/// max |b - A x| / (max |b| + max |A| row sum * max |x|), the backward error of x in the leading block.
inline double backward_error(const SparseMatrix& a, const std::vector<double>& x, const std::vector<double>& b) {
    const Index n = static_cast<Index>(x.size());
    std::vector<double> y(x.size());
    multiply(a, n, x.data(), y.data());
    std::vector<double> row(x.size(), 0.0);
    for (Index i = 0; i < n; ++i) {
        for (Index p = a.start[detail::as_size(i)]; p < a.start[detail::as_size(i) + 1]; ++p) {
            const std::size_t j = detail::as_size(a.column[detail::as_size(p)]);
            row[detail::as_size(i)] += std::abs(a.lower[detail::as_size(p)]);
            if (j != detail::as_size(i)) row[j] += std::abs(a.lower[detail::as_size(p)]);
        }
    }
    const double scale = largest(b) + largest(row) * largest(x);
    return scale > 0.0 ? largest_difference(y, b) / scale : 0.0;
}

} // namespace tepor::test
