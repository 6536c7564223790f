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

TEPOR_INLINE void Delaunay::constrain(Id h, Id number) {
    segment[as_size(h)] = number;
    if (twin[as_size(h)] >= 0) segment[as_size(twin[as_size(h)])] = number;
    if (number < 0) return;
    if (segment_edge.size() <= as_size(number)) segment_edge.resize(as_size(number) + 1, -1);
    segment_edge[as_size(number)] = h;
}

TEPOR_INLINE Id Delaunay::split_edge(Id h, Point p) {
    const Id g = twin[as_size(h)];
    const Id hn = next(h);
    const Id hp = prev(h);
    const Id gn = next(g);
    const Id gp = prev(g);
    const Id a = from(h);
    const Id b = from(g);
    const Id c = from(hp);
    const Id d = from(gp);
    if (!(orient(at(a), p, at(c)) > 0.0 && orient(p, at(b), at(c)) > 0.0 && orient(p, at(a), at(d)) > 0.0 &&
          orient(at(b), p, at(d)) > 0.0))
        return -1;
    const Id v = as_id(points.size());
    points.push_back(p);
    const Id s = segment[as_size(h)];
    // h side: a v c stays in place (h = a v, hn = v c, hp = c a); new triangle v b c at n.
    // g side: b v d stays in place is not possible for both ends, so g's triangle becomes v a d: g = v a, gn = a d, gp = d v,
    // and the new triangle b v d at m.
    const Id n = as_id(org.size());
    const Id m = n + 3;
    org.resize(org.size() + 6);
    twin.resize(twin.size() + 6);
    segment.resize(segment.size() + 6, -1);
    label.push_back(label[as_size(h / 3)]);
    label.push_back(label[as_size(g / 3)]);
    const Id bc_twin = twin[as_size(hn)];
    const Id bc_segment = segment[as_size(hn)];
    const Id db_twin = twin[as_size(gp)];
    const Id db_segment = segment[as_size(gp)];
    org[as_size(hn)] = v;
    org[as_size(n)] = v;
    org[as_size(n + 1)] = b;
    org[as_size(n + 2)] = c;
    org[as_size(g)] = v;
    org[as_size(m)] = b;
    org[as_size(m + 1)] = v;
    org[as_size(m + 2)] = d;
    link(h, g);
    link(n, m);
    link(hn, n + 2);
    link(n + 1, bc_twin);
    link(gp, m + 1);
    link(m + 2, db_twin);
    segment[as_size(hn)] = -1;
    segment[as_size(gp)] = -1;
    for (Id k = n; k < n + 6; ++k) segment[as_size(k)] = -1;
    segment[as_size(n + 1)] = bc_segment;
    segment[as_size(m + 2)] = db_segment;
    if (bc_segment >= 0) segment_edge[as_size(bc_segment)] = n + 1;
    if (db_segment >= 0) segment_edge[as_size(db_segment)] = m + 2;
    if (s >= 0) {
        segment_edge[as_size(s)] = h;
        constrain(n, as_id(segment_edge.size()));
    }
    out.push_back(n);
    const auto leave = [&](Id k) {
        const Id w = from(k);
        if (w > 3 || twin[as_size(k)] < 0) out[as_size(w)] = k;
    };
    leave(n + 1);
    leave(h);
    leave(hp);
    leave(gn);
    leave(m + 2);
    leave(m);
    star = {hp, n + 1, gn, m + 2};
    legalise(v);
    return v;
}

TEPOR_INLINE Id Delaunay::move(Id v, Point target) {
    const auto fits = [&](Point p, Id* blocker) {
        bool ok = true;
        around(v, [&](Id h) {
            const Id facing = next(h);
            if (orient(at(from(facing)), at(to(facing)), p) > 0.0) return;
            ok = false;
            if (segment[as_size(facing)] >= 0) *blocker = facing;
        });
        return ok;
    };
    for (int pass = 0; pass < 60; ++pass) {
        Id blocker = -2;
        const Point start = at(v);
        double step = 1.0;
        Point p = target;
        while (step > 1e-3 && !fits(p, &blocker)) {
            step *= 0.5;
            p = start + step * (target - start);
        }
        if (!(step > 1e-3)) return blocker;
        if (step < 1.0 && blocker >= 0 &&
            orient(start, target, at(from(blocker))) * orient(start, target, at(to(blocker))) < 0.0)
            return blocker;
        points[as_size(v)] = p;
        star.clear();
        around(v, [&](Id h) { star.push_back(next(h)); });
        legalise(v);
        // A moved vertex can leave edges at itself that are not Delaunay; flips away from v mend them.
        bool again = true;
        for (int round = 0; again && round < 20; ++round) {
            again = false;
            Id bad = -1;
            around(v, [&](Id h) {
                const Id g = twin[as_size(h)];
                if (bad >= 0 || g < 0 || segment[as_size(h)] >= 0) return;
                const Point c = at(apex(h));
                const Point d = at(apex(g));
                if (in_circle(at(v), at(to(h)), c, d) > 0.0 && orient(d, at(to(h)), c) > 0.0 &&
                    orient(c, at(v), d) > 0.0)
                    bad = h;
            });
            if (bad >= 0) {
                flip(bad);
                again = true;
            }
        }
        star.clear();
        around(v, [&](Id h) { star.push_back(next(h)); });
        if (step == 1.0) return -1;
    }
    return -2;
}

TEPOR_INLINE Id Delaunay::find_edge(Id a, Id b) const {
    Id found = -1;
    around(a, [&](Id h) {
        if (to(h) == b) found = h;
    });
    if (found >= 0) return found;
    // On an open fan the last edge only comes in.
    around(b, [&](Id h) {
        if (to(h) == a && twin[as_size(h)] >= 0) found = twin[as_size(h)];
    });
    return found;
}

TEPOR_INLINE Id Delaunay::force_edge(Id a, Id b, Id number) {
    const Id direct = find_edge(a, b);
    if (direct >= 0) {
        constrain(direct, number);
        return b;
    }
    const Point pa = at(a);
    const Point pb = at(b);
    // The triangle at a that the line enters, or a vertex on the line.
    Id h = -1;
    Id through = -1;
    around(a, [&](Id k) {
        if (h >= 0 || through >= 0) return;
        const Point u = at(to(k));
        const Point w = at(apex(k));
        const double right = orient(pa, pb, u);
        const double left = orient(pa, pb, w);
        if (right == 0.0 && dot(u - pa, pb - pa) > 0.0)
            through = to(k);
        else if (left == 0.0 && dot(w - pa, pb - pa) > 0.0)
            through = apex(k);
        else if (right < 0.0 && left > 0.0)
            h = next(k);
    });
    if (through >= 0) {
        constrain(find_edge(a, through), number);
        return through;
    }
    if (h < 0) return -1 - out[as_size(a)];
    // Edges crossed on the way, up to b or to a vertex exactly on the line.
    std::vector<Id> crossed;
    Id end = b;
    for (;;) {
        if (segment[as_size(h)] >= 0) return -1 - h;
        crossed.push_back(h);
        const Id g = twin[as_size(h)];
        const Id w = apex(g);
        if (w == b) break;
        const double side = orient(pa, pb, at(w));
        if (side == 0.0) {
            end = w;
            break;
        }
        // Enter the next triangle through g (u -> v seen from there): leave on the side where the line goes.
        h = side > 0.0 ? next(g) : prev(g);
    }
    // Flip crossed edges whose two triangles form a convex quadrilateral until none is left.
    // Source: Sloan, Computers & Structures 47 (1993) 441-450. Edges are kept by their ends, since flips renumber.
    std::vector<std::pair<Id, Id>> open;
    for (Id k : crossed) open.emplace_back(from(k), to(k));
    std::vector<std::pair<Id, Id>> fresh;
    const Point pe = at(end);
    std::size_t idle = 0;
    for (std::size_t i = 0; i < open.size(); ++i) {
        const Id k = find_edge(open[i].first, open[i].second);
        const Id g = twin[as_size(k)];
        const Point u = at(from(k));
        const Point w = at(to(k));
        const Point c = at(apex(k));
        const Point d = at(apex(g));
        if (!(orient(d, w, c) > 0.0 && orient(c, u, d) > 0.0)) {
            open.push_back(open[i]);
            if (++idle > 2 * open.size() + 100) return -1 - k;
            continue;
        }
        idle = 0;
        const Id cv = apex(k);
        const Id dv = apex(g);
        flip(k);
        const double sc = cv == a || cv == end ? 0.0 : orient(pa, pe, c);
        const double sd = dv == a || dv == end ? 0.0 : orient(pa, pe, d);
        if (sc * sd < 0.0)
            open.emplace_back(from(k), to(k));
        else
            fresh.emplace_back(from(k), to(k));
    }
    constrain(find_edge(a, end), number);
    // The new edges may be flipped once more to be Delaunay.
    bool again = true;
    for (int round = 0; again && round < 1000; ++round) {
        again = false;
        for (auto& edge : fresh) {
            const Id k = find_edge(edge.first, edge.second);
            if (k < 0 || segment[as_size(k)] >= 0 || twin[as_size(k)] < 0) continue;
            const Id g = twin[as_size(k)];
            const Point c = at(apex(k));
            const Point d = at(apex(g));
            if (in_circle(at(from(k)), at(to(k)), c, d) > 0.0 && orient(d, at(to(k)), c) > 0.0 &&
                orient(c, at(from(k)), d) > 0.0) {
                flip(k);
                edge = {from(k), to(k)};
                again = true;
            }
        }
    }
    return end;
}

} // namespace tepor::detail
