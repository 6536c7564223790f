#pragma once
// Delaunay refinement: pieces of edges first, then triangles too large or too sharp.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/edge_grid.hpp>
#include <tepor/mesh/quality.hpp>
#include <tepor/mesh/space_order.hpp>

namespace tepor::detail {

/// sin^2 of 25 degrees, the least angle refined for.
inline constexpr double least_sine_squared = 0.17860619515673032;
/// A triangle is too large when its circumradius exceeds this times the size at its vertices. At more than 1/sqrt(2) a new
/// vertex cannot encroach a piece of an edge that is itself no longer than the size; edges come out about as long as the size.
inline constexpr double radius_per_size = 0.73;
/// A piece of an edge is too long beyond this times the size at its ends.
inline constexpr double piece_per_size = 1.42;

TEPOR_INLINE Refiner::Refiner(const PlaneGraph& graph, const Targets& targets)
    : mesh(
          [&] {
              Point low = graph.points.front();
              for (Point p : graph.points) low = {std::min(low.x, p.x), std::min(low.y, p.y)};
              for (const MeshArc& a : graph.arcs)
                  low = {std::min(low.x, a.centre.x - a.radius), std::min(low.y, a.centre.y - a.radius)};
              return low;
          }(),
          [&] {
              Point high = graph.points.front();
              for (Point p : graph.points) high = {std::max(high.x, p.x), std::max(high.y, p.y)};
              for (const MeshArc& a : graph.arcs)
                  high = {std::max(high.x, a.centre.x + a.radius), std::max(high.y, a.centre.y + a.radius)};
              return high;
          }()),
      graph_(graph), targets_(targets) {}

TEPOR_INLINE void Refiner::fail(Point p, const char* cause) const {
    throw Error(ErrorCode::bad_geometry, "section",
                text("section: cannot be meshed near (", p.x, ", ", p.y, "): ", cause, "; the drawing's tolerance is ",
                     graph_.tolerance, " m"));
}

/// Points where two edges leave within 75 degrees of each other: there pieces end on common circles around the point. (75, not
/// 60: chords of arcs may stand closer than the arcs.)
TEPOR_INLINE void Refiner::mark_sharp_corners() {
    sharp_.assign(graph_.points.size(), 0);
    std::vector<std::pair<Id, double>> rays;
    for (const auto& e : graph_.edges)
        for (Id v : {e.a, e.b}) {
            const Point d = graph_.leaving(e, v);
            rays.emplace_back(v, std::atan2(d.y, d.x));
        }
    std::sort(rays.begin(), rays.end());
    const double sharp = 75.0 * pi / 180.0;
    for (std::size_t i = 0; i < rays.size();) {
        std::size_t j = i;
        while (j < rays.size() && rays[j].first == rays[i].first) ++j;
        for (std::size_t k = i; j - i > 1 && k < j; ++k) {
            const double gap =
                k + 1 < j ? rays[k + 1].second - rays[k].second : rays[i].second + 2.0 * pi - rays[k].second;
            if (gap < sharp) sharp_[as_size(rays[i].first)] = 1;
        }
        i = j;
    }
}

/// Where the piece a-b of edge e is split: the middle; on edges with a sharp corner a place whose distance from the corner is
/// as round a binary number as the middle part of the piece allows, so that all edges at the corner are split alike.
TEPOR_INLINE Point Refiner::split_place(const PlaneGraph::Edge& e, Point a, Point b) const {
    const MeshArc* arc = e.arc < 0 ? nullptr : &graph_.arcs[as_size(e.arc)];
    const Point middle = arc != nullptr ? on_arc(*arc, a, b, 0.5) : 0.5 * (a + b);
    Id corner = -1;
    for (Id v : {e.a, e.b})
        if (sharp_[as_size(v)] != 0 && (corner < 0 || distance(middle, graph_.points[as_size(v)]) <
                                                          distance(middle, graph_.points[as_size(corner)])))
            corner = v;
    if (corner < 0) return middle;
    const Point p = graph_.points[as_size(corner)];
    const Point q = graph_.points[as_size(corner == e.a ? e.b : e.a)];
    double near = distance(a, p);
    double far = distance(b, p);
    if (near > far) std::swap(near, far);
    const double low = near + 0.3 * (far - near);
    const double high = near + 0.7 * (far - near);
    double step = std::exp2(std::ceil(std::log2(high)));
    while (std::ceil(low / step) * step > high) step *= 0.5;
    double r = std::ceil(low / step) * step;
    // Of several equally round places the one nearest the middle.
    while (r + step <= high && std::abs(r + step - 0.5 * (near + far)) < std::abs(r - 0.5 * (near + far))) r += step;
    if (arc == nullptr) return p + (r / distance(p, q)) * (q - p);
    const Point u = p - arc->centre;
    const double turn =
        (cross(u, q - arc->centre) > 0.0 ? 2.0 : -2.0) * std::asin(std::min(1.0, 0.5 * r / arc->radius));
    const double scale = arc->radius / std::hypot(u.x, u.y);
    const double c = scale * std::cos(turn);
    const double s = scale * std::sin(turn);
    return {arc->centre.x + c * u.x - s * u.y, arc->centre.y + s * u.x + c * u.y};
}

TEPOR_INLINE bool Refiner::pieces_too_long(const PlaneGraph::Edge& e, Point a, Point b, bool sized) const {
    const double length = distance(a, b);
    if (sized && length > 1.1 * e.size) return true;
    if (e.arc < 0) return false;
    const MeshArc& arc = graph_.arcs[as_size(e.arc)];
    const double turn = 2.0 * std::asin(std::min(1.0, 0.5 * length / arc.radius));
    if (turn > targets_.turn * (1.0 + 1e-9)) return true;
    return sized && arc_height(arc, a, b) > targets_.deviation;
}

TEPOR_INLINE void Refiner::subdivide(bool sized) {
    points_ = graph_.points;
    point_edge_.assign(points_.size(), -1);
    pieces_.clear();
    std::vector<Piece> open;
    for (std::size_t k = 0; k < graph_.edges.size(); ++k) {
        const auto& e = graph_.edges[k];
        const auto edge = as_id(k);
        const Point a = graph_.points[as_size(e.a)];
        const Point b = graph_.points[as_size(e.b)];
        if (sharp_[as_size(e.a)] == 0 && sharp_[as_size(e.b)] == 0) {
            double parts = 1.0;
            double length = distance(a, b);
            if (e.arc >= 0) {
                const MeshArc& arc = graph_.arcs[as_size(e.arc)];
                const double turn = 2.0 * std::asin(std::min(1.0, 0.5 * length / arc.radius));
                length = turn * arc.radius;
                parts = std::max(parts, std::ceil(turn / targets_.turn - 1e-9));
                if (sized && targets_.deviation < arc.radius)
                    parts = std::max(parts,
                                     std::ceil(turn / (2.0 * std::acos(1.0 - targets_.deviation / arc.radius)) - 1e-9));
            }
            if (sized) parts = std::max(parts, std::ceil(length / e.size - 0.1));
            if (!(parts < 1e8))
                throw Error(ErrorCode::too_large, "size",
                            "size: an edge would have more than 1e8 pieces; use a larger size");
            const auto n = static_cast<Index>(parts);
            Id last = e.a;
            for (Index i = 1; i <= n; ++i) {
                Id here = e.b;
                if (i < n) {
                    const double t = as_double(i) / parts;
                    here = as_id(points_.size());
                    points_.push_back(e.arc >= 0 ? on_arc(graph_.arcs[as_size(e.arc)], a, b, t) : a + t * (b - a));
                    point_edge_.push_back(edge);
                }
                pieces_.push_back({last, here, edge});
                last = here;
            }
            continue;
        }
        open.push_back({e.a, e.b, edge});
        while (!open.empty()) {
            const Piece p = open.back();
            open.pop_back();
            const Point u = points_[as_size(p.a)];
            const Point v = points_[as_size(p.b)];
            if (!pieces_too_long(e, u, v, sized)) {
                pieces_.push_back(p);
                continue;
            }
            if (points_.size() > 100000000)
                throw Error(ErrorCode::too_large, "size", "size: more than 1e8 pieces of edges; use a larger size");
            const Id m = as_id(points_.size());
            points_.push_back(split_place(e, u, v));
            point_edge_.push_back(edge);
            open.push_back({m, p.b, edge});
            open.push_back({p.a, m, edge});
        }
    }
}

/// Chords must lie to each other as their arcs do: no point may stand between a chord and its arc, and no two pieces may have
/// the same chord. Arcs that break this are split in halves.
TEPOR_INLINE void Refiner::part_crossing_chords() {
    if (graph_.arcs.empty()) return;
    for (int round = 0; round < 60; ++round) {
        EdgeGrid grid;
        for (Point p : points_) grid.add(p, p);
        grid.build();
        std::vector<std::pair<std::pair<Id, Id>, std::size_t>> chords;
        std::vector<char> bad(pieces_.size(), 0);
        bool any = false;
        for (std::size_t i = 0; i < pieces_.size(); ++i) {
            const Piece& piece = pieces_[i];
            chords.push_back({std::minmax(piece.a, piece.b), i});
            const auto& e = graph_.edges[as_size(piece.edge)];
            if (e.arc < 0) continue;
            const MeshArc& arc = graph_.arcs[as_size(e.arc)];
            const Point a = points_[as_size(piece.a)];
            const Point b = points_[as_size(piece.b)];
            const double height = arc_height(arc, a, b);
            const double length = distance(a, b);
            const double side = cross(b - a, arc.centre - a) > 0.0 ? 1.0 : -1.0;
            grid.visit(a, b, height, [&](std::size_t k) {
                if (k == as_size(piece.a) || k == as_size(piece.b) || bad[i] != 0) return;
                const Point p = points_[k];
                const double along = dot(p - a, b - a);
                if (along <= 0.0 || along >= length * length) return;
                if (side * cross(b - a, p - a) < 1e-3 * height * length && distance(p, arc.centre) < arc.radius)
                    bad[i] = 1;
            });
            any = any || bad[i] != 0;
        }
        std::sort(chords.begin(), chords.end());
        for (std::size_t i = 1; i < chords.size(); ++i)
            if (chords[i].first == chords[i - 1].first)
                for (std::size_t k : {i - 1, i}) {
                    const std::size_t piece = chords[k].second;
                    if (graph_.edges[as_size(pieces_[piece].edge)].arc >= 0) bad[piece] = 1;
                    any = true;
                }
        if (!any) return;
        std::vector<Piece> next;
        for (std::size_t i = 0; i < pieces_.size(); ++i) {
            const Piece piece = pieces_[i];
            if (bad[i] == 0) {
                next.push_back(piece);
                continue;
            }
            const Point a = points_[as_size(piece.a)];
            const Point b = points_[as_size(piece.b)];
            if (distance(a, b) < 8.0 * graph_.tolerance)
                fail(a, "an arc and another edge run closer than the tolerance");
            const Id m = as_id(points_.size());
            points_.push_back(split_place(graph_.edges[as_size(piece.edge)], a, b));
            point_edge_.push_back(piece.edge);
            next.push_back({piece.a, m, piece.edge});
            next.push_back({m, piece.b, piece.edge});
        }
        pieces_.swap(next);
    }
    fail(points_.front(), "arcs and other edges run too close to each other");
}

TEPOR_INLINE void Refiner::insert_pieces() {
    const std::vector<Id> order = space_order(points_);
    std::vector<Id> vertex(points_.size(), -1);
    Id hint = 0;
    for (Id k : order) {
        const Index before = static_cast<Index>(mesh.points.size());
        vertex[as_size(k)] = mesh.insert(points_[as_size(k)], hint);
        if (static_cast<Index>(mesh.points.size()) == before) fail(points_[as_size(k)], "two points coincide");
        hint = mesh.out[as_size(vertex[as_size(k)])];
    }
    vertex_of_point.assign(vertex.begin(), vertex.begin() + static_cast<Index>(graph_.points.size()));
    const std::size_t n = mesh.points.size();
    vertex_edge_.assign(n, -1);
    vertex_point_.assign(n, -1);
    for (std::size_t k = 0; k < points_.size(); ++k) {
        vertex_edge_[as_size(vertex[k])] = point_edge_[k];
        if (k < graph_.points.size()) vertex_point_[as_size(vertex[k])] = as_id(k);
    }
    for (const Piece& piece : pieces_) {
        const Id a = vertex[as_size(piece.a)];
        const Id b = vertex[as_size(piece.b)];
        const Id end = mesh.force_edge(a, b, as_id(edge_of_segment.size()));
        if (end < 0) fail(mesh.at(mesh.from(-1 - end)), "two edges cross there or run closer than the tolerance");
        if (end != b) fail(mesh.at(end), "a point lies on an edge without being part of it");
        edge_of_segment.push_back(piece.edge);
        // The half-edge in the direction of the graph's edge.
        const Id h = mesh.find_edge(a, b);
        mesh.segment_edge.back() = h;
    }
}

TEPOR_INLINE void Refiner::flood() {
    std::fill(mesh.label.begin(), mesh.label.end(), -2);
    std::vector<Id> stack;
    const auto give = [&](Id half, Id label) {
        if (half < 0) return;
        Id& now = mesh.label[as_size(half / 3)];
        if (now == -2) {
            now = label;
            stack.push_back(half / 3);
        } else if (now != label) {
            fail(mesh.at(mesh.from(half)), "the regions beside an edge contradict each other");
        }
    };
    // After force_edge of later pieces half-edges may have moved: find them by their ends.
    for (std::size_t s = 0; s < pieces_.size(); ++s) {
        const Piece& piece = pieces_[s];
        const auto& e = graph_.edges[as_size(piece.edge)];
        Id h = mesh.segment_edge[s];
        if (!(mesh.at(mesh.from(h)) == points_[as_size(piece.a)])) h = mesh.twin[as_size(h)];
        mesh.segment_edge[s] = h;
        give(h, e.left);
        give(mesh.twin[as_size(h)], e.right);
    }
    while (!stack.empty()) {
        const Id t = stack.back();
        stack.pop_back();
        for (Id h = 3 * t; h < 3 * t + 3; ++h)
            if (mesh.segment[as_size(h)] < 0) give(mesh.twin[as_size(h)], mesh.label[as_size(t)]);
    }
    for (Id& label : mesh.label)
        if (label == -2) label = -1;
}

TEPOR_INLINE double Refiner::target_at(Point p, Id region) const {
    double size = targets_.size;
    if (region >= 0 && as_size(region) < targets_.region_size.size())
        size = std::min(size, targets_.region_size[as_size(region)]);
    if (targets_.law) {
        const double asked = targets_.law(p);
        if (!(asked > 0.0 && std::isfinite(asked)))
            throw Error(ErrorCode::bad_law, "size law",
                        text("size law: gives ", asked, " at (", p.x, ", ", p.y, "), expected a finite size > 0 [m]"));
        size = std::min(size, asked);
    }
    return size;
}

TEPOR_INLINE void Refiner::start(bool sized) {
    mark_sharp_corners();
    subdivide(sized);
    part_crossing_chords();
    insert_pieces();
    flood();
}

TEPOR_INLINE void Refiner::sync_vertex(Id vertex, Id edge, double size) {
    if (vertex_edge_.size() <= as_size(vertex)) {
        vertex_edge_.push_back(edge);
        vertex_point_.push_back(-1);
        size_.push_back(size);
    }
}

TEPOR_INLINE bool Refiner::encroached(Id segment) const {
    const Id h = mesh.segment_edge[as_size(segment)];
    const Point a = mesh.at(mesh.from(h));
    const Point b = mesh.at(mesh.to(h));
    const Point d = b - a;
    const double slack = -1e-10 * dot(d, d);
    for (const Id k : {h, mesh.twin[as_size(h)]}) {
        if (k < 0 || mesh.label[as_size(k / 3)] < 0) continue;
        const Point c = mesh.at(mesh.apex(k));
        if (dot(a - c, b - c) < slack) return true;
    }
    return false;
}

TEPOR_INLINE bool Refiner::too_long(Id segment) const {
    const Id h = mesh.segment_edge[as_size(segment)];
    const Id a = mesh.from(h);
    const Id b = mesh.to(h);
    return distance(mesh.at(a), mesh.at(b)) > piece_per_size * 0.5 * (size_[as_size(a)] + size_[as_size(b)]);
}

TEPOR_INLINE void Refiner::check_segment(Id segment) {
    if (encroached(segment) || too_long(segment)) segments_.push_back(segment);
}

/// True for two vertices on different edges that leave a common sharp corner, at equal distance from it.
TEPOR_INLINE bool Refiner::across_sharp_corner(Id p, Id q) const {
    const Id ep = vertex_edge_[as_size(p)];
    const Id eq = vertex_edge_[as_size(q)];
    if (ep < 0 || eq < 0 || ep == eq) return false;
    const auto& e = graph_.edges[as_size(ep)];
    const auto& f = graph_.edges[as_size(eq)];
    for (Id v : {e.a, e.b}) {
        if ((v != f.a && v != f.b) || sharp_[as_size(v)] == 0) continue;
        if (!(dot(graph_.leaving(e, v), graph_.leaving(f, v)) > 0.5)) continue; // less than 60 degrees
        const Point c = graph_.points[as_size(v)];
        const double r = distance(mesh.at(p), c);
        if (std::abs(distance(mesh.at(q), c) - r) <= 1e-6 * r) return true;
    }
    return false;
}

TEPOR_INLINE int Refiner::verdict(Id triangle) const {
    const Id* o = mesh.org.data() + Index{3} * triangle;
    const Point a = mesh.at(o[0]);
    const Point b = mesh.at(o[1]);
    const Point c = mesh.at(o[2]);
    const Point ab = b - a;
    const Point bc = c - b;
    const Point ca = a - c;
    const double l[3] = {dot(ab, ab), dot(bc, bc), dot(ca, ca)};
    const double area = cross(ab, c - a); // twice
    const double product = l[0] * l[1] * l[2];
    const double size = (size_[as_size(o[0])] + size_[as_size(o[1])] + size_[as_size(o[2])]) * (radius_per_size / 3.0);
    // R^2 = product / (2 area)^2 with twice the area a: R^2 = product / (4 a^2).
    if (product > 4.0 * area * area * size * size) return 1;
    const int k = l[0] <= l[1] ? (l[0] <= l[2] ? 0 : 2) : (l[1] <= l[2] ? 1 : 2);
    // sin of the least angle = shortest side / 2R.
    if (l[k] * area * area >= least_sine_squared * (1.0 - 1e-9) * product) return 0;
    const Id p = o[k];
    const Id q = o[k == 2 ? 0 : k + 1];
    const Id top = o[k == 0 ? 2 : k - 1];
    if (across_sharp_corner(p, q)) return 0;
    // The least angle stands in a sharp corner between two held edges: nothing can widen it.
    const Id point = vertex_point_[as_size(top)];
    if (point >= 0 && sharp_[as_size(point)] != 0) {
        const Id h = Id{3} * triangle + k;
        if (mesh.segment[as_size(Delaunay::next(h))] >= 0 && mesh.segment[as_size(Delaunay::prev(h))] >= 0) return 0;
    }
    return 2;
}

TEPOR_INLINE void Refiner::judge(Id triangle) {
    if (mesh.label[as_size(triangle)] < 0) return;
    if (waiting_.size() < mesh.label.size()) waiting_.resize(mesh.label.size() + mesh.label.size() / 2, 0);
    if (waiting_[as_size(triangle)] != 0) return;
    if (verdict(triangle) == 0) return;
    waiting_[as_size(triangle)] = 1;
    triangles_.push_back(triangle);
}

/// Sizes around a vertex that has got a smaller one: none may exceed it by more than the growth allows.
TEPOR_INLINE void Refiner::relax(Id vertex) {
    relaxing_.push_back(vertex);
    while (!relaxing_.empty()) {
        const Id v = relaxing_.back();
        relaxing_.pop_back();
        const Point p = mesh.at(v);
        const double size = size_[as_size(v)];
        mesh.around(v, [&](Id h) {
            const Id w = mesh.to(h);
            if (w < 4) return;
            if (mesh.label[as_size(h / 3)] < 0 &&
                (mesh.twin[as_size(h)] < 0 || mesh.label[as_size(mesh.twin[as_size(h)] / 3)] < 0))
                return;
            const double most = size + targets_.growth * distance(p, mesh.at(w));
            if (size_[as_size(w)] <= most * (1.0 + 1e-6)) return;
            size_[as_size(w)] = most;
            relaxing_.push_back(w);
            mesh.around(w, [&](Id k) {
                judge(k / 3);
                if (mesh.segment[as_size(k)] >= 0 && too_long(mesh.segment[as_size(k)]))
                    segments_.push_back(mesh.segment[as_size(k)]);
            });
        });
    }
}

/// After a vertex has been put in: its size, and everything it touches looked at. mesh.star holds the edges facing it.
TEPOR_INLINE void Refiner::settle(Id vertex) {
    const Point p = mesh.at(vertex);
    double size = size_[as_size(vertex)];
    for (const Id h : mesh.star) {
        if (mesh.label[as_size(h / 3)] < 0) continue;
        const Id a = mesh.from(h);
        const Id b = mesh.to(h);
        size = std::min(size, size_[as_size(a)] + targets_.growth * distance(p, mesh.at(a)));
        size = std::min(size, size_[as_size(b)] + targets_.growth * distance(p, mesh.at(b)));
    }
    size_[as_size(vertex)] = size;
    for (const Id h : mesh.star) {
        if (mesh.label[as_size(h / 3)] < 0) continue;
        const Id a = mesh.from(h);
        if (size_[as_size(a)] > (size + targets_.growth * distance(p, mesh.at(a))) * (1.0 + 1e-6)) {
            relax(vertex);
            break;
        }
    }
    for (const Id h : mesh.star) {
        const Id s = mesh.segment[as_size(h)];
        if (s >= 0) check_segment(s);
        judge(h / 3);
    }
}

TEPOR_INLINE void Refiner::split_segment(Id segment, int depth) {
    const Id h = mesh.segment_edge[as_size(segment)];
    const Point a = mesh.at(mesh.from(h));
    const Point b = mesh.at(mesh.to(h));
    const Id edge = edge_of_segment[as_size(segment)];
    const auto& e = graph_.edges[as_size(edge)];
    const double length = distance(a, b);
    if (!(length > 0.5 * graph_.tolerance) || depth > 40)
        fail(a, "edges run together at too sharp an angle or too small a distance");
    const Point target = split_place(e, a, b);
    Point first = target;
    if (e.arc >= 0) { // the foot of the target on the chord
        const double t = dot(target - a, b - a) / (length * length);
        first = a + t * (b - a);
    }
    const double half = 1.2 * std::max(distance(a, target), distance(b, target));
    const double mean = 0.5 * (size_[as_size(mesh.from(h))] + size_[as_size(mesh.to(h))]);
    const Id v = mesh.split_edge(h, first);
    if (v < 0) fail(first, "an edge and a point run closer than numbers can tell");
    edge_of_segment.push_back(edge);
    sync_vertex(v, edge, std::min({mean, half, e.size, target_at(target, -1)}));
    if (e.arc >= 0) {
        // Another arc's chord may stand between the chord and the arc: it is split first and makes way.
        for (int pass = 0;; ++pass) {
            const Id blocker = mesh.move(v, target);
            if (blocker == -1) break;
            if (blocker < 0 || pass > 30) fail(target, "an arc and another edge run too close to each other");
            const Id other = mesh.segment[as_size(blocker)];
            if (graph_.edges[as_size(edge_of_segment[as_size(other)])].arc < 0)
                fail(target, "an arc and a straight edge run too close to each other");
            split_segment(other, depth + 1);
        }
        mesh.star.clear();
        mesh.around(v, [&](Id k) { mesh.star.push_back(Delaunay::next(k)); });
    }
    settle(v);
    mesh.around(v, [&](Id k) {
        if (mesh.segment[as_size(k)] >= 0) check_segment(mesh.segment[as_size(k)]);
    });
}

/// Put a vertex into or near a faulty triangle, or split the pieces of edges that such a vertex would come too close to.
TEPOR_INLINE void Refiner::mend(Id triangle, int fault, bool plain) {
    const Id* o = mesh.org.data() + Index{3} * triangle;
    Point a = mesh.at(o[0]);
    Point b = mesh.at(o[1]);
    Point c = mesh.at(o[2]);
    // Turn it so that a-b is the shortest side.
    const auto squared = [](Point d) { return dot(d, d); };
    const double ab = squared(b - a);
    const double bc = squared(c - b);
    const double ca = squared(a - c);
    const double mean_size = (size_[as_size(o[0])] + size_[as_size(o[1])] + size_[as_size(o[2])]) / 3.0;
    if (bc < ab && bc <= ca) {
        const Point t = a;
        a = b;
        b = c;
        c = t;
    } else if (ca < ab && ca < bc) {
        const Point t = c;
        c = b;
        b = a;
        a = t;
    }
    const Point u = b - a;
    const Point w = c - a;
    const double uu = squared(u);
    const double ww = squared(w);
    const double scale = 0.5 / cross(u, w);
    Point centre = a + Point{scale * (w.y * uu - u.y * ww), scale * (u.x * ww - w.x * uu)};
    if (!(std::isfinite(centre.x) && std::isfinite(centre.y))) fail(a, "a triangle has no extent");
    // The new vertex goes to the circumcentre c, or, where c is far off, on the way from the middle of the shortest side to
    // c: for an angle to where the triangle over that side just gets the angle asked for, for size to where its other sides
    // get the length asked for, so that good triangles grow from the edges inwards.
    const double length = std::sqrt(uu);
    const Point normal = (1.0 / length) * Point{-u.y, u.x};
    const Point middle = 0.5 * (a + b);
    const double height = dot(centre - middle, normal);
    double reach = fault == 2 ? 2.2 * length : 1e300;
    if (fault == 1 && length < 1.5 * mean_size)
        reach = std::sqrt(std::max(mean_size * mean_size, 0.5 * uu) - 0.25 * uu);
    if (height > reach && !plain) centre = middle + reach * normal;
    const auto found = mesh.walk(centre, Id{3} * triangle, true);
    const auto again = [&] {
        if (waiting_[as_size(triangle)] == 0) {
            waiting_[as_size(triangle)] = 1;
            triangles_.push_back(triangle);
        }
    };
    if (found.blocked) {
        const Id s = mesh.segment[as_size(found.half)];
        if (s < 0) fail(centre, "the refinement left the drawing");
        if (fault == 1) {
            const Id k = found.half;
            if (distance(mesh.at(mesh.from(k)), mesh.at(mesh.to(k))) <= 1.1 * mean_size) return;
        }
        again();
        split_segment(s, 0);
        return;
    }
    const Id home = found.half - found.half % 3;
    for (Id k = home; k < home + 3; ++k)
        if (mesh.at(mesh.from(k)) == centre) return;
    mesh.open_cavity(centre, found.half);
    bool free = true;
    bool split = false;
    for (const Id k : mesh.rim) {
        const Id s = mesh.segment[as_size(k)];
        if (s < 0) continue;
        const Point p = mesh.at(mesh.from(k));
        const Point q = mesh.at(mesh.to(k));
        if (dot(p - centre, q - centre) >= 0.0) continue;
        free = false;
        if (fault == 2 || distance(p, q) > 1.1 * mean_size) {
            segments_.push_back(-1 - s);
            split = true;
        }
    }
    if (!free) {
        if (!plain && fault == 1) return mend(triangle, fault, true);
        if (split) again();
        return;
    }
    const Id v = mesh.fill_cavity(centre);
    sync_vertex(v, -1, target_at(centre, mesh.label[as_size(home / 3)]));
    settle(v);
}

TEPOR_INLINE void Refiner::refine() {
    // Sizes in the wrong unit are told before the work is done: triangles are about 0.43 size^2 each.
    double least = 0.0;
    for (Index t = 0; t < mesh.triangles(); ++t) {
        const Id region = mesh.label[as_size(t)];
        if (region < 0) continue;
        const Id* o = mesh.org.data() + 3 * t;
        const double size =
            as_size(region) < targets_.region_size.size() ? targets_.region_size[as_size(region)] : targets_.size;
        least += 0.5 * cross(mesh.at(o[1]) - mesh.at(o[0]), mesh.at(o[2]) - mesh.at(o[0])) / (0.43 * size * size);
    }
    const auto refuse = [&](const std::string& count) {
        throw Error(ErrorCode::too_large, "size",
                    text("size: ", count, " triangles, more than ", targets_.most_triangles,
                         "; use a larger size, or raise Meshing::most_triangles"));
    };
    if (least > 1.5 * as_double(targets_.most_triangles)) refuse(text("about ", least));
    size_.assign(mesh.points.size(), 1e300);
    for (std::size_t s = 0; s < pieces_.size(); ++s) {
        const Id h = mesh.segment_edge[s];
        const auto& e = graph_.edges[as_size(edge_of_segment[s])];
        const double length = 1.2 * distance(mesh.at(mesh.from(h)), mesh.at(mesh.to(h)));
        for (Id v : {mesh.from(h), mesh.to(h)})
            size_[as_size(v)] = std::min({size_[as_size(v)], e.size, length, target_at(mesh.at(v), -1)});
    }
    for (Id k : graph_.held) {
        const Id v = vertex_of_point[as_size(k)];
        size_[as_size(v)] =
            std::min(size_[as_size(v)], target_at(mesh.at(v), mesh.label[as_size(mesh.out[as_size(v)] / 3)]));
    }
    for (Id v = 4; v < static_cast<Id>(mesh.points.size()); ++v) relax(v);
    for (std::size_t s = 0; s < pieces_.size(); ++s) check_segment(as_id(s));
    for (Index t = 0; t < mesh.triangles(); ++t) judge(as_id(t));

    while (!segments_.empty() || !triangles_.empty()) {
        if (!segments_.empty()) {
            // Negative: split without asking again, for a vertex that was turned away would have encroached it.
            Id s = segments_.back();
            segments_.pop_back();
            const bool ask = s >= 0;
            if (!ask) s = -1 - s;
            if (!ask || encroached(s) || too_long(s)) split_segment(s, 0);
        } else {
            const Id t = triangles_.back();
            triangles_.pop_back();
            waiting_[as_size(t)] = 0;
            if (mesh.label[as_size(t)] < 0) continue;
            if (const int fault = verdict(t); fault != 0) mend(t, fault, false);
        }
        if (mesh.triangles() > targets_.most_triangles) refuse("the mesh has come to");
    }
}

} // namespace tepor::detail
