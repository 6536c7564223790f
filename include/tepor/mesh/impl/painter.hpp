#pragma once
// The painting rule: which region each face of an arrangement belongs to.

#include <algorithm>
#include <cmath>
#include <tepor/mesh/drawing.hpp>
#include <tepor/mesh/quality.hpp>

namespace tepor::detail {

/// One face of the arrangement: how often each part winds around it.
struct PaintFace {
    std::vector<int> winding;
    Id region = -1;
    std::vector<Id> cuts; ///< items of cuts that hold it
};

/// Faces of the arrangement by triangulating it; fills left_face and right_face of its pieces.
class Painter {
  public:
    Painter(const Section& section, Arrangement& arrangement);

    std::vector<PaintFace> faces;
    std::vector<std::string> regions; ///< by number, in the order first added
    std::vector<Id> face_of_point;    ///< face around each point that ends no piece, -1 for others

  private:
    void find_faces();
    void wind();
    void paint();

    const Section& section_;
    Arrangement& arrangement_;
};

TEPOR_INLINE Painter::Painter(const Section& section, Arrangement& arrangement)
    : section_(section), arrangement_(arrangement) {
    find_faces();
    wind();
    paint();
}

TEPOR_INLINE void Painter::find_faces() {
    PlaneGraph graph;
    graph.points = arrangement_.points;
    graph.arcs = arrangement_.arcs;
    graph.tolerance = arrangement_.tolerance;
    for (const auto& p : arrangement_.pieces) {
        PlaneGraph::Edge e;
        e.a = p.a;
        e.b = p.b;
        e.arc = p.arc;
        graph.edges.push_back(e);
    }
    Targets targets;
    Refiner refiner(graph, targets);
    refiner.start(false);

    Delaunay& mesh = refiner.mesh;
    std::vector<Id> face(mesh.label.size(), -1);
    std::vector<Id> stack;
    Id count = 0;
    const auto flood = [&](Id t) {
        if (face[as_size(t)] >= 0) return;
        face[as_size(t)] = count;
        stack.push_back(t);
        while (!stack.empty()) {
            const Id k = stack.back();
            stack.pop_back();
            for (Id h = 3 * k; h < 3 * k + 3; ++h) {
                const Id g = mesh.twin[as_size(h)];
                if (g < 0 || mesh.segment[as_size(h)] >= 0 || face[as_size(g / 3)] >= 0) continue;
                face[as_size(g / 3)] = count;
                stack.push_back(g / 3);
            }
        }
        ++count;
    };
    flood(mesh.out[0] / 3); // a corner of the bounding square lies outside: face 0
    for (Id t = 0; t < static_cast<Id>(face.size()); ++t) flood(t);
    faces.resize(as_size(count));
    for (std::size_t s = 0; s < refiner.edge_of_segment.size(); ++s) {
        const Id h = mesh.segment_edge[s]; // in the direction of the piece, since start() leaves it so
        auto& p = arrangement_.pieces[as_size(refiner.edge_of_segment[s])];
        p.left_face = face[as_size(h / 3)];
        p.right_face = face[as_size(mesh.twin[as_size(h)] / 3)];
    }
    std::vector<char> used(arrangement_.points.size(), 0);
    for (const auto& p : arrangement_.pieces) used[as_size(p.a)] = used[as_size(p.b)] = 1;
    face_of_point.assign(arrangement_.points.size(), -1);
    for (std::size_t k = 0; k < used.size(); ++k)
        if (used[k] == 0) face_of_point[k] = face[as_size(mesh.out[as_size(refiner.vertex_of_point[k])] / 3)];
}

TEPOR_INLINE void Painter::wind() {
    const auto& pieces = arrangement_.pieces;
    std::vector<std::vector<Id>> across(faces.size());
    for (std::size_t k = 0; k < pieces.size(); ++k) {
        across[as_size(pieces[k].left_face)].push_back(as_id(k));
        across[as_size(pieces[k].right_face)].push_back(as_id(k));
    }
    std::vector<Id> stack{0};
    faces[0].winding.assign(as_size(arrangement_.parts), 0);
    while (!stack.empty()) {
        const Id f = stack.back();
        stack.pop_back();
        for (Id k : across[as_size(f)]) {
            const auto& p = pieces[as_size(k)];
            const bool to_left = p.right_face == f;
            const Id g = to_left ? p.left_face : p.right_face;
            if (!faces[as_size(g)].winding.empty()) continue;
            faces[as_size(g)].winding = faces[as_size(f)].winding;
            for (const auto& o : p.owners)
                if (o.part >= 0) faces[as_size(g)].winding[as_size(o.part)] += to_left ? o.sign : -o.sign;
            stack.push_back(g);
        }
    }
}

TEPOR_INLINE void Painter::paint() {
    std::vector<Id> region_of_item;
    for (const auto& item : section_.items()) {
        Id r = -1;
        if (!item.cut) {
            const auto found = std::find(regions.begin(), regions.end(), item.name);
            r = as_id(found - regions.begin());
            if (found == regions.end()) regions.push_back(item.name);
        }
        region_of_item.push_back(r);
    }
    for (PaintFace& face : faces) {
        Id top = -1; // the item painted last
        for (std::size_t part = 0; part < face.winding.size(); ++part) {
            if (face.winding[part] == 0) continue;
            const Id item = arrangement_.item_of_part[part];
            if (section_.items()[as_size(item)].cut)
                face.cuts.push_back(item);
            else
                top = std::max(top, item);
        }
        if (top >= 0 && face.cuts.empty()) face.region = region_of_item[as_size(top)];
    }
}

} // namespace tepor::detail
