// A Galerkin solver of one's own, put together by hand: element, rule, mesh, element matrices, any sparse solver.
// A heated bar of square section, sides at 0 degC: by how much is its middle hotter?

#include <Eigen/SparseCholesky>
#include <array>
#include <cmath>
#include <fmt/core.h>
#include <tepor/assembly/element_matrices.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/quadrature/rules.hpp>
#include <vector>
using namespace tepor;

int main() {
    using E = Quadrilateral<2>;
    constexpr double side = 1.0;       // m
    constexpr double k = 1.0;          // W/(m K)
    constexpr double generation = 1.0; // W/m3

    Tiles drawing;
    drawing.add("bar", {0.0, 0.0}, {side, side});
    const Mesh<E> mesh = tiles<E>(drawing, {.size = side / 16});
    const Rule<2> rule = rule_for<E>(2 * E::order);

    std::vector<Eigen::Triplet<double>> entries;
    const auto n = static_cast<Eigen::Index>(mesh.nodes.size());
    Eigen::VectorXd load = Eigen::VectorXd::Zero(n);
    const auto held = [](Point p) { return p.x == 0.0 || p.x == side || p.y == 0.0 || p.y == side; };
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id* ids = mesh.cell(c);
        std::array<Point, E::nodes> x;
        for (std::size_t i = 0; i < x.size(); ++i) x[i] = mesh.nodes[static_cast<std::size_t>(ids[i])];
        const ElementMatrix<E> K = conduction_matrix<E>(x, k, rule);
        const ElementVector<E> F = load_vector<E>(x, generation, rule);
        for (int i = 0; i < E::nodes; ++i) {
            if (held(x[static_cast<std::size_t>(i)])) continue; // T = 0 there: neither row nor column
            load[ids[i]] += F[i];
            for (int j = 0; j < E::nodes; ++j)
                if (!held(x[static_cast<std::size_t>(j)])) entries.emplace_back(ids[i], ids[j], K(i, j));
        }
    }
    for (Eigen::Index i = 0; i < n; ++i)
        if (held(mesh.nodes[static_cast<std::size_t>(i)])) entries.emplace_back(i, i, 1.0);
    Eigen::SparseMatrix<double> matrix(n, n);
    matrix.setFromTriplets(entries.begin(), entries.end());
    const Eigen::SimplicialLDLT<Eigen::SparseMatrix<double>> solver(matrix);
    const Eigen::VectorXd T = solver.solve(load);

    double middle = 0.0;
    for (Eigen::Index i = 0; i < n; ++i) {
        const Point p = mesh.nodes[static_cast<std::size_t>(i)];
        if (std::abs(p.x - 0.5) + std::abs(p.y - 0.5) < 1e-12) middle = T[i];
    }
    // by hand: the series of the same equation in the torsion of a square bar, S. P. Timoshenko, J. N. Goodier, Theory of
    // Elasticity, 3rd ed., section 109: T = f side^2 / k (1/8 - 4 / pi^3 sum (-1)^((n-1)/2) / (n^3 cosh(n pi / 2))), n odd
    double series = 0.125;
    for (int odd = 1; odd < 40; odd += 2)
        series -= 4.0 / std::pow(pi, 3) * (odd % 4 == 1 ? 1.0 : -1.0) / (std::pow(odd, 3) * std::cosh(0.5 * pi * odd));
    fmt::print("middle {:.7f} K above the sides, series {:.7f}\n", middle, series);
    return std::abs(middle - series) < 2e-7 ? 0 : 1;
}
