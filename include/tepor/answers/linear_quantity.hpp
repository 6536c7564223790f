#pragma once
// A Quantity as a linear functional of the temperature, with the adjoint problem that weighs errors for it.

#include <tepor/body/model.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/flux/model_problem.hpp>
#include <vector>

namespace tepor::detail {

/// `Q(T) = scale ([l_z(T) + what z carries through prescribed faces] + constant)`.
///
/// z solves `adjoint` with the values `held` at the prescribed unknowns; l_z is the load of `adjoint`. Heat through faces at a
/// prescribed temperature has z = 1 there: `l(z) - a(T, z)` is the heat leaving.
struct LinearQuantity {
    FluxProblem adjoint;
    std::vector<double> held; ///< z at unknowns free .. unknowns - 1
    double constant = 0.0;
    double absolute = 0.0; ///< sum of the absolute terms of the constant
    double scale = 1.0;
    bool exact = false;        ///< the constant is the whole answer
    std::vector<char> through; ///< heat through faces: per entry of FluxProblem::sides, asked for; else empty
};

/// @param temperature  all unknowns, prescribed ones set (the free ones are not read)
/// @throws Error not_certifiable, naming what has no bound: extremes, a point outside one material or on a film face, a face that
///               meets another one of prescribed temperature, heat through an interface without contact
///         bad_name, outside
LinearQuantity linear_quantity(const Model& model, const Values& values, const ModelProblem& primal,
                               const Quantity& quantity, const double* temperature);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/linear_quantity.hpp>
#endif
