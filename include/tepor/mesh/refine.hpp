#pragma once
// refined(mesh): every cell split evenly, for all element types.

#include <span>
#include <tepor/base/config.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/subdivide.hpp>
#include <vector>

namespace tepor {
namespace detail {

/// Fill `fine`, whose element description is set, from `coarse`.
void refine_uniformly(const MeshData& coarse, const CellKind& kind, MeshData& fine);

std::vector<double> refine_values(const MeshData& coarse, const CellKind& kind, const MeshData& fine,
                                  const double* values);

inline void require_values(const MeshData& mesh, std::size_t count) {
    if (count == mesh.nodes.size()) return;
    throw Error(
        ErrorCode::bad_value, "values",
        text("transferred: ", count, " values, expected ", mesh.nodes.size(), ", one per node of the coarse mesh"));
}

} // namespace detail

/// Every cell split into children of half its width: 2 segments, 4 triangles or 4 quadrilaterals. Regions, faces and curves
/// are kept; new nodes of sides on arcs lie on the true arc. Cell c becomes cells n c .. n c + n - 1 with n = 2 or 4.
///
/// @throws Error bad_mesh   the sides of the mesh do not match, or a child next to an arc would be inverted
///               too_large  more nodes or cell entries than 32-bit ids hold
/// Cost    O(cells)
template <Element E>
Mesh<E> refined(const Mesh<E>& mesh) {
    Mesh<E> fine;
    detail::refine_uniformly(mesh, detail::cell_kind<E>(), fine);
    return fine;
}

/// Values at the nodes of refined(mesh) from values at the nodes of mesh, by its shape functions.
/// @throws Error bad_value  not one value per node
template <Element E>
std::vector<double> transferred(const Mesh<E>& mesh, const Mesh<E>& fine, std::span<const double> values) {
    detail::require_values(mesh, values.size());
    return detail::refine_values(mesh, detail::cell_kind<E>(), fine, values.data());
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/refine.hpp>
#endif
