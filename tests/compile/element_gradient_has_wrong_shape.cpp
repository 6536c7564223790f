// expect: (E::gradient\(xi\).+does not satisfy return-type-requirement|same_as<Eigen::Matrix<double, 1, 2, 1>.+was not satisfied)
// An element whose gradient() returns a row per direction, not per node, is refused at the door.
#include <array>
#include <tepor/element/map.hpp>

struct Turned {
    static constexpr int dim = 1;
    static constexpr int order = 1;
    static constexpr int nodes = 2;
    static constexpr int sides = 2;
    static constexpr tepor::CellShape shape_of_cell = tepor::CellShape::segment;
    using Side = tepor::PointSide;
    using point = Eigen::Matrix<double, 1, 1>;
    static Eigen::Matrix<double, 2, 1> shape(const point& xi) { return {1.0 - xi[0], xi[0]}; }
#ifdef TEPOR_WRONG
    static Eigen::Matrix<double, 1, 2> gradient(const point&) {
        return {-1.0, 1.0};
    }
#else
    static Eigen::Matrix<double, 2, 1> gradient(const point&) {
        return {-1.0, 1.0};
    }
#endif
    static point reference_node(int i) {
        return point(static_cast<double>(i));
    }
    static int side_node(int s, int) {
        return s;
    }
};

tepor::Point middle() {
    const std::array<tepor::Point, 2> ends{tepor::Point{0.0, 0.0}, tepor::Point{0.3, 0.0}};
    return tepor::place<Turned>(ends, Turned::point(0.5));
}
