#pragma once
// An element of a user's own, defined outside the library: the eight-node quadrilateral.

#include <Eigen/Core>
#include <array>
#include <tepor/element/concept.hpp>
#include <tepor/element/segment.hpp>

namespace tepor::test {

/// Eight-node quadrilateral on the unit square: four vertices and the middles of the sides; contains all polynomials of
/// degree 2 but not the term x^2 y^2.
/// Source: I. Ergatoudis, B. M. Irons, O. C. Zienkiewicz, Int. J. Solids and Structures 4 (1968) 31-42.
struct Serendipity8 {
    static constexpr int dim = 2;
    static constexpr int order = 2;
    static constexpr int nodes = 8;
    static constexpr int sides = 4;
    static constexpr CellShape shape_of_cell = CellShape::quadrilateral;
    using Side = Segment<2>;
    using point = Eigen::Matrix<double, 2, 1>;

    static Eigen::Matrix<double, 8, 1> shape(const point& xi) {
        const double s = 2.0 * xi[0] - 1.0;
        const double t = 2.0 * xi[1] - 1.0;
        Eigen::Matrix<double, 8, 1> n;
        for (int i = 0; i < 4; ++i) {
            const auto [a, b] = sign(i);
            n[i] = 0.25 * (1.0 + a * s) * (1.0 + b * t) * (a * s + b * t - 1.0);
        }
        n[4] = 0.5 * (1.0 - s * s) * (1.0 - t);
        n[5] = 0.5 * (1.0 - t * t) * (1.0 + s);
        n[6] = 0.5 * (1.0 - s * s) * (1.0 + t);
        n[7] = 0.5 * (1.0 - t * t) * (1.0 - s);
        return n;
    }

    static Eigen::Matrix<double, 8, 2> gradient(const point& xi) {
        const double s = 2.0 * xi[0] - 1.0;
        const double t = 2.0 * xi[1] - 1.0;
        Eigen::Matrix<double, 8, 2> g; // by s and t, doubled at the end
        for (int i = 0; i < 4; ++i) {
            const auto [a, b] = sign(i);
            g(i, 0) = 0.25 * a * (1.0 + b * t) * (2.0 * a * s + b * t);
            g(i, 1) = 0.25 * b * (1.0 + a * s) * (a * s + 2.0 * b * t);
        }
        g.row(4) << -s * (1.0 - t), -0.5 * (1.0 - s * s);
        g.row(5) << 0.5 * (1.0 - t * t), -t * (1.0 + s);
        g.row(6) << -s * (1.0 + t), 0.5 * (1.0 - s * s);
        g.row(7) << -0.5 * (1.0 - t * t), -t * (1.0 - s);
        return 2.0 * g;
    }

    static point reference_node(int i) {
        if (i < 4) return {0.5 + 0.5 * sign(i)[0], 0.5 + 0.5 * sign(i)[1]};
        return 0.5 * (reference_node(i - 4) + reference_node((i - 3) % 4));
    }

    static constexpr int side_node(int s, int j) { return j == 0 ? s : j == 1 ? (s + 1) % 4 : 4 + s; }

  private:
    static std::array<double, 2> sign(int vertex) {
        return {vertex == 1 || vertex == 2 ? 1.0 : -1.0, vertex >= 2 ? 1.0 : -1.0};
    }
};

static_assert(Element<Serendipity8>);

} // namespace tepor::test
