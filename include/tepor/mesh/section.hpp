#pragma once
// Section: the drawing of a plane cross-section, in painting order.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/mesh/of_place.hpp>
#include <tepor/mesh/shapes.hpp>
#include <vector>

namespace tepor {

/// A shape of a section, for naming its edge.
struct Drawn {
    Index item = -1;
};

/// A drawing in metres: regions painted one over the other, then cuts, then names for pieces of the edge.
///
/// Shapes may touch, overlap, cross, share edges and coincide; what counts is the picture. Edges between areas of the same
/// region, or under later paint, leave no trace. All points closer than the tolerance, 1e-9 of the drawing's diagonal, are one
/// point, and what such a merge leaves without width is gone; the mesh says so in its `remarks`.
class Section {
  public:
    /// Paint a shape over what is there. The same region name may be used again.
    /// @throws Error bad_name  an empty name
    Drawn add(std::string region, Shape shape);

    /// Cut a hole after all painting. Its edge becomes part of the named face; without a name it is adiabatic.
    Drawn cut(Shape shape, std::string face = {});

    /// Name the outer edge between two points of it, along the shorter way; a name may be given several pieces. The points
    /// must lie within 1e-6 of the diagonal of the edge, on the same loop of it. Where both ways are equally long, or the
    /// longer is meant, give a point in between. @throws Error bad_name  an empty name
    void face(std::string name, Point from, Point to);
    void face(std::string name, Point from, Point through, Point to);

    /// Name what of a shape's edge is outer edge.
    void face(std::string name, Drawn drawn);

    /// Name the cell sides of the outer edge whose ends and middle pass a test.
    void face(std::string name, PlaceTest test);

    /// Name all outer edge that has no name when the mesh is done.
    void rest(std::string name);

    /// A line inside the body that cell sides must follow, such as a foil or a thermal break. Parts outside do not count.
    void line(Point from, Point to);
    void line(Outline path);

    /// A point where the mesh must have a node, such as a sensor.
    void hold(Point p);

    /// Merge what is closer than this [m], instead of 1e-9 of the diagonal (which it cannot go below): for drawings whose
    /// shapes should meet but do not quite, such as coordinates read with few digits.
    /// @throws Error bad_value  not finite or not positive
    void tolerance(double distance);

    // What has been drawn, for triangulate().
    struct Item {
        bool cut = false;
        std::string name; ///< region, or face of a cut
        Shape shape;
    };
    struct Face {
        enum class Kind : int { between, edge, test, rest } kind = Kind::between;
        std::string name;
        Point from;
        Point to;
        Point through;
        bool has_through = false;
        Drawn drawn;
        PlaceTest test;
    };
    [[nodiscard]] const std::vector<Item>& items() const noexcept { return items_; }
    [[nodiscard]] const std::vector<Face>& faces() const noexcept { return faces_; }
    [[nodiscard]] const std::vector<Outline>& lines() const noexcept { return lines_; }
    [[nodiscard]] const std::vector<Point>& held() const noexcept { return held_; }
    [[nodiscard]] double tolerance() const noexcept { return tolerance_; }

  private:
    std::vector<Item> items_;
    std::vector<Face> faces_;
    std::vector<Outline> lines_;
    std::vector<Point> held_;
    double tolerance_ = 0.0;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/section.hpp>
#endif
