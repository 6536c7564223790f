#pragma once
// Marking, closing and splitting by newest-vertex bisection.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/bisect.hpp>
#include <tepor/mesh/sides.hpp>

namespace tepor::detail {

TEPOR_INLINE std::vector<ChildTable> bisection_tables(const CellKind& kind) {
    const Point a{0, 0}; // vertex 0, the newest
    const Point b{1, 0};
    const Point c{0, 1};
    const Point m{0.5, 0.5}; // middle of side 1, the one split first
    const Point n{0.5, 0};   // of side 0
    const Point p{0, 0.5};   // of side 2
    // A child's vertex 0 is the vertex made by the split; its side 1 lies opposite.
    return {make_child_table(kind, {{a, b, c}}), make_child_table(kind, {{m, a, b}, {m, c, a}}),
            make_child_table(kind, {{n, m, a}, {n, b, m}, {m, c, a}}),
            make_child_table(kind, {{m, a, b}, {p, m, c}, {p, a, m}}),
            make_child_table(kind, {{n, m, a}, {n, b, m}, {p, m, c}, {p, a, m}})};
}

TEPOR_INLINE void bisect(const MeshData& coarse, const CellKind& kind, std::span<const Index> cells, MeshData& fine,
                         Lineage& lineage, Index& skipped) {
    const SideMap sides = match_sides(coarse);
    Point low = coarse.nodes.front();
    Point high = low;
    for (Point p : coarse.nodes) {
        low = {std::min(low.x, p.x), std::min(low.y, p.y)};
        high = {std::max(high.x, p.x), std::max(high.y, p.y)};
    }
    const double least = 1e-12 * distance(low, high);

    // A side is split when it is marked. A triangle with a marked side must split side 1 as well: each newly marked side is
    // looked at once from both its triangles.
    std::vector<char> marked(as_size(sides.count()), 0);
    std::vector<Id> stack;
    const auto mark = [&](Index cell) {
        const Id s = sides.number(cell, 1);
        if (marked[as_size(s)] != 0) return;
        marked[as_size(s)] = 1;
        stack.push_back(s);
    };
    skipped = 0;
    for (Index c : cells) {
        if (c < 0 || c >= coarse.cell_count())
            throw Error(ErrorCode::bad_value, "cells",
                        text("bisected: cell ", c, ", expected 0 to ", coarse.cell_count() - 1), c);
        const Id* v = coarse.cell(c);
        if (!(distance(coarse.nodes[as_size(v[1])], coarse.nodes[as_size(v[2])]) >= least)) {
            ++skipped;
            continue;
        }
        mark(c);
        while (!stack.empty()) {
            const Id s = stack.back();
            stack.pop_back();
            mark(sides.first[as_size(s)].cell);
            if (sides.second[as_size(s)].cell >= 0) mark(sides.second[as_size(s)].cell);
        }
    }
    std::vector<std::uint8_t> which(as_size(coarse.cell_count()), 0);
    for (Index c = 0; c < coarse.cell_count(); ++c) {
        if (marked[as_size(sides.number(c, 1))] == 0) continue;
        which[as_size(c)] = static_cast<std::uint8_t>(1 + (marked[as_size(sides.number(c, 0))] != 0 ? 1 : 0) +
                                                      (marked[as_size(sides.number(c, 2))] != 0 ? 2 : 0));
    }
    subdivide(coarse, kind, sides, bisection_tables(kind), which, true, fine, lineage);
}

TEPOR_INLINE void longest_side_first(MeshData& mesh, const CellKind& kind) {
    std::vector<int> shift(as_size(mesh.cell_count()), 0); // old vertex that becomes vertex 0
    const int n = kind.nodes;
    std::vector<Id> old(as_size(n));
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        Id* ids = mesh.cells.data() + c * n;
        double length[3];
        for (int s = 0; s < 3; ++s)
            length[s] = distance(mesh.nodes[as_size(ids[s])], mesh.nodes[as_size(ids[(s + 1) % 3])]);
        int longest = 1;
        for (int s : {0, 2})
            if (length[s] > length[longest] * (1.0 + 1e-12)) longest = s;
        const int r = (longest + 2) % 3;
        shift[as_size(c)] = r;
        if (r == 0) continue;
        std::copy(ids, ids + n, old.begin());
        // Node i stands where the turned triangle has it: vertex k of the new is vertex k + r of the old.
        for (int i = 0; i < n; ++i) {
            const Point x = kind.reference_nodes[as_size(i)];
            const double l[3] = {1.0 - x.x - x.y, x.x, x.y};
            double t[3];
            for (int k = 0; k < 3; ++k) t[(k + r) % 3] = l[k];
            for (int j = 0; j < n; ++j)
                if (distance(kind.reference_nodes[as_size(j)], {t[1], t[2]}) < 1e-12) ids[i] = old[as_size(j)];
        }
    }
    const auto turn = [&](CellSide& s) { s.side = static_cast<Id>((s.side + 3 - shift[as_size(s.cell)]) % 3); };
    for (MeshFace& face : mesh.faces)
        for (CellSide& s : face.sides) turn(s);
    for (CurvedSide& c : mesh.curved) turn(c.side);
}

} // namespace tepor::detail
