#pragma once
// Crossings of lines and arcs, and the pieces between them.

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/drawing.hpp>
#include <tepor/mesh/edge_grid.hpp>

namespace tepor::detail {

/// An edge as drawn, with the points found on it.
struct RawEdge {
    ShapeEdge shape;
    Id arc = -1;
    Arrangement::Owner owner{};
    std::vector<Id> on; ///< points on it, ends included

    [[nodiscard]] Point low() const noexcept {
        return {std::min(shape.a.x, shape.b.x) - bulge(), std::min(shape.a.y, shape.b.y) - bulge()};
    }
    [[nodiscard]] Point high() const noexcept {
        return {std::max(shape.a.x, shape.b.x) + bulge(), std::max(shape.a.y, shape.b.y) + bulge()};
    }
    /// An arc of at most a quarter turn leaves the box of its ends by no more than its height.
    [[nodiscard]] double bulge() const noexcept {
        return shape.arc ? arc_height({shape.centre, shape.radius}, shape.a, shape.b) : 0.0;
    }
};

TEPOR_INLINE OnEdge project_on_edge(const ShapeEdge& e, Point p) {
    if (!e.arc) {
        const Point d = e.b - e.a;
        const double length = std::hypot(d.x, d.y);
        return {dot(p - e.a, d) / (length * length), std::abs(cross(d, p - e.a)) / length};
    }
    const Point u = e.a - e.centre;
    const Point v = e.b - e.centre;
    const Point w = p - e.centre;
    const double turn = std::atan2(cross(u, v), dot(u, v));
    return {std::atan2(cross(u, w), dot(u, w)) / turn, std::abs(std::hypot(w.x, w.y) - e.radius)};
}

/// Is p on e within the tolerance, ends included?
TEPOR_INLINE bool lies_on(const ShapeEdge& e, Point p, double tolerance) {
    if (distance(p, e.a) <= tolerance || distance(p, e.b) <= tolerance) return true;
    const OnEdge at = project_on_edge(e, p);
    return at.off <= tolerance && at.t > 0.0 && at.t < 1.0;
}

/// Places where the lines or circles of two edges meet (up to 2); touching within the tolerance counts as one place.
TEPOR_INLINE int meet(const ShapeEdge& e, const ShapeEdge& f, double tolerance, Point* places) {
    if (!e.arc && !f.arc) {
        const Point d = e.b - e.a;
        const Point g = f.b - f.a;
        const double det = cross(d, g);
        if (!(std::abs(det) > 1e-15 * std::hypot(d.x, d.y) * std::hypot(g.x, g.y))) return 0;
        const double t = cross(f.a - e.a, g) / det;
        places[0] = e.a + t * d;
        return 1;
    }
    if (e.arc && f.arc) {
        const Point d = f.centre - e.centre;
        const double apart = std::hypot(d.x, d.y);
        const double r = e.radius;
        const double s = f.radius;
        if (apart > r + s + tolerance || apart < std::abs(r - s) - tolerance) return 0;
        if (apart <= tolerance) return 0; // one circle: overlaps are found by their ends
        const Point n = (1.0 / apart) * d;
        const double along = (apart * apart + (r - s) * (r + s)) / (2.0 * apart);
        const bool touching = std::abs(apart - (r + s)) <= tolerance || std::abs(apart - std::abs(r - s)) <= tolerance;
        if (touching) {
            places[0] = e.centre + (along < 0.0 ? -r : r) * n;
            return 1;
        }
        const double up = std::sqrt(std::max(0.0, (r - along) * (r + along)));
        places[0] = {e.centre.x + along * n.x - up * n.y, e.centre.y + along * n.y + up * n.x};
        places[1] = {e.centre.x + along * n.x + up * n.y, e.centre.y + along * n.y - up * n.x};
        return 2;
    }
    const ShapeEdge& line = e.arc ? f : e;
    const ShapeEdge& arc = e.arc ? e : f;
    const Point d = line.b - line.a;
    const double length = std::hypot(d.x, d.y);
    const Point n = (1.0 / length) * d;
    const double along = dot(arc.centre - line.a, n);
    const Point foot = line.a + along * n;
    const double apart = std::abs(cross(n, arc.centre - line.a));
    if (apart > arc.radius + tolerance) return 0;
    if (apart >= arc.radius - tolerance) {
        places[0] = foot;
        return 1;
    }
    const double half = std::sqrt((arc.radius - apart) * (arc.radius + apart));
    places[0] = foot - half * n;
    places[1] = foot + half * n;
    return 2;
}

/// Points with a hash grid; a new point within the tolerance of an old one is the old one.
class PointStore {
  public:
    PointStore(double tolerance, Point origin) : tolerance_(tolerance), origin_(origin), table_(64, -1) {}

    Id put(Point p) {
        const auto [i, j] = cell(p);
        for (std::int64_t a = i - 1; a <= i + 1; ++a)
            for (std::int64_t b = j - 1; b <= j + 1; ++b)
                for (std::size_t slot = hash(a, b);; slot = (slot + 1) & (table_.size() - 1)) {
                    const Id k = table_[slot];
                    if (k < 0) break;
                    if (distance(points[as_size(k)], p) <= tolerance_) return k;
                }
        if (2 * (points.size() + 1) > table_.size()) grow();
        points.push_back(p);
        place(as_id(points.size()) - 1);
        return as_id(points.size()) - 1;
    }

    std::vector<Point> points;

  private:
    [[nodiscard]] std::pair<std::int64_t, std::int64_t> cell(Point p) const {
        return {static_cast<std::int64_t>(std::floor((p.x - origin_.x) / tolerance_)),
                static_cast<std::int64_t>(std::floor((p.y - origin_.y) / tolerance_))};
    }
    [[nodiscard]] std::size_t hash(std::int64_t i, std::int64_t j) const {
        std::uint64_t h = static_cast<std::uint64_t>(i) * 0x9E3779B97F4A7C15ULL ^
                          static_cast<std::uint64_t>(j) * 0xC2B2AE3D27D4EB4FULL;
        h ^= h >> 31;
        return as_size(h) & (table_.size() - 1);
    }
    void place(Id k) {
        const auto [i, j] = cell(points[as_size(k)]);
        std::size_t slot = hash(i, j);
        while (table_[slot] >= 0) slot = (slot + 1) & (table_.size() - 1);
        table_[slot] = k;
    }
    void grow() {
        table_.assign(2 * table_.size(), -1);
        for (std::size_t k = 0; k < points.size(); ++k) place(as_id(k));
    }

    double tolerance_;
    Point origin_;
    std::vector<Id> table_;
};

TEPOR_INLINE Arrangement arrange(const Section& section, std::vector<std::string>& remarks) {
    Arrangement out;
    std::vector<RawEdge> raw;
    const auto arc_of = [&](const ShapeEdge& e) -> Id {
        if (!e.arc) return -1;
        for (std::size_t k = out.arcs.size(); k-- > 0;)
            if (out.arcs[k].centre == e.centre && out.arcs[k].radius == e.radius) return as_id(k);
        out.arcs.push_back({e.centre, e.radius});
        return as_id(out.arcs.size()) - 1;
    };
    for (std::size_t i = 0; i < section.items().size(); ++i)
        for (const ShapePart& part : section.items()[i].shape.parts) {
            for (const auto& loop : part.loops)
                for (const ShapeEdge& e : loop) raw.push_back({e, arc_of(e), {as_id(i), out.parts, 1}, {}});
            out.item_of_part.push_back(as_id(i));
            ++out.parts;
        }
    for (const Outline& line : section.lines())
        for (const ShapeEdge& e : line.edges()) raw.push_back({e, arc_of(e), {-1, -1, 1}, {}});
    if (out.parts == 0)
        throw Error(ErrorCode::bad_geometry, "section", "section: nothing drawn; add at least one shape");
    if (raw.size() > 10000000) throw Error(ErrorCode::too_large, "section", "section: more than 1e7 edges");

    Point low = raw.front().low();
    Point high = raw.front().high();
    for (const RawEdge& e : raw) {
        low = {std::min(low.x, e.low().x), std::min(low.y, e.low().y)};
        high = {std::max(high.x, e.high().x), std::max(high.y, e.high().y)};
    }
    out.diagonal = distance(low, high);
    out.tolerance = std::max(1e-9 * out.diagonal, section.tolerance());
    if (!(out.tolerance < 0.01 * out.diagonal))
        throw Error(ErrorCode::bad_value, "tolerance",
                    text("section: tolerance = ", out.tolerance, " m, expected less than a hundredth of the diagonal, ",
                         out.diagonal, " m"));
    const double tolerance = out.tolerance;
    if (!(tolerance > 4.0 * 1e-16 * std::max({std::abs(low.x), std::abs(low.y), std::abs(high.x), std::abs(high.y)})))
        throw Error(ErrorCode::bad_geometry, "section",
                    text("section: the drawing is ", out.diagonal, " m across but lies near (", low.x, ", ", low.y,
                         "), too far from the origin for its tolerance; move it closer"));

    // Points: ends of edges first, so that crossings join them and not the other way round.
    PointStore store(tolerance, low);
    Index merged = 0;
    Point first_merge;
    double widest = 0.0;
    const auto put = [&](Point p) {
        const std::size_t before = store.points.size();
        const Id k = store.put(p);
        if (store.points.size() == before) {
            const double gap = distance(store.points[as_size(k)], p);
            if (gap > 1e-4 * tolerance) {
                if (merged++ == 0) first_merge = p;
                widest = std::max(widest, gap);
            }
        }
        return k;
    };
    for (RawEdge& e : raw) {
        const Id a = put(e.shape.a);
        const Id b = put(e.shape.b);
        e.on = {a, b};
        if (a == b && e.owner.item >= 0 && e.shape.arc) e.on = {a}; // an arc below the tolerance
    }
    for (Point p : section.held()) out.held.push_back(put(p));
    out.corner.assign(store.points.size(), 1);

    // An item all of whose points are one point is too small to be seen.
    {
        std::vector<char> extent(section.items().size(), 0);
        for (const RawEdge& e : raw)
            if (e.owner.item >= 0 && e.on.front() != e.on.back()) extent[as_size(e.owner.item)] = 1;
        for (std::size_t i = 0; i < extent.size(); ++i)
            if (extent[i] == 0)
                throw Error(ErrorCode::bad_geometry, section.items()[i].name,
                            text("section: shape ", i, " (\"", section.items()[i].name,
                                 "\") is smaller than the drawing's tolerance, ", tolerance,
                                 " m; leave it out or draw it larger"));
    }

    EdgeGrid grid;
    for (const RawEdge& e : raw) grid.add(e.low(), e.high(), tolerance);
    grid.build();
    for (std::size_t i = 0; i < raw.size(); ++i)
        grid.visit(raw[i].low(), raw[i].high(), tolerance, [&](std::size_t j) {
            if (j <= i) return;
            Point places[2];
            const int count = meet(raw[i].shape, raw[j].shape, tolerance, places);
            for (int k = 0; k < count; ++k) {
                if (!lies_on(raw[i].shape, places[k], tolerance) || !lies_on(raw[j].shape, places[k], tolerance))
                    continue;
                const Id p = store.put(places[k]);
                raw[i].on.push_back(p);
                raw[j].on.push_back(p);
            }
        });
    out.corner.resize(store.points.size(), 0);

    // Every point within the tolerance of an edge is on it.
    for (std::size_t k = 0; k < store.points.size(); ++k) {
        const Point p = store.points[k];
        grid.visit(p, p, tolerance, [&](std::size_t i) {
            if (!lies_on(raw[i].shape, p, tolerance)) return;
            if (out.corner[k] != 0) {
                const double gap = project_on_edge(raw[i].shape, p).off;
                if (gap > 1e-4 * tolerance) {
                    if (merged++ == 0) first_merge = p;
                    widest = std::max(widest, gap);
                }
            }
            raw[i].on.push_back(as_id(k));
        });
    }
    out.points = store.points;

    // Pieces between neighbouring points; pieces with the same ends and the same middle are one piece of several owners.
    struct Key {
        Id low;
        Id high;
        std::size_t piece;
    };
    std::vector<Arrangement::Piece> all;
    std::vector<std::pair<double, Id>> order;
    for (RawEdge& e : raw) {
        std::sort(e.on.begin(), e.on.end());
        e.on.erase(std::unique(e.on.begin(), e.on.end()), e.on.end());
        order.clear();
        for (Id k : e.on) order.emplace_back(project_on_edge(e.shape, out.points[as_size(k)]).t, k);
        std::sort(order.begin(), order.end());
        for (std::size_t k = 1; k < order.size(); ++k)
            all.push_back({order[k - 1].second, order[k].second, e.arc, {e.owner}});
    }
    const auto middle = [&](const Arrangement::Piece& p) {
        const Point a = out.points[as_size(p.a)];
        const Point b = out.points[as_size(p.b)];
        return p.arc < 0 ? 0.5 * (a + b) : on_arc(out.arcs[as_size(p.arc)], a, b, 0.5);
    };
    // Where merging has moved an end off its circle, the piece lies on a circle of its own, of the same radius.
    for (Arrangement::Piece& p : all) {
        if (p.arc < 0) continue;
        const MeshArc arc = out.arcs[as_size(p.arc)];
        const Point a = out.points[as_size(p.a)];
        const Point b = out.points[as_size(p.b)];
        const double off =
            std::max(std::abs(distance(a, arc.centre) - arc.radius), std::abs(distance(b, arc.centre) - arc.radius));
        if (off <= 1e-9 * out.diagonal) continue;
        const double half = 0.5 * distance(a, b);
        const double radius = std::max(arc.radius, half);
        const Point m = 0.5 * (a + b);
        const Point normal = (1.0 / (2.0 * half)) * Point{a.y - b.y, b.x - a.x};
        const double side = dot(arc.centre - m, normal) < 0.0 ? -1.0 : 1.0;
        p.arc = as_id(out.arcs.size());
        out.arcs.push_back({m + (side * std::sqrt((radius - half) * (radius + half))) * normal, radius});
    }
    std::vector<Key> keys;
    for (std::size_t k = 0; k < all.size(); ++k)
        keys.push_back({std::min(all[k].a, all[k].b), std::max(all[k].a, all[k].b), k});
    std::sort(keys.begin(), keys.end(), [](const Key& x, const Key& y) {
        return x.low != y.low ? x.low < y.low : x.high != y.high ? x.high < y.high : x.piece < y.piece;
    });
    for (std::size_t i = 0; i < keys.size();) {
        std::size_t j = i;
        const std::size_t base = out.pieces.size();
        for (; j < keys.size() && keys[j].low == keys[i].low && keys[j].high == keys[i].high; ++j) {
            const Arrangement::Piece& p = all[keys[j].piece];
            std::size_t same = base;
            while (same < out.pieces.size() && distance(middle(out.pieces[same]), middle(p)) > 3.0 * tolerance) ++same;
            if (same == out.pieces.size()) {
                out.pieces.push_back(p);
                continue;
            }
            Arrangement::Piece& q = out.pieces[same];
            if (q.arc < 0 && p.arc >= 0) q.arc = p.arc; // a curve tells more than its chord
            for (Arrangement::Owner o : p.owners) {
                o.sign = q.a == p.a ? o.sign : -o.sign;
                q.owners.push_back(o);
            }
        }
        i = j;
    }
    if (merged > 0)
        remarks.push_back(text(merged, " places up to ", widest, " m apart were merged, the first near (",
                               first_merge.x, ", ", first_merge.y, "); the drawing's tolerance is ", tolerance, " m"));
    return out;
}

} // namespace tepor::detail
