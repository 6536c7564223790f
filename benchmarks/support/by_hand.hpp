#pragma once
// Assembly written by hand for one element and one conductivity known at compile time, with the arithmetic of the library's
// kernels: what a specialist would write for one job. Ready map, or triplets.

#include <algorithm>
#include <cstddef>
#include <tepor/body/model.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/quadrature/rules.hpp>
#include <vector>

namespace by_hand {

using namespace tepor;

// Conductivities: a number, a function of place, a table over temperature.
struct Constant {
    static constexpr bool of_place = false, of_temperature = false;
};
struct OfPlace {
    static constexpr bool of_place = true, of_temperature = false;
};
struct Tabled {
    static constexpr bool of_place = false, of_temperature = true;
};
constexpr double constant = 1.5;
constexpr double knot[3] = {0.0, 400.0, 1000.0};
constexpr double knot_value[3] = {1.0, 1.8, 2.4};

/// Element matrices of cells, W at a time.
template <class E, class K>
class Cells {
  public:
    static constexpr int W = 32, N = E::nodes, pairs = N * (N + 1) / 2;
    static constexpr bool flat = E::shape_of_cell == CellShape::triangle && E::order == 1;

    Cells() {
        const auto rule = rule_for<E>(flat ? 1 : 2 * E::order);
        points_ = static_cast<int>(rule.size());
        for (Index q = 0; q < rule.size(); ++q) {
            weight_.push_back(rule.weight(q));
            const auto n = E::shape(rule.point(q));
            const auto g = E::gradient(rule.point(q));
            for (int i = 0; i < N; ++i) {
                shape_.push_back(n[i]);
                first_.push_back(g(i, 0));
                second_.push_back(g(i, 1));
            }
        }
        for (int i = 0; i < N; ++i)
            for (int j = 0; j < i; ++j)
                for (int q = 0; q < points_; ++q) {
                    const auto a = static_cast<std::size_t>(q * N + i);
                    const auto b = static_cast<std::size_t>(q * N + j);
                    product_.push_back(first_[a] * first_[b]);
                    product_.push_back(first_[a] * second_[b] + second_[a] * first_[b]);
                    product_.push_back(second_[a] * second_[b]);
                }
    }

    /// `count` cells whose nodes are `ids`; the rest of the block keeps what it held.
    void form(const Id* ids, int count, const Point* place, const double* T) {
        for (int c = 0; c < count; ++c, ids += N)
            for (int i = 0; i < N; ++i) {
                const Point p = place[ids[i]];
                x[i][c] = p.x;
                y[i][c] = p.y;
                if constexpr (K::of_temperature) t[i][c] = T[ids[i]];
            }
        for (int c = count; c < W; ++c)
            for (int i = 0; i < N; ++i) {
                x[i][c] = x[i][0];
                y[i][c] = y[i][0];
                t[i][c] = t[i][0];
            }
        if constexpr (flat)
            triangles();
        else
            cells();
    }

    double m[detail::as_size(pairs)][W]; // lower triangle
    double s[detail::as_size(N * N)][W]; // what the slope of a table adds

  private:
    void conductivity(const double* n, double* k, double* slope) const {
        double at[W];
        const auto mean = [&](const double(*v)[W]) {
            for (int c = 0; c < W; ++c) {
                double sum = n[0] * v[0][c];
                for (int i = 1; i < N; ++i) sum += n[i] * v[i][c];
                at[c] = sum;
            }
        };
        if constexpr (K::of_place) {
            mean(x);
            for (int c = 0; c < W; ++c) k[c] = 1.0 + 0.5 * at[c];
        } else if constexpr (K::of_temperature) {
            mean(t);
            for (int c = 0; c < W; ++c) {
                const int low = at[c] >= knot[1] ? 1 : 0;
                const bool outside = at[c] < knot[0] || at[c] >= knot[2];
                slope[c] = outside ? 0.0 : (knot_value[low + 1] - knot_value[low]) / (knot[low + 1] - knot[low]);
                k[c] = at[c] >= knot[2] ? knot_value[2] : knot_value[low] + slope[c] * (at[c] - knot[low]);
            }
        } else {
            for (int c = 0; c < W; ++c) k[c] = constant;
        }
    }

    void triangles() {
        double k[W];
        double slope[W];
        conductivity(shape_.data(), k, slope);
        for (int c = 0; c < W; ++c) {
            const double bx0 = y[1][c] - y[2][c], bx1 = y[2][c] - y[0][c], bx2 = y[0][c] - y[1][c];
            const double by0 = x[2][c] - x[1][c], by1 = x[0][c] - x[2][c], by2 = x[1][c] - x[0][c];
            const double half = 0.5 / (bx0 * by1 - bx1 * by0);
            const double scale = half * k[c];
            const double m10 = scale * (bx0 * bx1 + by0 * by1);
            const double m20 = scale * (bx0 * bx2 + by0 * by2);
            const double m21 = scale * (bx1 * bx2 + by1 * by2);
            m[0][c] = -(m10 + m20);
            m[1][c] = m10;
            m[2][c] = -(m10 + m21);
            m[3][c] = m20;
            m[4][c] = m21;
            m[5][c] = -(m20 + m21);
            if constexpr (K::of_temperature) {
                const double rise1 = t[1][c] - t[0][c];
                const double rise2 = t[2][c] - t[0][c];
                const double third = half * slope[c] / 3.0;
                const double tx = third * (bx1 * rise1 + bx2 * rise2);
                const double ty = third * (by1 * rise1 + by2 * rise2);
                const double row1 = tx * bx1 + ty * by1;
                const double row2 = tx * bx2 + ty * by2;
                for (int j = 0; j < 3; ++j) {
                    s[j][c] = -(row1 + row2);
                    s[3 + j][c] = row1;
                    s[6 + j][c] = row2;
                }
            }
        }
    }

    void cells() {
        double A[16][3][W];
        double D[16][3][W];
        for (int q = 0; q < points_; ++q) {
            const double* g = first_.data() + q * N;
            const double* h = second_.data() + q * N;
            double k[W];
            double slope[W];
            conductivity(shape_.data() + q * N, k, slope);
            const double w = weight_[static_cast<std::size_t>(q)];
            for (int c = 0; c < W; ++c) {
                double xx = 0.0, xe = 0.0, yx = 0.0, ye = 0.0;
                for (int i = 0; i < N; ++i) {
                    xx += g[i] * x[i][c];
                    xe += h[i] * x[i][c];
                    yx += g[i] * y[i][c];
                    ye += h[i] * y[i][c];
                }
                const double scale = w / (xx * ye - xe * yx);
                const double a = scale * (ye * ye + xe * xe);
                const double b = -scale * (ye * yx + xe * xx);
                const double d = scale * (yx * yx + xx * xx);
                A[q][0][c] = k[c] * a;
                A[q][1][c] = k[c] * b;
                A[q][2][c] = k[c] * d;
                if constexpr (K::of_temperature) {
                    D[q][0][c] = slope[c] * a;
                    D[q][1][c] = slope[c] * b;
                    D[q][2][c] = slope[c] * d;
                }
            }
        }
        const double* f = product_.data();
        for (int i = 0; i < N; ++i) {
            for (int c = 0; c < W; ++c) m[i * (i + 1) / 2 + i][c] = 0.0;
            for (int j = 0; j < i; ++j) {
                double* to = m[i * (i + 1) / 2 + j];
                for (int c = 0; c < W; ++c) to[c] = f[0] * A[0][0][c] + f[1] * A[0][1][c] + f[2] * A[0][2][c];
                f += 3;
                for (int q = 1; q < points_; ++q, f += 3)
                    for (int c = 0; c < W; ++c) to[c] += f[0] * A[q][0][c] + f[1] * A[q][1][c] + f[2] * A[q][2][c];
                for (int c = 0; c < W; ++c) {
                    m[i * (i + 1) / 2 + i][c] -= to[c];
                    m[j * (j + 1) / 2 + j][c] -= to[c];
                }
            }
        }
        if constexpr (K::of_temperature) slopes(D);
    }

    void slopes(const double (*D)[3][W]) {
        for (int e = 0; e < N * N; ++e)
            for (int c = 0; c < W; ++c) s[e][c] = 0.0;
        for (int q = 0; q < points_; ++q) {
            const double* g = first_.data() + q * N;
            const double* h = second_.data() + q * N;
            const double* n = shape_.data() + q * N;
            double one[W];
            double two[W];
            for (int c = 0; c < W; ++c) {
                double a = 0.0, b = 0.0;
                for (int i = 0; i < N; ++i) {
                    a += g[i] * t[i][c];
                    b += h[i] * t[i][c];
                }
                one[c] = D[q][0][c] * a + D[q][1][c] * b;
                two[c] = D[q][1][c] * a + D[q][2][c] * b;
            }
            for (int i = 0; i < N; ++i) {
                double row[W];
                for (int c = 0; c < W; ++c) row[c] = g[i] * one[c] + h[i] * two[c];
                for (int j = 0; j < N; ++j)
                    for (int c = 0; c < W; ++c) s[i * N + j][c] += row[c] * n[j];
            }
        }
    }

    int points_ = 0;
    std::vector<double> weight_, shape_, first_, second_, product_;
    double x[detail::as_size(N)][W] = {}, y[detail::as_size(N)][W] = {}, t[detail::as_size(N)][W] = {};
};

/// With the model's numbering and map, into the lower triangle and, where the slope of a table counts, the upper one.
template <class E, class K>
void scatter(Cells<E, K>& block, const Model& model, const double* T, SparseMatrix& matrix) {
    constexpr int N = E::nodes, pairs = N * (N + 1) / 2, W = Cells<E, K>::W;
    double* lower = matrix.lower.data();
    double* upper = matrix.upper.data();
    std::fill(matrix.lower.begin(), matrix.lower.end(), 0.0);
    std::fill(matrix.upper.begin(), matrix.upper.end(), 0.0);
    const auto cells = static_cast<Index>(model.user_cell.size());
    const Id* map = model.scatter.data();
    for (Index first = 0; first < cells; first += W) {
        const int count = static_cast<int>(std::min<Index>(W, cells - first));
        const Id* ids = model.cell(first);
        block.form(ids, count, model.places.data(), T);
        for (int c = 0; c < count; ++c, ids += N, map += pairs) {
            if constexpr (!K::of_temperature) {
                for (int e = 0; e < pairs; ++e) lower[map[e]] += block.m[e][c];
            } else {
                int e = 0;
                for (int i = 0; i < N; ++i)
                    for (int j = 0; j <= i; ++j, ++e) {
                        const bool below = ids[i] >= ids[j];
                        lower[map[e]] += block.m[e][c] + block.s[below ? i * N + j : j * N + i][c];
                        upper[map[e]] += block.m[e][c] + block.s[below ? j * N + i : i * N + j][c];
                    }
            }
        }
    }
}

} // namespace by_hand
