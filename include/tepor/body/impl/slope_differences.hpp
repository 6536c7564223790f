#pragma once
// Derivatives of the residual by slots for cell laws without fixed shape functions: differences of sixth order.

#include <cmath>
#include <tepor/body/residual_slope.hpp>

namespace tepor::detail {

/// Residual with one slot moved; false when the value cannot be evaluated.
inline bool moved_residual(const Model& model, const Values& values, Workspace& work, const double* T, TimeSpan time,
                           const Restriction* only, Id slot, double value, std::vector<double>& residual) {
    Values moved = values;
    moved.slots[as_size(slot)] = value;
    if (model.moving) model.update_geometry(moved);
    residual.resize(as_size(model.unknowns));
    Pass pass;
    pass.T = T;
    pass.time = time;
    pass.only = only;
    pass.residual = residual.data();
    assemble(model, moved, work, pass);
    return !pass.fault;
}

/// The residual is a smooth, mostly linear or rational function of a slot: with steps of 1 % the error of the difference is
/// near 1e-12 of its size. Next to the end of a range (an emissivity of 1) one-sided steps are taken.
inline void difference_of_residual(const Model& model, const Values& values, Workspace& work, const double* T,
                                   TimeSpan time, const Restriction* only, Id slot, double* column) {
    static constexpr double central[6] = {-1.0 / 60.0, 9.0 / 60.0, -45.0 / 60.0, 45.0 / 60.0, -9.0 / 60.0, 1.0 / 60.0};
    static constexpr double central_at[6] = {-3.0, -2.0, -1.0, 1.0, 2.0, 3.0};
    static constexpr double aside[6] = {-137.0 / 60.0, 5.0, -5.0, 10.0 / 3.0, -5.0 / 4.0, 1.0 / 5.0};
    static constexpr double aside_at[6] = {0.0, 1.0, 2.0, 3.0, 4.0, 5.0};
    const double centre = values.slots[as_size(slot)];
    const double step = centre == 0.0 ? 1e-3 : 1e-2 * std::abs(centre);
    std::vector<double> residual;
    const auto attempt = [&](const double* weight, const double* at, double h) {
        for (Index u = 0; u < model.unknowns; ++u) column[u] = 0.0;
        for (int i = 0; i < 6; ++i) {
            if (!moved_residual(model, values, work, T, time, only, slot, centre + at[i] * h, residual)) return false;
            for (Index u = 0; u < model.unknowns; ++u) column[u] += weight[i] / h * residual[as_size(u)];
        }
        return true;
    };
    if (attempt(central, central_at, step) || attempt(aside, aside_at, -step) || attempt(aside, aside_at, step)) return;
    const std::string& name = model.parameters[as_size(slot)].name();
    throw Error(ErrorCode::bad_value, name,
                text("the derivative by \"", name, "\" cannot be taken at ", centre,
                     ": the body has no meaning on either side of it"));
}

inline void column_by_differences(const Model& model, const Values& values, Workspace& work, const double* T,
                                  TimeSpan time, Id slot, double* column) {
    const SlotRole& role = model.roles[as_size(slot)];
    if (role.load || role.matrix || role.place)
        difference_of_residual(model, values, work, T, time, nullptr, slot, column);
}

inline void contract_by_differences(const Model& model, const Values& values, Workspace& work, const SlopePass& pass,
                                    SlopeSums& sums) {
    std::vector<double> column(as_size(model.unknowns));
    for (std::size_t s = 0; s < sums.slots.size(); ++s) {
        const SlotRole& role = model.roles[s];
        if (!role.load && !role.matrix && !role.place) continue;
        difference_of_residual(model, values, work, pass.T, pass.time, pass.only, as_id(s), column.data());
        double sum = 0.0;
        for (std::size_t u = 0; u < column.size(); ++u) sum += pass.weights[u] * column[u];
        sums.slots[s] += pass.factor * sum;
    }
}

} // namespace tepor::detail
