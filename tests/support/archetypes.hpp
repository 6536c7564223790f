#pragma once
// Types with nothing beyond what a concept asks for: templates that take more than the contract fail to compile on them.

#include <Eigen/Core>
#include <tepor/element/concept.hpp>

namespace tepor::test {

/// The straight two-node segment, bare: no instances, no members but those of the Element concept.
struct BareSegment {
    BareSegment() = delete;
    static constexpr int dim = 1;
    static constexpr int order = 1;
    static constexpr int nodes = 2;
    static constexpr int sides = 2;
    static constexpr CellShape shape_of_cell = CellShape::segment;
    using Side = PointSide;
    using point = Eigen::Matrix<double, 1, 1>;
    static Eigen::Matrix<double, 2, 1> shape(const point& xi) { return {1.0 - xi[0], xi[0]}; }
    static Eigen::Matrix<double, 2, 1> gradient(const point&) { return {-1.0, 1.0}; }
    static point reference_node(int i) { return point(i == 0 ? 0.0 : 1.0); }
    static int side_node(int s, int) { return s; }
};

/// The three-node triangle, bare; its sides are BareSegments.
struct BareTriangle {
    BareTriangle() = delete;
    static constexpr int dim = 2;
    static constexpr int order = 1;
    static constexpr int nodes = 3;
    static constexpr int sides = 3;
    static constexpr CellShape shape_of_cell = CellShape::triangle;
    using Side = BareSegment;
    using point = Eigen::Matrix<double, 2, 1>;
    static Eigen::Matrix<double, 3, 1> shape(const point& xi) { return {1.0 - xi[0] - xi[1], xi[0], xi[1]}; }
    static Eigen::Matrix<double, 3, 2> gradient(const point&) {
        Eigen::Matrix<double, 3, 2> g;
        g << -1.0, -1.0, 1.0, 0.0, 0.0, 1.0;
        return g;
    }
    static point reference_node(int i) { return {i == 1 ? 1.0 : 0.0, i == 2 ? 1.0 : 0.0}; }
    static int side_node(int s, int j) { return (s + j) % 3; }
};

static_assert(Element<BareSegment>);
static_assert(Element<BareTriangle>);

} // namespace tepor::test
