#pragma once
// The equilibrated flux of a temperature field and the error bound that follows from it.

#include <tepor/flux/equilibrated.hpp>
#include <tepor/flux/problem.hpp>

namespace tepor {

/// The flux and the bound of a finite element field. `temperature` has one value per degree of freedom.
///
/// O(cells). Planar triangles of order 1 and 2, triangles of order 1 in r-z, segments.
/// Throws Error not_certifiable for other meshes and for sinks in r-z, bad_value for negative sinks.
Equilibrated equilibrate(const FluxProblem& problem, const double* temperature);

/// Half-width and centre correction of a quantity whose adjoint field is known as well.
struct PairBound {
    double correction = 0.0; ///< half the product of the two defects, to be added to Q(Th) + rho(zh)
    double half_width = 0.0; ///< guaranteed, without the rounding of Q(Th) + rho(zh)
};

/// Bound of `a(T - Th, z - zh)` for two fields of problems with the same body: the midpoint of the hypercircle.
///
/// `|a(e_T, e_z) - correction| <= half_width`, from `a(e_T, e_z) = (d_T, d_z) - (s_T, s_z)` with the defects d and the errors s of
/// the two fluxes (H. J. Greenberg, J. Math. and Phys. 27 (1948) 161).
PairBound pair_bound(const FluxProblem& primal, const double* temperature, const Equilibrated& flux,
                     const FluxProblem& adjoint, const double* influence, const Equilibrated& adjoint_flux);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/equilibrate.hpp>
#endif
