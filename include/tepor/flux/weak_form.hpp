#pragma once
// The weak form of a FluxProblem evaluated at two fields, with the size of what was added up.

#include <tepor/flux/problem.hpp>

namespace tepor {

/// A sum and the sum of the absolute values of its terms, which bounds its rounding.
struct Summed {
    double value = 0.0;
    double absolute = 0.0;

    void add(double v) noexcept {
        value += v;
        absolute += v < 0.0 ? -v : v;
    }
};

/// `l(z) - a(T, z)` per unit depth, radian or steradian: zero for a finite element solution T and a z that vanishes where the
/// temperature is prescribed; otherwise it carries the heat through prescribed faces that z weighs. Planar triangles of order 1
/// and 2, r-z of order 1, segments. O(cells).
Summed weak_form(const FluxProblem& problem, const double* temperature, const double* z);

/// Integral of k |grad T|^2 over the cells, per unit depth, radian or steradian.
double conduction_energy(const FluxProblem& problem, const double* temperature);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/weak_form.hpp>
#endif
