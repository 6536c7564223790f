#pragma once
// Splitting cells by tables: where the children's nodes lie in their parent. Used by refined() and bisected().

#include <array>
#include <cstdint>
#include <tepor/base/config.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/sides.hpp>
#include <vector>

namespace tepor::detail {

/// The vertices of one child in the parent's reference cell.
using ChildCorners = std::array<Point, 4>;

/// The children of a cell and their nodes, each distinct place of the reference cell once.
struct ChildTable {
    struct Spot {
        Point xi;             ///< in the parent
        int parent_node = -1; ///< node of the parent at that place, or -1
        int side = -1;        ///< side of the parent it lies inside, or -1
        int slot = -1;        ///< position among the new spots of a split side, from its first vertex
        double t = 0.0;       ///< fraction along that side
        std::vector<double> shape;
    };
    struct SideChild {
        int child;
        int child_side;
    };
    int children = 0;
    std::vector<ChildCorners> corners;
    std::vector<Spot> spots;
    std::vector<int> node;                         ///< spot of node i of child k at k * nodes + i
    std::array<std::vector<SideChild>, 4> on_side; ///< children along each side of the parent, in its direction

    /// Place of a child's reference point in the parent.
    [[nodiscard]] Point in_parent(const CellKind& kind, int child, Point xi) const noexcept {
        const ChildCorners& c = corners[as_size(child)];
        const Point p = c[0] + xi.x * (c[1] - c[0]);
        if (kind.dim == 1) return p;
        return p + xi.y * ((kind.shape == CellShape::quadrilateral ? c[3] : c[2]) - c[0]);
    }
};

ChildTable make_child_table(const CellKind& kind, const std::vector<ChildCorners>& children);

/// Where the cells of a subdivided mesh come from.
struct Lineage {
    std::vector<Id> parent;          ///< cell of the coarse mesh
    std::vector<std::uint8_t> table; ///< table used
    std::vector<std::uint8_t> child; ///< child of that table
};

/// Fill `fine`, whose element description is set.
///
/// @param which       table of each cell
/// @param keep_nodes  nodes of the coarse mesh keep their numbers; else nodes are numbered as cells come to them
/// @throws Error bad_mesh  a child next to an arc would be inverted: the cell is too coarse for its arc
void subdivide(const MeshData& coarse, const CellKind& kind, const SideMap& sides,
               const std::vector<ChildTable>& tables, const std::vector<std::uint8_t>& which, bool keep_nodes,
               MeshData& fine, Lineage& lineage);

/// Values at the nodes of the fine mesh from those of the coarse one, by its shape functions.
std::vector<double> interpolate(const MeshData& coarse, const CellKind& kind, const std::vector<ChildTable>& tables,
                                const MeshData& fine, const Lineage& lineage, const double* values);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/subdivide.hpp>
#endif
