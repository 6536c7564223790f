#pragma once
// Solve, bound, mark, bisect.

#include <algorithm>
#include <cmath>
#include <limits>
#include <memory>
#include <tepor/answers/bracket.hpp>
#include <tepor/answers/impl/bracket_conductance.hpp>
#include <tepor/answers/impl/bracket_level.hpp>
#include <tepor/answers/impl/bracket_linear.hpp>
#include <tepor/answers/impl/bracket_refine.hpp>
#include <tepor/answers/impl/refine_loop.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor {

TEPOR_INLINE Bracket bracket(const Body& body, const Quantity& quantity, const BracketOptions& options) {
    using namespace detail;
    RefineBudget budget("BracketOptions", {"relative_width", options.relative_width},
                        {"absolute_width", options.absolute_width}, options.max_unknowns, options.max_seconds);
    std::shared_ptr<const MeshData> mesh = body.shared_mesh();
    Bracket out;
    if (!mesh->curved.empty()) out.remark = "of the polygon: curved sides are replaced by their chords";
    if (mesh->shape == CellShape::triangle && mesh->order <= 2) mesh = straightened(*mesh, *body.model()->kind);
    out.lower = -std::numeric_limits<double>::infinity();
    out.upper = std::numeric_limits<double>::infinity();
    const bool conductance = quantity.kind() == Quantity::Kind::conductance_between;
    const CellKind* kind = nullptr;
    std::vector<double> share;
    const auto pass = [&](const std::shared_ptr<const MeshData>& on) {
        BracketLevel level(body.on_mesh(on), conductance ? RadiatingFaces::refuse : RadiatingFaces::list);
        if (out.passes.empty()) static_cast<void>(steady(body)); // says what is missing, in the words of steady
        LevelAnswer answer = conductance                      ? answer_conductance(level, quantity)
                             : level.primal().radiating.any() ? answer_radiating(level, quantity)
                                                              : answer_linear(level, quantity);
        kind = level.model().kind;
        share = std::move(answer.share);
        out.cells = on->cell_count();
        out.unknowns = level.model().unknowns;
        // Every interval is guaranteed, so their intersection is.
        out.lower = std::max(out.lower, answer.lower);
        out.upper = std::min(out.upper, answer.upper);
        out.value = std::clamp(answer.value, out.lower, out.upper);
        out.passes.push_back({out.cells, out.unknowns, answer.lower, answer.upper, budget.seconds_of_pass()});
        out.reached = budget.reached(out.width(), out.value);
        return PassEnd{out.unknowns, out.passes.back().seconds, out.reached || share.empty(), false};
    };
    refine_loop(budget, mesh, 1.0, pass, [&](const MeshData& coarse) { return finer(coarse, *kind, share); });
    return out;
}

} // namespace tepor
