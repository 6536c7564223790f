#pragma once
// The map of a cell from its reference cell: place, Jacobian, and its inverse by Newton.

#include <Eigen/Core>
#include <algorithm>
#include <cmath>
#include <span>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/element/concept.hpp>

namespace tepor {

/// Node coordinates [m] of one cell, in the node order of E; an array of Point converts to it.
template <class E>
using CellNodes = std::span<const Point, detail::as_size(E::nodes)>;

/// Place [m] of the reference point xi.
template <Element E>
Point place(CellNodes<E> x, const typename E::point& xi) {
    const auto n = E::shape(xi);
    Point p;
    for (int i = 0; i < E::nodes; ++i) p = p + n[i] * x[detail::as_size(i)];
    return p;
}

/// J(a, b) = derivative of coordinate a by the reference coordinate b [m]; dim x dim.
template <Element E>
Eigen::Matrix<double, E::dim, E::dim> jacobian(CellNodes<E> x, const typename E::point& xi) {
    const auto g = E::gradient(xi);
    Eigen::Matrix<double, E::dim, E::dim> j = Eigen::Matrix<double, E::dim, E::dim>::Zero();
    for (int i = 0; i < E::nodes; ++i)
        for (int b = 0; b < E::dim; ++b) {
            j(0, b) += x[detail::as_size(i)].x * g(i, b);
            if constexpr (E::dim == 2) j(1, b) += x[detail::as_size(i)].y * g(i, b);
        }
    return j;
}

/// Determinant of a 1 x 1 or 2 x 2 matrix.
template <int Dim>
double determinant(const Eigen::Matrix<double, Dim, Dim>& j) noexcept {
    if constexpr (Dim == 1)
        return j(0, 0);
    else
        return j(0, 0) * j(1, 1) - j(0, 1) * j(1, 0);
}

/// Reference coordinates of the point t in [0,1] of side s, walked from its first to its second vertex; in 1D the end node.
/// The sides of a reference cell are straight, whatever the order.
template <Element E>
typename E::point side_point(int s, double t) {
    if constexpr (E::dim == 1)
        return E::reference_node(E::side_node(s, 0));
    else
        return (1.0 - t) * E::reference_node(E::side_node(s, 0)) + t * E::reference_node(E::side_node(s, 1));
}

/// How far xi lies outside the reference cell: the largest breach of its bounds, <= 0 inside.
template <Element E>
double outside_by(const typename E::point& xi) noexcept {
    double breach = -xi[0];
    if constexpr (E::dim == 2) breach = std::max(breach, -xi[1]);
    if constexpr (E::shape_of_cell == CellShape::triangle) return std::max(breach, xi[0] + xi[1] - 1.0);
    breach = std::max(breach, xi[0] - 1.0);
    if constexpr (E::dim == 2) breach = std::max(breach, xi[1] - 1.0);
    return breach;
}

/// The answer of inverse_map.
template <Element E>
struct ReferencePlace {
    typename E::point xi;
    bool converged = false; ///< false: no reference point found, such as far outside a curved cell
    int steps = 0;          ///< of Newton; the last one confirms
};

/// Reference coordinates of the place p: Newton from the middle of the cell, one step and one to confirm for
/// affine cells.
///
/// Converged when a step moves xi by less than 1e-13. Points outside the cell are followed a little way (a reference
/// coordinate beyond 3 gives up), so that the caller can judge with outside_by(). No allocation.
template <Element E>
ReferencePlace<E> inverse_map(CellNodes<E> x, Point p) {
    ReferencePlace<E> found;
    found.xi.setConstant(E::shape_of_cell == CellShape::triangle ? 1.0 / 3.0 : 0.5);
    double previous = 1e300;
    for (int pass = 0; pass < 30; ++pass) {
        const Point r = p - place<E>(x, found.xi);
        const auto j = jacobian<E>(x, found.xi);
        const double d = determinant<E::dim>(j);
        if (!(std::abs(d) > 0.0)) return found;
        typename E::point step;
        if constexpr (E::dim == 1) {
            step[0] = r.x / d;
        } else {
            step[0] = (j(1, 1) * r.x - j(0, 1) * r.y) / d;
            step[1] = (j(0, 0) * r.y - j(1, 0) * r.x) / d;
        }
        found.xi += step;
        ++found.steps;
        const double moved = step.cwiseAbs().maxCoeff();
        if (!(found.xi.cwiseAbs().maxCoeff() < 3.0)) return found;
        // Close to rounding the steps stop shrinking: on cells far from the origin that is the best there is.
        if (moved < 1e-13 || (moved < 1e-9 && moved >= previous)) {
            found.converged = true;
            return found;
        }
        previous = moved;
    }
    return found;
}

} // namespace tepor
