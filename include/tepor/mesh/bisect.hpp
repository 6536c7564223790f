#pragma once
// bisected(mesh, cells): newest-vertex bisection of triangles, with transfer of nodal values.

#include <span>
#include <tepor/base/config.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/mesh/subdivide.hpp>
#include <vector>

namespace tepor {

/// The result of bisected(): the finer mesh and where its cells come from.
template <Element E>
struct Bisected {
    Mesh<E> mesh;
    detail::Lineage lineage;
    Index skipped = 0; ///< marked cells left alone because they are smaller than 1e-12 of the body

    /// Cell of the coarse mesh that cell c is a part of.
    [[nodiscard]] Index parent(Index c) const noexcept { return lineage.parent[detail::as_size(c)]; }
};

namespace detail {

/// Tables of the ways a triangle is split: whole, side 1, sides 1 and 0, sides 1 and 2, all.
std::vector<ChildTable> bisection_tables(const CellKind& kind);

void bisect(const MeshData& coarse, const CellKind& kind, std::span<const Index> cells, MeshData& fine,
            Lineage& lineage, Index& skipped);

/// Turn the nodes of each triangle so that its longest side is side 1.
void longest_side_first(MeshData& mesh, const CellKind& kind);

} // namespace detail

/// Split the listed triangles, and as many more as keep whole sides shared.
///
/// A triangle is split at the middle of side 1, opposite its vertex 0; the new vertex becomes vertex 0 of both children, so
/// that angles stay within those of four classes of similar triangles per first triangle. triangulate() gives meshes with
/// the longest side in that place; aim_bisection() does it for others. Regions, faces and curves are kept, new nodes of sides
/// on arcs lie on the true arc, and nodes keep their numbers. No recursion.
///
/// @throws Error bad_value  a cell number out of range
///               bad_mesh   the sides of the mesh do not match, or a child next to an arc would be inverted
/// Cost    O(cells)
/// Source  Mitchell, ACM Trans. Math. Software 15 (1989) 326-347 (newest vertex); Binev, Dahmen & DeVore, Numer. Math. 97
///         (2004) 219-268 (closure adds no more than a constant times what was marked)
template <Element E>
Bisected<E> bisected(const Mesh<E>& mesh, std::span<const Index> cells) {
    static_assert(E::dim == 2 && E::shape_of_cell == CellShape::triangle, "bisected splits triangles");
    Bisected<E> fine;
    detail::bisect(mesh, detail::cell_kind<E>(), cells, fine.mesh, fine.lineage, fine.skipped);
    return fine;
}

/// Values at the nodes of the bisected mesh from values at the nodes of `mesh`, by its shape functions.
/// @throws Error bad_value  not one value per node
template <Element E>
std::vector<double> transferred(const Mesh<E>& mesh, const Bisected<E>& fine, std::span<const double> values) {
    detail::require_values(mesh, values.size());
    const auto& kind = detail::cell_kind<E>();
    return detail::interpolate(mesh, kind, detail::bisection_tables(kind), fine.mesh, fine.lineage, values.data());
}

/// Turn the nodes of each triangle so that its longest side is the one bisected first. For meshes from own arrays, before the
/// first bisection and never after.
template <Element E>
void aim_bisection(Mesh<E>& mesh) {
    static_assert(E::dim == 2 && E::shape_of_cell == CellShape::triangle, "aim_bisection is for triangles");
    detail::longest_side_first(mesh, detail::cell_kind<E>());
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/bisect.hpp>
#endif
