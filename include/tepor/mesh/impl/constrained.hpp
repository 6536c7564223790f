#pragma once
// Constraints: forcing an edge in, splitting one, and moving a vertex without crossing one.

#include <algorithm>
#include <tepor/mesh/delaunay.hpp>
#include <utility>

namespace tepor::detail {

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

/// A moved vertex can leave edges facing it and edges at it that are not Delaunay.
TEPOR_INLINE void Delaunay::mend_around(Id v) {
    star.clear();
    around(v, [&](Id h) { star.push_back(next(h)); });
    legalise(v);
    for (int round = 0; round < 20; ++round) {
        Id bad = -1;
        around(v, [&](Id h) {
            const Id g = twin[as_size(h)];
            if (bad >= 0 || g < 0 || segment[as_size(h)] >= 0) return;
            const Point c = at(apex(h));
            const Point d = at(apex(g));
            if (in_circle(at(v), at(to(h)), c, d) > 0.0 && orient(d, at(to(h)), c) > 0.0 && orient(c, at(v), d) > 0.0)
                bad = h;
        });
        if (bad < 0) break;
        flip(bad);
    }
    star.clear();
    around(v, [&](Id h) { star.push_back(next(h)); });
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
        mend_around(v);
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
    open.reserve(crossed.size());
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
