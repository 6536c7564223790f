#pragma once
// Node data of a block of cells or sides, gathered into its arrays.

#include <tepor/assembly/block.hpp>
#include <tepor/body/model.hpp>
#include <type_traits>

namespace tepor::detail {

/// Most nodes on a side.
inline constexpr int max_side_nodes = 16;

/// Calls `run` with the number of nodes as a constant where it is a usual one, so that loops over nodes unroll.
template <class Run>
void with_nodes(int nodes, Run&& run) {
    switch (nodes) {
    case 2: return run(std::integral_constant<int, 2>{});
    case 3: return run(std::integral_constant<int, 3>{});
    case 4: return run(std::integral_constant<int, 4>{});
    case 6: return run(std::integral_constant<int, 6>{});
    case 9: return run(std::integral_constant<int, 9>{});
    default: return run(nodes);
    }
}

/// Coordinates (and temperatures, when T is not null) of up to block_width cells from `first` on; the number of them.
inline int gather_cells(const Model& model, const Point* place, const double* T, double* nodal_T, Id first, Id end,
                        CellBlock& block, Id* cells) {
    constexpr int W = block_width;
    const int count = end - first < W ? end - first : W;
    const bool plane = model.kernels->dim == 2; // in 1D all y stay zero
    for (int b = 0; b < W; ++b) cells[b] = first + (b < count ? b : count - 1);
    double* TEPOR_RESTRICT x = block.x;
    double* TEPOR_RESTRICT y = block.y;
    with_nodes(model.kernels->nodes, [&](auto nodes) {
        const int n = nodes;
        const Id* all = model.cell_unknowns.data();
        for (int b = 0; b < W; ++b) {
            const Id* ids = all + static_cast<Index>(cells[b]) * n;
            for (int i = 0; i < n; ++i) {
                const Point p = place[ids[i]];
                x[i * W + b] = p.x;
                if (plane) y[i * W + b] = p.y;
            }
        }
        if (!T) return;
        for (int b = 0; b < W; ++b) {
            const Id* ids = all + static_cast<Index>(cells[b]) * n;
            for (int i = 0; i < n; ++i) nodal_T[i * W + b] = T[ids[i]];
        }
    });
    return count;
}

/// The same for sides; `cells` receives the cell of each.
inline int gather_sides(const Model& model, const Point* place, const double* T, double* nodal_T, const SideList& sides,
                        Index first, SideBlock& block, Id* cells) {
    constexpr int W = block_width;
    const int m = model.kernels->side_nodes;
    const int count = sides.count() - first < W ? static_cast<int>(sides.count() - first) : W;
    for (int b = 0; b < W; ++b) {
        const Index s = first + (b < count ? b : count - 1);
        cells[b] = sides.side[as_size(s)].cell;
        const Id* ids = sides.unknowns.data() + s * m;
        for (int i = 0; i < m; ++i) {
            block.x[i * W + b] = place[ids[i]].x;
            block.y[i * W + b] = place[ids[i]].y;
            if (T) nodal_T[i * W + b] = T[ids[i]];
        }
    }
    return count;
}

} // namespace tepor::detail
