#pragma once
// Derivatives of the weak form and of stored heat by slots and places: the functions others call.

#include <cmath>
#include <tepor/body/impl/slope_differences.hpp>
#include <tepor/body/impl/slope_enthalpy.hpp>
#include <tepor/body/impl/slope_passes.hpp>

namespace tepor {

namespace detail {

inline void require_shapes(const Model& model) {
    if (!model.kernels->shape_at(0))
        throw Error(ErrorCode::not_supported, "capacity",
                    "derivatives of stored heat, and of marches, need cells with shape functions; use Segment<P>");
}

} // namespace detail

TEPOR_INLINE void contract_slopes(const Model& model, const Values& values, Workspace& work, const SlopePass& pass,
                                  SlopeSums& sums) {
    if (!model.kernels->shape_at(0)) return detail::contract_by_differences(model, values, work, pass, sums);
    detail::SlopePasses(model, values, work, pass.time).contract(pass, sums);
}

TEPOR_INLINE void contract_products(const Model& model, const Values& values, Workspace& work,
                                    const SlopeProducts& products, TimeSpan time, SlopeSums& sums) {
    double scale = 0.0;
    for (const double w : products.weights) scale = std::max(scale, std::abs(w));
    if (scale == 0.0) scale = 1.0;
    detail::SlopePasses passes(model, values, work, time);
    passes.contract_pairs(products.pairs.data(), scale, sums);
    // the pass above gave every unknown the weight `scale` on the loads
    std::vector<double> rest = products.weights;
    for (double& w : rest) w -= scale;
    const std::vector<double> cold(rest.size(), 0.0);
    passes.contract({cold.data(), rest.data(), time, nullptr, 1.0}, sums);
}

TEPOR_INLINE void contract_capacity_products(const Model& model, const Values& values, Workspace& work,
                                             const std::vector<double>& pairs, double lumped_share, SlopeSums& sums) {
    detail::SlopePasses(model, values, work, {}).contract_storage_pairs(pairs.data(), lumped_share, sums);
}

TEPOR_INLINE void contract_enthalpy(const Model& model, const Values& values, Workspace& work, const double* from,
                                    const double* to, const double* weights, double lumped_share, SlopeSums& sums,
                                    Id only) {
    detail::require_shapes(model);
    detail::EnthalpySlopes(model, values, work).contract(from, to, weights, lumped_share, sums, only);
}

TEPOR_INLINE void contract_latent(const Model& model, const Values& values, Workspace& work, Id region,
                                  const double* weighted_share, SlopeSums& sums) {
    detail::require_shapes(model);
    detail::EnthalpySlopes(model, values, work).contract_latent(region, weighted_share, sums);
}

TEPOR_INLINE void contract_prescribed(const Model& model, const Values& values, TimeSpan time,
                                      const double* by_prescribed, SlopeSums& sums) {
    Workspace none;
    detail::PrescribedSlopes slopes(model, values, none, time);
    slopes.collect_all(sums, 1.0);
    slopes.run(by_prescribed, nullptr);
}

TEPOR_INLINE void contract_capacity(const Model& model, const Values& values, Workspace& work, const double* rise,
                                    const double* weights, double lumped_share, SlopeSums& sums) {
    detail::require_shapes(model);
    detail::SlopePasses(model, values, work, {}).contract_storage(rise, weights, lumped_share, sums);
}

TEPOR_INLINE void capacity_by_slot(const Model& model, const Values& values, Workspace& work, const double* rise,
                                   Id slot, double lumped_share, double* column) {
    for (Index u = 0; u < model.unknowns; ++u) column[u] = 0.0;
    const SlotRole& role = model.roles[detail::as_size(slot)];
    if (!role.capacity && !role.place) return;
    detail::require_shapes(model);
    detail::SlopePasses(model, values, work, {})
        .storage_column(rise, slot, places_by_slot(model, slot), lumped_share, column);
}

TEPOR_INLINE std::vector<Point> places_by_slot(const Model& model, Id slot) {
    if (!model.roles[detail::as_size(slot)].place) return {};
    const LayerStack& stack = model.mesh->stack;
    const Parameter& parameter = model.parameters[detail::as_size(slot)];
    const auto is = [&](const Number& n) { return n.parameter() && *n.parameter() == parameter; };
    std::vector<Point> velocity(detail::as_size(model.unknowns));
    for (std::size_t u = 0; u < velocity.size(); ++u) {
        const StackPlace& place = stack.place[detail::as_size(model.node_of[u])];
        double v = is(stack.start) ? 1.0 : 0.0;
        for (Index layer = 0; layer <= place.layer; ++layer)
            if (is(stack.thickness[detail::as_size(layer)])) v += place.slope_by_thickness(layer);
        velocity[u].x = v;
    }
    return velocity;
}

TEPOR_INLINE void chain_places(const Model& model, SlopeSums& sums) {
    if (!model.moving || sums.places.empty()) return;
    for (std::size_t s = 0; s < sums.slots.size(); ++s) {
        const std::vector<Point> velocity = places_by_slot(model, detail::as_id(s));
        for (std::size_t u = 0; u < velocity.size(); ++u) sums.slots[s] += dot(velocity[u], sums.places[u]);
    }
}

TEPOR_INLINE void residual_by_slot(const Model& model, const Values& values, Workspace& work, const double* T,
                                   TimeSpan time, Id slot, double* column) {
    for (Index u = 0; u < model.unknowns; ++u) column[u] = 0.0;
    if (!model.kernels->shape_at(0)) return detail::column_by_differences(model, values, work, T, time, slot, column);
    detail::SlopePasses(model, values, work, time).column(T, slot, places_by_slot(model, slot), column);
}

TEPOR_INLINE bool prescribed_by_slot(const Model& model, const Values& values, TimeSpan time, Id slot, double* column) {
    const SlotRole& role = model.roles[detail::as_size(slot)];
    for (Index u = model.free; u < model.unknowns; ++u) column[u] = 0.0;
    if (!role.prescribed && !role.place) return false;
    Workspace none;
    detail::PrescribedSlopes slopes(model, values, none, time);
    const std::vector<Point> velocity = places_by_slot(model, slot);
    slopes.collect_column(slot, velocity);
    slopes.run(nullptr, column);
    for (Index u = model.free; u < model.unknowns; ++u)
        if (column[u] != 0.0) return true;
    return false;
}

} // namespace tepor
