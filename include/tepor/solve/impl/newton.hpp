#pragma once
// Limits of convergence, start temperatures, and checks that every solve shares.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/body/gather.hpp>
#include <tepor/field/field.hpp>
#include <tepor/solve/engine.hpp>

namespace tepor::detail {

/// Sum of |r| over the free unknowns.
inline double residual_sum(const Model& model, const double* residual) noexcept {
    double sum = 0.0;
    for (Index u = 0; u < model.free; ++u) sum += std::abs(residual[u]);
    return sum;
}

/// Half the sum of absolute flows through cell sides of faces and of sources, from a pass and its reactions.
inline double gross_traffic(const Model& model, const Pass& pass, const double* residual) noexcept {
    double sum = pass.side_traffic + pass.source_traffic;
    for (Index u = model.free; u < model.unknowns; ++u) sum += std::abs(residual[u]);
    return 0.5 * sum;
}

/// Rounding of sum |r|: each row adds terms of the size of its diagonal times T.
inline double residual_rounding(const Model& model, const SparseMatrix& matrix, const double* T) noexcept {
    double sum = 0.0;
    for (Index u = 0; u < model.free; ++u) sum += std::abs(matrix.diagonal(u));
    double hottest = 0.0;
    for (Index u = 0; u < model.unknowns; ++u) hottest = std::max(hottest, std::abs(T[u]));
    return 8.0 * std::numeric_limits<double>::epsilon() * hottest * sum;
}

/// Rounding of the signed sum of r: that of its rows, of either sign.
inline double rounding_of_sum(const Model& model, const SparseMatrix& matrix, const double* T) noexcept {
    double squares = 0.0;
    for (Index u = 0; u < model.free; ++u) squares += matrix.diagonal(u) * matrix.diagonal(u);
    double hottest = 0.0;
    for (Index u = 0; u < model.unknowns; ++u) hottest = std::max(hottest, std::abs(T[u]));
    return 8.0 * std::numeric_limits<double>::epsilon() * hottest * std::sqrt(squares);
}

/// Mean of the outside and prescribed temperatures that are plain values: where a solve starts.
inline double start_temperature(const Model& model, const Values& values, TimeSpan time) {
    double sum = 0.0;
    int count = 0;
    const auto add = [&](const Coefficient& c) {
        if (!c.given() || !c.uniform()) return;
        sum += c.uniform_value(values.slots.data(), time);
        ++count;
    };
    for (const FaceModel& face : model.faces) {
        add(face.fixed);
        for (const FaceTerm& term : face.terms)
            if (term.kind != FaceTerm::Kind::flux) add(term.outside);
    }
    for (const RegionModel& region : model.regions)
        for (const VolumeTerm& term : region.volume)
            if (term.kind == VolumeTerm::Kind::side_film) add(term.fluid);
    return count > 0 ? sum / count : (model.scale == TemperatureScale::kelvin ? 300.0 : 20.0);
}

/// Every connected part needs something that sets its temperature level.
inline void require_level(const Model& model, const Values& values) {
    std::vector<unsigned char> level(as_size(model.parts), 0);
    const auto acts = [&](const Coefficient& c) {
        return !c.uniform() || c.uniform_value(values.slots.data(), {}) > 0.0;
    };
    for (Index u = model.free; u < model.unknowns; ++u) level[as_size(model.part(u))] = 1;
    for (const FaceModel& face : model.faces)
        for (const FaceTerm& term : face.terms)
            if (term.kind != FaceTerm::Kind::flux && acts(term.amount))
                for (const Id u : face.sides.unknowns) level[as_size(model.part(u))] = 1;
    for (const RegionModel& region : model.regions)
        for (const VolumeTerm& term : region.volume) {
            // a source that depends on temperature can set the level too; the solve tells whether it does
            const bool sets =
                term.kind == VolumeTerm::Kind::side_film ? acts(term.amount) : term.amount.depends_on_temperature();
            if (!sets) continue;
            for (Id c = region.first_cell; c < region.last_cell; ++c) level[as_size(model.part(model.cell(c)[0]))] = 1;
        }
    for (std::size_t part = 0; part < level.size(); ++part) {
        if (level[part]) continue;
        std::string name;
        for (const RegionModel& region : model.regions)
            if (name.empty() && model.part(model.cell(region.first_cell)[0]) == as_id(part)) name = region.name;
        throw Error(
            ErrorCode::no_level, name,
            text("steady: nothing sets the temperature level of the part of the body that holds region \"", name,
                 "\"; give one of its faces a FixedTemperature, a Film or a Radiation, or join it by a Contact"));
    }
}

/// Tables that refuse to be read outside their range are judged on the converged field.
inline void check_tables(const Model& model, const Values& values, Workspace& work, const double* T) {
    const auto refuse = [](const Coefficient& c, double t, Point p, Index cell) {
        throw Error(ErrorCode::outside_table, c.label(),
                    text(c.label(), ": the table covers ", c.value().table().first(), " to ", c.value().table().last(),
                         ", but the temperature is ", t, " at (", p.x, ", ", p.y, ") in cell ", cell,
                         "; extend the table, or say Outside::hold to keep its end value"),
                    cell);
    };
    const CellKernels& kernel = *model.kernels;
    const Point* place = model.places_of(values);
    Id ids[block_width];
    for (const RegionModel& region : model.regions) {
        std::vector<const Coefficient*> tables;
        const auto add = [&](const Coefficient& c) {
            if (c.value().kind() == Value::Kind::table && c.value().table().outside() == Outside::refuse)
                tables.push_back(&c);
        };
        for (const Coefficient& k : region.k) add(k);
        for (const VolumeTerm& term : region.volume) add(term.amount);
        if (tables.empty()) continue;
        if (kernel.exact) { // between the nodes it may be hotter or colder than at them
            const auto r = static_cast<Id>(&region - model.regions.data());
            for (const double direction : {1.0, -1.0}) {
                const Extreme e = extreme_in(model, values, T, r, direction);
                for (const Coefficient* table : tables)
                    if (!table->covers(e.value)) refuse(*table, e.value, e.place, model.user_cell[as_size(e.at.cell)]);
            }
            continue;
        }
        CellBlock& block = work.cells;
        block.T = work.nodal_T;
        for (Id c = region.first_cell; c < region.last_cell; c += block_width) {
            block.count = gather_cells(model, place, T, work.nodal_T, c, region.last_cell, block, ids);
            kernel.open(block);
            for (const Coefficient* table : tables)
                for (int q = 0; q < kernel.points; ++q)
                    for (int b = 0; b < block.count; ++b) {
                        const int at = q * block_width + b;
                        if (!table->covers(block.point_T[at]))
                            refuse(*table, block.point_T[at], {block.point_x[at], block.point_y[at]},
                                   model.user_cell[as_size(ids[b])]);
                    }
        }
    }
    for (const FaceModel& face : model.faces)
        for (const FaceTerm& term : face.terms) {
            if (term.amount.value().kind() != Value::Kind::table) continue;
            for (Index s = 0; s < face.sides.count(); ++s)
                for (int j = 0; j < kernel.side_nodes; ++j) {
                    const Id u = face.sides.unknowns[as_size(s * kernel.side_nodes + j)];
                    if (!term.amount.covers(T[u]))
                        refuse(term.amount, T[u], place[u], model.user_cell[as_size(face.sides.side[as_size(s)].cell)]);
                }
        }
}

/// The matrix has lost a pivot near an unknown; `history` is what an iteration did until then.
[[noreturn]] inline void raise_singular(const Model& model, Id unknown, const std::string& history = {}) {
    const Point p = unknown >= 0 ? model.places[as_size(unknown)] : Point{};
    throw Error(ErrorCode::singular, "",
                text("steady: the system has no unique solution near (", p.x, ", ", p.y,
                     "); a source that grows with temperature may outrun what carries the heat away, or a value is "
                     "extreme",
                     history));
}

} // namespace tepor::detail
