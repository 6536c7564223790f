#pragma once
// The second half of the refiner: pieces of edges and triangles split until sizes and angles are reached.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/quality.hpp>

namespace tepor::detail {

/// sin^2 of 25 degrees, the least angle refined for.
inline constexpr double least_sine_squared = 0.17860619515673032;
/// A triangle is too large when its circumradius exceeds this times the size at its vertices. At more than 1/sqrt(2) a new
/// vertex cannot encroach a piece of an edge that is itself no longer than the size; edges come out about as long as the size.
inline constexpr double radius_per_size = 0.73;
/// A short piece of an edge asks for small cells around it: this times its length. Large enough that a piece split for its
/// neighbours' sake never makes them too long or their triangles too large in turn (a right corner needs 1.33).
inline constexpr double size_per_piece = 1.7;
/// Passes over all free vertices at the end.
inline constexpr int smoothing_sweeps = 2;
/// A piece of an edge is too long beyond this times the size at its ends.
inline constexpr double piece_per_size = 1.42;

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

/// Squared sides and twice the area of a triangle.
struct TriangleMeasure {
    double side[3];
    double area;
    double product;

    TriangleMeasure(Point a, Point b, Point c)
        : side{dot(b - a, b - a), dot(c - b, c - b), dot(a - c, a - c)}, area(cross(b - a, c - a)),
          product(side[0] * side[1] * side[2]) {}

    [[nodiscard]] int shortest() const noexcept {
        return side[0] <= side[1] ? (side[0] <= side[2] ? 0 : 2) : (side[1] <= side[2] ? 1 : 2);
    }
    /// sin^2 of the least angle = (shortest side / 2R)^2, R^2 = product / (4 area^2).
    [[nodiscard]] double least_sine_squared() const noexcept {
        return std::min({side[0], side[1], side[2]}) * area * area / product;
    }
};

/// An angle below 25 degrees that can be mended.
TEPOR_INLINE bool Refiner::bad_angle(Id triangle) const {
    const Id* o = mesh.org.data() + Index{3} * triangle;
    const TriangleMeasure m(mesh.at(o[0]), mesh.at(o[1]), mesh.at(o[2]));
    if (m.least_sine_squared() >= least_sine_squared * (1.0 - 1e-9)) return false;
    const int k = m.shortest();
    if (across_sharp_corner(o[k], o[k == 2 ? 0 : k + 1])) return false;
    // The least angle stands in a sharp corner between two held edges: nothing can widen it.
    const Id point = vertex_point_[as_size(o[k == 0 ? 2 : k - 1])];
    if (point < 0 || sharp_[as_size(point)] == 0) return true;
    const Id h = Id{3} * triangle + k;
    return mesh.segment[as_size(Delaunay::next(h))] < 0 || mesh.segment[as_size(Delaunay::prev(h))] < 0;
}

TEPOR_INLINE int Refiner::verdict(Id triangle) const {
    const Id* o = mesh.org.data() + Index{3} * triangle;
    const TriangleMeasure m(mesh.at(o[0]), mesh.at(o[1]), mesh.at(o[2]));
    const double size = (size_[as_size(o[0])] + size_[as_size(o[1])] + size_[as_size(o[2])]) * (radius_per_size / 3.0);
    if (m.product > 4.0 * m.area * m.area * size * size) return 1;
    if (m.least_sine_squared() >= least_sine_squared * (1.0 - 1e-9)) return 0;
    return bad_angle(triangle) ? 2 : 0;
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
        const Id a = mesh.from(h);
        const Id b = mesh.to(h);
        if (!(distance(p, mesh.at(a)) > 1e-3 * graph_.tolerance)) fail(p, "edges run together at too sharp an angle");
        if (mesh.label[as_size(h / 3)] < 0) continue;
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
    const double half = size_per_piece * std::max(distance(a, target), distance(b, target));
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

} // namespace tepor::detail

#include <tepor/mesh/impl/refiner_passes.hpp>
