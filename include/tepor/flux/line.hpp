#pragma once
// One dimension (slab, cylinder, sphere): the flux has one free number per piece of the line, and the bound is the error itself.

#include <tepor/flux/equilibrated.hpp>
#include <tepor/flux/problem.hpp>

namespace tepor::detail {

/// The flux of a 1D body of any order with conductivity constant per cell, in all frames.
///
/// `r^n s = C + F(r)` with F the integral of the source from the left end, exactly; C minimises the defect, which is then that
/// of the exact flux: without sinks bound() equals the error. Interior places held at a temperature cut the line into pieces.
/// O(cells). `outflow` has two numbers per cell: heat leaving through its left and right end per area factor of the frame.
Equilibrated equilibrate_line(const FluxProblem& problem, const double* temperature);

/// Product of the defects of two such fluxes: cells, films and contacts.
double line_product(const FluxProblem& primal, const double* temperature, const Equilibrated& flux,
                    const FluxProblem& adjoint, const double* influence, const Equilibrated& adjoint_flux);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/line.hpp>
#endif
