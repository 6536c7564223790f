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

TEPOR_INLINE void refine_uniformly(const MeshData& coarse, const CellKind& kind, MeshData& fine) {
    const std::vector<ChildTable> tables{even_split(kind)};
    const std::vector<std::uint8_t> which(as_size(coarse.cell_count()), 0);
    Lineage lineage;
    subdivide(coarse, kind, match_sides(coarse), tables, which, false, fine, lineage);
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
