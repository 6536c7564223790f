#pragma once
// Weights on a disc: the mean over a spot, and the kernel that turns a point temperature into a mean.

#include <tepor/base/point.hpp>
#include <tepor/flux/problem.hpp>
#include <vector>

namespace tepor {

/// The weight `w = scale (m + 1)/(pi rho^2) (1 - |x - centre|^2/rho^2)^m` inside the disc, zero outside; its integral is `scale`.
///
/// m = 0 is the mean over the disc. m = 2 is smooth enough to lose nothing in the bound, and by the mean value property (Gauss;
/// L. C. Evans, Partial Differential Equations, section 2.2) `T(centre) = integral of w T + f rho^2/(4 k (m + 2))` for
/// -k laplace T = f in the disc. On a straight insulated edge the half disc with scale 2 does the same.
struct Disc {
    Point centre;
    double radius = 0.0; ///< rho [m]
    int power = 2;       ///< m: 0, 1 or 2
    double scale = 1.0;
};

/// Moments of the weight over every triangle it touches, to rounding: cells cut by the circle are integrated over their exact
/// intersection, in polar coordinates about the centre. O(cells) with about 50 us per cut cell.
std::vector<SpreadSource> disc_moments(const MeshData& mesh, const Disc& disc);

namespace detail {

/// Adds sources cell by cell; what a projection loses adds up at worst.
void merge_spread(std::vector<SpreadSource>& to, const std::vector<SpreadSource>& from);

} // namespace detail
} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/disc.hpp>
#endif
