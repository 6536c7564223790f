#pragma once
// Matrices and loads of one element, for those who compose their own Galerkin solver.

#include <Eigen/Core>
#include <cmath>
#include <concepts>
#include <tepor/base/error.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/base/point.hpp>
#include <tepor/base/text.hpp>
#include <tepor/element/map.hpp>
#include <tepor/quadrature/rule.hpp>
#include <type_traits>

namespace tepor {

/// nodes x nodes, and nodes entries, in the node order of E; the same for a side in the node order of E::Side.
template <class E>
using ElementMatrix = Eigen::Matrix<double, E::nodes, E::nodes>;
template <class E>
using ElementVector = Eigen::Matrix<double, E::nodes, 1>;

/// A number, or a callable that is given the place [m] of a quadrature point and returns one.
template <class F>
concept Placed = std::convertible_to<F, double> || std::is_invocable_r_v<double, const F&, Point>;

/// A conductivity: Placed, or a callable that returns the tensor (dim x dim) at a place.
template <class F, class E>
concept PlacedConductivity = Placed<F> || std::is_invocable_r_v < Eigen::Matrix<double, E::dim, E::dim>,
const F&, Point > ;

/// Conduction matrix of one element, K(i, j) = integral of k grad N_i . grad N_j over the element.
///
///     const std::array<Point, 3> x{{{0, 0}, {0.1, 0}, {0, 0.1}}};
///     const auto K = conduction_matrix<Triangle<1>>(x, 45.0, rule_for<Triangle<1>>(2), Planar{.depth = 0.4});
///
/// @param x      node coordinates [m], in the order of E
/// @param k      conductivity [W/(m K)]: a number > 0, or a callable of Point returning one or a symmetric tensor
/// @param rule   quadrature on the reference cell of E; 2 order - 2 + degree of k and frame is exact on straight simplices
/// @param frame  what the coordinates stand for; its size multiplies the result
/// @return   K [W/K], nodes x nodes, symmetric, each row sums to zero
/// @throws   Error  bad_value     k is not finite or not positive (of a tensor: its diagonal)
///                  bad_geometry  the Jacobian determinant is not positive at a quadrature point
/// Cost      O(points nodes^2 dim); no heap allocation
/// Source    Galerkin's method, DEVELOPERS.md, "The weak form"; checked in tests/unit/assembly/element_matrices.cpp
template <Element E, QuadratureRule R, PlacedConductivity<E> K>
ElementMatrix<E> conduction_matrix(CellNodes<E> x, const K& k, const R& rule, const Frame& frame = {});

/// Capacity matrix of one element, M(i, j) = integral of c N_i N_j, with c = density times specific heat [J/(m3 K)] (or the
/// strength of a loss c T [W/(m3 K)]).
/// @param rule  degree 2 order + degree of c and frame is exact on straight cells
/// @return   M [J/K], symmetric; all its entries sum to the heat capacity of the element
/// @throws   Error  bad_value (c not finite), bad_geometry
/// Cost      O(points nodes^2); no heap allocation
template <Element E, QuadratureRule R, Placed C>
ElementMatrix<E> capacity_matrix(CellNodes<E> x, const C& c, const R& rule, const Frame& frame = {});

/// Load of a source f [W/m3], F(i) = integral of f N_i [W].
/// @throws   Error  bad_value (f not finite), bad_geometry
/// Cost      O(points nodes); no heap allocation
template <Element E, QuadratureRule R, Placed F>
ElementVector<E> load_vector(CellNodes<E> x, const F& f, const R& rule, const Frame& frame = {});

/// Film matrix of side s, H(i, j) = integral over the side of h N_i N_j [W/K], h [W/(m2 K)]; side nodes x side nodes.
/// @param rule  quadrature on [0, 1]; a 1D cell has points as sides and does not ask it
/// @throws   Error  bad_value (h not finite or < 0)
/// Cost      O(points side nodes^2); no heap allocation
template <Element E, QuadratureRule R, Placed H>
ElementMatrix<typename E::Side> film_matrix(CellNodes<E> x, int s, const H& h, const R& rule, const Frame& frame = {});

/// Load of a flux q [W/m2] into side s, F(i) = integral over the side of q N_i [W]; of a film, q = h times the fluid's temperature.
/// @throws   Error  bad_value (q not finite)
/// Cost      O(points side nodes); no heap allocation
template <Element E, QuadratureRule R, Placed Q>
ElementVector<typename E::Side> side_load_vector(CellNodes<E> x, int s, const Q& q, const R& rule,
                                                 const Frame& frame = {});

// ---------------------------------------------------------------------------------------------------------------------

namespace detail {

template <class F>
double value_at(const F& f, Point p, const char* name) {
    double v = 0.0;
    if constexpr (std::convertible_to<F, double>)
        v = static_cast<double>(f);
    else
        v = static_cast<double>(f(p));
    if (!std::isfinite(v))
        throw Error(ErrorCode::bad_value, name,
                    text(name, " = ", v, " at (", p.x, ", ", p.y, "), expected a finite number"));
    return v;
}

inline double measure_at(const Frame& frame, int dim, double r) noexcept {
    double m = frame.factor(dim);
    for (int power = 0; power < frame.power(); ++power) m *= r;
    return m;
}

/// Calls `add(shape, gradient by the coordinates, weight with the frame's measure, place)` at every point of the rule.
template <Element E, class R, class Add>
void at_points(CellNodes<E> x, const R& rule, const Frame& frame, Add add) {
    static_assert(R::dim == E::dim, "the rule is for another dimension than the element");
    for (Index q = 0; q < rule.size(); ++q) {
        const typename E::point xi = rule.point(q);
        const auto j = jacobian<E>(x, xi);
        const double det = determinant<E::dim>(j);
        const Point p = place<E>(x, xi);
        if (!(det > 0.0))
            throw Error(ErrorCode::bad_geometry, "element",
                        text("the element has Jacobian determinant ", det, " at (", p.x, ", ", p.y,
                             "), expected > 0; list its nodes counter-clockwise, in 1D from left to right"));
        const auto g = E::gradient(xi);
        Eigen::Matrix<double, E::nodes, E::dim> gradient;
        for (int i = 0; i < E::nodes; ++i) {
            if constexpr (E::dim == 1) {
                gradient(i, 0) = g(i, 0) / det;
            } else {
                gradient(i, 0) = (j(1, 1) * g(i, 0) - j(1, 0) * g(i, 1)) / det;
                gradient(i, 1) = (j(0, 0) * g(i, 1) - j(0, 1) * g(i, 0)) / det;
            }
        }
        add(E::shape(xi), gradient, rule.weight(q) * det * measure_at(frame, E::dim, p.x), p);
    }
}

/// Calls `add(shape of the side, weight with the frame's measure, place)` at every point of the rule on side s.
template <Element E, class R, class Add>
void at_side_points(CellNodes<E> x, int s, const R& rule, const Frame& frame, Add add) {
    if constexpr (E::dim == 1) {
        const Point p = x[as_size(E::side_node(s, 0))];
        add(Eigen::Matrix<double, 1, 1>::Ones().eval(), measure_at(frame, 1, p.x), p);
    } else {
        using Side = typename E::Side;
        static_assert(R::dim == 1, "the rule of a side is one on [0, 1]");
        for (Index q = 0; q < rule.size(); ++q) {
            const typename Side::point t = rule.point(q);
            const auto n = Side::shape(t);
            const auto g = Side::gradient(t);
            Point p;
            Point along;
            for (int i = 0; i < Side::nodes; ++i) {
                p = p + n[i] * x[as_size(E::side_node(s, i))];
                along = along + g(i, 0) * x[as_size(E::side_node(s, i))];
            }
            add(n, rule.weight(q) * std::sqrt(dot(along, along)) * measure_at(frame, 2, p.x), p);
        }
    }
}

} // namespace detail

template <Element E, QuadratureRule R, PlacedConductivity<E> K>
ElementMatrix<E> conduction_matrix(CellNodes<E> x, const K& k, const R& rule, const Frame& frame) {
    ElementMatrix<E> out = ElementMatrix<E>::Zero();
    detail::at_points<E>(x, rule, frame, [&](const auto&, const auto& g, double weight, Point p) {
        const auto positive = [&](double v) {
            if (!(v > 0.0 && std::isfinite(v)))
                throw Error(ErrorCode::bad_value, "k",
                            detail::text("k = ", v, " at (", p.x, ", ", p.y, "), expected a finite number > 0"));
        };
        if constexpr (Placed<K>) {
            const double here = detail::value_at(k, p, "k");
            positive(here);
            out.noalias() += (weight * here) * (g * g.transpose());
        } else {
            const Eigen::Matrix<double, E::dim, E::dim> here = k(p);
            for (int d = 0; d < E::dim; ++d) positive(here(d, d));
            const Eigen::Matrix<double, E::nodes, E::dim> flux = weight * (g * here);
            out.noalias() += flux * g.transpose();
        }
    });
    return out;
}

template <Element E, QuadratureRule R, Placed C>
ElementMatrix<E> capacity_matrix(CellNodes<E> x, const C& c, const R& rule, const Frame& frame) {
    ElementMatrix<E> out = ElementMatrix<E>::Zero();
    detail::at_points<E>(x, rule, frame, [&](const auto& n, const auto&, double weight, Point p) {
        out.noalias() += (weight * detail::value_at(c, p, "c")) * (n * n.transpose());
    });
    return out;
}

template <Element E, QuadratureRule R, Placed F>
ElementVector<E> load_vector(CellNodes<E> x, const F& f, const R& rule, const Frame& frame) {
    ElementVector<E> out = ElementVector<E>::Zero();
    detail::at_points<E>(x, rule, frame, [&](const auto& n, const auto&, double weight, Point p) {
        out += (weight * detail::value_at(f, p, "f")) * n;
    });
    return out;
}

template <Element E, QuadratureRule R, Placed H>
ElementMatrix<typename E::Side> film_matrix(CellNodes<E> x, int s, const H& h, const R& rule, const Frame& frame) {
    ElementMatrix<typename E::Side> out = ElementMatrix<typename E::Side>::Zero();
    detail::at_side_points<E>(x, s, rule, frame, [&](const auto& n, double weight, Point p) {
        const double here = detail::value_at(h, p, "h");
        if (!(here >= 0.0))
            throw Error(ErrorCode::bad_value, "h",
                        detail::text("h = ", here, " at (", p.x, ", ", p.y, "), expected a number >= 0"));
        out.noalias() += (weight * here) * (n * n.transpose());
    });
    return out;
}

template <Element E, QuadratureRule R, Placed Q>
ElementVector<typename E::Side> side_load_vector(CellNodes<E> x, int s, const Q& q, const R& rule, const Frame& frame) {
    ElementVector<typename E::Side> out = ElementVector<typename E::Side>::Zero();
    detail::at_side_points<E>(x, s, rule, frame, [&](const auto& n, double weight, Point p) {
        out += (weight * detail::value_at(q, p, "q")) * n;
    });
    return out;
}

} // namespace tepor
