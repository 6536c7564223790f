#pragma once
// Shapes as loops of straight edges and arcs of at most a quarter turn.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/shapes.hpp>
#include <utility>

namespace tepor {
namespace detail {

TEPOR_INLINE void require_finite(const char* shape, Point p) {
    if (!(std::isfinite(p.x) && std::isfinite(p.y)))
        throw Error(ErrorCode::bad_geometry, shape,
                    text(shape, ": point (", p.x, ", ", p.y, "), expected finite coordinates [m]"));
}

TEPOR_INLINE void require_positive(const char* shape, const char* what, double value) {
    if (!(value > 0.0 && std::isfinite(value)))
        throw Error(ErrorCode::bad_geometry, shape, text(shape, ": ", what, " = ", value, ", expected > 0 [m]"));
}

TEPOR_INLINE Shape one_part(std::vector<std::vector<ShapeEdge>> loops) {
    Shape shape;
    shape.parts.push_back({std::move(loops)});
    return shape;
}

} // namespace detail

TEPOR_INLINE Outline::Outline(Point start) : start_(start), end_(start) {
    detail::require_finite("outline", start);
}

TEPOR_INLINE Outline& Outline::line_to(Point end) {
    detail::require_finite("outline", end);
    if (end == end_)
        throw Error(ErrorCode::bad_geometry, "outline",
                    detail::text("outline: a line from (", end.x, ", ", end.y, ") to the same point; leave it out"));
    edges_.push_back({end_, end, false, {}, 0.0});
    end_ = end;
    return *this;
}

TEPOR_INLINE void Outline::add_arc(Point centre, double radius, double from, double turn, Point end) {
    const int parts = std::max(1, static_cast<int>(std::ceil(std::abs(turn) / (0.5 * pi) - 1e-9)));
    for (int k = 1; k <= parts; ++k) {
        Point next = end;
        if (k < parts) {
            const double a = from + turn * k / parts;
            next = {centre.x + radius * std::cos(a), centre.y + radius * std::sin(a)};
        }
        edges_.push_back({end_, next, true, centre, radius});
        end_ = next;
    }
}

TEPOR_INLINE Outline& Outline::arc_to(Point through, Point end) {
    detail::require_finite("outline", through);
    detail::require_finite("outline", end);
    const Point u = through - end_;
    const Point v = end - end_;
    const double d = 2.0 * cross(u, v);
    const double size = std::max(dot(u, u), dot(v, v));
    if (!(std::abs(d) > 1e-12 * size) || through == end)
        throw Error(ErrorCode::bad_geometry, "outline",
                    detail::text("outline: an arc from (", end_.x, ", ", end_.y, ") through (", through.x, ", ",
                                 through.y, ") to (", end.x, ", ", end.y,
                                 "), expected three points that do not lie on a line; use line_to"));
    const double uu = dot(u, u);
    const double vv = dot(v, v);
    const Point c = end_ + Point{(v.y * uu - u.y * vv) / d, (u.x * vv - v.x * uu) / d};
    return arc_around(c, end, d > 0.0 ? Turn::left : Turn::right);
}

TEPOR_INLINE Outline& Outline::arc_around(Point centre, Point end, Turn turn) {
    detail::require_finite("outline", centre);
    detail::require_finite("outline", end);
    const double radius = distance(end_, centre);
    detail::require_positive("outline", "radius of an arc", radius);
    const double other = distance(end, centre);
    if (!(std::abs(other - radius) <= 1e-9 * radius))
        throw Error(ErrorCode::bad_geometry, "outline",
                    detail::text("outline: an arc starts ", radius, " m and ends ", other,
                                 " m from its centre, expected the same distance"));
    const double from = std::atan2(end_.y - centre.y, end_.x - centre.x);
    double angle = std::atan2(end.y - centre.y, end.x - centre.x) - from;
    if (turn == Turn::left && angle <= 1e-12) angle += 2.0 * pi;
    if (turn == Turn::right && angle >= -1e-12) angle -= 2.0 * pi;
    add_arc(centre, radius, from, angle, end);
    return *this;
}

TEPOR_INLINE Shape rectangle(Point corner, Point opposite) {
    detail::require_finite("rectangle", corner);
    detail::require_finite("rectangle", opposite);
    detail::require_positive("rectangle", "width", std::abs(opposite.x - corner.x));
    detail::require_positive("rectangle", "height", std::abs(opposite.y - corner.y));
    const Point a{std::min(corner.x, opposite.x), std::min(corner.y, opposite.y)};
    const Point b{std::max(corner.x, opposite.x), std::max(corner.y, opposite.y)};
    return polygon({a, {b.x, a.y}, b, {a.x, b.y}});
}

TEPOR_INLINE Shape polygon(std::vector<Point> corners) {
    for (Point p : corners) detail::require_finite("polygon", p);
    if (corners.size() > 1 && corners.front() == corners.back()) corners.pop_back();
    corners.erase(std::unique(corners.begin(), corners.end()), corners.end());
    if (corners.size() < 3)
        throw Error(ErrorCode::bad_geometry, "polygon",
                    detail::text("polygon: ", corners.size(), " corners, expected at least 3"));
    double area = 0.0;
    double size = 0.0;
    for (std::size_t i = 0; i < corners.size(); ++i) {
        const Point a = corners[i] - corners[0];
        const Point b = corners[i + 1 == corners.size() ? 0 : i + 1] - corners[0];
        area += 0.5 * cross(a, b);
        size = std::max(size, dot(a, a));
    }
    bool flat = true;
    for (Point p : corners) flat = flat && std::abs(cross(corners[1] - corners[0], p - corners[0])) <= 1e-15 * size;
    if (flat) throw Error(ErrorCode::bad_geometry, "polygon", "polygon: its corners lie on one line, expected an area");
    if (area < 0.0) std::reverse(corners.begin(), corners.end());
    std::vector<detail::ShapeEdge> loop;
    for (std::size_t i = 0; i < corners.size(); ++i)
        loop.push_back({corners[i], corners[i + 1 == corners.size() ? 0 : i + 1], false, {}, 0.0});
    return detail::one_part({loop});
}

TEPOR_INLINE Shape circle(Point centre, double radius) {
    detail::require_finite("circle", centre);
    detail::require_positive("circle", "radius", radius);
    const Point start{centre.x + radius, centre.y};
    return detail::one_part({Outline(start).arc_around(centre, start, Turn::left).edges()});
}

TEPOR_INLINE Shape ring(Point centre, double inner, double outer) {
    detail::require_finite("ring", centre);
    detail::require_positive("ring", "inner radius", inner);
    if (!(outer > inner && std::isfinite(outer)))
        throw Error(
            ErrorCode::bad_geometry, "ring",
            detail::text("ring: outer radius = ", outer, ", expected more than the inner radius ", inner, " [m]"));
    const Point out{centre.x + outer, centre.y};
    const Point in{centre.x + inner, centre.y};
    return detail::one_part({Outline(out).arc_around(centre, out, Turn::left).edges(),
                             Outline(in).arc_around(centre, in, Turn::right).edges()});
}

TEPOR_INLINE Shape rounded_rectangle(Point corner, Point opposite, double radius) {
    (void)rectangle(corner, opposite); // the same conditions
    const Point a{std::min(corner.x, opposite.x), std::min(corner.y, opposite.y)};
    const Point b{std::max(corner.x, opposite.x), std::max(corner.y, opposite.y)};
    const double w = b.x - a.x;
    const double h = b.y - a.y;
    const double most = 0.5 * std::min(w, h);
    if (!(radius > 0.0 && radius <= most * (1.0 + 1e-12)))
        throw Error(ErrorCode::bad_geometry, "rounded_rectangle",
                    detail::text("rounded_rectangle: radius = ", radius,
                                 ", expected > 0 and at most half the shorter side, ", most, " m"));
    const double r = std::min(radius, most);
    const bool flat_x = w - 2.0 * r > 1e-12 * w; // straight parts at top and bottom
    const bool flat_y = h - 2.0 * r > 1e-12 * h;
    Outline path({a.x + r, a.y});
    if (flat_x) path.line_to({b.x - r, a.y});
    path.arc_around({flat_x ? b.x - r : a.x + r, a.y + r}, {b.x, a.y + r}, Turn::left);
    if (flat_y) path.line_to({b.x, b.y - r});
    path.arc_around({b.x - r, flat_y ? b.y - r : a.y + r}, {b.x - r, b.y}, Turn::left);
    if (flat_x) path.line_to({a.x + r, b.y});
    path.arc_around({flat_x ? a.x + r : b.x - r, b.y - r}, {a.x, b.y - r}, Turn::left);
    if (flat_y) path.line_to({a.x, a.y + r});
    path.arc_around({a.x + r, flat_y ? a.y + r : b.y - r}, {a.x + r, a.y}, Turn::left);
    return enclosed(path);
}

TEPOR_INLINE Shape enclosed(const Outline& outline) {
    Outline closed = outline;
    if (!(closed.end() == closed.start())) closed.line_to(closed.start());
    if (closed.edges().empty())
        throw Error(ErrorCode::bad_geometry, "outline", "outline: no edges, expected lines or arcs");
    const bool curved = std::any_of(closed.edges().begin(), closed.edges().end(), [](const auto& e) { return e.arc; });
    if (!curved) {
        std::vector<Point> corners;
        for (const auto& e : closed.edges()) corners.push_back(e.a);
        return polygon(corners);
    }
    return detail::one_part({closed.edges()});
}

TEPOR_INLINE Shape united(std::initializer_list<Shape> shapes) {
    Shape all;
    for (const Shape& s : shapes) all.parts.insert(all.parts.end(), s.parts.begin(), s.parts.end());
    if (all.parts.empty()) throw Error(ErrorCode::bad_geometry, "united", "united: no shapes, expected at least one");
    return all;
}

namespace detail {
template <class Map>
Shape mapped(Shape shape, Map&& map) {
    for (auto& part : shape.parts)
        for (auto& loop : part.loops)
            for (auto& e : loop) {
                e.a = map(e.a);
                e.b = map(e.b);
                if (e.arc) e.centre = map(e.centre);
            }
    return shape;
}
} // namespace detail

TEPOR_INLINE Shape shifted(Shape shape, Point by) {
    detail::require_finite("shifted", by);
    return detail::mapped(std::move(shape), [&](Point p) { return p + by; });
}

TEPOR_INLINE Shape turned(Shape shape, double degrees, Point about) {
    detail::require_finite("turned", about);
    detail::require_finite("turned", {degrees, 0.0});
    const double c = std::cos(degrees * pi / 180.0);
    const double s = std::sin(degrees * pi / 180.0);
    return detail::mapped(std::move(shape), [&](Point p) {
        const Point d = p - about;
        return Point{about.x + c * d.x - s * d.y, about.y + s * d.x + c * d.y};
    });
}

} // namespace tepor
