// expect: (required expression .+E::side_node\(i, i\).+ is invalid|no member named 'side_node')
// An element that misses a member is refused at the door, and the compiler names the member.
#include <array>
#include <tepor/element/map.hpp>

struct Almost {
    static constexpr int dim = 1;
    static constexpr int order = 1;
    static constexpr int nodes = 2;
    static constexpr int sides = 2;
    static constexpr tepor::CellShape shape_of_cell = tepor::CellShape::segment;
    using Side = tepor::PointSide;
    using point = Eigen::Matrix<double, 1, 1>;
    static Eigen::Matrix<double, 2, 1> shape(const point& xi) { return {1.0 - xi[0], xi[0]}; }
    static Eigen::Matrix<double, 2, 1> gradient(const point&) { return {-1.0, 1.0}; }
    static point reference_node(int i) { return point(static_cast<double>(i)); }
#ifndef TEPOR_WRONG
    static int side_node(int s, int) {
        return s;
    }
#endif
};

tepor::Point middle() {
    const std::array<tepor::Point, 2> ends{tepor::Point{0.0, 0.0}, tepor::Point{0.3, 0.0}};
    return tepor::place<Almost>(ends, Almost::point(0.5));
}
