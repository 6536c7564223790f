#pragma once
// refined(mesh): every cell split evenly, for all element types.

#include <tepor/base/config.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>

namespace tepor {
namespace detail {
/// Fill `fine`, whose element description is set, from `coarse`.
void refine_uniformly(const MeshData& coarse, const CellKind& kind, MeshData& fine);
} // namespace detail

/// Every cell split into children of half its width: 2 segments, 4 triangles or 4 quadrilaterals. Regions, faces and curves
/// are kept; new nodes of sides on arcs lie on the true arc. Cell c becomes cells n c .. n c + n - 1 with n = 2 or 4.
///
/// @throws Error bad_mesh   the sides of the mesh do not match
///               too_large  more nodes or cell entries than 32-bit ids hold
/// Cost    O(cells)
template <Element E>
Mesh<E> refined(const Mesh<E>& mesh) {
    Mesh<E> fine;
    detail::refine_uniformly(mesh, detail::cell_kind<E>(), fine);
    return fine;
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/refine.hpp>
#endif
