#pragma once
// Triangle<P>: the Lagrange element of order P on the triangle (0,0) (1,0) (0,1).

#include <Eigen/Core>
#include <array>
#include <tepor/base/numbers.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/element/lagrange.hpp>
#include <tepor/element/segment.hpp>

namespace tepor {
namespace detail {

/// A node on the lattice of step 1 / P.
struct Lattice {
    int i = 0;
    int j = 0;
};

/// Lattice places of the triangle's nodes in the order of the Element concept.
template <int P>
constexpr std::array<Lattice, as_size((P + 1) * (P + 2) / 2)> triangle_lattice() {
    std::array<Lattice, as_size((P + 1) * (P + 2) / 2)> nodes{};
    std::size_t n = 0;
    nodes[n++] = {0, 0};
    nodes[n++] = {P, 0};
    nodes[n++] = {0, P};
    for (int k = 1; k < P; ++k) nodes[n++] = {k, 0};
    for (int k = 1; k < P; ++k) nodes[n++] = {P - k, k};
    for (int k = 1; k < P; ++k) nodes[n++] = {0, P - k};
    for (int j = 1; j < P; ++j)
        for (int i = 1; i + j < P; ++i) nodes[n++] = {i, j};
    return nodes;
}

} // namespace detail

/// Lagrange element on the triangle (0,0) (1,0) (0,1) with equispaced nodes: three vertices, the inner nodes of the three
/// sides, then the inner nodes row by row.
template <int P>
struct Triangle {
    static_assert(P >= 1 && P <= 3, "Triangle<P> comes in the orders 1, 2 and 3");

    static constexpr int dim = 2;
    static constexpr int order = P;
    static constexpr int nodes = (P + 1) * (P + 2) / 2;
    static constexpr int sides = 3;
    static constexpr CellShape shape_of_cell = CellShape::triangle;
    using Side = Segment<P>;
    using point = Eigen::Matrix<double, 2, 1>;

    /// Shape functions in any scalar, such as dual numbers.
    template <class Scalar>
    static std::array<Scalar, detail::as_size(nodes)> values(const std::array<Scalar, 2>& xi) {
        std::array<Scalar, detail::as_size(nodes)> n{};
        for (std::size_t a = 0; a < n.size(); ++a) {
            const auto [i, j] = lattice[a];
            n[a] = detail::silvester<P, Scalar>(i, xi[0]) * detail::silvester<P, Scalar>(j, xi[1]) *
                   detail::silvester<P, Scalar>(P - i - j, 1.0 - xi[0] - xi[1]);
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
            const auto x = detail::silvester_slope<P>(i, xi[0]);
            const auto y = detail::silvester_slope<P>(j, xi[1]);
            const auto z = detail::silvester_slope<P>(P - i - j, 1.0 - xi[0] - xi[1]);
            g(a, 0) = (x.slope * z.value - x.value * z.slope) * y.value;
            g(a, 1) = (y.slope * z.value - y.value * z.slope) * x.value;
        }
        return g;
    }

    static point reference_node(int a) {
        const auto [i, j] = lattice[detail::as_size(a)];
        return {static_cast<double>(i) / P, static_cast<double>(j) / P};
    }

    static constexpr int side_node(int s, int j) {
        if (j == 0) return s;
        if (j == 1) return (s + 1) % 3;
        return 3 + s * (P - 1) + j - 2;
    }

    /// Node a stands at (lattice[a].i, lattice[a].j) / P.
    static constexpr auto lattice = detail::triangle_lattice<P>();
};

} // namespace tepor
