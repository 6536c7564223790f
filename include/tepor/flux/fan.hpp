#pragma once
// The cells around a vertex, and the small system whose solution is the flux of that vertex.

#include <algorithm>
#include <cstddef>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor::detail {

/// A cell of a fan and which of its vertices is the common one.
struct FanCell {
    Id cell;
    Id corner;
};

/// Walks the fans of a triangle mesh: cells joined around a vertex through sides that are not listed, counter-clockwise. A vertex
/// has one fan, or one for each set of cells that contacts and boundary leave connected.
class FanWalk {
  public:
    FanWalk(const std::vector<Id>& neighbours, Index cells)
        : neighbours_(neighbours.data()), seen_(as_size(cells) * 3, 0) {}

    /// The fan through `corner` of `cell` into `fan`; false when it was walked before. `first` and `last` receive what lies
    /// behind the first and the last edge (negative, see side_neighbours), or the fan is a `ring`.
    bool next(Id cell, Id corner, std::vector<FanCell>& fan, bool& ring, Id& first, Id& last) {
        if (seen_[slot(cell, corner)]) return false;
        fan.clear();
        ring = true;
        Id c = cell, i = corner;
        do { // counter-clockwise: across the side that ends at the vertex
            fan.push_back({c, i});
            seen_[slot(c, i)] = 1;
            const Id behind = neighbours_[slot(c, before(i))];
            if (behind < 0) {
                ring = false;
                last = behind;
                break;
            }
            c = behind / 3;
            i = behind % 3;
        } while (c != cell || i != corner);
        if (ring) return true;
        const auto ahead = static_cast<std::ptrdiff_t>(fan.size());
        c = cell;
        i = corner;
        for (;;) { // clockwise to the start: across side i, which runs from the vertex; behind it the vertex is the end
            const Id behind = neighbours_[slot(c, i)];
            if (behind < 0) {
                first = behind;
                break;
            }
            c = behind / 3;
            i = next_corner(behind % 3);
            fan.push_back({c, i});
            seen_[slot(c, i)] = 1;
        }
        std::reverse(fan.begin() + ahead, fan.end());
        std::rotate(fan.begin(), fan.begin() + ahead, fan.end());
        return true;
    }

    static constexpr Id next_corner(Id i) noexcept { return i == 2 ? 0 : i + 1; }
    static constexpr Id before(Id i) noexcept { return i == 0 ? 2 : i - 1; }

  private:
    static std::size_t slot(Id cell, Id corner) noexcept { return 3 * as_size(cell) + as_size(corner); }

    const Id* neighbours_;
    std::vector<unsigned char> seen_;
};

/// Minimises a quadratic over fluxes across the edges 0..n of a fan: B numbers `x_j` per edge beside the total flux of edge 0, `m`.
///
/// The matrix is a chain (edge j meets edges j - 1 and j + 1) with one full row for m; in a ring edge n is edge 0.
/// Elimination along the chain keeps the two ends and m as border: O(n B^3) without a general factorisation.
template <std::size_t B>
class FanSystem {
  public:
    using Block = double[B][B];
    struct Edge {
        double diagonal[B][B]; ///< x_j with x_j
        double next[B][B];     ///< x_j (rows) with x_{j+1} (columns)
        double first[B][B];    ///< x_j (rows) with x_0: filled by elimination
        double total[B];       ///< x_j with m
        double right[B];       ///< right-hand side
        double x[B];           ///< solution
    };

    /// A fan of `cells` cells; edges hold what they held before.
    void start(int cells) {
        cells_ = cells;
        if (edges_.size() < as_size(cells) + 1) edges_.resize(as_size(cells) + 1);
        total = total_right = 0.0;
    }

    /// The same with all edges at zero.
    void reset(int cells) {
        start(cells);
        for (int j = 0; j <= cells; ++j) edges_[as_size(j)] = Edge{};
    }

    Edge& operator[](int j) noexcept { return edges_[as_size(j)]; }

    double total = 0.0;       ///< m with m
    double total_right = 0.0; ///< right-hand side of m

    /// What is known at the ends: nothing (free), or x and with it the total flux.
    struct End {
        bool known = false;
        double x[B] = {};
    };

    /// Solves for all edges and returns m; `m` is taken as known when `m_known`.
    double solve(bool ring, const End& begin, const End& end, bool m_known, double m) {
        const int n = cells_;
        Edge& e0 = edges_[0];
        for (std::size_t a = 0; a < B && n > 1; ++a)
            for (std::size_t b = 0; b < B; ++b) edges_[1].first[a][b] = e0.next[b][a];
        for (int j = 1; j < n; ++j) eliminate(edges_[as_size(j)], edges_[as_size(j) + 1], e0);
        Edge& en = edges_[as_size(n)];
        if constexpr (B == 1)
            if (ring) { // two unknowns are left, in most fans of order 1
                const double s00 =
                    e0.diagonal[0][0] + en.diagonal[0][0] + 2.0 * (n > 1 ? en.first[0][0] : e0.next[0][0]);
                const double s10 = e0.total[0] + en.total[0], r0 = e0.right[0] + en.right[0];
                const double pivot = 1.0 / s00, f = s10 * pivot;
                const double whole = (total_right - f * r0) / (total - f * s10);
                e0.x[0] = en.x[0] = (r0 - s10 * whole) * pivot;
                substitute(whole);
                return whole;
            }
        Border border;
        auto& s = border.s;
        auto& r = border.r;
        auto& value = border.value;
        auto& known = border.known;
        for (std::size_t a = 0; a < B; ++a) {
            for (std::size_t b = 0; b < B; ++b) {
                s[a][b] = e0.diagonal[a][b];
                s[B + a][B + b] = en.diagonal[a][b];
                s[B + a][b] = n > 1 ? en.first[a][b] : e0.next[b][a];
            }
            s[2 * B][a] = e0.total[a];
            s[2 * B][B + a] = en.total[a];
            r[a] = e0.right[a];
            r[B + a] = en.right[a];
        }
        s[2 * B][2 * B] = total;
        r[2 * B] = total_right;
        if (ring) { // fold x_n onto x_0 and hold the freed unknowns at zero
            for (std::size_t a = 0; a < B; ++a) {
                for (std::size_t b = 0; b < B; ++b) s[a][b] += s[B + a][B + b] + s[B + a][b] + s[B + b][a];
                s[2 * B][a] += s[2 * B][B + a];
                r[a] += r[B + a];
                known[B + a] = true;
            }
            for (std::size_t a = 0; a < B; ++a) {
                for (std::size_t b = 0; b < B; ++b) s[B + a][b] = 0.0;
                s[2 * B][B + a] = 0.0;
            }
        } else {
            for (std::size_t a = 0; a < B; ++a) {
                known[a] = begin.known;
                value[a] = begin.x[a];
                known[B + a] = end.known;
                value[B + a] = end.x[a];
            }
        }
        known[2 * B] = m_known;
        value[2 * B] = m;
        border.solve();
        for (std::size_t a = 0; a < B; ++a) {
            e0.x[a] = value[a];
            en.x[a] = ring ? value[a] : value[B + a];
        }
        substitute(value[2 * B]);
        return value[2 * B];
    }

  private:
    /// The inner edges, once both ends and the total flux are known.
    void substitute(double m) noexcept {
        for (int j = cells_ - 1; j > 0; --j) {
            Edge& e = edges_[as_size(j)];
            const Edge& after = edges_[as_size(j) + 1];
            double y[B];
            for (std::size_t a = 0; a < B; ++a) {
                y[a] = e.right[a] - e.total[a] * m;
                for (std::size_t b = 0; b < B; ++b) y[a] -= e.next[a][b] * after.x[b] + e.first[a][b] * edges_[0].x[b];
            }
            for (std::size_t a = 0; a < B; ++a) {
                e.x[a] = 0.0;
                for (std::size_t b = 0; b < B; ++b)
                    e.x[a] += e.diagonal[a][b] * y[b]; // holds its inverse since eliminate
            }
        }
    }

    static void invert(Block& d) noexcept {
        if constexpr (B == 1) {
            d[0][0] = 1.0 / d[0][0];
        } else {
            static_assert(B == 2);
            const double f = 1.0 / (d[0][0] * d[1][1] - d[0][1] * d[1][0]);
            const double a = d[0][0];
            d[0][0] = d[1][1] * f;
            d[1][1] = a * f;
            d[0][1] = d[1][0] = -f * d[0][1];
        }
    }

    void eliminate(Edge& e, Edge& after, Edge& e0) noexcept {
        invert(e.diagonal);
        double to_next[B][B], to_first[B][B], to_total[B], to_right[B]; // inverse times each coupling
        for (std::size_t a = 0; a < B; ++a) {
            to_total[a] = to_right[a] = 0.0;
            for (std::size_t b = 0; b < B; ++b) {
                to_next[a][b] = to_first[a][b] = 0.0;
                for (std::size_t c = 0; c < B; ++c) {
                    to_next[a][b] += e.diagonal[a][c] * e.next[c][b];
                    to_first[a][b] += e.diagonal[a][c] * e.first[c][b];
                }
                to_total[a] += e.diagonal[a][b] * e.total[b];
                to_right[a] += e.diagonal[a][b] * e.right[b];
            }
        }
        for (std::size_t a = 0; a < B; ++a)
            for (std::size_t c = 0; c < B; ++c) {
                for (std::size_t b = 0; b < B; ++b) {
                    after.diagonal[a][b] -= e.next[c][a] * to_next[c][b];
                    after.first[a][b] -= e.next[c][a] * to_first[c][b];
                    e0.diagonal[a][b] -= e.first[c][a] * to_first[c][b];
                }
                after.total[a] -= e.next[c][a] * to_total[c];
                after.right[a] -= e.next[c][a] * to_right[c];
                e0.total[a] -= e.first[c][a] * to_total[c];
                e0.right[a] -= e.first[c][a] * to_right[c];
            }
        for (std::size_t c = 0; c < B; ++c) {
            total -= e.total[c] * to_total[c];
            total_right -= e.total[c] * to_right[c];
        }
    }

    static constexpr std::size_t border_size = 2 * B + 1; // x_0, x_n, m

    struct Border {
        double s[border_size][border_size] = {}; ///< lower triangle
        double r[border_size] = {};
        double value[border_size] = {};
        bool known[border_size] = {};

        /// Gauss elimination without pivoting of the unknown part (positive definite); known rows are passed over.
        void solve() noexcept {
            constexpr std::size_t N = border_size;
            for (std::size_t i = 0; i < N; ++i)
                for (std::size_t j = 0; j < i; ++j) s[j][i] = s[i][j];
            for (std::size_t i = 0; i < N; ++i)
                for (std::size_t j = 0; j < N; ++j)
                    if (known[j] && !known[i]) r[i] -= s[i][j] * value[j];
            for (std::size_t k = 0; k < N; ++k) {
                if (known[k]) continue;
                const double pivot = 1.0 / s[k][k];
                for (std::size_t i = k + 1; i < N; ++i) {
                    if (known[i]) continue;
                    const double f = s[i][k] * pivot;
                    for (std::size_t j = k; j < N; ++j) s[i][j] -= f * s[k][j];
                    r[i] -= f * r[k];
                }
            }
            for (std::size_t k = N; k-- > 0;) {
                if (known[k]) continue;
                double sum = r[k];
                for (std::size_t j = k + 1; j < N; ++j)
                    if (!known[j]) sum -= s[k][j] * value[j];
                value[k] = sum / s[k][k];
            }
        }
    };

    int cells_ = 0;
    std::vector<Edge> edges_;
};

} // namespace tepor::detail
