#pragma once
// Uniform refinement from one table per element type: where the children's nodes lie in the parent.

#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/mesh/sides.hpp>
#include <vector>

namespace tepor::detail {

/// The children of one cell and their nodes, each distinct place of the reference cell once.
struct ChildTable {
    struct Spot {
        Point xi;             ///< in the parent
        int parent_node = -1; ///< node of the parent at that place, or -1
        int side = -1;        ///< side of the parent it lies inside, or -1
        int slot = -1;        ///< position among the spots of that side, from its first vertex
        double t = 0.0;       ///< fraction along that side
        std::vector<double> shape;
    };
    int children = 0;
    std::vector<Spot> spots;
    std::vector<int> node;            ///< spot of node i of child k at k * nodes + i
    std::vector<double> side_t;       ///< fractions of the spots of a side, ascending
    std::vector<CellSide> side_child; ///< the two children (child, side) of side s at 2 s, 2 s + 1
};

TEPOR_INLINE ChildTable make_child_table(const CellKind& kind) {
    using Corners = std::array<Point, 4>;
    ChildTable table;
    std::vector<Corners> children;
    const Point o{0, 0};
    const Point x{1, 0};
    const Point y{0, 1};
    const Point m{0.5, 0};
    if (kind.shape == CellShape::segment) {
        children = {{o, m, o, o}, {m, x, o, o}};
        table.side_child = {{0, 0}, {0, 0}, {1, 1}, {1, 1}};
    } else if (kind.shape == CellShape::triangle) {
        const Point p{0.5, 0.5};
        const Point q{0, 0.5};
        children = {{o, m, q, o}, {m, x, p, o}, {q, p, y, o}, {p, q, m, o}};
        table.side_child = {{0, 0}, {1, 0}, {1, 1}, {2, 1}, {2, 2}, {0, 2}};
    } else {
        const Point xy{1, 1};
        const Point c{0.5, 0.5};
        const Point e{1, 0.5};
        const Point n{0.5, 1};
        const Point w{0, 0.5};
        children = {{o, m, c, w}, {m, x, e, c}, {c, e, xy, n}, {w, c, n, y}};
        table.side_child = {{0, 0}, {1, 0}, {1, 1}, {2, 1}, {2, 2}, {3, 2}, {3, 3}, {0, 3}};
    }
    table.children = static_cast<int>(children.size());

    // Fractions along a side where children's nodes lie.
    if (kind.dim == 2) {
        std::vector<double> t{0.5};
        for (int j = 2; j < kind.side_nodes; ++j) {
            const Point r = kind.reference_nodes[as_size(kind.side_node(0, j))]; // side 0 runs along x
            t.push_back(0.5 * r.x);
            t.push_back(0.5 + 0.5 * r.x);
        }
        std::sort(t.begin(), t.end());
        for (double f : t)
            if (table.side_t.empty() || f - table.side_t.back() > 1e-12) table.side_t.push_back(f);
    }
    const int slots = static_cast<int>(table.side_t.size());

    const auto spot_at = [&](Point xi) {
        for (std::size_t u = 0; u < table.spots.size(); ++u)
            if (distance(table.spots[u].xi, xi) < 1e-12) return static_cast<int>(u);
        ChildTable::Spot spot;
        spot.xi = xi;
        for (int i = 0; i < kind.nodes; ++i)
            if (distance(kind.reference_nodes[as_size(i)], xi) < 1e-12) spot.parent_node = i;
        if (kind.dim == 2 && !(spot.parent_node >= 0 && spot.parent_node < kind.vertices()))
            for (int s = 0; s < kind.sides; ++s) {
                const Point a = kind.reference_nodes[as_size(s)];
                const Point z = kind.reference_nodes[as_size(s + 1 == kind.sides ? 0 : s + 1)];
                const double length = distance(a, z);
                if (std::abs(cross(z - a, xi - a)) > 1e-12) continue;
                spot.side = s;
                spot.t = distance(a, xi) / length;
                for (int j = 0; j < slots; ++j)
                    if (std::abs(table.side_t[as_size(j)] - spot.t) < 1e-12) spot.slot = j;
            }
        spot.shape.resize(as_size(kind.nodes));
        kind.evaluate(xi, spot.shape.data(), nullptr);
        table.spots.push_back(spot);
        return static_cast<int>(table.spots.size()) - 1;
    };
    for (const Corners& c : children)
        for (int i = 0; i < kind.nodes; ++i) {
            const Point r = kind.reference_nodes[as_size(i)];
            // Affine in x and y: the corners 1 and (last) of a child span it.
            const Point far = kind.shape == CellShape::quadrilateral ? c[3] : c[2];
            Point xi = c[0] + r.x * (c[1] - c[0]);
            if (kind.dim == 2) xi = xi + r.y * (far - c[0]);
            table.node.push_back(spot_at(xi));
        }
    return table;
}

/// The places of the finer nodes in the layers of a 1D stack, so that a Parameter moves them as it moved the coarse ones.
TEPOR_INLINE void refine_stack(const MeshData& coarse, const ChildTable& table, MeshData& fine) {
    const LayerStack& from = coarse.stack;
    LayerStack& to = fine.stack;
    to.start = from.start;
    to.thickness = from.thickness;
    to.place.resize(fine.nodes.size());
    const Id* node = fine.cells.data(); // children follow each other as their parents do
    for (Index c = 0; c < coarse.cell_count(); ++c) {
        const StackPlace left = from.place[as_size(coarse.cell(c)[0])];
        const StackPlace right = from.place[as_size(coarse.cell(c)[1])];
        for (const int spot : table.node)
            to.place[as_size(*node++)] = between(left, right, table.spots[as_size(spot)].xi.x);
        to.layer_of_cell.insert(to.layer_of_cell.end(), as_size(table.children), from.layer_of_cell[as_size(c)]);
    }
}

TEPOR_INLINE void refine_uniformly(const MeshData& coarse, const CellKind& kind, MeshData& fine) {
    const ChildTable table = make_child_table(kind);
    const int n = kind.nodes;
    const int slots = static_cast<int>(table.side_t.size());
    const Index cells = coarse.cell_count();
    if (cells * table.children * n > max_id)
        throw Error(ErrorCode::too_large, "mesh", "mesh: refining would give more cell entries than 32-bit ids hold");
    const SideMap sides = match_sides(coarse);

    fine.frame = coarse.frame;
    fine.region_names = coarse.region_names;
    fine.arcs = coarse.arcs;
    fine.remarks = coarse.remarks;

    std::vector<Id> side_arc(as_size(sides.count()), -1);
    for (const CurvedSide& c : coarse.curved) side_arc[as_size(sides.number(c.side.cell, c.side.side))] = c.arc;

    std::vector<Id> kept(coarse.nodes.size(), -1); // new number of an old node
    std::vector<Id> on_side(as_size(sides.count() * slots), -1);
    const auto keep = [&](Id old) {
        Id& id = kept[as_size(old)];
        if (id < 0) {
            id = as_id(fine.nodes.size());
            fine.nodes.push_back(coarse.nodes[as_size(old)]);
        }
        return id;
    };
    fine.cells.reserve(as_size(cells * table.children * n));
    fine.region.reserve(as_size(cells * table.children));
    fine.nodes.reserve(as_size(cells * table.children));
    std::vector<Id> ids(table.spots.size());
    Point x[max_cell_nodes];
    Point child[max_cell_nodes];
    for (Index c = 0; c < cells; ++c) {
        cell_points(coarse, c, x);
        bool on_arcs = false;
        for (int s = 0; kind.dim == 2 && s < kind.sides; ++s)
            on_arcs = on_arcs || side_arc[as_size(sides.number(c, s))] >= 0;
        for (std::size_t u = 0; u < table.spots.size(); ++u) {
            const ChildTable::Spot& spot = table.spots[u];
            Id* known = nullptr;
            if (spot.side >= 0) {
                const Id number = sides.number(c, spot.side);
                const bool forward = sides.first[as_size(number)].cell == c;
                known = &on_side[as_size(Index{number} * slots + (forward ? spot.slot : slots - 1 - spot.slot))];
                if (*known >= 0) {
                    ids[u] = *known;
                    continue;
                }
            }
            if (spot.parent_node >= 0) {
                ids[u] = keep(coarse.cell(c)[spot.parent_node]);
            } else {
                Point p;
                const Id arc = spot.side < 0 ? -1 : side_arc[as_size(sides.number(c, spot.side))];
                if (arc >= 0)
                    p = on_arc(coarse.arcs[as_size(arc)], x[spot.side],
                               x[spot.side + 1 == kind.sides ? 0 : spot.side + 1], spot.t);
                else
                    for (int i = 0; i < n; ++i) p = p + spot.shape[as_size(i)] * x[i];
                ids[u] = as_id(fine.nodes.size());
                fine.nodes.push_back(p);
            }
            if (known != nullptr) *known = ids[u];
        }
        for (int k = 0; k < table.children; ++k) {
            for (int i = 0; i < n; ++i) fine.cells.push_back(ids[as_size(table.node[as_size(k * n + i)])]);
            fine.region.push_back(coarse.region[as_size(c)]);
        }
        if (!on_arcs || kind.order == 1 || kind.shape != CellShape::triangle) continue;
        // Next to an arc: sides inside the parent are straight, inner nodes follow the child's own arcs. A parent's node can
        // lie there too (order 3: its inner node is where the middle child has one), and moves with its child.
        for (int k = 0; k < table.children; ++k) {
            const MeshArc* arcs[4] = {};
            for (int s = 0; s < kind.sides; ++s) {
                const Id arc = side_arc[as_size(sides.number(c, s))];
                for (int half = 0; half < 2; ++half) {
                    const CellSide at = table.side_child[as_size(2 * s + half)];
                    if (arc >= 0 && at.cell == k) arcs[at.side] = &coarse.arcs[as_size(arc)];
                }
            }
            const int* node = table.node.data() + k * n;
            for (int i = 0; i < n; ++i) child[i] = fine.nodes[as_size(ids[as_size(node[i])])];
            place_cell_nodes(kind, arcs, child);
            for (int i = kind.vertices(); i < n; ++i)
                if (table.spots[as_size(node[i])].side < 0) fine.nodes[as_size(ids[as_size(node[i])])] = child[i];
        }
    }

    const auto child_side = [&](CellSide s, int half) {
        CellSide at = table.side_child[as_size(2 * s.side + half)];
        at.cell += s.cell * table.children;
        return at;
    };
    const int halves = kind.dim == 1 ? 1 : 2;
    for (const MeshFace& face : coarse.faces) {
        MeshFace finer{face.name, {}};
        for (CellSide s : face.sides)
            for (int half = 0; half < halves; ++half) finer.sides.push_back(child_side(s, half));
        fine.faces.push_back(std::move(finer));
    }
    for (const CurvedSide& c : coarse.curved)
        for (int half = 0; half < halves; ++half) fine.curved.push_back({child_side(c.side, half), c.arc});
    if (coarse.stack.given()) refine_stack(coarse, table, fine);
}

} // namespace tepor::detail
