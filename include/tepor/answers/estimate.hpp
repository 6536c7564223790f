#pragma once
// estimate: a quantity with its likely error from a sequence of refined meshes, for bodies that have no guaranteed bound.

#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/describe/quantity.hpp>
#include <vector>

namespace tepor {

/// How good, and what it may cost. With neither accuracy given: 1 % of |value|; with both: the one reached first.
struct EstimateOptions {
    double relative_error = 0.0;  ///< of |value|
    double absolute_error = 0.0;  ///< in the unit of the quantity
    Index max_unknowns = 200'000; ///< no mesh with more, the first two excepted
    double max_seconds = 60.0;    ///< no mesh that would end later, judged by the one before
};

/// The quantity on one mesh.
struct EstimatePass {
    Index cells = 0;
    Index unknowns = 0;
    double value = 0.0;
    double seconds = 0.0;
};

/// A value and how far off it likely is. Not a bound: it supposes that the error goes on falling as it did from mesh to mesh.
struct Estimate {
    double value = 0.0;
    double likely_error = 0.0; ///< in the unit of the quantity
    bool reached = false;      ///< the accuracy asked for was reached; else a budget was spent first
    double order = 0.0;        ///< observed: the error falls as h^order; 0 when it could not be seen
    std::vector<EstimatePass> passes;
};

/// A quantity of the steady state, on the body's own mesh and on meshes refined evenly (curves are followed), extrapolated where the
/// changes fall regularly (L. F. Richardson, Phil. Trans. R. Soc. A 210 (1911) 307).
///
/// Serves every body and quantity steady() can answer: k(T), radiation, own laws, quadrilaterals, order 3, extremes.
/// @throws Error as steady() and Field::operator[]; bad_value for an option
Estimate estimate(const Body& body, const Quantity& quantity, const EstimateOptions& options = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/estimate.hpp>
#endif
