#pragma once
// Node data of a block of cells or sides, gathered into its arrays.

#include <tepor/assembly/block.hpp>
#include <tepor/body/model.hpp>

namespace tepor::detail {

/// Most nodes on a side.
inline constexpr int max_side_nodes = 16;

/// Coordinates (and temperatures, when T is not null) of up to block_width cells from `first` on; the number of them.
inline int gather_cells(const Model& model, const Point* place, const double* T, double* nodal_T, Id first, Id end,
                        CellBlock& block, Id* cells) {
    constexpr int W = block_width;
    const int n = model.kernels->nodes;
    const int count = end - first < W ? end - first : W;
    const bool plane = model.kernels->dim == 2; // in 1D all y stay zero
    for (int b = 0; b < W; ++b) {
        cells[b] = first + (b < count ? b : count - 1);
        const Id* ids = model.cell(cells[b]);
        for (int i = 0; i < n; ++i) block.x[i * W + b] = place[ids[i]].x;
        if (plane)
            for (int i = 0; i < n; ++i) block.y[i * W + b] = place[ids[i]].y;
        if (T)
            for (int i = 0; i < n; ++i) nodal_T[i * W + b] = T[ids[i]];
    }
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
