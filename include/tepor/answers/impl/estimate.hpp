#pragma once
// Evenly refined meshes and what the changes between them tell.

#include <algorithm>
#include <cmath>
#include <limits>
#include <memory>
#include <tepor/answers/estimate.hpp>
#include <tepor/answers/impl/refine_loop.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor {
namespace detail {

/// Value and likely error from the last passes.
inline void judge(Estimate& out, int element_order) {
    const std::size_t n = out.passes.size();
    const double last = out.passes[n - 1].value;
    const double change = last - out.passes[n - 2].value;
    // a steady solve leaves this much of its own
    const double floor = 1e-9 * std::abs(last);
    out.value = last;
    out.order = 0.0;
    out.likely_error = std::abs(change) + floor;
    if (n < 3) return;
    const double before = out.passes[n - 2].value - out.passes[n - 3].value;
    const double ratio = change == 0.0 ? std::numeric_limits<double>::infinity() : before / change;
    // Regular: changes of one sign that fall no slower than at a strong singularity and no faster than the best order.
    const double best = std::ldexp(1.5, 2 * element_order);
    if (ratio >= 1.3 && ratio <= best) {
        const double rest = change / (ratio - 1.0);
        out.value = last + rest;
        out.order = std::log2(ratio);
        out.likely_error = std::abs(rest) + floor; // the whole correction, though most of it has been made
    } else if (std::abs(ratio) > best) {
        out.likely_error = std::abs(change) + std::abs(before) / best + floor;
    } else {
        out.likely_error = 2.0 * std::max(std::abs(change), std::abs(before)) + floor; // no order to be seen
    }
}

} // namespace detail

TEPOR_INLINE Estimate estimate(const Body& body, const Quantity& quantity, const EstimateOptions& options) {
    using namespace detail;
    RefineBudget budget("EstimateOptions", {"relative_error", options.relative_error},
                        {"absolute_error", options.absolute_error}, options.max_unknowns, options.max_seconds);
    const std::shared_ptr<const MeshData>& mesh = body.shared_mesh();
    Estimate out;
    const CellKind* kind = nullptr;
    const auto pass = [&](const std::shared_ptr<const MeshData>& on) {
        const Field field = steady(body.on_mesh(on));
        kind = field.model().kind;
        const Index unknowns = field.model().unknowns;
        out.passes.push_back({on->cell_count(), unknowns, field[quantity], budget.seconds_of_pass()});
        const bool first = out.passes.size() < 2;
        if (!first) {
            judge(out, on->order);
            out.reached = budget.reached(out.likely_error, out.value);
        }
        return PassEnd{unknowns, out.passes.back().seconds, out.reached && out.passes.size() >= 3, first};
    };
    refine_loop(budget, mesh, mesh->dim == 1 ? 2.0 : 4.0, pass, [&](const MeshData& coarse) {
        auto fine = mesh_like(coarse);
        refine_uniformly(coarse, *kind, *fine);
        return fine;
    });
    return out;
}

} // namespace tepor
