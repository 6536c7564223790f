#pragma once
// The meshes of a bracket: straight sides first, then cells that carry half of the width bisected.

#include <algorithm>
#include <memory>
#include <tepor/answers/impl/refine_loop.hpp>
#include <tepor/mesh/bisect.hpp>
#include <tepor/mesh/refine.hpp>
#include <vector>

namespace tepor::detail {

/// Cells that may still be halved: down to 1e-12 of the body, where coordinates run out of digits. Refining on at a strong
/// singularity beyond that would leave all other cells as they are.
inline std::vector<Index> refinable(const MeshData& mesh) {
    Point low = mesh.nodes.front(), high = low;
    for (const Point& p : mesh.nodes) {
        low = {std::min(low.x, p.x), std::min(low.y, p.y)};
        high = {std::max(high.x, p.x), std::max(high.y, p.y)};
    }
    const double least = 1.001e-12 * distance(low, high);
    std::vector<Index> cells;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id* cell = mesh.cell(c);
        if (distance(mesh.nodes[as_size(cell[1])], mesh.nodes[as_size(cell[2])]) > least) cells.push_back(c);
    }
    return cells;
}

/// Of these cells, those of largest share that carry half of their sum (W. Doerfler, SIAM J. Numer. Anal. 33 (1996) 1106).
inline std::vector<Index> bulk(std::vector<Index> cells, const std::vector<double>& share) {
    std::sort(cells.begin(), cells.end(), [&](Index a, Index b) {
        return share[as_size(a)] != share[as_size(b)] ? share[as_size(a)] > share[as_size(b)] : a < b;
    });
    double half = 0.0, sum = 0.0;
    for (const Index c : cells) half += 0.5 * share[as_size(c)];
    std::size_t count = 0;
    while (count < cells.size() && sum < half) sum += share[as_size(cells[count++])];
    cells.resize(count);
    return cells;
}

/// A copy with straight sides, ready to be bisected.
inline std::shared_ptr<MeshData> straightened(const MeshData& mesh, const CellKind& kind) {
    auto out = std::make_shared<MeshData>(mesh);
    for (const CurvedSide& curved : out->curved) {
        const Id* cell = out->cell(curved.side.cell);
        const Id s = curved.side.side;
        if (out->order == 2)
            out->nodes[as_size(cell[3 + s])] =
                0.5 * (out->nodes[as_size(cell[s])] + out->nodes[as_size(cell[s == 2 ? 0 : s + 1])]);
    }
    out->curved.clear();
    longest_side_first(*out, kind);
    return out;
}

/// The next mesh: in 2D the cells that carry half of the width are bisected, in 1D all are.
inline std::shared_ptr<const MeshData> finer(const MeshData& mesh, const CellKind& kind,
                                             const std::vector<double>& share) {
    auto fine = mesh_like(mesh);
    if (mesh.dim == 1) {
        refine_uniformly(mesh, kind, *fine);
    } else {
        Lineage lineage;
        Index skipped = 0;
        bisect(mesh, kind, bulk(refinable(mesh), share), *fine, lineage, skipped);
    }
    return fine;
}

} // namespace tepor::detail
