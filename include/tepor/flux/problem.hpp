#pragma once
// Everything an equilibrated flux needs to know of a linear conduction problem, as plain arrays.

#include <cmath>
#include <cstdint>
#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/sides.hpp>
#include <vector>

namespace tepor {

/// What is said on one cell side.
enum class SideKind : std::uint8_t {
    fixed,  ///< prescribed temperature: the heat through the side is free
    open,   ///< boundary side with flux, film and given trace, which add up
    contact ///< one of the two sides of a contact; listed once for each of its two cells
};

/// One cell side on which something is said. Boundary sides that are not listed are insulated.
///
/// The heat leaving the cell through the side is
/// - open: `flux + film (T - fluid) + trace`,
/// - contact: `film (T - T_partner - fluid)`: `film` is the contact conductance and `fluid` a prescribed jump, which has the
///   opposite sign on the partner.
struct FluxSide {
    CellSide side;
    SideKind kind = SideKind::open;
    Id partner = -1;    ///< contact: position of the other side in FluxProblem::sides
    Id trace = -1;      ///< position in FluxProblem::traces, or -1
    double flux = 0.0;  ///< [W/m2] out of the cell
    double film = 0.0;  ///< [W/(m2 K)]
    double fluid = 0.0; ///< [degC], contact: [K]
};

/// Heat g leaving through a side, known only by integrals: a radiating side evaluated at the present temperature.
///
/// `moment[m]` is the integral of g t^m dt over t in [0,1], counter-clockwise along the side, by the quadrature of the solve.
struct SideTrace {
    double moment[4] = {0.0, 0.0, 0.0, 0.0}; ///< [W/m2]
    double lost_squared = 0.0;               ///< integral of (g - its projection on degree p)^2 dt [W2/m4]
    double least_slope = 0.0;                ///< lower bound of dg/dT over the possible temperatures [W/(m2 K)]
    double size = 0.0;                       ///< largest sum of the absolute terms of g, for its rounding [W/m2]
};

/// Source w in one cell that is not a constant: the kernel of a point temperature, the mean over a spot.
///
/// `moment` are the integrals of w lambda_a lambda_b over the cell for (a, b) = 00, 11, 22, 01, 12, 20 and add to the
/// constant source; `lost_squared` is the integral of (w - its projection on degree p - 1)^2.
struct SpreadSource {
    Id cell = 0;
    double moment[6] = {0.0, 0.0, 0.0, 0.0, 0.0, 0.0};
    double lost_squared = 0.0;
};

/// A linear steady problem on straight-sided triangles of order 1 or 2, or on segments of any order.
///
/// All values are for unit depth (planar), per radian (cylindrical) or per steradian (spherical): the constant factor of the
/// frame is left to the caller. Conductivity is constant in every cell.
struct FluxProblem {
    const MeshData* mesh = nullptr;
    std::vector<Id> dof;              ///< degree of freedom of each cell node, nodes_per_cell per cell
    std::vector<double> conductivity; ///< [W/(m K)] per cell; of a tensor the root of its determinant
    std::vector<double> stretch;      ///< conductivity tensors: stretch_of, 3 per cell; empty when all are isotropic
    std::vector<double> source;       ///< [W/m3] per cell
    std::vector<double> sink;         ///< loss per volume and kelvin, c >= 0 [W/(m3 K)] per cell, or empty
    std::vector<double> sink_temperature; ///< [degC] per cell, or empty
    std::vector<FluxSide> sides;
    std::vector<SideTrace> traces;
    std::vector<SpreadSource> spread; ///< at most one per cell
    std::shared_ptr<const SideMap>
        matched; ///< match_sides of the mesh, where it is at hand: all fluxes on a mesh share it
};

namespace detail {

/// Inverse of the Cholesky factor of a conductivity tensor, (1/l_xx, entry yx, 1/l_yy). In the coordinates it maps to, the cell
/// conducts like an isotropic one of conductivity sqrt(det), with the same heat through every side.
inline void stretch_of(double kxx, double kxy, double kyy, double* out) noexcept {
    const double lx = std::sqrt(kxx), lower = kxy / lx, ly = std::sqrt(kyy - lower * lower);
    out[0] = 1.0 / lx;
    out[1] = -lower / (lx * ly);
    out[2] = 1.0 / ly;
}

/// The sides of the mesh, matched now where that was not done before.
inline std::shared_ptr<const SideMap> matched_sides(const FluxProblem& problem) {
    return problem.matched ? problem.matched : std::make_shared<const SideMap>(match_sides(*problem.mesh));
}

/// A vector of cell c in the coordinates in which the cell is isotropic.
inline Point stretched(const FluxProblem& problem, Id c, Point v) noexcept {
    if (problem.stretch.empty()) return v;
    const double* f = problem.stretch.data() + 3 * as_size(c);
    return {f[0] * v.x, f[1] * v.x + f[2] * v.y};
}

} // namespace detail
} // namespace tepor
