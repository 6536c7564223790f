#pragma once
// Segment<P>: the Lagrange element of order P on [0,1].

#include <Eigen/Core>
#include <array>
#include <tepor/base/numbers.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/element/lagrange.hpp>

namespace tepor {

/// Lagrange element on [0,1] with P + 1 equispaced nodes: both ends, then the inner nodes from left to right.
template <int P>
struct Segment {
    static_assert(P >= 1 && P <= 3, "Segment<P> comes in the orders 1, 2 and 3");

    static constexpr int dim = 1;
    static constexpr int order = P;
    static constexpr int nodes = P + 1;
    static constexpr int sides = 2;
    static constexpr CellShape shape_of_cell = CellShape::segment;
    using Side = PointSide;
    using point = Eigen::Matrix<double, 1, 1>;

    /// Shape functions in any scalar, such as dual numbers.
    template <class Scalar>
    static std::array<Scalar, detail::as_size(nodes)> values(const std::array<Scalar, 1>& xi) {
        std::array<Scalar, detail::as_size(nodes)> n{};
        for (int i = 0; i < nodes; ++i) n[detail::as_size(i)] = detail::lagrange<P>(lattice(i), xi[0]);
        return n;
    }

    static Eigen::Matrix<double, nodes, 1> shape(const point& xi) {
        Eigen::Matrix<double, nodes, 1> n;
        for (int i = 0; i < nodes; ++i) n[i] = detail::lagrange<P>(lattice(i), xi[0]);
        return n;
    }

    static Eigen::Matrix<double, nodes, 1> gradient(const point& xi) {
        Eigen::Matrix<double, nodes, 1> g;
        for (int i = 0; i < nodes; ++i) g[i] = detail::lagrange_slope<P>(lattice(i), xi[0]).slope;
        return g;
    }

    static point reference_node(int i) { return point(static_cast<double>(lattice(i)) / P); }

    /// The end node of side s: 0 left, 1 right.
    static constexpr int side_node(int s, int /*j*/) { return s; }

    /// Place of node i on the lattice 0..P from left to right.
    static constexpr int lattice(int i) { return i == 0 ? 0 : i == 1 ? P : i - 1; }
};

} // namespace tepor
