#pragma once
// Options checked, drawing looked at, refined, and handed over as arrays.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/drawing.hpp>
#include <tepor/mesh/inner_nodes.hpp>
#include <tepor/mesh/quality.hpp>
#include <tepor/mesh/sides.hpp>
#include <tepor/mesh/space_order.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <utility>

namespace tepor::detail {

TEPOR_INLINE void validate(const Meshing& m) {
    const auto refuse = [](const char* name, double value, const char* rule) {
        throw Error(ErrorCode::bad_value, name, text("Meshing: ", name, " = ", value, ", expected ", rule));
    };
    if (!(m.size >= 0.0 && std::isfinite(m.size)))
        refuse("size", m.size, "a finite length > 0 [m], or 0 for a 40th of the diagonal");
    if (!(m.growth >= 0.05 && m.growth <= 1.0)) refuse("growth", m.growth, "0.05 to 1");
    if (!(m.turn > 0.0 && m.turn <= 30.0)) refuse("turn", m.turn, "more than 0 and at most 30 degrees");
    if (!(m.deviation >= 0.0 && std::isfinite(m.deviation))) refuse("deviation", m.deviation, "a length >= 0 [m]");
    if (m.most_triangles < 1) refuse("most_triangles", as_double(m.most_triangles), "at least 1");
    for (const auto* list : {&m.in, &m.on})
        for (const NamedSize& s : *list)
            if (!(s.size > 0.0 && std::isfinite(s.size)))
                throw Error(ErrorCode::bad_value, s.name,
                            text("Meshing: size for \"", s.name, "\" = ", s.size, ", expected > 0 [m]"));
}

/// Places along an edge of the graph, ends included.
TEPOR_INLINE std::vector<Point> places_along(const PlaneGraph& graph, const PlaneGraph::Edge& e) {
    constexpr int count = 33;
    std::vector<Point> out;
    const Point a = graph.points[as_size(e.a)], b = graph.points[as_size(e.b)];
    for (int i = 0; i < count; ++i) {
        const double t = static_cast<double>(i) / (count - 1);
        out.push_back(e.arc < 0 ? (1.0 - t) * a + t * b : on_arc(graph.arcs[as_size(e.arc)], a, b, t));
    }
    return out;
}

/// Sizes of faces by test and of the rest for an outer edge: a test that passes on a part of the edge sizes all of it, and what
/// no face and no test takes in full is rest.
TEPOR_INLINE void size_by_place(const Section& section, const Picture& picture, const std::vector<double>& face_size,
                                PlaneGraph::Edge& e) {
    const auto size_of = [&](const std::string& name) {
        return face_size[as_size(std::find(picture.faces.begin(), picture.faces.end(), name) - picture.faces.begin())];
    };
    const std::vector<Point> places = places_along(picture.graph, e);
    bool taken = e.face_set >= 0;
    for (const auto& face : section.faces()) {
        if (face.kind != Section::Face::Kind::test) continue;
        const auto passed = std::count_if(places.begin(), places.end(), face.test);
        if (passed > 1) e.size = std::min(e.size, size_of(face.name)); // a corner alone is no part
        taken = taken || passed == static_cast<std::ptrdiff_t>(places.size());
    }
    for (const auto& face : section.faces())
        if (face.kind == Section::Face::Kind::rest && !taken) e.size = std::min(e.size, size_of(face.name));
}

/// Sizes of regions and edges from the options.
TEPOR_INLINE Targets make_targets(const Meshing& meshing, const Section& section, Picture& picture) {
    PlaneGraph& graph = picture.graph;
    Targets targets;
    targets.size = meshing.size > 0.0 ? meshing.size : graph.diagonal / 40.0;
    targets.law = meshing.law;
    targets.growth = meshing.growth;
    targets.turn = meshing.turn * pi / 180.0;
    if (meshing.deviation > 0.0) targets.deviation = meshing.deviation;
    targets.most_triangles = meshing.most_triangles;
    targets.region_size.assign(picture.regions.size(), targets.size);
    for (const NamedSize& s : meshing.in) {
        const auto r =
            as_size(std::find(picture.regions.begin(), picture.regions.end(), s.name) - picture.regions.begin());
        if (r == picture.regions.size())
            throw Error(
                ErrorCode::bad_name, s.name,
                text("Meshing: size for region \"", s.name, "\", expected one of ", quoted_list(picture.regions)));
        targets.region_size[r] = std::min(targets.region_size[r], s.size);
    }
    std::vector<double> face_size(picture.faces.size(), targets.size);
    for (const NamedSize& s : meshing.on) {
        const auto f = as_size(std::find(picture.faces.begin(), picture.faces.end(), s.name) - picture.faces.begin());
        if (f == picture.faces.size())
            throw Error(ErrorCode::bad_name, s.name,
                        text("Meshing: size for face \"", s.name, "\", expected one of ", quoted_list(picture.faces)));
        face_size[f] = std::min(face_size[f], s.size);
    }
    for (auto& e : graph.edges) {
        e.size = targets.size;
        for (Id r : {e.left, e.right})
            if (r >= 0) e.size = std::min(e.size, targets.region_size[as_size(r)]);
        if (e.face_set >= 0)
            for (Id f : graph.face_sets[as_size(e.face_set)]) e.size = std::min(e.size, face_size[as_size(f)]);
        if (!meshing.on.empty() && (e.left < 0 || e.right < 0)) size_by_place(section, picture, face_size, e);
    }
    return targets;
}

/// Sizes in the wrong unit are told before the work is done: triangles are about 0.43 size^2 each.
TEPOR_INLINE void estimate_count(const Targets& targets, const PlaneGraph& graph) {
    double least = 0.0;
    for (const auto& e : graph.edges) {
        const Point a = graph.points[as_size(e.a)];
        const Point b = graph.points[as_size(e.b)];
        double area = 0.5 * cross(a - graph.points[0], b - graph.points[0]); // of the sum over closed loops
        if (e.arc >= 0) {
            const MeshArc& arc = graph.arcs[as_size(e.arc)];
            const double turn = std::atan2(cross(a - arc.centre, b - arc.centre), dot(a - arc.centre, b - arc.centre));
            area += 0.5 * arc.radius * arc.radius * (turn - std::sin(turn));
        }
        for (const auto& [region, sign] : {std::pair{e.left, 1.0}, std::pair{e.right, -1.0}}) {
            if (region < 0) continue;
            const double size = targets.region_size[as_size(region)];
            least += sign * area / (0.43 * size * size);
        }
    }
    if (least > 1.5 * as_double(targets.most_triangles))
        throw Error(ErrorCode::too_large, "size",
                    text("size: about ", least, " triangles, over most_triangles = ", targets.most_triangles,
                         "; use a larger size (is it in metres?), or raise most_triangles"));
}

/// Triangles inside, vertices they use, both along a space-filling curve; faces and curved sides.
TEPOR_INLINE std::vector<Id> hand_over(const Refiner& refiner, Picture& picture, MeshData& mesh) {
    const Delaunay& d = refiner.mesh;
    const PlaneGraph& graph = picture.graph;
    std::vector<Id> inside;
    std::vector<Point> middle;
    for (Index t = 0; t < d.triangles(); ++t)
        if (d.label[as_size(t)] >= 0) {
            inside.push_back(as_id(t));
            const Id* o = d.org.data() + 3 * t;
            middle.push_back((1.0 / 3.0) * (d.at(o[0]) + d.at(o[1]) + d.at(o[2])));
        }
    if (static_cast<Index>(inside.size()) > max_id / 3)
        throw Error(ErrorCode::too_large, "size", "size: more triangles than 32-bit ids hold; use a larger size");
    const std::vector<Id> order = space_order(middle);

    mesh.region_names = picture.regions;
    mesh.arcs = graph.arcs;
    mesh.faces.resize(picture.faces.size());
    for (std::size_t f = 0; f < picture.faces.size(); ++f) mesh.faces[f].name = picture.faces[f];
    std::vector<Id> node(d.points.size(), -1);
    std::vector<Id> corners;
    corners.reserve(3 * order.size());
    mesh.region.reserve(order.size());
    mesh.nodes.reserve(d.points.size());
    for (const Id k : order) {
        const Id t = inside[as_size(k)];
        const Id cell = as_id(mesh.region.size());
        mesh.region.push_back(d.label[as_size(t)]);
        // The longest side is side 1, where bisection begins.
        Id longest = 3 * t;
        for (Id h = longest + 1; h < 3 * t + 3; ++h)
            if (distance(d.at(d.from(h)), d.at(d.to(h))) > distance(d.at(d.from(longest)), d.at(d.to(longest))))
                longest = h;
        Id h = Delaunay::prev(longest);
        for (Id side = 0; side < 3; ++side, h = Delaunay::next(h)) {
            Id& n = node[as_size(d.from(h))];
            if (n < 0) {
                n = as_id(mesh.nodes.size());
                mesh.nodes.push_back(d.at(d.from(h)));
            }
            corners.push_back(n);
            const Id s = d.segment[as_size(h)];
            if (s < 0) continue;
            const auto& e = graph.edges[as_size(refiner.edge_of_segment[as_size(s)])];
            if (e.arc >= 0) mesh.curved.push_back({{cell, side}, e.arc});
            if (e.face_set >= 0)
                for (Id f : graph.face_sets[as_size(e.face_set)]) mesh.faces[as_size(f)].sides.push_back({cell, side});
        }
    }
    return corners;
}

/// Faces by test, then those of all that is left.
TEPOR_INLINE void name_by_place(const Section& section, const Refiner& refiner, const std::vector<Id>& corners,
                                MeshData& mesh) {
    (void)refiner;
    bool wanted = false;
    for (const auto& face : section.faces())
        wanted = wanted || face.kind == Section::Face::Kind::test || face.kind == Section::Face::Kind::rest;
    if (!wanted) return;
    MeshData view; // vertices alone
    view.dim = 2;
    view.nodes_per_cell = 3;
    view.sides_per_cell = 3;
    view.shape = CellShape::triangle;
    view.nodes = mesh.nodes;
    view.cells = corners;
    view.region = mesh.region;
    const SideMap sides = match_sides(view);
    std::vector<Id> arc(as_size(sides.count()), -1);
    for (const CurvedSide& c : mesh.curved) arc[as_size(sides.number(c.side.cell, c.side.side))] = c.arc;
    std::vector<char> named(as_size(sides.count()), 0);
    const auto mark = [&] {
        for (const MeshFace& face : mesh.faces)
            for (CellSide s : face.sides) named[as_size(sides.number(s.cell, s.side))] = 1;
    };
    for (const auto kind : {Section::Face::Kind::test, Section::Face::Kind::rest}) {
        if (kind == Section::Face::Kind::rest) mark();
        for (const auto& face : section.faces()) {
            if (face.kind != kind) continue;
            MeshFace& target = mesh.faces[as_size(mesh.find_face(face.name))];
            const std::size_t before = target.sides.size();
            for (Index n = 0; n < sides.count(); ++n) {
                if (sides.second[as_size(n)].cell >= 0) continue;
                const CellSide s = sides.first[as_size(n)];
                if (kind == Section::Face::Kind::rest) {
                    if (named[as_size(n)] == 0) target.sides.push_back(s);
                    continue;
                }
                const Point a = mesh.nodes[as_size(corners[as_size(3 * s.cell + s.side)])];
                const Point b = mesh.nodes[as_size(corners[as_size(3 * s.cell + (s.side + 1) % 3)])];
                const Point m =
                    arc[as_size(n)] < 0 ? 0.5 * (a + b) : on_arc(mesh.arcs[as_size(arc[as_size(n)])], a, b, 0.5);
                if (!(face.test(a) && face.test(b) && face.test(m))) continue;
                if (std::find(target.sides.begin(), target.sides.begin() + static_cast<Index>(before), s) ==
                    target.sides.begin() + static_cast<Index>(before))
                    target.sides.push_back(s);
            }
            if (target.sides.empty())
                throw Error(ErrorCode::bad_name, face.name,
                            text("face \"", face.name, "\": no cell side of the outer edge ",
                                 kind == Section::Face::Kind::rest ? "is left without a name"
                                                                   : "has both ends and its middle pass the test"));
        }
    }
}

/// Where curving a side would fold a cell (curves that touch at no angle), the side stays straight.
TEPOR_INLINE void straighten_folded(const CellKind& kind, const std::vector<Id>& corners, MeshData& mesh) {
    if (kind.order == 1 || mesh.curved.empty()) return;
    const auto start = [&](CellSide s) { return corners[as_size(3 * s.cell + s.side)]; };
    const auto end = [&](CellSide s) { return corners[as_size(3 * s.cell + (s.side + 1) % 3)]; };
    // Curved sides by cell; both cells of a side must agree.
    struct Entry {
        Id low;
        Id high;
        std::size_t k;
    };
    std::vector<std::size_t> by_cell(mesh.curved.size());
    for (std::size_t k = 0; k < by_cell.size(); ++k) by_cell[k] = k;
    std::sort(by_cell.begin(), by_cell.end(),
              [&](std::size_t a, std::size_t b) { return mesh.curved[a].side.cell < mesh.curved[b].side.cell; });
    std::vector<Entry> pairs;
    for (std::size_t k = 0; k < mesh.curved.size(); ++k) {
        const CellSide s = mesh.curved[k].side;
        pairs.push_back({std::min(start(s), end(s)), std::max(start(s), end(s)), k});
    }
    std::sort(pairs.begin(), pairs.end(),
              [](const Entry& a, const Entry& b) { return a.low != b.low ? a.low < b.low : a.high < b.high; });
    std::vector<std::size_t> partner(mesh.curved.size(), mesh.curved.size());
    for (std::size_t i = 1; i < pairs.size(); ++i)
        if (pairs[i].low == pairs[i - 1].low && pairs[i].high == pairs[i - 1].high) {
            partner[pairs[i].k] = pairs[i - 1].k;
            partner[pairs[i - 1].k] = pairs[i].k;
        }
    std::vector<char> straight(mesh.curved.size(), 0);
    Index count = 0;
    Point where;
    Point x[max_cell_nodes];
    for (bool again = true; again;) {
        again = false;
        for (std::size_t i = 0; i < by_cell.size();) {
            std::size_t j = i;
            const Id cell = mesh.curved[by_cell[i]].side.cell;
            const MeshArc* arcs[4] = {};
            bool any = false;
            for (; j < by_cell.size() && mesh.curved[by_cell[j]].side.cell == cell; ++j)
                if (straight[by_cell[j]] == 0) {
                    arcs[mesh.curved[by_cell[j]].side.side] = &mesh.arcs[as_size(mesh.curved[by_cell[j]].arc)];
                    any = true;
                }
            if (any) {
                for (int v = 0; v < 3; ++v) x[v] = mesh.nodes[as_size(corners[as_size(3 * cell + v)])];
                const double flat = cross(x[1] - x[0], x[2] - x[0]);
                place_cell_nodes(kind, arcs, x);
                if (!(least_jacobian(kind, x) > 0.02 * flat)) {
                    for (std::size_t k = i; k < j; ++k) {
                        if (straight[by_cell[k]] != 0) continue;
                        straight[by_cell[k]] = 1;
                        if (partner[by_cell[k]] < straight.size()) straight[partner[by_cell[k]]] = 1;
                        if (count++ == 0) where = x[0];
                    }
                    again = true;
                }
            }
            i = j;
        }
    }
    if (count == 0) return;
    std::vector<CurvedSide> kept;
    for (std::size_t k = 0; k < straight.size(); ++k)
        if (straight[k] == 0) kept.push_back(mesh.curved[k]);
    mesh.curved = std::move(kept);
    mesh.remarks.push_back(text(count, " cell sides on arcs were kept straight, the first near (", where.x, ", ",
                                where.y, "): curves touch there, and curved cells would fold"));
}

TEPOR_INLINE void triangulate(const Section& section, const Meshing& meshing, const CellKind& kind, MeshData& mesh) {
    validate(meshing);
    Picture picture = look_at(section);
    if (mesh.frame.kind() == Frame::Kind::spherical)
        throw Error(ErrorCode::wrong_dimension, "frame",
                    "triangulate: Spherical is for 1D; use Cylindrical for a body of revolution");
    if (mesh.frame.kind() == Frame::Kind::cylindrical) {
        for (Point& p : picture.graph.points) {
            if (p.x < -picture.graph.tolerance)
                throw Error(ErrorCode::bad_geometry, "section",
                            text("section: the point (", p.x, ", ", p.y,
                                 ") has a negative radius; in a Cylindrical frame x is the radius"));
            if (p.x < picture.graph.tolerance) p.x = 0.0; // on the axis
        }
    }
    const Targets targets = make_targets(meshing, section, picture);
    estimate_count(targets, picture.graph);
    Refiner refiner(picture.graph, targets);
    refiner.start(true);
    refiner.refine();
    std::vector<Id> corners = hand_over(refiner, picture, mesh);
    mesh.remarks = picture.remarks;
    name_by_place(section, refiner, corners, mesh);
    straighten_folded(kind, corners, mesh);
    add_inner_nodes(mesh, kind, std::move(corners));
}

} // namespace tepor::detail
