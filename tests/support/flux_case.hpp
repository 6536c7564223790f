#pragma once
// A small finite element assembler and meshes of its own, so that the error bounds are tested apart from the library's solver.

#include <Eigen/SparseCholesky>
#include <Eigen/SparseCore>
#include <algorithm>
#include <array>
#include <cmath>
#include <map>
#include <numeric>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/flux/neighbours.hpp>
#include <utility>
#include <vector>

namespace tepor::test {

/// Evenly spaced lines from a to b.
inline std::vector<double> lines(double a, double b, int cells) {
    std::vector<double> x;
    for (int i = 0; i <= cells; ++i) x.push_back(a + (b - a) * i / cells);
    return x;
}

/// Triangles on grid lines with alternating diagonals; `region(x, y)` of each rectangle's centre, negative: left out.
template <class Region>
MeshData grid_triangles(int order, const std::vector<double>& x, const std::vector<double>& y, Region region) {
    MeshData mesh;
    mesh.dim = 2;
    mesh.order = order;
    mesh.nodes_per_cell = order == 1 ? 3 : 6;
    mesh.sides_per_cell = 3;
    mesh.shape = CellShape::triangle;
    std::map<std::pair<double, double>, Id> numbers;
    const auto node = [&](Point p) {
        const auto [it, fresh] = numbers.try_emplace({p.x, p.y}, static_cast<Id>(mesh.nodes.size()));
        if (fresh) mesh.nodes.push_back(p);
        return it->second;
    };
    const auto add = [&](Point a, Point b, Point c, int r) {
        for (const Point p : {a, b, c}) mesh.cells.push_back(node(p));
        if (order == 2)
            for (const auto& [p, q] : {std::pair{a, b}, std::pair{b, c}, std::pair{c, a}})
                mesh.cells.push_back(node(0.5 * (p + q)));
        mesh.region.push_back(static_cast<Id>(r));
    };
    for (std::size_t j = 0; j + 1 < y.size(); ++j)
        for (std::size_t i = 0; i + 1 < x.size(); ++i) {
            const int r = region(0.5 * (x[i] + x[i + 1]), 0.5 * (y[j] + y[j + 1]));
            if (r < 0) continue;
            const Point p00{x[i], y[j]}, p10{x[i + 1], y[j]}, p11{x[i + 1], y[j + 1]}, p01{x[i], y[j + 1]};
            if ((i + j) % 2 == 0) {
                add(p00, p10, p11, r);
                add(p00, p11, p01, r);
            } else {
                add(p00, p10, p01, r);
                add(p10, p11, p01, r);
            }
        }
    return mesh;
}

/// A body for the flux: mesh, degrees of freedom, conditions, and its own assembly and direct solve.
class FluxCase {
  public:
    MeshData mesh;
    FluxProblem problem;
    Index dofs = 0;
    std::vector<char> held;             ///< per dof: temperature prescribed
    std::vector<double> given;          ///< its value
    Eigen::SparseMatrix<double> matrix; ///< of all dofs, prescribed ones included
    Eigen::VectorXd load;

    template <class Conductivity>
    FluxCase(MeshData m, Conductivity k) : mesh(std::move(m)) {
        const std::size_t cells = as_size(mesh.cell_count());
        problem.mesh = &mesh;
        for (std::size_t c = 0; c < cells; ++c) problem.conductivity.push_back(k(mesh.region[c]));
        problem.source.assign(cells, 0.0);
        number_dofs();
    }
    FluxCase(const FluxCase& other) { *this = other; }
    FluxCase& operator=(const FluxCase& other) {
        mesh = other.mesh, problem = other.problem, dofs = other.dofs, held = other.held, given = other.given;
        matrix = other.matrix, load = other.load, tensor = other.tensor;
        problem.mesh = &mesh;
        return *this;
    }

    Point corner(Index c, int i) const { return mesh.nodes[as_size(mesh.cell(c)[i % 3])]; }
    Point centre(Index c) const { return (1.0 / 3.0) * (corner(c, 0) + corner(c, 1) + corner(c, 2)); }

    /// Calls `statement(middle of the side)` for each boundary side; it returns the FluxSide to list (its `side` is filled in)
    /// and whether to list it at all.
    template <class Statement>
    void on_boundary(Statement statement) {
        const auto behind = detail::side_neighbours(problem);
        for (Index c = 0; c < mesh.cell_count(); ++c)
            for (int s = 0; s < 3; ++s) {
                if (behind[as_size(3 * c + s)] != -1) continue;
                FluxSide side;
                if (!statement(0.5 * (corner(c, s) + corner(c, s + 1)), side)) continue;
                side.side = {static_cast<Id>(c), s};
                problem.sides.push_back(side);
            }
    }

    /// Contact of conductance hc between regions a and b: nodes get one copy on each side.
    void contact(Id a, Id b, double hc) {
        const auto behind = detail::side_neighbours(problem);
        for (Index c = 0; c < mesh.cell_count(); ++c)
            for (int s = 0; s < 3; ++s) {
                const Id other = behind[as_size(3 * c + s)];
                if (other < 0 || mesh.region[as_size(c)] != a || mesh.region[as_size(other / 3)] != b) continue;
                const Id mine = static_cast<Id>(problem.sides.size());
                problem.sides.push_back({{static_cast<Id>(c), s}, SideKind::contact, mine + 1, -1, 0.0, hc, 0.0});
                problem.sides.push_back({{other / 3, other % 3}, SideKind::contact, mine, -1, 0.0, hc, 0.0});
            }
        number_dofs();
    }

    /// Prescribes g(place) at every dof of sides of kind fixed.
    template <class Value>
    void prescribe(Value g) {
        held.assign(as_size(dofs), 0);
        given.assign(as_size(dofs), 0.0);
        for (const FluxSide& s : problem.sides)
            if (s.kind == SideKind::fixed)
                for (int n = 0; n < mesh.order + 1; ++n) {
                    const int local = n == 2 ? 3 + s.side.side : (s.side.side + n) % 3;
                    const std::size_t at = as_size(s.side.cell) * as_size(mesh.nodes_per_cell) + as_size(local);
                    held[as_size(problem.dof[at])] = 1;
                    given[as_size(problem.dof[at])] = g(mesh.nodes[as_size(mesh.cells[at])]);
                }
    }

    /// Shape functions and gradients at barycentric (l1, l2) of cell c.
    void shapes(Index c, double l1, double l2, double (&n)[6], Point (&g)[6]) const {
        const double l[3] = {1.0 - l1 - l2, l1, l2};
        const double twice = cross(corner(c, 1) - corner(c, 0), corner(c, 2) - corner(c, 0));
        Point d[3];
        for (int i = 0; i < 3; ++i) {
            const Point e = corner(c, i + 2) - corner(c, i + 1);
            d[i] = (1.0 / twice) * Point{-e.y, e.x};
        }
        for (int i = 0; i < 3; ++i) {
            const int j = (i + 1) % 3;
            n[i] = mesh.order == 1 ? l[i] : l[i] * (2 * l[i] - 1);
            g[i] = mesh.order == 1 ? d[i] : (4 * l[i] - 1) * d[i];
            n[3 + i] = 4 * l[i] * l[j];
            g[3 + i] = 4 * l[j] * d[i] + 4 * l[i] * d[j];
        }
    }

    /// Calls f(weight, l1, l2) at the points of a rule exact to degree 4 on a triangle of area 1 (D. A. Dunavant, IJNME 21 (1985)).
    template <class F>
    static void points(F f) {
        for (const auto& [w, a] :
             {std::pair{0.223381589678011, 0.445948490915965}, std::pair{0.109951743655322, 0.091576213509771}}) {
            f(w, a, a);
            f(w, a, 1 - 2 * a);
            f(w, 1 - 2 * a, a);
        }
    }

    /// Calls f(weight, t) at the points of a Gauss rule exact to degree 5 on [0,1].
    template <class F>
    static void side_points(F f) {
        const double r = std::sqrt(0.15);
        f(5.0 / 18, 0.5 - r);
        f(8.0 / 18, 0.5);
        f(5.0 / 18, 0.5 + r);
    }

    /// Degrees of freedom and values of the shape functions at t along a side.
    void on_side(CellSide side, double t, std::array<Id, 3>& who, std::array<double, 3>& n) const {
        const Id* d = problem.dof.data() + as_size(side.cell) * as_size(mesh.nodes_per_cell);
        who = {d[side.side], d[(side.side + 1) % 3], mesh.order == 2 ? d[3 + side.side] : d[side.side]};
        n = mesh.order == 2 ? std::array{(1 - t) * (1 - 2 * t), t * (2 * t - 1), 4 * t * (1 - t)}
                            : std::array{1 - t, t, 0.0};
    }

    /// 1 in a plane section, the radius in r-z.
    double radius(Index c, double l1, double l2) const {
        if (mesh.frame.power() == 0) return 1.0;
        return (1.0 - l1 - l2) * corner(c, 0).x + l1 * corner(c, 1).x + l2 * corner(c, 2).x;
    }
    double radius(CellSide s, double t) const {
        return mesh.frame.power() == 0 ? 1.0 : (1.0 - t) * corner(s.cell, s.side).x + t * corner(s.cell, s.side + 1).x;
    }

    double area(Index c) const { return 0.5 * cross(corner(c, 1) - corner(c, 0), corner(c, 2) - corner(c, 0)); }
    double length(CellSide s) const { return distance(corner(s.cell, s.side), corner(s.cell, s.side + 1)); }

    std::vector<std::array<double, 3>> tensor; ///< per cell (kxx, kxy, kyy), or empty

    /// Gives every cell a conductivity tensor.
    void conduct_like(std::vector<std::array<double, 3>> k) {
        tensor = std::move(k);
        problem.stretch.resize(3 * tensor.size());
        for (std::size_t c = 0; c < tensor.size(); ++c) {
            const auto& [xx, xy, yy] = tensor[c];
            problem.conductivity[c] = std::sqrt(xx * yy - xy * xy);
            detail::stretch_of(xx, xy, yy, problem.stretch.data() + 3 * c);
        }
    }

    double conduct(Index c, Point a, Point b) const {
        if (tensor.empty()) return problem.conductivity[as_size(c)] * dot(a, b);
        const auto& [xx, xy, yy] = tensor[as_size(c)];
        return a.x * (xx * b.x + xy * b.y) + a.y * (xy * b.x + yy * b.y);
    }

    void assemble() {
        std::vector<Eigen::Triplet<double>> entries;
        load = Eigen::VectorXd::Zero(dofs);
        for (Index c = 0; c < mesh.cell_count(); ++c) {
            const Id* d = problem.dof.data() + as_size(c) * as_size(mesh.nodes_per_cell);
            const double sink = problem.sink.empty() ? 0.0 : problem.sink[as_size(c)];
            const double f =
                problem.source[as_size(c)] + (sink > 0 ? sink * problem.sink_temperature[as_size(c)] : 0.0);
            points([&](double w, double l1, double l2) {
                double n[6];
                Point g[6];
                shapes(c, l1, l2, n, g);
                for (int i = 0; i < mesh.nodes_per_cell; ++i) {
                    load[d[i]] += w * area(c) * radius(c, l1, l2) * f * n[i];
                    for (int j = 0; j < mesh.nodes_per_cell; ++j)
                        entries.emplace_back(d[i], d[j],
                                             w * area(c) * radius(c, l1, l2) *
                                                 (conduct(c, g[i], g[j]) + sink * n[i] * n[j]));
                }
            });
        }
        constexpr int a[6] = {0, 1, 2, 0, 1, 2}, b[6] = {0, 1, 2, 1, 2, 0};
        for (const SpreadSource& w : problem.spread) {
            const Id* d = problem.dof.data() + as_size(w.cell) * as_size(mesh.nodes_per_cell);
            double against[3] = {};
            for (int p = 0; p < 6; ++p) {
                against[a[p]] += w.moment[p];
                if (p > 2) against[b[p]] += w.moment[p];
            }
            for (int p = 0; p < mesh.nodes_per_cell; ++p)
                load[d[p]] += mesh.order == 1 ? against[p] : p > 2 ? 4 * w.moment[p] : 2 * w.moment[p] - against[p];
        }
        for (const FluxSide& s : problem.sides) {
            if (s.kind == SideKind::fixed) continue;
            side_points([&](double w, double t) {
                std::array<Id, 3> who{}, other{};
                std::array<double, 3> n{}, m{};
                on_side(s.side, t, who, n);
                const double l = w * length(s.side) * radius(s.side, t);
                if (s.kind == SideKind::contact) on_side(problem.sides[as_size(s.partner)].side, 1 - t, other, m);
                for (std::size_t i = 0; i < 3; ++i) {
                    load[who[i]] += l * n[i] * (s.film * s.fluid - s.flux);
                    for (std::size_t j = 0; j < 3; ++j) {
                        entries.emplace_back(who[i], who[j], l * s.film * n[i] * n[j]);
                        if (s.kind == SideKind::contact)
                            entries.emplace_back(who[i], other[j], -l * s.film * n[i] * m[j]);
                    }
                }
            });
        }
        matrix.resize(dofs, dofs);
        matrix.setFromTriplets(entries.begin(), entries.end());
    }

    /// Assembles and solves directly.
    std::vector<double> solve() {
        assemble();
        if (held.empty()) prescribe([](Point) { return 0.0; });
        std::vector<Id> free(as_size(dofs), -1);
        Index count = 0;
        for (Index i = 0; i < dofs; ++i)
            if (!held[as_size(i)]) free[as_size(i)] = static_cast<Id>(count++);
        Eigen::VectorXd all = Eigen::VectorXd::Zero(dofs);
        for (Index i = 0; i < dofs; ++i) all[i] = given[as_size(i)];
        const Eigen::VectorXd right = load - matrix * all;
        std::vector<Eigen::Triplet<double>> entries;
        for (Index j = 0; j < matrix.outerSize(); ++j)
            for (Eigen::SparseMatrix<double>::InnerIterator it(matrix, j); it; ++it)
                if (free[as_size(it.row())] >= 0 && free[as_size(j)] >= 0)
                    entries.emplace_back(free[as_size(it.row())], free[as_size(j)], it.value());
        Eigen::SparseMatrix<double> reduced(count, count);
        reduced.setFromTriplets(entries.begin(), entries.end());
        Eigen::VectorXd r(count);
        for (Index i = 0; i < dofs; ++i)
            if (free[as_size(i)] >= 0) r[free[as_size(i)]] = right[i];
        const Eigen::SimplicialLDLT<Eigen::SparseMatrix<double>> factor(reduced);
        Eigen::VectorXd x = factor.solve(r);
        x += factor.solve(r - reduced * x);
        std::vector<double> result(as_size(dofs));
        for (Index i = 0; i < dofs; ++i) result[as_size(i)] = free[as_size(i)] >= 0 ? x[free[as_size(i)]] : all[i];
        return result;
    }

    static Eigen::Map<const Eigen::VectorXd> vector(const std::vector<double>& v) {
        return {v.data(), static_cast<Index>(v.size())};
    }

    /// a(u, v) of two dof vectors; needs assemble().
    double energy(const std::vector<double>& u, const std::vector<double>& v) const {
        return vector(u).dot(matrix * vector(v));
    }
    double work(const std::vector<double>& v) const { return vector(v).dot(load); }

    static std::size_t as_size(Index i) { return static_cast<std::size_t>(i); }

  private:
    /// One dof per node and set of cells joined around it through sides that are not listed.
    void number_dofs() {
        const auto behind = detail::side_neighbours(problem);
        std::vector<Id> parent(mesh.cells.size());
        std::iota(parent.begin(), parent.end(), 0);
        const auto root = [&](Id i) {
            while (parent[as_size(i)] != i) i = parent[as_size(i)] = parent[as_size(parent[as_size(i)])];
            return i;
        };
        const Id per_cell = mesh.nodes_per_cell;
        for (Index c = 0; c < mesh.cell_count(); ++c)
            for (Id s = 0; s < 3; ++s) {
                const Id other = behind[as_size(3 * c + s)];
                if (other < 0) continue;
                const Id mine = static_cast<Id>(c) * per_cell, theirs = other / 3 * per_cell, r = other % 3;
                parent[as_size(root(mine + s))] = root(theirs + (r + 1) % 3);
                parent[as_size(root(mine + (s + 1) % 3))] = root(theirs + r);
                if (mesh.order == 2) parent[as_size(root(mine + 3 + s))] = root(theirs + 3 + r);
            }
        std::vector<Id> number(mesh.cells.size(), -1);
        problem.dof.resize(mesh.cells.size());
        Id next = 0;
        for (std::size_t i = 0; i < problem.dof.size(); ++i) {
            Id& n = number[as_size(root(static_cast<Id>(i)))];
            if (n < 0) n = next++;
            problem.dof[i] = n;
        }
        dofs = next;
        held.clear();
    }
};

} // namespace tepor::test
