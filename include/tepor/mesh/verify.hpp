#pragma once
// verify(mesh): the invariants of a mesh, and the name of the first one broken.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>

namespace tepor {

/// What verify() found.
struct MeshReport {
    std::string problem; ///< empty when the mesh is sound; else the broken invariant with numbers and what to do
    Index cell = -1;     ///< the cell at fault, when there is one
    Index node = -1;     ///< the node at fault, when there is one

    /// True when every invariant holds.
    explicit operator bool() const noexcept { return problem.empty(); }

    /// Throw Error bad_mesh when an invariant is broken.
    void or_throw() const;
};

namespace detail {
MeshReport verify(const MeshData& mesh, const CellKind& kind);
}

/// Check a mesh; the first broken invariant is reported, in this order:
/// array sizes, finite coordinates, ids in range; repeated node in a cell, duplicate cell, unused node, nodes at one place;
/// Jacobian determinant > 0 all over each cell; sides shared by at most two cells in opposite directions with the same
/// inner nodes; cells around a node fill no more than the full turn; no hanging node, gap or crossing on the outer edge;
/// faces and curves refer to real sides, once each, and curved sides lie on their arcs, all others straight.
///
/// Cost  O(cells), about 1 us per triangle of order 1
template <Element E>
MeshReport verify(const Mesh<E>& mesh) {
    return detail::verify(mesh, detail::cell_kind<E>());
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/verify.hpp>
#endif
