#pragma once
// The Element concept: shape functions on a reference cell, its nodes and its sides.

#include <Eigen/Core>
#include <array>
#include <concepts>
#include <tepor/base/numbers.hpp>

namespace tepor {

/// Reference cells: [0,1]; the triangle (0,0) (1,0) (0,1); the unit square.
enum class CellShape : int { point, segment, triangle, quadrilateral };

/// The side of a 1D cell: a single node.
struct PointSide {
    static constexpr int dim = 0;
    static constexpr int order = 0;
    static constexpr int nodes = 1;
    static constexpr CellShape shape_of_cell = CellShape::point;
};

/// Shape functions on a reference cell.
///
/// | member | meaning |
/// |---|---|
/// | `E::dim`, `E::order`, `E::nodes` | dimension 1 or 2, polynomial order P, number of nodes |
/// | `E::shape_of_cell` | the reference cell |
/// | `E::point` | Eigen column vector of `dim` reference coordinates |
/// | `E::shape(xi)` | the `nodes` shape functions at xi |
/// | `E::gradient(xi)` | nodes x dim, derivatives by the reference coordinates |
/// | `E::reference_node(i)` | reference coordinates of node i |
/// | `E::Side`, `E::sides` | element type of a side (`Segment<P>`-like, or `PointSide` in 1D) and number of sides |
/// | `E::side_node(s, j)` | local node that is node j of side s, in the node order of `Side` |
///
/// Node order: vertices first (counter-clockwise), then the inner nodes of side 0, 1, ... walked from its first to its
/// second vertex, then inner nodes. Side s joins vertices s and s + 1 (cyclic) with the cell on its left; in 1D side 0 is
/// the left end. Also promised, and checked by the contract tests: the shape functions sum to 1, shape i is 1 at node i
/// and 0 at the others, gradient() is the derivative of shape(), polynomials of degree P are reproduced.
template <class E>
concept Element = requires(const typename E::point& xi, int i) {
    typename E::Side;
    { E::dim } -> std::convertible_to<int>;
    { E::order } -> std::convertible_to<int>;
    { E::nodes } -> std::convertible_to<int>;
    { E::sides } -> std::convertible_to<int>;
    { E::shape_of_cell } -> std::convertible_to<CellShape>;
    { E::shape(xi) } -> std::same_as<Eigen::Matrix<double, E::nodes, 1>>;
    { E::gradient(xi) } -> std::same_as<Eigen::Matrix<double, E::nodes, E::dim>>;
    { E::reference_node(i) } -> std::same_as<typename E::point>;
    { E::side_node(i, i) } -> std::convertible_to<int>;
    { E::Side::nodes } -> std::convertible_to<int>;
};

} // namespace tepor
