#pragma once
// Gauss rules on [0,1] of any number of points, computed: Legendre, and Jacobi with the weight 1 - x.

#include <tepor/base/config.hpp>
#include <tepor/quadrature/rule.hpp>

namespace tepor {

/// Gauss-Legendre rule of n >= 1 points on [0,1], in ascending order, exact to degree 2n - 1.
///
/// Newton on the Legendre polynomial from Tricomi's approximation of its roots; points and weights to a few units in the
/// last place. Cost O(n^2).
/// @throws Error bad_value  n < 1
/// Source: DLMF 3.5(v) (weights), 18.9.1 (recurrence), 18.16(ii) (roots).
[[nodiscard]] TEPOR_INLINE Rule<1> gauss_legendre(int n);

/// Gauss-Jacobi rule of n >= 1 points for the integral of (1 - x) f(x) over [0,1], exact to degree 2n - 1 in f; its weights
/// sum to 1/2. The inner factor of collapsed rules on the triangle.
///
/// @throws Error bad_value  n < 1
/// Source: DLMF 3.5(v), 18.9.2 (recurrence with alpha = 1, beta = 0), 18.3 (norm).
[[nodiscard]] TEPOR_INLINE Rule<1> gauss_jacobi(int n);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/quadrature/impl/gauss.hpp>
#endif
