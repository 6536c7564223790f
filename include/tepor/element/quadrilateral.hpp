#pragma once
// Quadrilateral<P>: the Lagrange element of order P in each coordinate on the unit square.

#include <Eigen/Core>
#include <array>
#include <tepor/base/numbers.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/element/lagrange.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>

namespace tepor {
namespace detail {

/// Lattice places of the quadrilateral's nodes in the order of the Element concept.
template <int P>
constexpr std::array<Lattice, as_size((P + 1) * (P + 1))> quadrilateral_lattice() {
    std::array<Lattice, as_size((P + 1) * (P + 1))> nodes{};
    std::size_t n = 0;
    nodes[n++] = {0, 0};
    nodes[n++] = {P, 0};
    nodes[n++] = {P, P};
    nodes[n++] = {0, P};
    for (int k = 1; k < P; ++k) nodes[n++] = {k, 0};
    for (int k = 1; k < P; ++k) nodes[n++] = {P, k};
    for (int k = 1; k < P; ++k) nodes[n++] = {P - k, P};
    for (int k = 1; k < P; ++k) nodes[n++] = {0, P - k};
    for (int j = 1; j < P; ++j)
        for (int i = 1; i < P; ++i) nodes[n++] = {i, j};
    return nodes;
}

} // namespace detail

/// Lagrange element on the unit square with equispaced nodes: four vertices, the inner nodes of the four sides, then the
/// inner nodes row by row.
template <int P>
struct Quadrilateral {
    static_assert(P >= 1 && P <= 3, "Quadrilateral<P> comes in the orders 1, 2 and 3");

    static constexpr int dim = 2;
    static constexpr int order = P;
    static constexpr int nodes = (P + 1) * (P + 1);
    static constexpr int sides = 4;
    static constexpr CellShape shape_of_cell = CellShape::quadrilateral;
    using Side = Segment<P>;
    using point = Eigen::Matrix<double, 2, 1>;

    /// Shape functions in any scalar, such as dual numbers.
    template <class Scalar>
    static std::array<Scalar, detail::as_size(nodes)> values(const std::array<Scalar, 2>& xi) {
        std::array<Scalar, detail::as_size(nodes)> n{};
        for (std::size_t a = 0; a < n.size(); ++a) {
            const auto [i, j] = lattice[a];
            n[a] = detail::lagrange<P>(i, xi[0]) * detail::lagrange<P>(j, xi[1]);
        }
        return n;
    }

    static Eigen::Matrix<double, nodes, 1> shape(const point& xi) {
        const auto n = values<double>({xi[0], xi[1]});
        return Eigen::Map<const Eigen::Matrix<double, nodes, 1>>(n.data());
    }

    static Eigen::Matrix<double, nodes, 2> gradient(const point& xi) {
        Eigen::Matrix<double, nodes, 2> g;
        for (int a = 0; a < nodes; ++a) {
            const auto [i, j] = lattice[detail::as_size(a)];
            const auto x = detail::lagrange_slope<P>(i, xi[0]);
            const auto y = detail::lagrange_slope<P>(j, xi[1]);
            g(a, 0) = x.slope * y.value;
            g(a, 1) = x.value * y.slope;
        }
        return g;
    }

    static point reference_node(int a) {
        const auto [i, j] = lattice[detail::as_size(a)];
        return {static_cast<double>(i) / P, static_cast<double>(j) / P};
    }

    static constexpr int side_node(int s, int j) {
        if (j == 0) return s;
        if (j == 1) return (s + 1) % 4;
        return 4 + s * (P - 1) + j - 2;
    }

    /// Node a stands at (lattice[a].i, lattice[a].j) / P.
    static constexpr auto lattice = detail::quadrilateral_lattice<P>();
};

} // namespace tepor
