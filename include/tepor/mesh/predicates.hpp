#pragma once
// Exact signs of the orientation and in-circle determinants, by floating-point filters and expansion arithmetic.

#include <cmath>
#include <tepor/base/config.hpp>
#include <tepor/base/point.hpp>

// The method: evaluate in doubles; if the result exceeds a bound on its rounding error its sign is right, else compute with
// more and more exact terms, each number being an unevaluated sum of doubles (an expansion).
// Source of method and error bounds: J. R. Shewchuk, Discrete Comput. Geom. 18 (1997) 305-363.
//
// The bounds hold for any contraction of a * b + c into one rounding, since that only removes rounding errors. Coordinates
// must be such that no product of four differences overflows or underflows (drawings from 1e-60 to 1e60 m).

namespace tepor::detail {

/// Half the spacing of doubles at 1.
inline constexpr double half_ulp = 1.1102230246251565e-16;

double orient_exact(Point a, Point b, Point c);
double in_circle_exact(Point a, Point b, Point c, Point d, double permanent);

/// Twice the signed area of the triangle a b c: > 0 counter-clockwise, 0 exactly when the points lie on one line.
inline double orient(Point a, Point b, Point c) {
    const double left = (a.x - c.x) * (b.y - c.y);
    const double right = (a.y - c.y) * (b.x - c.x);
    const double det = left - right;
    constexpr double bound = (3.0 + 16.0 * half_ulp) * half_ulp;
    if (std::abs(det) > bound * (std::abs(left) + std::abs(right))) return det;
    return orient_exact(a, b, c);
}

/// > 0 when d lies inside the circle through a, b, c (counter-clockwise), 0 exactly when on it.
inline double in_circle(Point a, Point b, Point c, Point d) {
    const double ax = a.x - d.x;
    const double ay = a.y - d.y;
    const double bx = b.x - d.x;
    const double by = b.y - d.y;
    const double cx = c.x - d.x;
    const double cy = c.y - d.y;
    const double bxcy = bx * cy;
    const double cxby = cx * by;
    const double cxay = cx * ay;
    const double axcy = ax * cy;
    const double axby = ax * by;
    const double bxay = bx * ay;
    const double a2 = ax * ax + ay * ay;
    const double b2 = bx * bx + by * by;
    const double c2 = cx * cx + cy * cy;
    const double det = a2 * (bxcy - cxby) + b2 * (cxay - axcy) + c2 * (axby - bxay);
    const double permanent = (std::abs(bxcy) + std::abs(cxby)) * a2 + (std::abs(cxay) + std::abs(axcy)) * b2 +
                             (std::abs(axby) + std::abs(bxay)) * c2;
    constexpr double bound = (10.0 + 96.0 * half_ulp) * half_ulp;
    if (std::abs(det) > bound * permanent) return det;
    return in_circle_exact(a, b, c, d, permanent);
}

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/predicates.hpp>
#endif
