#pragma once
// Evenly refined meshes and what the changes between them tell.

#include <algorithm>
#include <chrono>
#include <cmath>
#include <limits>
#include <memory>
#include <tepor/answers/estimate.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor {
namespace detail {

inline void validate(const EstimateOptions& options) {
    const auto check = [](const char* name, double value, bool fine, const char* rule) {
        if (!fine)
            throw Error(ErrorCode::bad_value, name, text("EstimateOptions: ", name, " = ", value, ", expected ", rule));
    };
    check("relative_error", options.relative_error, options.relative_error >= 0.0, "a number >= 0");
    check("absolute_error", options.absolute_error, options.absolute_error >= 0.0, "a number >= 0");
    check("max_unknowns", as_double(options.max_unknowns), options.max_unknowns > 0, "at least 1");
    check("max_seconds", options.max_seconds, options.max_seconds > 0.0, "a number > 0");
}

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
    using Clock = std::chrono::steady_clock;
    validate(options);
    const double relative =
        options.relative_error == 0.0 && options.absolute_error == 0.0 ? 0.01 : options.relative_error;
    const auto started = Clock::now();
    const auto since = [](Clock::time_point then) {
        return std::chrono::duration<double>(Clock::now() - then).count();
    };
    std::shared_ptr<const MeshData> mesh = body.shared_mesh();
    Estimate out;
    for (;;) {
        const auto began = Clock::now();
        const Body level = body.on_mesh(mesh);
        const Field field = steady(level);
        out.passes.push_back({mesh->cell_count(), field.model().unknowns, field[quantity], since(began)});
        const double growth = mesh->dim == 1 ? 2.0 : 4.0;
        if (out.passes.size() >= 2) {
            judge(out, mesh->order);
            out.reached = out.likely_error <= std::max(relative * std::abs(out.value), options.absolute_error);
            if (out.reached && out.passes.size() >= 3) break;
            if (growth * as_double(out.passes.back().unknowns) > as_double(options.max_unknowns)) break;
            if (since(started) + 1.5 * growth * out.passes.back().seconds > options.max_seconds) break;
        }
        auto fine = std::make_shared<MeshData>();
        fine->dim = mesh->dim, fine->order = mesh->order, fine->nodes_per_cell = mesh->nodes_per_cell;
        fine->sides_per_cell = mesh->sides_per_cell, fine->shape = mesh->shape, fine->frame = mesh->frame;
        refine_uniformly(*mesh, *level.model()->kind, *fine);
        mesh = std::move(fine);
    }
    return out;
}

} // namespace tepor
