#pragma once
// Matching of sides: buckets by the lower end vertex, so that the work is linear and walks memory in order.

#include <algorithm>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/sides.hpp>

namespace tepor {

TEPOR_INLINE SideMap match_sides(const MeshData& mesh) {
    using detail::as_id;
    using detail::as_size;
    const Index cells = mesh.cell_count();
    const int sides = mesh.sides_per_cell;
    SideMap map;
    map.sides_per_cell = sides;
    map.id.assign(as_size(cells * sides), -1);

    std::vector<Id> start(as_size(mesh.node_count() + 2), 0);
    Id* s = start.data();
    for (Index c = 0; c < cells; ++c)
        for (int k = 0; k < sides; ++k) {
            const auto ends = detail::side_ends(mesh, k);
            ++s[std::min(mesh.cell(c)[ends[0]], mesh.cell(c)[ends[1]]) + 2];
        }
    for (std::size_t n = 2; n < start.size(); ++n) start[n] += start[n - 1];

    // While filling, s[v + 1] is the end of the bucket of vertex v; each entry is a side already numbered.
    std::vector<Id> bucket(as_size(cells * sides));
    std::vector<Id> high(as_size(cells * sides));
    Id* b = bucket.data();
    Id* h = high.data();
    map.first.reserve(as_size(cells * sides / 2 + 16));
    map.second.reserve(as_size(cells * sides / 2 + 16));
    for (Index c = 0; c < cells; ++c)
        for (int k = 0; k < sides; ++k) {
            const auto ends = detail::side_ends(mesh, k);
            const Id a = mesh.cell(c)[ends[0]];
            const Id z = mesh.cell(c)[ends[1]];
            const Id low = std::min(a, z);
            const Id top = std::max(a, z);
            Id found = -1;
            for (Id i = s[low]; i < s[low + 1]; ++i)
                if (h[i] == top) found = b[i];
            if (found < 0) {
                b[s[low + 1]] = as_id(map.first.size());
                h[s[low + 1]++] = top;
                found = as_id(map.first.size());
                map.first.push_back({as_id(c), k});
                map.second.push_back({-1, -1});
            } else {
                CellSide& second = map.second[as_size(found)];
                const CellSide first = map.first[as_size(found)];
                if (second.cell >= 0)
                    throw Error(ErrorCode::bad_mesh, "mesh",
                                detail::text("mesh: the side from node ", a, " to node ", z, " belongs to cells ",
                                             first.cell, ", ", second.cell, " and ", c,
                                             ", expected one or two; remove the cell too many"),
                                c);
                if (mesh.dim == 2 && mesh.cell(first.cell)[first.side] == a)
                    throw Error(ErrorCode::bad_mesh, "mesh",
                                detail::text("mesh: cells ", first.cell, " and ", c, " both walk the side from node ",
                                             a, " to node ", z,
                                             " in this direction, so they overlap or one of them is inverted"),
                                c);
                second = {as_id(c), k};
            }
            map.id[as_size(c * sides + k)] = found;
        }
    return map;
}

} // namespace tepor
