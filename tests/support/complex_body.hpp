#pragma once
// A small dense heat solve in complex numbers, written from the weak form alone: with i h added to a datum, the imaginary
// part of any result over h is its derivative to rounding (the complex step).

#include <cmath>
#include <complex>
#include <functional>
#include <tepor/assembly/kernels.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor::test {

using Complex = std::complex<double>;

/// A point of a cell or side as the data see it.
struct ComplexSpot {
    Complex T, x, y;
};

/// One element type, one frame, any data. Every node has one unknown per region, so that regions are joined by contacts only.
template <class E>
class ComplexBody {
  public:
    explicit ComplexBody(const MeshData& mesh) : mesh_(mesh), places(mesh.nodes.size()) {
        for (std::size_t n = 0; n < places.size(); ++n)
            places[n] = {Complex(mesh.nodes[n].x), Complex(mesh.nodes[n].y)};
        fixed.assign(mesh.nodes.size() * regions(), false);
        fixed_value.assign(fixed.size(), Complex());
        load.assign(fixed.size(), Complex());
    }

    using Tensor = std::array<Complex, 3>; // xx, yy, xy
    std::function<Tensor(std::size_t, const ComplexSpot&)> conductivity;
    std::function<Complex(std::size_t, const ComplexSpot&)> source;   // heat taken up per volume
    std::function<Complex(std::size_t, const ComplexSpot&)> outflow;  // per area of a face
    std::function<Complex(std::size_t, const ComplexSpot&)> capacity; // per volume, not of temperature
    Complex contact = 0.0;

    std::size_t regions() const { return mesh_.region_names.size(); }
    std::size_t unknown(Id node, Id region) const {
        return static_cast<std::size_t>(node) * regions() + static_cast<std::size_t>(region);
    }

    const MeshData& mesh_;
    std::vector<std::array<Complex, 2>> places;
    std::vector<bool> fixed;
    std::vector<Complex> fixed_value;
    std::vector<Complex> load;
    std::vector<Complex> T;

    /// Integral of f(spot) over a region.
    Complex over_region(std::size_t r, const std::function<Complex(const ComplexSpot&)>& f) {
        Complex sum = 0.0;
        for (Index c = 0; c < mesh_.cell_count(); ++c)
            if (static_cast<std::size_t>(mesh_.region[static_cast<std::size_t>(c)]) == r)
                each_point(c, [&](const Cell& at, Complex w) { sum += w * f(at.spot); });
        return sum;
    }

    /// Integral of f(spot) over a face.
    Complex over_face(std::size_t face, const std::function<Complex(const ComplexSpot&)>& f) {
        Complex sum = 0.0;
        for (const CellSide side : mesh_.faces[face].sides)
            each_side_point(side, [&](const ComplexSpot& s, Complex w, const double*) { sum += w * f(s); });
        return sum;
    }

    /// Newton's method, its matrix by differences of the residual: converges by many digits a pass.
    void solve(double start = 20.0) {
        T.assign(fixed.size(), Complex(start));
        std::vector<bool> used(fixed.size(), false);
        for (Index c = 0; c < mesh_.cell_count(); ++c)
            for (int i = 0; i < E::nodes; ++i)
                used[unknown(mesh_.cell(c)[i], mesh_.region[static_cast<std::size_t>(c)])] = true;
        for (std::size_t u = 0; u < T.size(); ++u)
            if (fixed[u]) T[u] = fixed_value[u];
        const std::size_t n = T.size();
        for (int pass = 0; pass < 12; ++pass) {
            std::vector<Complex> r = residual();
            std::vector<std::vector<Complex>> A(n, std::vector<Complex>(n, 0.0));
            for (std::size_t j = 0; j < n; ++j) {
                if (fixed[j] || !used[j]) continue;
                const Complex before = T[j];
                const double h = 1e-5;
                T[j] = before + h;
                const std::vector<Complex> moved = residual(j);
                T[j] = before - h;
                const std::vector<Complex> other = residual(j);
                T[j] = before;
                for (std::size_t i = 0; i < n; ++i) A[i][j] = (moved[i] - other[i]) / (2.0 * h);
            }
            for (std::size_t i = 0; i < n; ++i)
                if (fixed[i] || !used[i]) {
                    A[i].assign(n, 0.0);
                    A[i][i] = 1.0;
                    r[i] = 0.0;
                }
            const std::vector<Complex> step = eliminate(A, r);
            double largest = 0.0;
            for (std::size_t i = 0; i < n; ++i) {
                T[i] -= step[i];
                largest = std::max(largest, std::abs(step[i]));
            }
            if (pass > 4 && largest < 1e-13) break;
        }
    }

    /// Heat taken up at every unknown by a rise, lumped by row sums or consistent.
    std::vector<Complex> stored(const std::vector<Complex>& rise, bool lumped) {
        std::vector<Complex> out(T.size(), 0.0);
        for (Index c = 0; c < mesh_.cell_count(); ++c) {
            const Id region = mesh_.region[static_cast<std::size_t>(c)];
            each_point(c, [&](const Cell& at, Complex w) {
                const Complex per_volume = w * capacity(static_cast<std::size_t>(region), at.spot);
                Complex here = 0.0;
                for (int i = 0; i < E::nodes; ++i)
                    here += at.shape[static_cast<std::size_t>(i)] * rise[unknown(mesh_.cell(c)[i], region)];
                for (int i = 0; i < E::nodes; ++i) {
                    const std::size_t u = unknown(mesh_.cell(c)[i], region);
                    out[u] += per_volume * at.shape[static_cast<std::size_t>(i)] * (lumped ? rise[u] : here);
                }
            });
        }
        return out;
    }

    /// One theta step from the temperatures `from` into T; prescribed unknowns stand at their values throughout.
    /// Returns stored(T - from) + dt r(theta T + (1 - theta) from) at all unknowns: zero where free.
    std::vector<Complex> step(const std::vector<Complex>& from, double dt, double theta, bool lumped) {
        std::vector<Complex> now = from;
        std::vector<Complex> early = from;
        for (std::size_t u = 0; u < now.size(); ++u)
            if (fixed[u]) now[u] = early[u] = fixed_value[u];
        const std::size_t n = now.size();
        const auto balance = [&](const std::vector<Complex>& at) {
            std::vector<Complex> rise(n);
            for (std::size_t u = 0; u < n; ++u) {
                rise[u] = at[u] - from[u];
                T[u] = theta * at[u] + (1.0 - theta) * early[u];
            }
            std::vector<Complex> r = residual();
            const std::vector<Complex> s = stored(rise, lumped);
            for (std::size_t u = 0; u < n; ++u) r[u] = s[u] + dt * r[u];
            return r;
        };
        std::vector<Complex> r;
        for (int pass = 0; pass < 8; ++pass) {
            r = balance(now);
            std::vector<std::vector<Complex>> A(n, std::vector<Complex>(n, 0.0));
            for (std::size_t j = 0; j < n; ++j) {
                const double h = 1e-4;
                std::vector<Complex> moved = now;
                moved[j] += h;
                const std::vector<Complex> above = balance(moved);
                moved[j] -= 2.0 * h;
                const std::vector<Complex> below = balance(moved);
                for (std::size_t i = 0; i < n; ++i) A[i][j] = (above[i] - below[i]) / (2.0 * h);
            }
            std::vector<Complex> b = r;
            for (std::size_t i = 0; i < n; ++i) {
                bool used = false;
                for (std::size_t j = 0; j < n; ++j) used = used || A[i][j] != 0.0;
                if (fixed[i] || !used) {
                    A[i].assign(n, 0.0);
                    A[i][i] = 1.0;
                    b[i] = 0.0;
                }
            }
            const std::vector<Complex> d = eliminate(A, b);
            double largest = 0.0;
            for (std::size_t i = 0; i < n; ++i) {
                now[i] -= d[i];
                largest = std::max(largest, std::abs(d[i]));
            }
            if (pass > 3 && largest < 1e-13) break;
        }
        r = balance(now);
        T = now;
        return r;
    }

    /// Residual at all unknowns; with `near` only of the cells and sides that hold that unknown (for differences).
    std::vector<Complex> residual(std::size_t near = std::size_t(-1)) {
        std::vector<Complex> r(T.size(), 0.0);
        const auto touches = [&](Index c, bool any_region) {
            if (near == std::size_t(-1)) return true;
            for (int i = 0; i < E::nodes; ++i) {
                const Id node = mesh_.cell(c)[i];
                if (unknown(node, mesh_.region[static_cast<std::size_t>(c)]) == near) return true;
                if (any_region && near / regions() == static_cast<std::size_t>(node)) return true;
            }
            return false;
        };
        for (Index c = 0; c < mesh_.cell_count(); ++c) {
            if (!touches(c, false)) continue;
            const Id region = mesh_.region[static_cast<std::size_t>(c)];
            // triangles of order 1 conduct by the conductivity at their centroid
            const bool flat = E::shape_of_cell == CellShape::triangle && E::order == 1;
            const int degree = flat ? 1 : 2 * E::order + mesh_.frame.power();
            each_point(c, rule_for<E>(degree), [&](const Cell& at, Complex w) {
                const Tensor k = conductivity(static_cast<std::size_t>(region), at.spot);
                const Complex qx = k[0] * at.tx + k[2] * at.ty;
                const Complex qy = k[1] * at.ty + k[2] * at.tx;
                for (int i = 0; i < E::nodes; ++i)
                    r[unknown(mesh_.cell(c)[i], region)] +=
                        w * (qx * at.gx[static_cast<std::size_t>(i)] + qy * at.gy[static_cast<std::size_t>(i)]);
            });
            each_point(c, [&](const Cell& at, Complex w) {
                const Complex s = source(static_cast<std::size_t>(region), at.spot);
                for (int i = 0; i < E::nodes; ++i)
                    r[unknown(mesh_.cell(c)[i], region)] += w * s * at.shape[static_cast<std::size_t>(i)];
            });
        }
        for (std::size_t f = 0; f < mesh_.faces.size(); ++f)
            for (const CellSide side : mesh_.faces[f].sides) {
                if (!touches(side.cell, false)) continue;
                each_side_point(side, [&](const ComplexSpot& s, Complex w, const double* shape) {
                    const Complex q = outflow(f, s);
                    for (int j = 0; j < E::Side::nodes; ++j) r[side_unknown(side, j)] += w * q * shape[j];
                });
            }
        for (const auto& [mine, other] : interfaces()) {
            if (!touches(mine.cell, true)) continue;
            each_side_point(mine, [&, m = mine, o = other](const ComplexSpot&, Complex w, const double* shape) {
                Complex jump = 0.0;
                for (int j = 0; j < E::Side::nodes; ++j)
                    jump += shape[j] * (T[side_unknown(m, j)] - T[unknown(side_node_id(m, j), o)]);
                for (int j = 0; j < E::Side::nodes; ++j) {
                    r[side_unknown(m, j)] += w * contact * jump * shape[j];
                    r[unknown(side_node_id(m, j), o)] -= w * contact * jump * shape[j];
                }
            });
        }
        if (near == std::size_t(-1))
            for (std::size_t u = 0; u < r.size(); ++u) r[u] -= load[u];
        return r;
    }

    Id side_node_id(CellSide s, int j) const { return mesh_.cell(s.cell)[E::side_node(s.side, j)]; }
    std::size_t side_unknown(CellSide s, int j) const {
        return unknown(side_node_id(s, j), mesh_.region[static_cast<std::size_t>(s.cell)]);
    }

  private:
    struct Cell {
        ComplexSpot spot;
        Complex tx, ty;
        std::array<Complex, static_cast<std::size_t>(E::nodes)> gx, gy;
        std::array<double, static_cast<std::size_t>(E::nodes)> shape;
    };

    Complex measure(Complex x) const {
        Complex m = mesh_.frame.factor(E::dim);
        for (int i = 0; i < mesh_.frame.power(); ++i) m *= x;
        return m;
    }

    template <class Take>
    void each_point(Index c, const Take& take) {
        each_point(c, rule_for<E>(2 * E::order + mesh_.frame.power()), take);
    }

    template <class R, class Take>
    void each_point(Index c, const R& rule, const Take& take) {
        const Id region = mesh_.region[static_cast<std::size_t>(c)];
        for (Index q = 0; q < rule.size(); ++q) {
            const auto n = E::shape(rule.point(q));
            const auto g = E::gradient(rule.point(q));
            Cell at;
            Complex J[2][2] = {{0.0, 0.0}, {0.0, 0.0}};
            for (int i = 0; i < E::nodes; ++i) {
                const auto& p = places[static_cast<std::size_t>(mesh_.cell(c)[i])];
                at.spot.x += n[i] * p[0];
                at.spot.y += n[i] * p[1];
                for (int d = 0; d < E::dim; ++d) {
                    J[0][d] += g(i, d) * p[0];
                    J[1][d] += g(i, d) * p[1];
                }
            }
            Complex det = J[0][0];
            if constexpr (E::dim == 2) det = J[0][0] * J[1][1] - J[0][1] * J[1][0];
            for (int i = 0; i < E::nodes; ++i) {
                const auto a = static_cast<std::size_t>(i);
                if constexpr (E::dim == 2) {
                    at.gx[a] = (J[1][1] * g(i, 0) - J[1][0] * g(i, 1)) / det;
                    at.gy[a] = (J[0][0] * g(i, 1) - J[0][1] * g(i, 0)) / det;
                } else {
                    at.gx[a] = g(i, 0) / det;
                    at.gy[a] = 0.0;
                }
                at.shape[a] = n[i];
                if (T.empty()) continue;
                const Complex t = T[unknown(mesh_.cell(c)[i], region)];
                at.spot.T += n[i] * t;
                at.tx += at.gx[a] * t;
                at.ty += at.gy[a] * t;
            }
            take(at, rule.weight(q) * det * measure(at.spot.x));
        }
    }

    template <class Take>
    void each_side_point(CellSide side, const Take& take) {
        if constexpr (E::dim == 1) {
            ComplexSpot s;
            s.x = places[static_cast<std::size_t>(side_node_id(side, 0))][0];
            s.T = T.empty() ? Complex() : T[side_unknown(side, 0)];
            const double one = 1.0;
            take(s, measure(s.x), &one);
        } else {
            const Rule<1> rule = line_rule(2 * E::order + mesh_.frame.power());
            for (Index q = 0; q < rule.size(); ++q) {
                typename E::Side::point xi;
                xi[0] = rule.point(q)[0];
                const auto n = E::Side::shape(xi);
                const auto g = E::Side::gradient(xi);
                ComplexSpot s;
                Complex tx = 0.0;
                Complex ty = 0.0;
                double shape[16];
                for (int j = 0; j < E::Side::nodes; ++j) {
                    const auto& p = places[static_cast<std::size_t>(side_node_id(side, j))];
                    s.x += n[j] * p[0];
                    s.y += n[j] * p[1];
                    tx += g(j, 0) * p[0];
                    ty += g(j, 0) * p[1];
                    if (!T.empty()) s.T += n[j] * T[side_unknown(side, j)];
                    shape[j] = n[j];
                }
                take(s, rule.weight(q) * std::sqrt(tx * tx + ty * ty) * measure(s.x), shape);
            }
        }
    }

    /// Sides of cells of region 0 that are sides of another region's cell too, with that region.
    std::vector<std::pair<CellSide, Id>> interfaces() const {
        std::vector<std::pair<CellSide, Id>> found;
        for (Index a = 0; a < mesh_.cell_count(); ++a) {
            if (mesh_.region[static_cast<std::size_t>(a)] != 0) continue;
            for (int s = 0; s < E::sides; ++s)
                for (Index b = 0; b < mesh_.cell_count(); ++b) {
                    if (mesh_.region[static_cast<std::size_t>(b)] == 0) continue;
                    int shared = 0;
                    for (int j = 0; j < E::Side::nodes; ++j)
                        for (int i = 0; i < E::nodes; ++i)
                            shared += mesh_.cell(a)[E::side_node(s, j)] == mesh_.cell(b)[i] ? 1 : 0;
                    if (shared == E::Side::nodes)
                        found.push_back({{static_cast<Id>(a), s}, mesh_.region[static_cast<std::size_t>(b)]});
                }
        }
        return found;
    }

    static std::vector<Complex> eliminate(std::vector<std::vector<Complex>> A, std::vector<Complex> b) {
        const std::size_t n = b.size();
        for (std::size_t k = 0; k < n; ++k) {
            std::size_t p = k;
            for (std::size_t i = k; i < n; ++i)
                if (std::abs(A[i][k]) > std::abs(A[p][k])) p = i;
            std::swap(A[k], A[p]);
            std::swap(b[k], b[p]);
            for (std::size_t i = k + 1; i < n; ++i) {
                if (A[i][k] == 0.0) continue;
                const Complex f = A[i][k] / A[k][k];
                for (std::size_t j = k; j < n; ++j) A[i][j] -= f * A[k][j];
                b[i] -= f * b[k];
            }
        }
        for (std::size_t k = n; k-- > 0;) {
            for (std::size_t j = k + 1; j < n; ++j) b[k] -= A[k][j] * b[j];
            b[k] /= A[k][k];
        }
        return b;
    }
};

} // namespace tepor::test
