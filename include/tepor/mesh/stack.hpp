#pragma once
// What a 1D stack keeps beside its nodes, so that a Parameter can move its layers without a new mesh.

#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/describe/number.hpp>
#include <vector>

namespace tepor {

/// Where a node of a 1D stack lies: `fraction` of the way through its layer.
struct StackPlace {
    Id layer = 0;
    double fraction = 0.0;

    /// Derivative of the node's x by the thickness of a layer: layers before it push it along, its own one stretches.
    [[nodiscard]] double slope_by_thickness(Index of_layer) const noexcept {
        return of_layer < layer ? 1.0 : of_layer == layer ? fraction : 0.0;
    }
};

/// The place `t` of the way from a to b, two nodes of one cell. An inner border of the stack may be written as the end of
/// one layer or as the start of the next.
inline StackPlace between(StackPlace a, StackPlace b, double t) noexcept {
    if (a.layer < b.layer) a = b.fraction > 0.0 ? StackPlace{b.layer, 0.0} : a;
    if (b.layer < a.layer) b = a.fraction > 0.0 ? StackPlace{a.layer, 0.0} : b;
    if (a.layer < b.layer) b = {a.layer, 1.0};
    if (b.layer < a.layer) a = {b.layer, 1.0};
    return {a.layer, (1.0 - t) * a.fraction + t * b.fraction};
}

/// Layers as said, and the place of every node in them. Empty for a mesh that is no stack.
struct LayerStack {
    Number start = 0.0;            ///< x or radius [m] of the first face
    std::vector<Number> thickness; ///< [m], one per layer
    std::vector<StackPlace> place; ///< one per node
    std::vector<Id> layer_of_cell; ///< one per cell

    [[nodiscard]] bool given() const noexcept { return !place.empty(); }
    [[nodiscard]] Index layer_count() const noexcept { return static_cast<Index>(thickness.size()); }
};

namespace detail {

/// Put the nodes where the stack has them for these thicknesses [m], one per layer, all > 0. O(nodes), no allocation.
inline void place_nodes(const LayerStack& stack, double start, const double* thickness, Point* nodes) noexcept {
    Id layer = 0; // the places are walked in their order; where it goes back, the sum is done again
    double x = start;
    for (std::size_t n = 0; n < stack.place.size(); ++n) {
        const StackPlace p = stack.place[n];
        if (p.layer < layer) {
            layer = 0;
            x = start;
        }
        for (; layer < p.layer; ++layer) x += thickness[layer];
        nodes[n] = {p.fraction == 1.0 ? x + thickness[layer] : x + p.fraction * thickness[layer], 0.0};
    }
}

} // namespace detail
} // namespace tepor
