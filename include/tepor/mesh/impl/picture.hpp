#pragma once
// What can be seen of an arrangement, and the names of outer edges.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/drawing.hpp>
#include <tepor/mesh/impl/painter.hpp>

namespace tepor::detail {

/// The edges that can be seen, and the names of outer ones.
class EdgeNamer {
  public:
    EdgeNamer(const Section& section, const Arrangement& arrangement, const Painter& painter, Picture& picture)
        : section_(section), arrangement_(arrangement), painter_(painter), picture_(picture) {}

    void run();

  private:
    /// A seen edge with what it came from.
    struct Seen {
        Id a;
        Id b;
        Id piece;
        std::vector<Id> faces;
    };

    [[nodiscard]] Id region(Id face) const { return painter_.faces[as_size(face)].region; }
    [[nodiscard]] bool outer(const Seen& s) const {
        const auto& p = arrangement_.pieces[as_size(s.piece)];
        return (region(p.left_face) < 0) != (region(p.right_face) < 0);
    }
    [[nodiscard]] Id arc(const Seen& s) const { return arrangement_.pieces[as_size(s.piece)].arc; }
    [[nodiscard]] double length(const Seen& s) const;
    Id face_number(const std::string& name);
    void see();
    void name_cuts();
    void name_shape_edge(const Section::Face& face);
    void name_between(const Section::Face& face);
    Id point_on_edge(Point p, const std::string& name);
    void dissolve();
    void finish();

    const Section& section_;
    const Arrangement& arrangement_;
    const Painter& painter_;
    Picture& picture_;
    std::vector<Point> points_;
    std::vector<Seen> seen_;
    std::vector<char> keep_;     ///< points that must stay
    std::vector<int> pieces_at_; ///< pieces of the arrangement at each point
};

TEPOR_INLINE double EdgeNamer::length(const Seen& s) const {
    const Point a = points_[as_size(s.a)];
    const Point b = points_[as_size(s.b)];
    const double chord = distance(a, b);
    if (arc(s) < 0) return chord;
    const double r = arrangement_.arcs[as_size(arc(s))].radius;
    return 2.0 * r * std::asin(std::min(1.0, 0.5 * chord / r));
}

TEPOR_INLINE Id EdgeNamer::face_number(const std::string& name) {
    auto& names = picture_.faces;
    const auto found = std::find(names.begin(), names.end(), name);
    if (found != names.end()) return as_id(found - names.begin());
    names.push_back(name);
    return as_id(names.size()) - 1;
}

TEPOR_INLINE void EdgeNamer::see() {
    points_ = arrangement_.points;
    keep_.assign(points_.size(), 0);
    pieces_at_.assign(points_.size(), 0);
    for (std::size_t k = 0; k < arrangement_.pieces.size(); ++k) {
        const auto& p = arrangement_.pieces[k];
        ++pieces_at_[as_size(p.a)];
        ++pieces_at_[as_size(p.b)];
        const Id l = region(p.left_face);
        const Id r = region(p.right_face);
        const bool line = std::any_of(p.owners.begin(), p.owners.end(), [](const auto& o) { return o.item < 0; });
        if (l != r || (line && l >= 0)) seen_.push_back({p.a, p.b, as_id(k), {}});
    }
    for (std::size_t i = 0; i < arrangement_.held.size(); ++i) keep_[as_size(arrangement_.held[i])] = 1;
}

/// Points left over from hidden edges, in the middle of what is now one straight edge or one arc, go.
TEPOR_INLINE void EdgeNamer::dissolve() {
    std::vector<std::vector<std::size_t>> at(points_.size());
    for (std::size_t k = 0; k < seen_.size(); ++k) {
        std::sort(seen_[k].faces.begin(), seen_[k].faces.end());
        seen_[k].faces.erase(std::unique(seen_[k].faces.begin(), seen_[k].faces.end()), seen_[k].faces.end());
        at[as_size(seen_[k].a)].push_back(k);
        at[as_size(seen_[k].b)].push_back(k);
    }
    std::vector<char> gone(seen_.size(), 0);
    for (std::size_t v = 0; v < points_.size(); ++v) {
        if (at[v].size() != 2 || keep_[v] != 0 || pieces_at_[v] <= 2) continue;
        const std::size_t i = at[v][0];
        const std::size_t j = at[v][1];
        Seen& s = seen_[i];
        Seen& t = seen_[j];
        if (i == j || arc(s) != arc(t) || s.faces != t.faces) continue;
        const auto& p = arrangement_.pieces[as_size(s.piece)];
        const auto& q = arrangement_.pieces[as_size(t.piece)];
        // The same direction: one enters v, the other leaves it.
        const bool along = (s.b == as_id(v)) != (t.b == as_id(v));
        const Id ql = along ? q.left_face : q.right_face;
        const Id qr = along ? q.right_face : q.left_face;
        if (region(p.left_face) != region(ql) || region(p.right_face) != region(qr)) continue;
        const Id far_s = s.b == as_id(v) ? s.a : s.b;
        const Id far_t = t.b == as_id(v) ? t.a : t.b;
        if (far_s == far_t) continue;
        const Point a = points_[as_size(far_s)];
        const Point b = points_[as_size(far_t)];
        if (arc(s) < 0) {
            if (!(std::abs(cross(b - a, points_[v] - a)) <= 0.01 * arrangement_.tolerance * distance(a, b)) ||
                !(dot(points_[v] - a, b - points_[v]) > 0.0))
                continue;
        } else {
            const Point c = arrangement_.arcs[as_size(arc(s))].centre;
            const Point m = points_[v];
            const double turn =
                std::atan2(cross(a - c, m - c), dot(a - c, m - c)) + std::atan2(cross(m - c, b - c), dot(m - c, b - c));
            if (!(std::abs(turn) < 0.6 * pi)) continue;
        }
        if (s.b == as_id(v))
            s.b = far_t;
        else
            s.a = far_t;
        gone[j] = 1;
        auto& list = at[as_size(far_t)];
        std::replace(list.begin(), list.end(), j, i);
        at[v].clear();
    }
    std::size_t kept = 0;
    for (std::size_t k = 0; k < seen_.size(); ++k)
        if (gone[k] == 0) {
            if (kept != k) seen_[kept] = std::move(seen_[k]);
            ++kept;
        }
    seen_.resize(kept);
}

TEPOR_INLINE void EdgeNamer::finish() {
    PlaneGraph& graph = picture_.graph;
    graph.tolerance = arrangement_.tolerance;
    graph.diagonal = arrangement_.diagonal;
    std::vector<Id> point(points_.size(), -1);
    const auto use = [&](Id k) {
        if (point[as_size(k)] < 0) {
            point[as_size(k)] = as_id(graph.points.size());
            graph.points.push_back(points_[as_size(k)]);
        }
        return point[as_size(k)];
    };
    // Regions that can be seen, in the order added; arcs that are used.
    std::vector<Id> region_number(painter_.regions.size(), -1);
    for (const Seen& s : seen_) {
        const auto& p = arrangement_.pieces[as_size(s.piece)];
        for (Id f : {p.left_face, p.right_face})
            if (region(f) >= 0) region_number[as_size(region(f))] = 0;
    }
    for (std::size_t r = 0; r < region_number.size(); ++r) {
        if (region_number[r] < 0) {
            picture_.remarks.push_back(
                text("region \"", painter_.regions[r], "\" is painted over or cut away; it has no cells"));
            continue;
        }
        region_number[r] = as_id(picture_.regions.size());
        picture_.regions.push_back(painter_.regions[r]);
    }
    if (picture_.regions.empty())
        throw Error(ErrorCode::bad_geometry, "section",
                    "section: nothing is left; the cuts remove everything that was painted");
    std::vector<Id> arc_number(arrangement_.arcs.size(), -1);
    const auto number_of = [&](Id r) { return r < 0 ? Id{-1} : region_number[as_size(r)]; };
    for (const Seen& s : seen_) {
        const auto& p = arrangement_.pieces[as_size(s.piece)];
        PlaneGraph::Edge e;
        e.a = use(s.a);
        e.b = use(s.b);
        if (p.arc >= 0) {
            Id& n = arc_number[as_size(p.arc)];
            if (n < 0) {
                n = as_id(graph.arcs.size());
                graph.arcs.push_back(arrangement_.arcs[as_size(p.arc)]);
            }
            e.arc = n;
        }
        e.left = number_of(region(p.left_face));
        e.right = number_of(region(p.right_face));
        if (!s.faces.empty()) {
            const auto found = std::find(graph.face_sets.begin(), graph.face_sets.end(), s.faces);
            e.face_set = as_id(found - graph.face_sets.begin());
            if (found == graph.face_sets.end()) graph.face_sets.push_back(s.faces);
        }
        graph.edges.push_back(e);
    }
    for (std::size_t i = 0; i < arrangement_.held.size(); ++i) {
        const Id k = arrangement_.held[i];
        const Id f = painter_.face_of_point[as_size(k)];
        if (point[as_size(k)] >= 0) continue;
        // On a hidden edge: the regions beside it tell.
        Id r = f >= 0 ? region(f) : -1;
        for (const auto& p : arrangement_.pieces)
            if (f < 0 && (p.a == k || p.b == k)) r = std::max(r, region(p.left_face));
        if (r < 0)
            throw Error(
                ErrorCode::bad_geometry, "hold",
                text("hold: the point (", section_.held()[i].x, ", ", section_.held()[i].y, ") lies outside the body"));
        graph.held.push_back(use(k));
    }
}

TEPOR_INLINE void EdgeNamer::run() {
    see();
    name_cuts();
    for (const auto& face : section_.faces()) {
        if (face.kind == Section::Face::Kind::between) name_between(face);
        if (face.kind == Section::Face::Kind::edge) name_shape_edge(face);
        if (face.kind == Section::Face::Kind::test || face.kind == Section::Face::Kind::rest) face_number(face.name);
    }
    dissolve();
    finish();
}

TEPOR_INLINE Picture look_at(const Section& section) {
    Picture picture;
    Arrangement arrangement = arrange(section, picture.remarks);
    const Painter painter(section, arrangement);
    EdgeNamer(section, arrangement, painter, picture).run();
    return picture;
}

} // namespace tepor::detail

#include <tepor/mesh/impl/edge_namer.hpp>
