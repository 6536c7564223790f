#pragma once
// Insertion by cavities and flips.

#include <algorithm>
#include <cmath>
#include <tepor/mesh/delaunay.hpp>

namespace tepor::detail {

TEPOR_INLINE Delaunay::Delaunay(Point low, Point high) {
    const double reach = 1.5 * std::max({high.x - low.x, high.y - low.y, 1e-100});
    const Point m = 0.5 * (low + high);
    points = {{m.x - 2.0 * reach, m.y - 2.0 * reach},
              {m.x + 2.0 * reach, m.y - 2.0 * reach},
              {m.x + 2.0 * reach, m.y + 2.0 * reach},
              {m.x - 2.0 * reach, m.y + 2.0 * reach}};
    org = {0, 1, 2, 0, 2, 3};
    twin = {-1, -1, 3, 2, -1, -1};
    segment.assign(6, -1);
    label = {-1, -1};
    // The fan around a corner is open: it begins with the half-edge on the square, so that around() sees all of it.
    out = {0, 1, 4, 5};
}

TEPOR_INLINE Delaunay::Found Delaunay::walk(Point p, Id h, bool stop) const {
    // The edge entered by is not tested again; which of the other two is tried first alternates, so that a walk in a
    // constrained (not everywhere Delaunay) triangulation cannot circle for ever.
    const Id t = h - h % 3;
    for (Id k = t; k < t + 3; ++k)
        if (orient(at(from(k)), at(to(k)), p) < 0.0) {
            if (stop && segment[as_size(k)] >= 0) return {k, true};
            Id g = twin[as_size(k)];
            for (unsigned step = 0;; ++step) {
                if (g < 0) return {k, true}; // left the bounding square
                const bool swap = (step & 1U) != 0;
                const Id one = swap ? prev(g) : next(g);
                const Id two = swap ? next(g) : prev(g);
                Id cross_at = -1;
                if (orient(at(from(one)), at(to(one)), p) < 0.0)
                    cross_at = one;
                else if (orient(at(from(two)), at(to(two)), p) < 0.0)
                    cross_at = two;
                if (cross_at < 0) return {g, false};
                if (stop && segment[as_size(cross_at)] >= 0) return {cross_at, true};
                g = twin[as_size(cross_at)];
            }
        }
    return {t, false};
}

TEPOR_INLINE void Delaunay::open_cavity(Point p, Id h) {
    // Depth first in counter-clockwise order, so that the rim comes out in order. In a constrained Delaunay triangulation
    // the triangles found this way are seen from p as a whole and form a star-shaped hole.
    rim.clear();
    dead_.clear();
    stack_.clear();
    const Id t = h - h % 3;
    dead_.push_back(t / 3);
    stack_.push_back(t + 2);
    stack_.push_back(t + 1);
    stack_.push_back(t);
    while (!stack_.empty()) {
        const Id k = stack_.back();
        stack_.pop_back();
        const Id g = twin[as_size(k)];
        if (g < 0 || segment[as_size(k)] >= 0) {
            rim.push_back(k);
            continue;
        }
        const Id n = next(g);
        const Id q = prev(g);
        if (in_circle(at(from(g)), at(from(n)), at(from(q)), p) <= 0.0) {
            rim.push_back(k);
            continue;
        }
        dead_.push_back(g / 3);
        stack_.push_back(q);
        stack_.push_back(n);
    }
}

TEPOR_INLINE Id Delaunay::fill_cavity(Point p) {
    const Id v = as_id(points.size());
    points.push_back(p);
    const std::size_t n = rim.size();
    // A cavity of d triangles has a rim of d + 2 edges: two new triangles.
    const std::size_t d = dead_.size();
    const Id inside = label[as_size(dead_.front())];
    stack_.resize(3 * n);
    for (std::size_t i = 0; i < n; ++i) {
        const Id k = rim[i];
        stack_[3 * i] = from(k);
        stack_[3 * i + 1] = twin[as_size(k)];
        stack_[3 * i + 2] = segment[as_size(k)];
    }
    star.resize(n);
    for (std::size_t i = 0; i < n; ++i) {
        if (i < d) {
            star[i] = 3 * dead_[i];
        } else {
            star[i] = as_id(org.size());
            org.resize(org.size() + 3);
            twin.resize(twin.size() + 3);
            segment.resize(segment.size() + 3);
            label.push_back(inside);
        }
    }
    for (std::size_t i = 0; i < n; ++i) {
        const Id h = star[i];
        const std::size_t j = i + 1 == n ? 0 : i + 1;
        const Id a = stack_[3 * i];
        const Id outer = stack_[3 * i + 1];
        const Id number = stack_[3 * i + 2];
        Id* o = org.data() + h;
        o[0] = a;
        o[1] = stack_[3 * j];
        o[2] = v;
        Id* s = segment.data() + h;
        s[0] = number;
        s[1] = -1;
        s[2] = -1;
        Id* w = twin.data() + h;
        w[0] = outer;
        w[1] = star[j] + 2;
        w[2] = star[i == 0 ? n - 1 : i - 1] + 1;
        if (outer >= 0) twin[as_size(outer)] = h;
        if (number >= 0) segment_edge[as_size(number)] = h;
        // Around a corner of the bounding square the first half-edge of its open fan is the one on the square.
        if (a > 3 || outer < 0) out[as_size(a)] = h;
        label[as_size(h / 3)] = inside;
    }
    out.push_back(star[0] + 2);
    return v;
}

TEPOR_INLINE Id Delaunay::insert(Point p, Id hint) {
    const Id h = walk(p, hint, false).half;
    for (Id k = 0; k < 3; ++k) {
        const Id v = from(h - h % 3 + k);
        if (at(v) == p) return v;
    }
    open_cavity(p, h);
    return fill_cavity(p);
}

TEPOR_INLINE void Delaunay::flip(Id h) {
    const Id g = twin[as_size(h)];
    const Id hn = next(h);
    const Id hp = prev(h);
    const Id gn = next(g);
    const Id gp = prev(g);
    const Id a = from(h);
    const Id b = from(g);
    const Id c = from(hp);
    const Id d = from(gp);
    // h becomes d -> c, g becomes c -> d.
    const Id hn_twin = twin[as_size(hn)];
    const Id gn_twin = twin[as_size(gn)];
    const Id hn_segment = segment[as_size(hn)];
    const Id gn_segment = segment[as_size(gn)];
    // Triangle of h: d c a; its sides: h = d c, hn = c a (was hp), hp = a d (was gn).
    // Triangle of g: c d b; its sides: g = c d, gn = d b (was gp), gp = b c (was hn).
    const Id hp_twin = twin[as_size(hp)];
    const Id gp_twin = twin[as_size(gp)];
    const Id hp_segment = segment[as_size(hp)];
    const Id gp_segment = segment[as_size(gp)];
    org[as_size(h)] = d;
    org[as_size(hn)] = c;
    org[as_size(hp)] = a;
    org[as_size(g)] = c;
    org[as_size(gn)] = d;
    org[as_size(gp)] = b;
    link(hn, hp_twin);
    link(hp, gn_twin);
    link(gn, gp_twin);
    link(gp, hn_twin);
    segment[as_size(hn)] = hp_segment;
    segment[as_size(hp)] = gn_segment;
    segment[as_size(gn)] = gp_segment;
    segment[as_size(gp)] = hn_segment;
    for (const Id k : {hn, hp, gn, gp})
        if (segment[as_size(k)] >= 0) segment_edge[as_size(segment[as_size(k)])] = k;
    // Leaving half-edges; those on the bounding square stay first of their open fans.
    const auto leave = [&](Id k) {
        const Id v = from(k);
        if (v > 3 || twin[as_size(k)] < 0) out[as_size(v)] = k;
    };
    leave(h);
    leave(hn);
    leave(hp);
    leave(g);
    leave(gn);
    leave(gp);
}

TEPOR_INLINE void Delaunay::legalise(Id v) {
    // Each half-edge in `star` has v as its apex.
    stack_ = star;
    star.clear();
    while (!stack_.empty()) {
        const Id h = stack_.back();
        stack_.pop_back();
        const Id g = twin[as_size(h)];
        if (g >= 0 && segment[as_size(h)] < 0) {
            const Id d = apex(g);
            if (in_circle(at(from(h)), at(to(h)), at(v), at(d)) > 0.0) {
                // After the flip h runs from d to v; the edges facing v are the next of g's side and prev of h's.
                flip(h);
                // h: d -> v, triangle d v a with a = old from(h): the edge facing v is a -> d = prev(h).
                // g: v -> d, triangle v d b: the edge facing v is d -> b = next(g).
                stack_.push_back(prev(h));
                stack_.push_back(next(g));
                continue;
            }
        }
        star.push_back(h);
    }
}

} // namespace tepor::detail
