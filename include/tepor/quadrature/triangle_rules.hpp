#pragma once
// Rules on the triangle (0,0) (1,0) (0,1): symmetric ones with positive weights and inner points, and collapsed ones.

#include <tepor/base/config.hpp>
#include <tepor/quadrature/rule.hpp>

namespace tepor {

/// The cheapest symmetric rule exact to at least `degree`, positive weights, inner points; the weights sum to 1/2.
///
/// Points: 1, 3, 6, 7, 12, 16, 19, 25, 33 for degree 1, 2, 4, 5, 6, 8, 9, 10, 12. Above 12 the collapsed rule, which is not
/// symmetric. A degree below 1 gives the rule of degree 1.
/// Source: D. A. Dunavant, Int. J. Numerical Methods in Engineering 21 (1985) 1129-1148, Table II; those whose points lie
/// inside and whose weights are positive. Digits polished to 20 by Newton on the moment equations.
[[nodiscard]] TEPOR_INLINE Rule<2> triangle_rule(int degree);

/// Tensor rule on the square folded onto the triangle, (x, y) = (u, (1 - u) v): exact to at least `degree`, of any degree,
/// positive weights, inner points, n^2 of them with n = degree / 2 + 1. Not symmetric.
/// Source: A. H. Stroud, Approximate Calculation of Multiple Integrals (1971), conical product formulas.
[[nodiscard]] TEPOR_INLINE Rule<2> collapsed_triangle_rule(int degree);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/quadrature/impl/triangle_rules.hpp>
#endif
