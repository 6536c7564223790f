#pragma once
// The even splits of the three cell shapes.

#include <tepor/mesh/refine.hpp>

namespace tepor::detail {

/// Children keep the orientation of their parent, so that side s of a child lies on or is parallel to side s of the parent.
TEPOR_INLINE ChildTable even_split(const CellKind& kind) {
    const Point o{0, 0};
    const Point x{1, 0};
    const Point y{0, 1};
    const Point m{0.5, 0};
    const Point c{0.5, 0.5};
    const Point w{0, 0.5};
    if (kind.shape == CellShape::segment) return make_child_table(kind, {{o, m}, {m, x}});
    if (kind.shape == CellShape::triangle) return make_child_table(kind, {{o, m, w}, {m, x, c}, {w, c, y}, {c, w, m}});
    const Point xy{1, 1};
    const Point e{1, 0.5};
    const Point n{0.5, 1};
    return make_child_table(kind, {{o, m, c, w}, {m, x, e, c}, {c, e, xy, n}, {w, c, n, y}});
}

/// The places of the finer nodes in the layers of a 1D stack, so that a Parameter moves them as it moved the coarse ones.
TEPOR_INLINE void refine_stack(const MeshData& coarse, const ChildTable& table, MeshData& fine) {
    const LayerStack& from = coarse.stack;
    LayerStack& to = fine.stack;
    to.start = from.start;
    to.thickness = from.thickness;
    to.place.resize(fine.nodes.size());
    const Id* node = fine.cells.data(); // children follow each other as their parents do
    for (Index c = 0; c < coarse.cell_count(); ++c) {
        const StackPlace left = from.place[as_size(coarse.cell(c)[0])];
        const StackPlace right = from.place[as_size(coarse.cell(c)[1])];
        for (const int spot : table.node)
            to.place[as_size(*node++)] = between(left, right, table.spots[as_size(spot)].xi.x);
        to.layer_of_cell.insert(to.layer_of_cell.end(), as_size(table.children), from.layer_of_cell[as_size(c)]);
    }
}

TEPOR_INLINE void refine_uniformly(const MeshData& coarse, const CellKind& kind, MeshData& fine) {
    const std::vector<ChildTable> tables{even_split(kind)};
    const std::vector<std::uint8_t> which(as_size(coarse.cell_count()), 0);
    Lineage lineage;
    subdivide(coarse, kind, match_sides(coarse), tables, which, false, fine, lineage);
    if (coarse.stack.given()) refine_stack(coarse, tables[0], fine);
}

TEPOR_INLINE std::vector<double> refine_values(const MeshData& coarse, const CellKind& kind, const MeshData& fine,
                                               const double* values) {
    const std::vector<ChildTable> tables{even_split(kind)};
    Lineage lineage;
    for (Index c = 0; c < fine.cell_count(); ++c) {
        lineage.parent.push_back(as_id(c / tables[0].children));
        lineage.child.push_back(static_cast<std::uint8_t>(c % tables[0].children));
    }
    lineage.table.assign(lineage.parent.size(), 0);
    return interpolate(coarse, kind, tables, fine, lineage, values);
}

} // namespace tepor::detail
