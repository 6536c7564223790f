#pragma once
// Numbering and placing the nodes of a cell that are no vertices.

#include <tepor/base/error.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/inner_nodes.hpp>
#include <tepor/mesh/sides.hpp>
#include <utility>

namespace tepor::detail {

TEPOR_INLINE void add_inner_nodes(MeshData& mesh, const CellKind& kind, std::vector<Id> corners) {
    const int v = kind.vertices();
    const int n = kind.nodes;
    const Index cells = mesh.cell_count();
    if (n == v) {
        mesh.cells = std::move(corners);
        return;
    }
    if (cells * n > max_id)
        throw Error(ErrorCode::too_large, "mesh",
                    "mesh: more cell entries than 32-bit ids hold; use larger cells or a lower order");
    mesh.cells.assign(as_size(cells * n), -1);
    for (Index c = 0; c < cells; ++c)
        for (int k = 0; k < v; ++k) mesh.cells[as_size(c * n + k)] = corners[as_size(c * v + k)];
    const SideMap sides = match_sides(mesh);

    std::vector<const MeshArc*> side_arc(kind.dim == 2 && !mesh.curved.empty() ? as_size(sides.count()) : 0, nullptr);
    for (const CurvedSide& c : mesh.curved)
        side_arc[as_size(sides.number(c.side.cell, c.side.side))] = &mesh.arcs[as_size(c.arc)];

    const int inner = kind.dim == 2 ? kind.side_nodes - 2 : 0;
    std::vector<Id> first(as_size(sides.count()), -1); // first inner node of a side, in the direction of its first cell
    Point x[max_cell_nodes];
    const MeshArc* arcs[4] = {};
    for (Index c = 0; c < cells; ++c) {
        Id* ids = mesh.cells.data() + c * n;
        for (int k = 0; k < v; ++k) x[k] = mesh.nodes[as_size(ids[k])];
        if (kind.dim == 2 && !side_arc.empty())
            for (int s = 0; s < kind.sides; ++s) arcs[s] = side_arc[as_size(sides.number(c, s))];
        place_cell_nodes(kind, arcs, x);
        for (int s = 0; s < kind.sides && inner > 0; ++s) {
            const Id number = sides.number(c, s);
            Id& start = first[as_size(number)];
            if (start < 0) {
                start = as_id(mesh.nodes.size());
                for (int j = 0; j < inner; ++j) {
                    ids[kind.side_node(s, 2 + j)] = start + j;
                    mesh.nodes.push_back(x[kind.side_node(s, 2 + j)]);
                }
            } else {
                for (int j = 0; j < inner; ++j) ids[kind.side_node(s, 2 + j)] = start + inner - 1 - j;
            }
        }
        for (int i = v; i < n; ++i)
            if (ids[i] < 0) {
                ids[i] = as_id(mesh.nodes.size());
                mesh.nodes.push_back(x[i]);
            }
    }
}

} // namespace tepor::detail
