#pragma once
// Child tables and the one loop that splits cells.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/subdivide.hpp>
#include <utility>

namespace tepor::detail {

/// Fraction of p along side s of the reference cell, or -1 when it does not lie on it.
TEPOR_INLINE double along_side(const CellKind& kind, int s, Point p) {
    const Point a = kind.reference_nodes[as_size(s)];
    if (kind.dim == 1) return std::abs(p.x - a.x) < 1e-12 ? 0.0 : -1.0;
    const Point d = kind.reference_nodes[as_size(s + 1 == kind.sides ? 0 : s + 1)] - a;
    if (std::abs(cross(d, p - a)) > 1e-12) return -1.0;
    return dot(p - a, d) / dot(d, d);
}

TEPOR_INLINE ChildTable make_child_table(const CellKind& kind, const std::vector<ChildCorners>& children) {
    ChildTable table;
    table.children = static_cast<int>(children.size());
    table.corners = children;
    const auto spot_at = [&](Point xi) {
        for (std::size_t u = 0; u < table.spots.size(); ++u)
            if (distance(table.spots[u].xi, xi) < 1e-12) return static_cast<int>(u);
        ChildTable::Spot spot;
        spot.xi = xi;
        for (int i = 0; i < kind.nodes; ++i)
            if (distance(kind.reference_nodes[as_size(i)], xi) < 1e-12) spot.parent_node = i;
        for (int s = 0; kind.dim == 2 && s < kind.sides; ++s) {
            const double t = along_side(kind, s, xi);
            if (!(t > 1e-12 && t < 1.0 - 1e-12)) continue;
            spot.side = s;
            spot.t = t;
        }
        spot.shape.resize(as_size(kind.nodes));
        kind.evaluate(xi, spot.shape.data(), nullptr);
        table.spots.push_back(std::move(spot));
        return static_cast<int>(table.spots.size()) - 1;
    };
    for (int k = 0; k < table.children; ++k)
        for (int i = 0; i < kind.nodes; ++i)
            table.node.push_back(spot_at(table.in_parent(kind, k, kind.reference_nodes[as_size(i)])));

    // New spots of each side in its direction. Both cells of a side find the same ones, in opposite order.
    for (int s = 0; kind.dim == 2 && s < kind.sides; ++s) {
        std::vector<std::pair<double, std::size_t>> fresh;
        for (std::size_t u = 0; u < table.spots.size(); ++u)
            if (table.spots[u].side == s && table.spots[u].parent_node < 0) fresh.emplace_back(table.spots[u].t, u);
        std::sort(fresh.begin(), fresh.end());
        for (std::size_t j = 0; j < fresh.size(); ++j) table.spots[fresh[j].second].slot = static_cast<int>(j);
    }
    for (int s = 0; s < kind.sides; ++s) {
        std::vector<std::pair<double, ChildTable::SideChild>> found;
        for (int k = 0; k < table.children; ++k)
            for (int c = 0; c < kind.sides; ++c) {
                const double a = along_side(kind, s, children[as_size(k)][as_size(c)]);
                const double z =
                    kind.dim == 1 ? a
                                  : along_side(kind, s, children[as_size(k)][as_size(c + 1 == kind.sides ? 0 : c + 1)]);
                if (a >= 0.0 && z >= a) found.push_back({a, {k, c}});
            }
        std::sort(found.begin(), found.end(), [](const auto& x, const auto& y) { return x.first < y.first; });
        for (const auto& f : found) table.on_side[as_size(s)].push_back(f.second);
    }
    return table;
}

TEPOR_INLINE void subdivide(const MeshData& coarse, const CellKind& kind, const SideMap& sides,
                            const std::vector<ChildTable>& tables, const std::vector<std::uint8_t>& which,
                            bool keep_nodes, MeshData& fine, Lineage& lineage) {
    const int n = kind.nodes;
    const Index cells = coarse.cell_count();
    Index total = 0;
    int slots = 0;
    for (const ChildTable& t : tables)
        for (const auto& spot : t.spots) slots = std::max(slots, spot.slot + 1);
    for (Index c = 0; c < cells; ++c) total += tables[which[as_size(c)]].children;
    if (total * n > max_id)
        throw Error(ErrorCode::too_large, "mesh", "mesh: refining would give more cell entries than 32-bit ids hold");

    fine.frame = coarse.frame;
    fine.region_names = coarse.region_names;
    fine.arcs = coarse.arcs;
    fine.remarks = coarse.remarks;
    std::vector<Id> side_arc(coarse.curved.empty() ? 0 : as_size(sides.count()), -1);
    for (const CurvedSide& c : coarse.curved) side_arc[as_size(sides.number(c.side.cell, c.side.side))] = c.arc;
    const auto arc_of = [&](Index c, int s) -> const MeshArc* {
        if (side_arc.empty()) return nullptr;
        const Id a = side_arc[as_size(sides.number(c, s))];
        return a < 0 ? nullptr : &coarse.arcs[as_size(a)];
    };

    std::vector<Id> kept(coarse.nodes.size(), -1); // new number of an old node
    if (keep_nodes) fine.nodes = coarse.nodes;
    const auto keep = [&](Id old) {
        if (keep_nodes) return old;
        Id& id = kept[as_size(old)];
        if (id < 0) {
            id = as_id(fine.nodes.size());
            fine.nodes.push_back(coarse.nodes[as_size(old)]);
        }
        return id;
    };
    std::vector<Id> on_side(as_size(sides.count() * slots), -1);
    std::vector<Id> first_child(as_size(cells));
    fine.cells.reserve(as_size(total * n));
    fine.region.reserve(as_size(total));
    lineage.parent.reserve(as_size(total));
    lineage.table.reserve(as_size(total));
    lineage.child.reserve(as_size(total));
    std::vector<Id> ids;
    Point x[max_cell_nodes];
    Point child[max_cell_nodes];
    for (Index c = 0; c < cells; ++c) {
        const ChildTable& table = tables[which[as_size(c)]];
        cell_points(coarse, c, x);
        first_child[as_size(c)] = as_id(fine.region.size());
        ids.resize(table.spots.size());
        bool on_arcs = false;
        for (int s = 0; kind.dim == 2 && s < kind.sides; ++s) on_arcs = on_arcs || arc_of(c, s) != nullptr;
        for (std::size_t u = 0; u < table.spots.size(); ++u) {
            const ChildTable::Spot& spot = table.spots[u];
            if (spot.parent_node >= 0) {
                ids[u] = keep(coarse.cell(c)[spot.parent_node]);
                continue;
            }
            Id* known = nullptr;
            if (spot.side >= 0) {
                const Id number = sides.number(c, spot.side);
                const bool forward = sides.first[as_size(number)].cell == c;
                int count = 0; // new spots of this side
                for (const auto& other : table.spots) count += other.side == spot.side && other.slot >= 0 ? 1 : 0;
                known = &on_side[as_size(Index{number} * slots + (forward ? spot.slot : count - 1 - spot.slot))];
                if (*known >= 0) {
                    ids[u] = *known;
                    continue;
                }
            }
            Point p;
            const MeshArc* arc = spot.side < 0 ? nullptr : arc_of(c, spot.side);
            if (arc != nullptr)
                p = on_arc(*arc, x[spot.side], x[spot.side + 1 == kind.sides ? 0 : spot.side + 1], spot.t);
            else
                for (int i = 0; i < n; ++i) p = p + spot.shape[as_size(i)] * x[i];
            ids[u] = as_id(fine.nodes.size());
            fine.nodes.push_back(p);
            if (known != nullptr) *known = ids[u];
        }
        for (int k = 0; k < table.children; ++k) {
            for (int i = 0; i < n; ++i) fine.cells.push_back(ids[as_size(table.node[as_size(k * n + i)])]);
            fine.region.push_back(coarse.region[as_size(c)]);
            lineage.parent.push_back(as_id(c));
            lineage.table.push_back(which[as_size(c)]);
            lineage.child.push_back(static_cast<std::uint8_t>(k));
        }
        if (!on_arcs || table.children == 1 || kind.shape != CellShape::triangle) continue;
        // Next to an arc: sides inside the parent are straight, inner nodes follow the child's own arcs.
        for (int k = 0; k < table.children; ++k) {
            const MeshArc* arcs[4] = {};
            for (int s = 0; s < kind.sides; ++s)
                for (const auto& at : table.on_side[as_size(s)])
                    if (at.child == k) arcs[at.child_side] = arc_of(c, s);
            const int* node = table.node.data() + k * n;
            for (int i = 0; i < n; ++i) child[i] = fine.nodes[as_size(ids[as_size(node[i])])];
            place_cell_nodes(kind, arcs, child);
            if (!(least_jacobian(kind, child) > 0.0))
                throw Error(
                    ErrorCode::bad_mesh, "mesh",
                    text("mesh: refining cell ", c,
                         " would invert a child: its arc bends too much for the cell; make the first mesh finer there"),
                    c);
            for (int i = kind.vertices(); i < n; ++i)
                if (table.spots[as_size(node[i])].side < 0) fine.nodes[as_size(ids[as_size(node[i])])] = child[i];
        }
    }

    const auto each_child_side = [&](CellSide s, auto&& act) {
        for (const auto& at : tables[which[as_size(s.cell)]].on_side[as_size(s.side)])
            act(CellSide{first_child[as_size(s.cell)] + at.child, at.child_side});
    };
    for (const MeshFace& face : coarse.faces) {
        MeshFace finer{face.name, {}};
        for (CellSide s : face.sides) each_child_side(s, [&](CellSide f) { finer.sides.push_back(f); });
        fine.faces.push_back(std::move(finer));
    }
    for (const CurvedSide& c : coarse.curved)
        each_child_side(c.side, [&](CellSide f) { fine.curved.push_back({f, c.arc}); });

    if (!keep_nodes) return;
    // Elements whose inner nodes do not fall on the children's nodes leave some unused: those go, the others keep their order.
    std::vector<char> used(fine.nodes.size(), 0);
    for (Id id : fine.cells) used[as_size(id)] = 1;
    if (std::find(used.begin(), used.end(), 0) == used.end()) return;
    std::vector<Id> number(fine.nodes.size(), -1);
    std::size_t count = 0;
    for (std::size_t k = 0; k < used.size(); ++k)
        if (used[k] != 0) {
            fine.nodes[count] = fine.nodes[k];
            number[k] = as_id(count++);
        }
    fine.nodes.resize(count);
    for (Id& id : fine.cells) id = number[as_size(id)];
}

TEPOR_INLINE std::vector<double> interpolate(const MeshData& coarse, const CellKind& kind,
                                             const std::vector<ChildTable>& tables, const MeshData& fine,
                                             const Lineage& lineage, const double* values) {
    std::vector<double> out(fine.nodes.size());
    std::vector<char> done(fine.nodes.size(), 0);
    const int n = kind.nodes;
    for (Index c = 0; c < fine.cell_count(); ++c) {
        const ChildTable& table = tables[lineage.table[as_size(c)]];
        const Id* from = coarse.cell(lineage.parent[as_size(c)]);
        for (int i = 0; i < n; ++i) {
            const Id id = fine.cell(c)[i];
            if (done[as_size(id)] != 0) continue;
            done[as_size(id)] = 1;
            const auto& spot = table.spots[as_size(table.node[as_size(lineage.child[as_size(c)] * n + i)])];
            double v = 0.0;
            if (spot.parent_node >= 0)
                v = values[from[spot.parent_node]];
            else
                for (int j = 0; j < n; ++j) v += spot.shape[as_size(j)] * values[from[j]];
            out[as_size(id)] = v;
        }
    }
    return out;
}

} // namespace tepor::detail
