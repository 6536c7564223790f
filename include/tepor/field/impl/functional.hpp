#pragma once
// Compiled quantities evaluated.

#include <algorithm>
#include <cmath>
#include <tepor/field/functional.hpp>
#include <tepor/field/impl/quantity_compiler.hpp>
#include <tepor/field/impl/quantity_heats.hpp>
#include <tepor/field/impl/stored.hpp>

namespace tepor {

namespace detail {

/// Runs a restricted pass with the heat's weights.
inline double weigh(const Functional::Heat& heat, const Model& model, const Values& values, Workspace& work,
                    const double* T, TimeSpan time, double* transposed) {
    std::vector<double> dense(as_size(model.unknowns), 0.0);
    for (std::size_t i = 0; i < heat.weights.unknown.size(); ++i)
        dense[as_size(heat.weights.unknown[i])] += heat.weights.weight[i];
    Pass pass;
    pass.T = T;
    pass.time = time;
    pass.only = &heat.part;
    pass.weights = dense.data();
    pass.transposed = transposed;
    assemble(model, values, work, pass);
    if (pass.fault) raise(pass.fault);
    return pass.weighted;
}

/// Integral of T over a region as exact cells have it; with `row`, factor times its derivative is added there.
inline double content_of(const Functional::Content& content, const Model& model, const Values& values, Workspace& work,
                         const double* T, TimeSpan time, double* row) {
    Restriction part;
    part.regions.push_back(content.region);
    std::vector<double> sums(model.regions.size());
    std::vector<double> slope(row ? as_size(model.unknowns) : 0, 0.0);
    Pass pass;
    pass.T = T;
    pass.time = time;
    pass.only = &part;
    pass.content = sums.data();
    pass.content_slope = row ? slope.data() : nullptr;
    assemble(model, values, work, pass);
    if (pass.fault) raise(pass.fault);
    for (std::size_t u = 0; u < slope.size(); ++u) row[u] += content.factor * slope[u];
    return content.factor * sums[as_size(content.region)];
}

} // namespace detail

TEPOR_INLINE Functional compile(const Model& model, const Values& values, const Quantity& quantity) {
    return detail::QuantityCompiler(model, values, quantity).run();
}

TEPOR_INLINE double evaluate(const Functional& functional, const Model& model, const Values& values, Workspace& work,
                             const double* T, const double* reaction, TimeSpan time) {
    if (functional.unbounded)
        throw Error(
            ErrorCode::no_answer, "",
            detail::text(
                "the heat flow through this face is unbounded at (", functional.unbounded->x, ", ",
                functional.unbounded->y,
                "), where two prescribed temperatures differ; ask for the faces together, or give the corner a film"));
    if (functional.extreme)
        return (functional.face >= 0 ? extreme_on(model, values, T, functional.face, functional.direction)
                                     : extreme_in(model, values, T, functional.region, functional.direction))
            .value;
    double value = functional.constant + functional.temperature.dot(T);
    if (functional.stored >= 0) {
        const Enthalpy enthalpy(model.regions[detail::as_size(functional.stored)], values);
        value += sensible_heat(model, values, work, enthalpy, detail::as_size(functional.stored), T, nullptr);
        value += latent_heat(model, values, work, enthalpy, detail::as_size(functional.stored), T);
    }
    if (!functional.reaction.unknown.empty()) value += functional.reaction.dot(reaction);
    for (const Functional::Heat& heat : functional.heats)
        value += detail::weigh(heat, model, values, work, T, time, nullptr);
    for (const Functional::EdgeFlux& edge : functional.edges)
        value += edge.factor * detail::edge_flux(model, values, edge, T, time, nullptr);
    for (const Functional::Inner& inner : functional.inner)
        value += inner.factor * detail::inner_place(model, values, work, T, inner.place, time).temperature;
    for (const Functional::Content& content : functional.contents)
        value += detail::content_of(content, model, values, work, T, time, nullptr);
    return value;
}

TEPOR_INLINE void temperature_slope(const Functional& functional, const Model& model, const Values& values,
                                    Workspace& work, const double* T, TimeSpan time, double* row) {
    if (functional.extreme) {
        const Extreme at = functional.face >= 0 ? extreme_on(model, values, T, functional.face, functional.direction)
                                                : extreme_in(model, values, T, functional.region, functional.direction);
        double shape[detail::max_cell_nodes];
        (void)shapes_at(model, values, at.at, shape, nullptr, nullptr);
        if (model.kernels->exact) {
            const detail::InnerPlace there = detail::inner_place(model, values, work, T, at.at, time);
            for (int i = 0; i < 2; ++i) shape[i] = there.slope[i];
        }
        for (int i = 0; i < model.kernels->nodes; ++i) row[model.cell(at.at.cell)[i]] += shape[i];
        return;
    }
    for (std::size_t i = 0; i < functional.temperature.unknown.size(); ++i)
        row[functional.temperature.unknown[i]] += functional.temperature.weight[i];
    if (functional.stored >= 0) {
        const Enthalpy enthalpy(model.regions[detail::as_size(functional.stored)], values);
        (void)sensible_heat(model, values, work, enthalpy, detail::as_size(functional.stored), T, row);
    }
    for (const Functional::Heat& heat : functional.heats) (void)detail::weigh(heat, model, values, work, T, time, row);
    for (const Functional::EdgeFlux& edge : functional.edges)
        (void)detail::edge_flux(model, values, edge, T, time, row);
    for (const Functional::Inner& inner : functional.inner) {
        const detail::InnerPlace there = detail::inner_place(model, values, work, T, inner.place, time);
        for (int i = 0; i < 2; ++i) row[model.cell(inner.place.cell)[i]] += inner.factor * there.slope[i];
    }
    for (const Functional::Content& content : functional.contents)
        (void)detail::content_of(content, model, values, work, T, time, row);
}

} // namespace tepor
