#pragma once
// The outcome of an equilibrated flux: side moments, the bound and its parts.

#include <limits>
#include <tepor/base/numbers.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor {

/// A flux that obeys the heat balance in every cell, the bound it gives, and the parts of that bound.
///
/// `|||T - Th||| <= bound()` for the exact solution T of the problem and the norm `|||v|||^2 = integral of k |grad v|^2 + c v^2
/// over the cells + film v^2 over film sides + conductance [v]^2 over contacts`, per unit depth, radian or steradian: the
/// constant factor of the frame is left to the caller (its square root applies to the bound). No constant is left unknown
/// (W. Prager and J. L. Synge, Quart. Appl. Math. 5 (1947) 241).
struct Equilibrated {
    int per_side = 0; ///< numbers per cell side in `outflow`: order + 1 (planar); 1 in 1D

    /// Heat leaving through each cell side. Order 1: flux times length at the start and the end of the side; order 2: three
    /// Legendre moments, counter-clockwise; 1D: the heat itself. Equal and opposite, bit by bit, in two cells that share a side.
    std::vector<double> outflow;
    std::vector<double> bubble; ///< order 2: the inner degree of freedom of each cell

    std::vector<double> squared; ///< eta_K^2 of each cell, mismatch on radiating sides included
    std::vector<double> lost;    ///< oscillation of each cell (not squared); empty when all are zero

    double squared_total = 0.0; ///< sum of `squared`
    double lost_total = 0.0;    ///< root of the sum of squares of `lost`
    double mixed_total = 0.0;   ///< root of the sum of (eta_K + lost_K)^2
    double residual = 0.0;      ///< what the solver left over, carried to where heat can leave the body
    double rounding = 0.0;      ///< 64 eps times the accumulated absolute contributions

    /// Heat leaving through each entry of FluxProblem::sides [W per unit depth ...]. Over all sides of a body their sum is the
    /// heat generated, to rounding and the residual.
    std::vector<double> flow;

    /// Guaranteed bound of the error in the energy norm.
    [[nodiscard]] double bound() const noexcept { return mixed_total + residual + rounding; }
};

namespace detail {

/// 64 eps: how much a sum of absolute contributions may be off.
inline constexpr double rounding_unit = 64.0 * std::numeric_limits<double>::epsilon();

/// Heat leaving a triangle through one of its sides.
inline double side_total(const Equilibrated& flux, CellSide side) noexcept {
    const double* out = flux.outflow.data() + as_size(flux.per_side) * (3 * as_size(side.cell) + as_size(side.side));
    return flux.per_side == 2 ? 0.5 * (out[0] + out[1]) : out[0];
}

} // namespace detail
} // namespace tepor
