#pragma once
// Where contacts lie in a mesh, and the copies of nodes they make.

#include <algorithm>
#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/base/config.hpp>
#include <tepor/mesh/mesh.hpp>
#include <utility>
#include <vector>

namespace tepor::detail {

/// First and last vertex of a side, the lower id first: names the side whichever cell it is seen from.
using SideKey = std::pair<Id, Id>;

inline SideKey side_key(const MeshData& mesh, const CellKernels& kernels, Id cell, Id side) {
    const Id* nodes = mesh.cell(cell);
    const Id a = nodes[kernels.side_node(side, 0)];
    const Id b = kernels.dim == 1 ? a : nodes[kernels.side_node(side, 1)];
    return std::minmax(a, b);
}

struct KeyedSide {
    SideKey key;
    CellSide side;
};

inline void sort_by_key(std::vector<KeyedSide>& sides) {
    std::sort(sides.begin(), sides.end(), [](const KeyedSide& a, const KeyedSide& b) { return a.key < b.key; });
}

inline const KeyedSide* find_key(const std::vector<KeyedSide>& sides, SideKey key) {
    const auto found = std::lower_bound(sides.begin(), sides.end(), key,
                                        [](const KeyedSide& s, const SideKey& k) { return s.key < k; });
    return found != sides.end() && found->key == key ? &*found : nullptr;
}

/// The two cells that meet at a contact, user numbering, each with its side.
struct ContactPair {
    CellSide first;
    CellSide second;
    bool reversed = false; ///< the second side runs through the shared nodes the other way
};

/// The pairs of sides between two regions; empty when they do not touch. Cost O(cells of both).
[[nodiscard]] TEPOR_INLINE std::vector<ContactPair> interface_between(const MeshData& mesh, const CellKernels& kernels,
                                                                      Id first, Id second);

/// Cell unknowns before numbering: the node, or a copy of it beyond the contact. One copy per set of cells still connected
/// around the node once contact sides are removed. `owner` receives the node of each provisional unknown.
[[nodiscard]] TEPOR_INLINE std::vector<Id> split_nodes(const MeshData& mesh, const CellKernels& kernels,
                                                       const std::vector<ContactPair>& contacts,
                                                       std::vector<Id>& owner);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/split.hpp>
#endif
