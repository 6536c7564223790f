#pragma once
// Where contacts lie in a mesh, and the copies of nodes they make.

#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/base/config.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor::detail {

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
