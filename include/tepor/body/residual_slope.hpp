#pragma once
// The one derivative of the weak form by everything that can be set or moved: dr/dslot and dr/dplace.

#include <tepor/base/config.hpp>
#include <tepor/body/assemble.hpp>
#include <tepor/body/model.hpp>
#include <vector>

namespace tepor {

/// Sums of derivatives by every slot and, when wanted, by the place of every unknown.
struct SlopeSums {
    std::vector<double> slots; ///< per slot
    std::vector<Point> places; ///< per unknown, per metre along x and y; empty: not wanted

    SlopeSums() = default;
    SlopeSums(const Model& model, bool with_places)
        : slots(model.parameters.size(), 0.0), places(with_places ? detail::as_size(model.unknowns) : 0) {}
};

/// What is contracted: factor * sum over unknowns of weights . r at the temperature T.
struct SlopePass {
    const double* T = nullptr;       ///< all unknowns, required
    const double* weights = nullptr; ///< all unknowns, required
    TimeSpan time{};
    const Restriction* only = nullptr; ///< null: the whole model
    double factor = 1.0;
};

/// Adds factor * d(weights . r)/d(slot, place) at fixed T: conductivities, films, fluids, radiation, fluxes, generation, side
/// films, contacts, local heat, tables and laws through their parameters, and with places the shape derivative of every
/// integral (methods: the weak form moved with the nodes; exact for the quadrature used, curved cells and r-weights too).
/// Local heat moves with its cell. A node on the axis of revolution moves along it only.
///
/// Slots that are places (thickness, start of a stack) are not in `slots` until chain_places() is called. Capacity does not
/// enter r; see solve/capacity.hpp.
/// Cost  one pass of the residual, whatever the number of slots
/// @throws Error bad_law, not_supported (cells without fixed shape functions)
TEPOR_INLINE void contract_slopes(const Model& model, const Values& values, Workspace& work, const SlopePass& pass,
                                  SlopeSums& sums);

/// What many steps of a body sum up whose weak form is linear in the temperature, matrix and loads of one time: r = K T - F, and the
/// sum of factor * weights . r is that of the pairs with K less that of the weights with F.
struct SlopeProducts {
    std::vector<double> pairs;   ///< per entry of Model::pattern: sum of factor (w_i T_j + w_j T_i) / 2
    std::vector<double> weights; ///< per unknown: sum of factor w

    explicit SlopeProducts(const Model& model)
        : pairs(model.pattern.column.size(), 0.0), weights(detail::as_size(model.unknowns), 0.0) {}
    /// One more step. Cost O(entries of the pattern), allocates nothing.
    void add(const Model& model, const double* w, const double* T, double factor) noexcept {
        add_pairs(model, w, T, factor, pairs.data());
        for (std::size_t u = 0; u < weights.size(); ++u) weights[u] += factor * w[u];
    }
    /// pairs += factor (w T^T + T w^T) / 2 on the pattern.
    static void add_pairs(const Model& model, const double* w, const double* T, double factor, double* pairs) noexcept {
        const Id* start = model.pattern.start.data();
        const Id* column = model.pattern.column.data();
        for (Index i = 0; i < model.unknowns; ++i) {
            const double wi = 0.5 * factor * w[i];
            const double Ti = 0.5 * factor * T[i];
            for (Id p = start[i]; p < start[i + 1]; ++p) pairs[p] += wi * T[column[p]] + Ti * w[column[p]];
        }
    }
};

/// Adds what contract_slopes() adds for all the steps in `products`.
/// Cost  as many passes of the residual as a cell has nodes, and one
TEPOR_INLINE void contract_products(const Model& model, const Values& values, Workspace& work,
                                    const SlopeProducts& products, TimeSpan time, SlopeSums& sums);

/// Adds what contract_capacity() adds for the sum of products of weights and rises; `pairs` as in SlopeProducts (lumped: the
/// diagonal is enough).
TEPOR_INLINE void contract_capacity_products(const Model& model, const Values& values, Workspace& work,
                                             const std::vector<double>& pairs, double lumped_share, SlopeSums& sums);

/// Adds d(weights . (E(to) - E(from)))/d(slot, place) of the sensible heat content E, whatever density and specific heat depend on;
/// of one region when `only` is not -1.
TEPOR_INLINE void contract_enthalpy(const Model& model, const Values& values, Workspace& work, const double* from,
                                    const double* to, const double* weights, double lumped_share, SlopeSums& sums,
                                    Id only = -1);

/// Adds the derivative of the latent heat of one region at fixed shares molten: `weighted_share` is per unknown the weight times
/// the rise of the share molten there. Densities, latent heats and the volume of each node count.
TEPOR_INLINE void contract_latent(const Model& model, const Values& values, Workspace& work, Id region,
                                  const double* weighted_share, SlopeSums& sums);

/// Adds the sum over prescribed unknowns u of `by_prescribed[u] * dT_u/d(slot, place)`; reads [free, unknowns).
TEPOR_INLINE void contract_prescribed(const Model& model, const Values& values, TimeSpan time,
                                      const double* by_prescribed, SlopeSums& sums);

/// Adds d(weights . M rise)/d(slot, place) for a capacity M that does not depend on temperature, `lumped_share` of it at the nodes
/// and the rest consistent: densities and specific heats through their parameters, and the shape derivative.
TEPOR_INLINE void contract_capacity(const Model& model, const Values& values, Workspace& work, const double* rise,
                                    const double* weights, double lumped_share, SlopeSums& sums);

/// Adds what the places mean for the slots that move them: slots += places . dplaces/dslot. Once, when all is summed.
TEPOR_INLINE void chain_places(const Model& model, SlopeSums& sums);

/// dr/dslot at fixed T into `column` (all unknowns, set). Place slots included, prescribed temperatures aside.
TEPOR_INLINE void residual_by_slot(const Model& model, const Values& values, Workspace& work, const double* T,
                                   TimeSpan time, Id slot, double* column);

/// d(M rise)/dslot into `column` (all unknowns, set); see contract_capacity().
TEPOR_INLINE void capacity_by_slot(const Model& model, const Values& values, Workspace& work, const double* rise,
                                   Id slot, double lumped_share, double* column);

/// dT/dslot of the prescribed unknowns into `column[free .. unknowns)` (set); true when any is not zero.
TEPOR_INLINE bool prescribed_by_slot(const Model& model, const Values& values, TimeSpan time, Id slot, double* column);

/// Derivative of the place of each unknown by a slot; empty when the slot moves nothing.
[[nodiscard]] TEPOR_INLINE std::vector<Point> places_by_slot(const Model& model, Id slot);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/residual_slope.hpp>
#endif
