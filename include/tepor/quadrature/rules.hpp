#pragma once
// Rules by the degree they must integrate exactly: on the segment, on the square, and for any element.

#include <tepor/base/config.hpp>
#include <tepor/quadrature/gauss.hpp>
#include <tepor/quadrature/rule.hpp>
#include <tepor/quadrature/triangle_rules.hpp>
#include <type_traits>

namespace tepor {

/// Gauss-Legendre rule on [0,1] exact to at least `degree`; a degree below 1 gives the midpoint.
[[nodiscard]] TEPOR_INLINE Rule<1> line_rule(int degree);

/// Gauss-Legendre points in both directions of the unit square, n^2 of them, exact to degree 2n - 1 in each coordinate.
/// @throws Error bad_value  n < 1
[[nodiscard]] TEPOR_INLINE Rule<2> square_rule(int n);

/// The rule on the reference cell of element E exact to at least `degree` (on the square: in each coordinate).
/// E is any type with `shape_of_cell` and `dim`, the element of a user included. Cheap: built per body, not kept.
template <class E>
Rule<E::dim> rule_for(int degree) {
    using ReferenceCell = std::remove_cvref_t<decltype(E::shape_of_cell)>; // CellShape, which stands in a later room
    if constexpr (E::dim == 1)
        return line_rule(degree);
    else if constexpr (E::shape_of_cell == ReferenceCell::triangle)
        return triangle_rule(degree);
    else
        return square_rule(degree < 1 ? 1 : degree / 2 + 1);
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/quadrature/impl/rules.hpp>
#endif
