#pragma once
// The faces that the owner of a drawing gives its outer edges.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/impl/picture.hpp>

namespace tepor::detail {

TEPOR_INLINE void EdgeNamer::name_cuts() {
    for (std::size_t i = 0; i < section_.items().size(); ++i) {
        const auto& item = section_.items()[i];
        if (!item.cut || item.name.empty()) continue;
        Id number = -1;
        for (Seen& s : seen_) {
            if (!outer(s)) continue;
            const auto& p = arrangement_.pieces[as_size(s.piece)];
            const Id empty = region(p.left_face) < 0 ? p.left_face : p.right_face;
            const auto& cuts = painter_.faces[as_size(empty)].cuts;
            if (std::find(cuts.begin(), cuts.end(), as_id(i)) == cuts.end()) continue;
            if (std::none_of(p.owners.begin(), p.owners.end(), [&](const auto& o) { return o.item == as_id(i); }))
                continue;
            if (number < 0) number = face_number(item.name);
            s.faces.push_back(number);
        }
        if (number < 0)
            picture_.remarks.push_back(text("the cut of face \"", item.name, "\" touches nothing; it leaves no face"));
    }
}

TEPOR_INLINE void EdgeNamer::name_shape_edge(const Section::Face& face) {
    const Id number = face_number(face.name);
    bool any = false;
    for (Seen& s : seen_) {
        const auto& owners = arrangement_.pieces[as_size(s.piece)].owners;
        if (!outer(s) || std::none_of(owners.begin(), owners.end(),
                                      [&](const auto& o) { return o.item == static_cast<Id>(face.drawn.item); }))
            continue;
        s.faces.push_back(number);
        any = true;
    }
    if (!any)
        throw Error(ErrorCode::bad_name, face.name,
                    text("face \"", face.name,
                         "\": no part of the edge of that shape is outer edge; it is hidden or inside the body"));
}

/// The point of the outer edge nearest to p; edges are split there.
TEPOR_INLINE Id EdgeNamer::point_on_edge(Point p, const std::string& name) {
    double best = std::numeric_limits<double>::infinity();
    std::size_t edge = 0;
    double best_t = 0.0;
    Point where;
    for (std::size_t k = 0; k < seen_.size(); ++k) {
        if (!outer(seen_[k])) continue;
        const Point a = points_[as_size(seen_[k].a)];
        const Point b = points_[as_size(seen_[k].b)];
        ShapeEdge e{a, b, false, {}, 0.0};
        if (arc(seen_[k]) >= 0) {
            e.arc = true;
            e.centre = arrangement_.arcs[as_size(arc(seen_[k]))].centre;
            e.radius = arrangement_.arcs[as_size(arc(seen_[k]))].radius;
        }
        double t = project_on_edge(e, p).t;
        t = std::isfinite(t) ? std::clamp(t, 0.0, 1.0) : 0.0;
        const Point q = t == 0.0 ? a : t == 1.0 ? b : e.arc ? on_arc({e.centre, e.radius}, a, b, t) : a + t * (b - a);
        if (distance(p, q) < best) {
            best = distance(p, q);
            edge = k;
            best_t = t;
            where = q;
        }
    }
    if (!(best <= std::max(1e-6 * arrangement_.diagonal, arrangement_.tolerance)))
        throw Error(ErrorCode::bad_geometry, name,
                    text("face \"", name, "\": the point (", p.x, ", ", p.y, ") lies ", best,
                         " m off the outer edge, expected on it; nearest is (", where.x, ", ", where.y, ")"));
    Seen& s = seen_[edge];
    // An end of the edge within reach is meant, not a place a hair beside it.
    const double reach = std::max(2.0 * arrangement_.tolerance, 2.0 * best);
    for (Id v : {s.a, s.b})
        if (best_t == (v == s.a ? 0.0 : 1.0) || distance(points_[as_size(v)], where) <= reach) {
            keep_[as_size(v)] = 1;
            return v;
        }
    const Id v = as_id(points_.size());
    points_.push_back(where);
    keep_.push_back(1);
    pieces_at_.push_back(2);
    Seen second = s;
    second.a = v;
    s.b = v;
    seen_.push_back(second);
    return v;
}

TEPOR_INLINE void EdgeNamer::name_between(const Section::Face& face) {
    const Id from = point_on_edge(face.from, face.name);
    const Id to = point_on_edge(face.to, face.name);
    const Id through = face.has_through ? point_on_edge(face.through, face.name) : -1;
    if (from == to)
        throw Error(
            ErrorCode::bad_geometry, face.name,
            text("face \"", face.name,
                 "\": both points are the same point of the edge; name a whole loop with the edge of its shape"));
    // Walk with the body on the left. Leaving a point where the outline touches itself: the sharpest turn to the right of the
    // way on, which keeps to the same area.
    const auto start_of = [&](const Seen& s) {
        const auto& p = arrangement_.pieces[as_size(s.piece)];
        return region(p.left_face) >= 0 ? s.a : s.b;
    };
    const auto end_of = [&](const Seen& s) { return start_of(s) == s.a ? s.b : s.a; };
    PlaneGraph view;
    view.points = points_;
    view.arcs = arrangement_.arcs;
    const auto leaving = [&](const Seen& s, Id v) {
        PlaneGraph::Edge e;
        e.a = s.a;
        e.b = s.b;
        e.arc = arc(s);
        return view.leaving(e, v);
    };
    std::vector<std::vector<std::size_t>> out(points_.size());
    for (std::size_t k = 0; k < seen_.size(); ++k)
        if (outer(seen_[k])) out[as_size(start_of(seen_[k]))].push_back(k);
    struct Way {
        std::vector<std::size_t> edges;
        double length = 0.0;
        bool arrives = false;
        bool passes = false;
    };
    const auto walk = [&](Id start, Id goal, Id by) {
        Way best;
        for (std::size_t first : out[as_size(start)]) {
            Way way;
            std::size_t k = first;
            for (std::size_t steps = 0; steps <= seen_.size(); ++steps) {
                way.edges.push_back(k);
                way.length += length(seen_[k]);
                const Id v = end_of(seen_[k]);
                if (v == by) way.passes = true;
                if (v == goal) {
                    way.arrives = true;
                    break;
                }
                if (v == start) break;
                // Turn: the next edge clockwise from the way back.
                const Point back = leaving(seen_[k], v);
                std::size_t next = seen_.size();
                double least = 1e300;
                for (std::size_t c : out[as_size(v)]) {
                    const Point d = leaving(seen_[c], v);
                    double turn = std::atan2(cross(d, back), dot(d, back)); // clockwise from back to d
                    if (turn <= 0.0) turn += 2.0 * pi;
                    if (turn < least) {
                        least = turn;
                        next = c;
                    }
                }
                if (next == seen_.size()) break;
                k = next;
            }
            if (way.arrives && (!best.arrives || way.length < best.length)) best = way;
        }
        return best;
    };
    const Way there = walk(from, to, through);
    const Way back = walk(to, from, through);
    const Way* chosen = nullptr;
    if (through >= 0) {
        chosen = there.arrives && there.passes ? &there : back.arrives && back.passes ? &back : nullptr;
        if (chosen == nullptr)
            throw Error(ErrorCode::bad_geometry, face.name,
                        text("face \"", face.name,
                             "\": no way along one outline joins its three points; give points of one loop, in order"));
    } else {
        if (!there.arrives && !back.arrives)
            throw Error(ErrorCode::bad_geometry, face.name,
                        text("face \"", face.name, "\": (", face.from.x, ", ", face.from.y, ") and (", face.to.x, ", ",
                             face.to.y, ") lie on different loops of the outer edge, expected one loop"));
        if (there.arrives && back.arrives && std::abs(there.length - back.length) <= 1e-9 * arrangement_.diagonal)
            throw Error(ErrorCode::bad_geometry, face.name,
                        text("face \"", face.name, "\": both ways from (", face.from.x, ", ", face.from.y, ") to (",
                             face.to.x, ", ", face.to.y, ") are ", there.length, " m long; give a point in between"));
        chosen = !back.arrives || (there.arrives && there.length < back.length) ? &there : &back;
    }
    const Id number = face_number(face.name);
    for (std::size_t k : chosen->edges) seen_[k].faces.push_back(number);
}

} // namespace tepor::detail
