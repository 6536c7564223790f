#pragma once
// The conductance between two faces from both sides, by energies alone.

#include <tepor/flux/equilibrate.hpp>

namespace tepor {

/// Guaranteed lower and upper value.
struct TwoSided {
    double lower = 0.0;
    double upper = 0.0;
};

/// Conductance between the places at 1 and the places at 0 (prescribed temperatures or film fluids) of a problem without sources,
/// sinks and given fluxes, [W/K] per unit depth.
///
/// `upper` is the energy of the field (Dirichlet's principle), `lower` is L^2/S with the flow L and the energy S of the flux
/// (Thomson's principle), or upper - bound^2 if that is better. `hot` marks the entries of FluxProblem::sides held at 1.
/// Throws Error not_certifiable when the problem has a source, a sink or a given flux.
TwoSided conductance_bounds(const FluxProblem& problem, const double* temperature, const Equilibrated& flux,
                            const std::vector<char>& hot);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/conductance.hpp>
#endif
