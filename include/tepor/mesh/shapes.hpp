#pragma once
// Shapes of a drawing: rectangle, polygon, circle, ring, rounded rectangle, outlines of lines and arcs, and their union.

#include <initializer_list>
#include <tepor/base/config.hpp>
#include <tepor/base/point.hpp>
#include <vector>

namespace tepor {
namespace detail {

/// A straight edge, or an arc of at most a quarter turn.
struct ShapeEdge {
    Point a;
    Point b;
    bool arc = false;
    Point centre;
    double radius = 0.0;
};

/// Closed loops; a place is inside when they wind around it (not zero times).
struct ShapePart {
    std::vector<std::vector<ShapeEdge>> loops;
};

} // namespace detail

/// A filled shape: one part or several, together. Made by the functions below.
struct Shape {
    std::vector<detail::ShapePart> parts;
};

/// Which way an arc goes round its centre.
enum class Turn : int { left, right };

/// A path of lines and arcs, closed into a shape by enclosed(), or drawn into a section as an interior line.
///
///     Shape d = enclosed(Outline({0, 0}).line_to({1, 0}).arc_to({1.5, 0.5}, {1, 1}).line_to({0, 1}));
class Outline {
  public:
    explicit Outline(Point start);

    /// Straight on to a point. @throws Error bad_geometry  not finite, or where the path already is
    Outline& line_to(Point end);

    /// Along the arc through a point to an end. @throws Error bad_geometry  the three points lie on a line or coincide
    Outline& arc_to(Point through, Point end);

    /// Around a centre to an end; start and end must be equally far from it within 1e-9 of the radius.
    /// A full circle when the end is where the path already is.
    Outline& arc_around(Point centre, Point end, Turn turn);

    [[nodiscard]] const std::vector<detail::ShapeEdge>& edges() const noexcept { return edges_; }
    [[nodiscard]] Point start() const noexcept { return start_; }
    [[nodiscard]] Point end() const noexcept { return end_; }

  private:
    void add_arc(Point centre, double radius, double from, double turn, Point end);

    Point start_;
    Point end_;
    std::vector<detail::ShapeEdge> edges_;
};

// All throw Error bad_geometry: a coordinate or radius that is not finite, a shape without extent. Lengths in metres.

/// Sides along the axes, from any corner to the opposite one.
Shape rectangle(Point corner, Point opposite);

/// At least three corners, in either direction; the last is joined to the first. Where the outline crosses itself, everything
/// it winds around is inside.
Shape polygon(std::vector<Point> corners);

Shape circle(Point centre, double radius);

/// What lies between two circles, 0 < inner < outer.
Shape ring(Point centre, double inner, double outer);

/// A rectangle whose corners are quarter circles, 0 < radius <= half the shorter side.
Shape rounded_rectangle(Point corner, Point opposite, double radius);

/// What an outline of lines and arcs encloses; a straight edge is added back to its start where it does not end there.
Shape enclosed(const Outline& outline);

/// Several shapes as one: their overlap is inside, edges inside the union do not count.
Shape united(std::initializer_list<Shape> shapes);

template <class... Shapes>
Shape united(const Shape& first, const Shapes&... others) {
    return united({first, others...});
}

/// The shape moved by a vector [m].
Shape shifted(Shape shape, Point by);

/// The shape turned counter-clockwise by an angle [degrees] about a point.
Shape turned(Shape shape, double degrees, Point about = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/shapes.hpp>
#endif
