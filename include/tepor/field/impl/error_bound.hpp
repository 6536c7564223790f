#pragma once
// Field::error_bound by the equilibrated flux.

#include <cmath>
#include <tepor/field/field.hpp>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/flux/model_problem.hpp>
#include <tepor/flux/weak_form.hpp>

namespace tepor {

TEPOR_INLINE ErrorBound Field::error_bound() const {
    const ModelProblem posed = model_problem(*model_, values_);
    const Equilibrated flux = equilibrate(posed.problem, temperature_.data());
    const double root = std::sqrt(posed.factor);
    ErrorBound out;
    out.total = root * flux.bound();
    out.residual = root * flux.residual;
    out.rounding = root * flux.rounding;
    out.field_energy = std::sqrt(posed.factor * conduction_energy(posed.problem, temperature_.data()));
    out.per_cell.resize(flux.squared.size());
    for (std::size_t c = 0; c < out.per_cell.size(); ++c)
        out.per_cell[c] = root * (std::sqrt(flux.squared[c]) + (flux.lost.empty() ? 0.0 : flux.lost[c]));
    if (posed.polygon) out.remark = "of the polygon: curved sides are replaced by their chords";
    return out;
}

} // namespace tepor
