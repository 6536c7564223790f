#pragma once
// The invariants of a mesh, one function each, in the order they are reported.

#include <algorithm>
#include <cmath>
#include <numeric>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/edge_grid.hpp>
#include <tepor/mesh/sides.hpp>
#include <tepor/mesh/verify.hpp>
#include <vector>

namespace tepor {

TEPOR_INLINE void MeshReport::or_throw() const {
    if (!problem.empty()) throw Error(ErrorCode::bad_mesh, "mesh", problem, cell);
}

namespace detail {

TEPOR_INLINE std::string at_place(Point p) {
    return text("(", p.x, ", ", p.y, ")");
}

/// Sizes of arrays and ranges of ids; everything after relies on it.
TEPOR_INLINE MeshReport verify_arrays(const MeshData& mesh, const CellKind& kind) {
    if (mesh.dim != kind.dim || mesh.nodes_per_cell != kind.nodes || mesh.sides_per_cell != kind.sides)
        return {text("mesh: dim, nodes_per_cell, sides_per_cell = ", mesh.dim, ", ", mesh.nodes_per_cell, ", ",
                     mesh.sides_per_cell, ", expected those of the element: ", kind.dim, ", ", kind.nodes, ", ",
                     kind.sides)};
    const Index cells = mesh.cell_count();
    if (cells == 0) return {"mesh: no cells; give at least one"};
    if (static_cast<Index>(mesh.cells.size()) != cells * kind.nodes)
        return {text("mesh: ", mesh.cells.size(), " node ids in cells and ", cells, " entries in region, expected ",
                     kind.nodes, " ids for each entry")};
    for (Index n = 0; n < mesh.node_count(); ++n) {
        const Point p = mesh.nodes[as_size(n)];
        if (!(std::isfinite(p.x) && std::isfinite(p.y)))
            return {text("mesh: node ", n, " lies at ", at_place(p), ", expected finite coordinates"), -1, n};
    }
    for (Index c = 0; c < cells; ++c)
        for (int i = 0; i < kind.nodes; ++i) {
            const Id n = mesh.cell(c)[i];
            if (n < 0 || n >= mesh.node_count())
                return {text("mesh: cell ", c, " has node id ", n, ", expected 0 to ", mesh.node_count() - 1,
                             "; ids count from 0"),
                        c};
        }
    const auto regions = static_cast<Index>(mesh.region_names.size());
    for (Index c = 0; c < cells; ++c) {
        const Id r = mesh.region[as_size(c)];
        if (r < 0 || r >= regions)
            return {text("mesh: cell ", c, " has region ", r, ", expected 0 to ", regions - 1,
                         "; region_names needs a name for each"),
                    c};
    }
    for (Index r = 0; r < regions; ++r) {
        const auto& name = mesh.region_names[as_size(r)];
        if (name.empty()) return {text("mesh: region ", r, " has an empty name")};
        if (mesh.find_region(name) != r) return {text("mesh: two regions are named \"", name, "\"; join them")};
    }
    return {};
}

/// Repeated nodes, duplicate cells, unused nodes, two nodes at one place.
TEPOR_INLINE MeshReport verify_nodes(const MeshData& mesh, double size) {
    std::vector<char> used(mesh.nodes.size(), 0);
    const Index cells = mesh.cell_count();
    for (Index c = 0; c < cells; ++c) {
        const Id* n = mesh.cell(c);
        for (int i = 0; i < mesh.nodes_per_cell; ++i) {
            used[as_size(n[i])] = 1;
            for (int j = 0; j < i; ++j)
                if (n[i] == n[j])
                    return {text("mesh: cell ", c, " holds node ", n[i], " twice; a cell needs ", mesh.nodes_per_cell,
                                 " different nodes"),
                            c, n[i]};
        }
    }
    // Duplicate cells share their lowest vertex.
    const int corners = mesh.dim == 1 ? 2 : mesh.sides_per_cell;
    std::vector<Id> start(mesh.nodes.size() + 1, 0);
    std::vector<Id> order(as_size(cells));
    const auto low = [&](Index c) { return *std::min_element(mesh.cell(c), mesh.cell(c) + corners); };
    for (Index c = 0; c < cells; ++c) ++start[as_size(low(c)) + 1];
    std::partial_sum(start.begin(), start.end(), start.begin());
    std::vector<Id> fill(start.begin(), start.end() - 1);
    for (Index c = 0; c < cells; ++c) order[as_size(fill[as_size(low(c))]++)] = as_id(c);
    for (std::size_t v = 0; v + 1 < start.size(); ++v)
        for (Id i = start[v]; i < start[v + 1]; ++i)
            for (Id j = start[v]; j < i; ++j) {
                const Id a = order[as_size(i)];
                const Id b = order[as_size(j)];
                if (std::is_permutation(mesh.cell(a), mesh.cell(a) + corners, mesh.cell(b)))
                    return {text("mesh: cells ", b, " and ", a, " have the same vertices; remove one"), a};
            }
    for (Index n = 0; n < mesh.node_count(); ++n)
        if (used[as_size(n)] == 0)
            return {text("mesh: node ", n, " at ", at_place(mesh.nodes[as_size(n)]), " belongs to no cell; remove it"),
                    -1, n};

    // Two nodes at one place make a crack no heat can cross. Hash of a fine grid; a node near a grid line enters both cells.
    const double width = 1e-12 * size;
    const double reach = 0.05 * width;
    std::size_t slots = 16;
    while (slots < 8 * mesh.nodes.size()) slots *= 2; // up to four entries a node, and half of the slots stay free
    std::vector<Id> table(slots, -1);
    for (Index n = 0; n < mesh.node_count(); ++n) {
        const Point p = mesh.nodes[as_size(n)];
        std::int64_t seen[4][2];
        int count = 0;
        for (int k = 0; k < 4; ++k) {
            const std::int64_t i = static_cast<std::int64_t>(std::floor((p.x + (k & 1 ? reach : -reach)) / width));
            const std::int64_t j = static_cast<std::int64_t>(std::floor((p.y + (k & 2 ? reach : -reach)) / width));
            bool again = false;
            for (int m = 0; m < count; ++m) again = again || (seen[m][0] == i && seen[m][1] == j);
            if (again) continue;
            seen[count][0] = i;
            seen[count++][1] = j;
            std::uint64_t h = static_cast<std::uint64_t>(i) * 0x9E3779B97F4A7C15ULL ^
                              (static_cast<std::uint64_t>(j) + 0x7F4A7C15ULL) * 0xC2B2AE3D27D4EB4FULL;
            h ^= h >> 29;
            for (std::size_t slot = as_size(h) & (slots - 1);; slot = (slot + 1) & (slots - 1)) {
                const Id other = table[slot];
                if (other < 0) {
                    table[slot] = as_id(n);
                    break;
                }
                const Point q = mesh.nodes[as_size(other)];
                if (other != n && std::abs(p.x - q.x) <= reach && (mesh.dim == 1 || std::abs(p.y - q.y) <= reach))
                    return {text("mesh: nodes ", other, " and ", n, " lie at the same place ", at_place(p),
                                 "; use one node, else no heat crosses between their cells"),
                            -1, n};
            }
        }
    }
    return {};
}

/// Jacobian determinant > 0 all over every cell.
TEPOR_INLINE MeshReport verify_cells(const MeshData& mesh, const CellKind& kind) {
    Point x[max_cell_nodes];
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        cell_points(mesh, c, x);
        const double least = least_jacobian(kind, x);
        double length = 0.0;
        for (int k = 0; k < kind.vertices(); ++k)
            length = std::max(length, distance(x[k], x[k + 1 == kind.vertices() ? 0 : k + 1]));
        const double floor = kind.dim == 1 ? 0.0 : 1e-14 * length * length;
        if (!(least > floor)) {
            const char* advice = "; list its nodes counter-clockwise";
            if (kind.dim == 1) advice = "; list its nodes by increasing x";
            if (least >= -floor && kind.order == 1) advice = "; its vertices lie on one line";
            if (kind.order > 1)
                advice = "; list its nodes counter-clockwise and keep inner side nodes near the middle of their side";
            return {text("mesh: cell ", c, " has Jacobian determinant ", least, ", expected > 0", advice), c};
        }
    }
    return {};
}

/// Sides match, with the same inner nodes.
TEPOR_INLINE MeshReport verify_sides(const MeshData& mesh, const CellKind& kind, SideMap& sides) {
    try {
        sides = match_sides(mesh);
    } catch (const Error& error) {
        return {error.what(), error.cell()};
    }
    for (Index n = 0; n < sides.count(); ++n) {
        const CellSide a = sides.first[as_size(n)];
        const CellSide b = sides.second[as_size(n)];
        if (b.cell < 0) continue;
        if (kind.dim == 1) {
            if (a.side == b.side)
                return {text("mesh: cells ", a.cell, " and ", b.cell, " lie on the same side of their common node ",
                             mesh.cell(a.cell)[a.side], ", so they overlap"),
                        b.cell};
            continue;
        }
        for (int j = 0; j < kind.side_nodes; ++j) {
            const Id p = mesh.cell(a.cell)[kind.side_node(a.side, j)];
            const Id q = mesh.cell(b.cell)[kind.side_node(b.side, j < 2 ? 1 - j : kind.side_nodes + 1 - j)];
            if (p != q)
                return {text("mesh: cells ", a.cell, " and ", b.cell, " share a side but not its inner nodes (", p,
                             " and ", q, "); use the same nodes on both"),
                        b.cell, q};
        }
    }
    return {};
}

/// The corners around each node fill no more than a full turn, and exactly one inside the body.
TEPOR_INLINE MeshReport verify_angles(const MeshData& mesh, const CellKind& kind, const SideMap& sides) {
    std::vector<double> angle(mesh.nodes.size(), 0.0);
    std::vector<char> outer(mesh.nodes.size(), 0);
    for (Index n = 0; n < sides.count(); ++n)
        if (sides.second[as_size(n)].cell < 0) {
            const CellSide a = sides.first[as_size(n)];
            for (int e : side_ends(mesh, a.side)) outer[as_size(mesh.cell(a.cell)[e])] = 1;
        }
    Point x[max_cell_nodes];
    double g[2 * max_cell_nodes];
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        cell_points(mesh, c, x);
        for (int k = 0; k < kind.sides; ++k) {
            Point to;
            Point from;
            const int next = k + 1 == kind.sides ? 0 : k + 1;
            const int last = k == 0 ? kind.sides - 1 : k - 1;
            if (kind.order == 1) {
                to = x[next] - x[k];
                from = x[last] - x[k];
            } else { // directions of the sides from the Jacobian at the vertex
                kind.evaluate(kind.reference_nodes[as_size(k)], nullptr, g);
                const Point dn = kind.reference_nodes[as_size(next)] - kind.reference_nodes[as_size(k)];
                const Point dl = kind.reference_nodes[as_size(last)] - kind.reference_nodes[as_size(k)];
                for (int i = 0; i < kind.nodes; ++i) {
                    to = to + (g[2 * i] * dn.x + g[2 * i + 1] * dn.y) * x[i];
                    from = from + (g[2 * i] * dl.x + g[2 * i + 1] * dl.y) * x[i];
                }
            }
            angle[as_size(mesh.cell(c)[k])] += std::atan2(cross(to, from), dot(to, from));
        }
    }
    for (Index n = 0; n < mesh.node_count(); ++n) {
        const double a = angle[as_size(n)];
        if (a > 2.0 * pi + 1e-6)
            return {text("mesh: the cells around node ", n, " at ", at_place(mesh.nodes[as_size(n)]), " fill ",
                         a * 180.0 / pi, " degrees, expected at most 360; some of them overlap"),
                    -1, n};
        if (outer[as_size(n)] == 0 && a > 0.0 && a < 2.0 * pi - 1e-6)
            return {text("mesh: the cells around the inner node ", n, " at ", at_place(mesh.nodes[as_size(n)]),
                         " fill ", a * 180.0 / pi, " degrees, expected 360; some of them overlap"),
                    -1, n};
    }
    return {};
}

/// No vertex lies on the outer edge of another cell, and outer edges do not cross.
TEPOR_INLINE MeshReport verify_outline(const MeshData& mesh, const SideMap& sides, double size) {
    if (mesh.dim == 1) {
        std::vector<Id> order(as_size(mesh.cell_count()));
        std::iota(order.begin(), order.end(), 0);
        const auto end = [&](Id c, int k) { return mesh.nodes[as_size(mesh.cell(c)[k])].x; };
        std::sort(order.begin(), order.end(), [&](Id a, Id b) { return end(a, 0) < end(b, 0); });
        for (std::size_t i = 1; i < order.size(); ++i) {
            const Id a = order[i - 1];
            const Id b = order[i];
            if (mesh.cell(a)[1] == mesh.cell(b)[0]) continue;
            return {text("mesh: cell ", a, " ends at node ", mesh.cell(a)[1], ", x = ", end(a, 1),
                         ", and the next cell ", b, " begins at node ", mesh.cell(b)[0], ", x = ", end(b, 0),
                         end(b, 0) < end(a, 1) ? ": they overlap" : ": a gap; use one node for both"),
                    b, mesh.cell(b)[0]};
        }
        return {};
    }
    std::vector<CellSide> outer;
    for (Index n = 0; n < sides.count(); ++n)
        if (sides.second[as_size(n)].cell < 0) outer.push_back(sides.first[as_size(n)]);
    const auto node = [&](CellSide s, int end) { return mesh.cell(s.cell)[side_ends(mesh, s.side)[end == 0 ? 0 : 1]]; };
    EdgeGrid grid;
    for (CellSide s : outer) grid.add(mesh.nodes[as_size(node(s, 0))], mesh.nodes[as_size(node(s, 1))]);
    grid.build();
    MeshReport report;
    for (std::size_t i = 0; i < outer.size(); ++i) {
        const Id ia = node(outer[i], 0);
        const Id iz = node(outer[i], 1);
        const Point a = mesh.nodes[as_size(ia)];
        const Point z = mesh.nodes[as_size(iz)];
        const double length = distance(a, z);
        const double near = std::min(1e-6 * length, 0.9e-9 * size); // gaps wider than a drawing's tolerance are meant
        grid.visit(a, z, near, [&](std::size_t j) {
            if (j == i || !report) return;
            const Id ib = node(outer[j], 0);
            const Id iy = node(outer[j], 1);
            const Point b = mesh.nodes[as_size(ib)];
            if (ib != ia && ib != iz) { // every vertex of the outline begins one outer side
                const double along = dot(b - a, z - a) / length;
                const double off = std::abs(cross(z - a, b - a)) / length;
                if (off <= near && along > -near && along < length + near) {
                    const bool at_end = along < near || along > length - near;
                    report = {text("mesh: node ", ib,
                                   at_end ? " all but coincides with node " : " hangs on the side from node ",
                                   at_end && along > near ? iz : ia, at_end ? std::string() : text(" to node ", iz),
                                   " of cell ", outer[i].cell, " near ", at_place(b),
                                   "; cells must share whole sides, else no heat crosses"),
                              outer[i].cell, ib};
                    return;
                }
            }
            if (ib == ia || ib == iz || iy == ia || iy == iz || j < i) return;
            const Point y = mesh.nodes[as_size(iy)];
            const double c1 = cross(z - a, b - a);
            const double c2 = cross(z - a, y - a);
            const double c3 = cross(y - b, a - b);
            const double c4 = cross(y - b, z - b);
            if (c1 * c2 < 0.0 && c3 * c4 < 0.0)
                report = {text("mesh: the outer sides of cells ", outer[i].cell, " and ", outer[j].cell, " cross near ",
                               at_place(a), "; the cells overlap"),
                          outer[i].cell};
        });
        if (!report) return report;
    }
    return {};
}

/// Faces and curves refer to real sides, once each; nodes of curved sides lie on their arcs.
TEPOR_INLINE MeshReport verify_faces(const MeshData& mesh, const CellKind& kind, double size) {
    const auto real = [&](CellSide s) {
        return s.cell >= 0 && s.cell < mesh.cell_count() && s.side >= 0 && s.side < mesh.sides_per_cell;
    };
    std::vector<Id> mark(as_size(mesh.cell_count() * mesh.sides_per_cell), -1);
    for (std::size_t f = 0; f < mesh.faces.size(); ++f) {
        const MeshFace& face = mesh.faces[f];
        if (face.name.empty()) return {text("mesh: face ", f, " has an empty name")};
        if (mesh.find_face(face.name) != static_cast<Index>(f))
            return {text("mesh: two faces are named \"", face.name, "\"; join them")};
        for (CellSide s : face.sides) {
            if (!real(s))
                return {text("mesh: face \"", face.name, "\" refers to side ", s.side, " of cell ", s.cell,
                             ", expected cell 0 to ", mesh.cell_count() - 1, " and side 0 to ",
                             mesh.sides_per_cell - 1),
                        s.cell};
            Id& m = mark[as_size(Index{s.cell} * mesh.sides_per_cell + s.side)];
            if (m == as_id(f))
                return {text("mesh: face \"", face.name, "\" holds side ", s.side, " of cell ", s.cell, " twice"),
                        s.cell};
            m = as_id(f);
        }
    }
    std::fill(mark.begin(), mark.end(), -1);
    for (const CurvedSide& curved : mesh.curved) {
        const CellSide s = curved.side;
        if (!real(s) || curved.arc < 0 || curved.arc >= static_cast<Index>(mesh.arcs.size()))
            return {text("mesh: a curved side refers to side ", s.side, " of cell ", s.cell, " and arc ", curved.arc,
                         ", expected cells, sides and arcs that exist"),
                    s.cell};
        Id& m = mark[as_size(Index{s.cell} * mesh.sides_per_cell + s.side)];
        if (m >= 0) return {text("mesh: side ", s.side, " of cell ", s.cell, " is listed as curved twice"), s.cell};
        m = 0;
        const MeshArc& arc = mesh.arcs[as_size(curved.arc)];
        for (int j = 0; j < kind.side_nodes; ++j) {
            const Id n = mesh.cell(s.cell)[kind.side_node(s.side, j)];
            const double off = std::abs(distance(mesh.nodes[as_size(n)], arc.centre) - arc.radius);
            if (!(off <= 1e-8 * size))
                return {text("mesh: node ", n, " of the curved side ", s.side, " of cell ", s.cell, " lies ", off,
                             " m off its arc of radius ", arc.radius, " m, expected on it"),
                        s.cell, n};
        }
    }
    return {};
}

TEPOR_INLINE MeshReport verify(const MeshData& mesh, const CellKind& kind) {
    MeshReport report = verify_arrays(mesh, kind);
    if (!report) return report;
    Point low = mesh.nodes.front();
    Point high = low;
    for (Point p : mesh.nodes) {
        low = {std::min(low.x, p.x), std::min(low.y, p.y)};
        high = {std::max(high.x, p.x), std::max(high.y, p.y)};
    }
    const double size = mesh.dim == 1 ? high.x - low.x : distance(low, high);
    SideMap sides;
    if (report = verify_nodes(mesh, size); !report) return report;
    if (report = verify_cells(mesh, kind); !report) return report;
    if (report = verify_sides(mesh, kind, sides); !report) return report;
    if (mesh.dim == 2)
        if (report = verify_angles(mesh, kind, sides); !report) return report;
    if (report = verify_outline(mesh, sides, size); !report) return report;
    return verify_faces(mesh, kind, size);
}

} // namespace detail
} // namespace tepor
