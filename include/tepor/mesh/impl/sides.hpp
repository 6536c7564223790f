#pragma once
// Matching of sides: buckets by the lower end vertex, so that the work is linear and walks memory in order.

#include <algorithm>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/sides.hpp>

namespace tepor {

namespace detail {

/// For S sides per cell, known when compiled, so that the loops over them unroll.
template <int S>
SideMap match_sides_of(const MeshData& mesh) {
    const Index cells = mesh.cell_count();
    const int nodes = mesh.nodes_per_cell;
    const Id* const all = mesh.cells.data();
    SideMap map;
    map.sides_per_cell = S;
    map.id.resize(as_size(cells * S));
    const auto end_of = [&](const Id* cell, int k) { return S == 2 ? cell[k] : cell[k + 1 == S ? 0 : k + 1]; };

    std::vector<Id> start(as_size(mesh.node_count() + 2), 0);
    Id* s = start.data();
    for (Index c = 0; c < cells; ++c) {
        const Id* cell = all + c * nodes;
        for (int k = 0; k < S; ++k) ++s[std::min(cell[k], end_of(cell, k)) + 2];
    }
    for (std::size_t n = 2; n < start.size(); ++n) start[n] += start[n - 1];

    // While filling, s[v + 1] is the end of the bucket of vertex v; each entry is a side already numbered.
    struct Entry {
        Id high, number;
    };
    std::vector<Entry> bucket(as_size(cells * S));
    Entry* b = bucket.data();
    map.first.resize(as_size(cells * S));
    map.second.resize(as_size(cells * S));
    CellSide* first = map.first.data();
    CellSide* second = map.second.data();
    Id count = 0;
    for (Index c = 0; c < cells; ++c) {
        const Id* cell = all + c * nodes;
        for (int k = 0; k < S; ++k) {
            const Id a = cell[k];
            const Id z = end_of(cell, k);
            const Id low = std::min(a, z);
            const Id top = std::max(a, z);
            Id found = -1;
            for (Id i = s[low]; i < s[low + 1]; ++i)
                if (b[i].high == top) found = b[i].number;
            if (found < 0) {
                found = count++;
                b[s[low + 1]++] = {top, found};
                first[found] = {as_id(c), k};
                second[found] = {-1, -1};
            } else {
                if (second[found].cell >= 0)
                    throw Error(ErrorCode::bad_mesh, "mesh",
                                text("mesh: the side from node ", a, " to node ", z, " belongs to cells ",
                                     first[found].cell, ", ", second[found].cell, " and ", c,
                                     ", expected one or two; remove the cell too many"),
                                c);
                if (S > 2 && mesh.cell(first[found].cell)[first[found].side] == a)
                    throw Error(ErrorCode::bad_mesh, "mesh",
                                text("mesh: cells ", first[found].cell, " and ", c, " both walk the side from node ", a,
                                     " to node ", z, " in this direction, so they overlap or one of them is inverted"),
                                c);
                second[found] = {as_id(c), k};
            }
            map.id[as_size(c * S + k)] = found;
        }
    }
    map.first.resize(as_size(count));
    map.second.resize(as_size(count));
    return map;
}

} // namespace detail

TEPOR_INLINE SideMap match_sides(const MeshData& mesh) {
    return mesh.sides_per_cell == 2   ? detail::match_sides_of<2>(mesh)
           : mesh.sides_per_cell == 3 ? detail::match_sides_of<3>(mesh)
                                      : detail::match_sides_of<4>(mesh);
}

} // namespace tepor
