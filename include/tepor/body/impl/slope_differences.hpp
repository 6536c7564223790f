#pragma once
// Derivatives of the residual by slots for cell laws without fixed shape functions: differences of sixth order.

#include <cmath>
#include <numeric>
#include <tepor/body/impl/slope_passes.hpp>
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

/// The residual of cells is a smooth function of a slot: with steps of 0.1 % the error of the difference is near 1e-12 of its size
/// even where a law rises with the 30th power. Next to the end of a range (an emissivity of 1) one-sided steps are taken.
inline void difference_of_residual(const Model& model, const Values& values, Workspace& work, const double* T,
                                   TimeSpan time, const Restriction* only, Id slot, double* column) {
    static constexpr double central[6] = {-1.0 / 60.0, 9.0 / 60.0, -45.0 / 60.0, 45.0 / 60.0, -9.0 / 60.0, 1.0 / 60.0};
    static constexpr double central_at[6] = {-3.0, -2.0, -1.0, 1.0, 2.0, 3.0};
    static constexpr double aside[6] = {-137.0 / 60.0, 5.0, -5.0, 10.0 / 3.0, -5.0 / 4.0, 1.0 / 5.0};
    static constexpr double aside_at[6] = {0.0, 1.0, 2.0, 3.0, 4.0, 5.0};
    const double centre = values.slots[as_size(slot)];
    const double step = centre == 0.0 ? 1e-3 : 1e-3 * std::abs(centre);
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

/// A pass in two: what stands in cells, by differences, and what acts through sides, whose slopes are exact. There a law may
/// turn within a step: a film law of the difference to its fluid does so at zero.
struct CellsAndSides {
    Restriction cells, sides;

    CellsAndSides(const Model& model, const Restriction* only) {
        if (only) {
            cells.regions = only->regions;
            cells.locals = only->locals;
            sides.faces = only->faces;
            sides.contacts = only->contacts;
            return;
        }
        cells.regions = all_of(model.regions.size());
        cells.locals = all_of(model.locals.size());
        sides.contacts = all_of(model.contacts.size());
        for (std::size_t f = 0; f < model.faces.size(); ++f) sides.faces.push_back({as_id(f), model.faces[f].sides});
    }

  private:
    static std::vector<Id> all_of(std::size_t count) {
        std::vector<Id> ids(count);
        std::iota(ids.begin(), ids.end(), 0);
        return ids;
    }
};

inline void column_by_differences(const Model& model, const Values& values, Workspace& work, const double* T,
                                  TimeSpan time, Id slot, double* column) {
    const SlotRole& role = model.roles[as_size(slot)];
    if (role.place) return difference_of_residual(model, values, work, T, time, nullptr, slot, column);
    if (!role.load && !role.matrix) return;
    const CellsAndSides parts(model, nullptr);
    difference_of_residual(model, values, work, T, time, &parts.cells, slot, column);
    SlopePasses(model, values, work, time).column_of_sides(T, slot, column);
}

inline void contract_by_differences(const Model& model, const Values& values, Workspace& work, const SlopePass& pass,
                                    SlopeSums& sums) {
    const CellsAndSides parts(model, pass.only);
    SlopeSums through_sides(model, false);
    SlopePass of_sides = pass;
    of_sides.only = &parts.sides;
    SlopePasses(model, values, work, pass.time).contract(of_sides, through_sides);
    std::vector<double> column(as_size(model.unknowns));
    for (std::size_t s = 0; s < sums.slots.size(); ++s) {
        const SlotRole& role = model.roles[s];
        if (!role.load && !role.matrix && !role.place) continue;
        difference_of_residual(model, values, work, pass.T, pass.time, role.place ? pass.only : &parts.cells, as_id(s),
                               column.data());
        double sum = 0.0;
        for (std::size_t u = 0; u < column.size(); ++u) sum += pass.weights[u] * column[u];
        sums.slots[s] += pass.factor * sum;
        if (!role.place) sums.slots[s] += through_sides.slots[s];
    }
}

} // namespace tepor::detail
