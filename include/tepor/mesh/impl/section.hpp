#pragma once
// Section only collects; triangulate() judges.

#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/section.hpp>
#include <utility>

namespace tepor {
namespace detail {
TEPOR_INLINE void require_name(const char* what, const std::string& name) {
    if (name.empty()) throw Error(ErrorCode::bad_name, what, text("section: a ", what, " without a name; give it one"));
}
} // namespace detail

TEPOR_INLINE Drawn Section::add(std::string region, Shape shape) {
    detail::require_name("region", region);
    items_.push_back({false, std::move(region), std::move(shape)});
    return {static_cast<Index>(items_.size()) - 1};
}

TEPOR_INLINE Drawn Section::cut(Shape shape, std::string face) {
    items_.push_back({true, std::move(face), std::move(shape)});
    return {static_cast<Index>(items_.size()) - 1};
}

TEPOR_INLINE void Section::face(std::string name, Point from, Point to) {
    detail::require_name("face", name);
    Face f;
    f.name = std::move(name);
    f.from = from;
    f.to = to;
    faces_.push_back(std::move(f));
}

TEPOR_INLINE void Section::face(std::string name, Point from, Point through, Point to) {
    face(std::move(name), from, to);
    faces_.back().through = through;
    faces_.back().has_through = true;
}

TEPOR_INLINE void Section::face(std::string name, Drawn drawn) {
    detail::require_name("face", name);
    if (drawn.item < 0 || drawn.item >= static_cast<Index>(items_.size()))
        throw Error(ErrorCode::bad_value, name,
                    detail::text("face \"", name,
                                 "\": the shape does not belong to this section; use what add() or cut() gave"));
    Face f;
    f.kind = Face::Kind::edge;
    f.name = std::move(name);
    f.drawn = drawn;
    faces_.push_back(std::move(f));
}

TEPOR_INLINE void Section::face(std::string name, PlaceTest test) {
    detail::require_name("face", name);
    if (!test)
        throw Error(ErrorCode::bad_value, name,
                    detail::text("face \"", name, "\": an empty test; give a function of a Point"));
    Face f;
    f.kind = Face::Kind::test;
    f.name = std::move(name);
    f.test = std::move(test);
    faces_.push_back(std::move(f));
}

TEPOR_INLINE void Section::rest(std::string name) {
    detail::require_name("face", name);
    Face f;
    f.kind = Face::Kind::rest;
    f.name = std::move(name);
    faces_.push_back(std::move(f));
}

TEPOR_INLINE void Section::line(Point from, Point to) {
    line(Outline(from).line_to(to));
}

TEPOR_INLINE void Section::line(Outline path) {
    if (path.edges().empty())
        throw Error(ErrorCode::bad_geometry, "line", "line: a path without edges; add lines or arcs");
    lines_.push_back(std::move(path));
}

TEPOR_INLINE void Section::hold(Point p) {
    if (!(std::isfinite(p.x) && std::isfinite(p.y)))
        throw Error(ErrorCode::bad_geometry, "hold", "hold: a point that is not finite");
    held_.push_back(p);
}

TEPOR_INLINE void Section::tolerance(double distance) {
    if (!(distance > 0.0 && std::isfinite(distance)))
        throw Error(ErrorCode::bad_value, "tolerance",
                    detail::text("section: tolerance = ", distance, ", expected a length > 0 [m]"));
    tolerance_ = distance;
}

} // namespace tepor
