#pragma once
// ErrorBound: how far a field can be from the exact one, with no unknown constant.

#include <string>
#include <vector>

namespace tepor {

/// Guaranteed bound of the error in the energy norm, `|||e|||^2 = integral of k |grad e|^2` plus films, contacts and side films
/// times e^2, for the size the frame states: `|||T - field||| <= total`.
///
/// The square of the norm is in W K: it is the error of the heat flow per kelvin of what drives it. For the error of one number
/// ask `bracket`.
struct ErrorBound {
    double total = 0.0;           ///< [(W K)^(1/2)], solver error and rounding included
    std::vector<double> per_cell; ///< share of each cell, user numbering; the squares sum to about total^2
    double field_energy = 0.0;    ///< (integral of k |grad T|^2)^(1/2), to compare with [(W K)^(1/2)]
    double residual = 0.0;        ///< part of total: what the solver left over
    double rounding = 0.0;        ///< part of total
    std::string remark;           ///< what the bound is for, when not for the body as drawn
    [[nodiscard]] double relative() const noexcept { return total / field_energy; }
};

} // namespace tepor
