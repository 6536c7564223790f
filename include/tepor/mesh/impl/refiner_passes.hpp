#pragma once
// Passes of the refinement: faulty triangles mended, vertices smoothed, until nothing is left to do.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/impl/quality.hpp>
#include <tepor/mesh/quality.hpp>

namespace tepor::detail {

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
    // A triangle a little too large beside pieces of the right length may stay, but not one with a bad angle.
    const auto give_up = [&] {
        if (fault == 1 && bad_angle(triangle)) mend(triangle, 2, plain);
    };
    if (found.blocked) {
        const Id s = mesh.segment[as_size(found.half)];
        if (s < 0) fail(centre, "the refinement left the drawing");
        if (fault == 1) {
            const Id k = found.half;
            if (distance(mesh.at(mesh.from(k)), mesh.at(mesh.to(k))) <= 1.1 * mean_size) return give_up();
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
        if (!split) return give_up();
        again();
        return;
    }
    const Id v = mesh.fill_cavity(centre);
    sync_vertex(v, -1, target_at(centre, mesh.label[as_size(home / 3)]));
    settle(v);
}

/// Move free vertices to the mean of their neighbours where that widens the least angle around them, then flip.
TEPOR_INLINE void Refiner::smooth() {
    std::vector<Point> ring;
    for (Id v = 4; v < static_cast<Id>(mesh.points.size()); ++v) {
        if (vertex_edge_[as_size(v)] >= 0 || vertex_point_[as_size(v)] >= 0) continue;
        if (mesh.label[as_size(mesh.out[as_size(v)] / 3)] < 0) continue;
        ring.clear();
        mesh.star.clear();
        Point mean;
        mesh.around(v, [&](Id h) {
            ring.push_back(mesh.at(mesh.to(h)));
            mesh.star.push_back(Delaunay::next(h));
            mean = mean + ring.back();
        });
        const std::size_t n = ring.size();
        mean = (1.0 / as_double(n)) * mean;
        const Point old = mesh.at(v);
        double before = 1.0;
        double after = 1.0;
        for (std::size_t i = 0; i < n; ++i) {
            const Point a = ring[i];
            const Point b = ring[i + 1 == n ? 0 : i + 1];
            before = std::min(before, TriangleMeasure(a, b, old).least_sine_squared());
            const TriangleMeasure moved(a, b, mean);
            after = std::min(after, moved.area > 0.0 ? moved.least_sine_squared() : -1.0);
        }
        if (!(after > before)) continue;
        mesh.points[as_size(v)] = mean;
        mesh.mend_around(v);
    }
}

TEPOR_INLINE void Refiner::refine() {
    for (Index h = 0; h < 3 * mesh.triangles(); ++h)
        if (!(distance(mesh.at(mesh.from(as_id(h))), mesh.at(mesh.to(as_id(h)))) > 1e-3 * graph_.tolerance))
            fail(mesh.at(mesh.from(as_id(h))), "edges run together at too sharp an angle");
    const auto refuse = [&](double count) {
        Id shortest = 0;
        double length = 1e300;
        for (std::size_t s = 0; s < edge_of_segment.size(); ++s) {
            const Id h = mesh.segment_edge[s];
            const double l = distance(mesh.at(mesh.from(h)), mesh.at(mesh.to(h)));
            if (l >= length) continue;
            length = l;
            shortest = mesh.from(h);
        }
        const Point p = mesh.at(shortest);
        throw Error(ErrorCode::too_large, "size",
                    text("size: ", count, " triangles and not done, over most_triangles = ", targets_.most_triangles,
                         "; the shortest piece of an edge is ", length, " m long, near (", p.x, ", ", p.y,
                         "); use a larger size, or draw no strips that narrow, or raise most_triangles"));
    };
    size_.assign(mesh.points.size(), 1e300);
    for (std::size_t s = 0; s < pieces_.size(); ++s) {
        const Id h = mesh.segment_edge[s];
        const auto& e = graph_.edges[as_size(edge_of_segment[s])];
        const double length = size_per_piece * distance(mesh.at(mesh.from(h)), mesh.at(mesh.to(h)));
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
        if (mesh.triangles() > targets_.most_triangles) refuse(as_double(mesh.triangles()));
    }
    for (int sweep = 0; sweep < smoothing_sweeps; ++sweep) smooth();
}

} // namespace tepor::detail
