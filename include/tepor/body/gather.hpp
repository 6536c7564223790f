#pragma once
// Node data of a block of cells or sides, gathered into its arrays.

#include <cstring>
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

/// Coordinates of two points side by side. One store of two numbers each: what follows reads more than one at a time.
inline void put_pair(const Point* p, const Point* q, double* x, double* y) {
#if defined(__has_builtin) && __has_builtin(__builtin_shufflevector)
    using Pair = double __attribute__((vector_size(16)));
    static_assert(sizeof(Point) == sizeof(Pair));
    Pair a, b;
    std::memcpy(&a, p, sizeof a);
    std::memcpy(&b, q, sizeof b);
    const Pair first = __builtin_shufflevector(a, b, 0, 2);
    const Pair second = __builtin_shufflevector(a, b, 1, 3);
    std::memcpy(x, &first, sizeof first);
    std::memcpy(y, &second, sizeof second);
#else
    x[0] = p->x;
    x[1] = q->x;
    y[0] = p->y;
    y[1] = q->y;
#endif
}

/// Coordinates of the nodes of `count` cells; the last cell stands in the places of the block that are left.
template <class N>
void gather_places(N nodes, const Id* TEPOR_RESTRICT ids, int count, const Point* TEPOR_RESTRICT place,
                   double* TEPOR_RESTRICT x, double* TEPOR_RESTRICT y) {
    constexpr int W = block_width;
    const int n = nodes;
    int b = 0;
    for (; b + 1 < count; b += 2, ids += 2 * n)
        for (int i = 0; i < n; ++i) put_pair(place + ids[i], place + ids[n + i], x + i * W + b, y + i * W + b);
    if (b == count) ids -= n;
    for (; b < W; ++b)
        for (int i = 0; i < n; ++i) {
            x[i * W + b] = place[ids[i]].x;
            y[i * W + b] = place[ids[i]].y;
        }
}

/// The same for one number per node.
template <class N, class Of>
void gather_numbers(N nodes, const Id* TEPOR_RESTRICT ids, int count, Of of, double* TEPOR_RESTRICT to) {
    const int n = nodes;
    for (int b = 0; b < block_width; ++b) {
        for (int i = 0; i < n; ++i) to[i * block_width + b] = of(ids[i]);
        if (b + 1 < count) ids += n;
    }
}

/// The points of an open block at which its conductivities are taken; `point_T` null when no temperature is at hand.
inline Points conduction_points(const CellKernels& kernel, const CellBlock& block, const double* point_T) {
    const Index first = static_cast<Index>(kernel.first_conduction_point()) * block_width;
    return {static_cast<Index>(kernel.conduction_points()) * block_width, point_T ? point_T + first : nullptr, nullptr,
            block.point_x + first, block.point_y + first};
}

/// Coordinates (and temperatures, when T is not null) of up to block_width cells from `first` on; the number of them.
inline int gather_cells(const Model& model, const Point* place, const double* T, double* nodal_T, Id first, Id end,
                        CellBlock& block, Id* cells) {
    constexpr int W = block_width;
    const int count = end - first < W ? end - first : W;
    const bool plane = model.kernels->dim == 2; // in 1D all y stay zero
    for (int b = 0; b < W; ++b) cells[b] = first + b;
    for (int b = count; b < W; ++b) cells[b] = first + count - 1;
    const Id* const ids = model.cell(first);
    with_nodes(model.kernels->nodes, [&](auto nodes) {
        if (plane)
            gather_places(nodes, ids, count, place, block.x, block.y);
        else
            gather_numbers(
                nodes, ids, count, [place](Id id) { return place[id].x; }, block.x);
        if (T)
            gather_numbers(
                nodes, ids, count, [T](Id id) { return T[id]; }, nodal_T);
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
