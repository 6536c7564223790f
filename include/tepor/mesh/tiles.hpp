#pragma once
// tiles: 2D meshes of rectangles on grid lines.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/base/point.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/tile_axis.hpp>
#include <utility>
#include <vector>

namespace tepor {

namespace detail {

struct TileRectangle {
    std::string name;
    Point low;
    Point high;
};

struct TileFace {
    std::string name;
    Point from;
    Point to;
};

/// All that was said of a drawing on grid lines.
struct TilePlan {
    std::vector<TileRectangle> painted;
    std::vector<TileRectangle> cuts;
    std::vector<TileFace> faces;
    TileAxis x;
    TileAxis y;
};

} // namespace detail

/// A drawing of rectangles. Their edges are the grid lines; tiles() fills the spaces between the lines with cells.
///
///     Tiles wall;
///     wall.add("concrete",   {0.00, 0.0}, {0.30, 1.0});
///     wall.add("insulation", {0.30, 0.0}, {0.42, 1.0});
///     wall.cut({0.10, 0.4}, {0.20, 0.6}, "duct");              // a hole; its edge is the face "duct"
///     wall.face("floor heating", {0.0, 0.0}, {0.30, 0.0});     // a piece of the edge
///     wall.finer_x({.at = 0.30, .size = 0.002});               // cells beside x = 0.30 are at most 2 mm, growing away from it
///     wall.split_y({.from = 0.6, .to = 1.0, .cells = 10});     // so many cells, whatever the size elsewhere
///     auto mesh = tiles<Quadrilateral<2>>(wall, {.size = 0.02}, Planar{.depth = 3.0});
///
/// Rectangles are painted one over the other; cuts apply after all painting. What is neither painted nor left by a cut is
/// not body. Faces "left", "right", "bottom" and "top" are the parts of the body's edge on the box around all painted
/// rectangles, unless a face or cut of the drawing bears that name. An edge may belong to several faces; edges of the
/// body that no face names are adiabatic.
class Tiles {
  public:
    /// Paint a rectangle, given by two opposite corners, with a region. Several rectangles of one name are one region.
    Tiles& add(std::string region, Point corner, Point opposite);

    /// Take a rectangle out of the body; with a name, the new edges are a face of that name.
    Tiles& cut(Point corner, Point opposite, std::string face = "");

    /// Name the edges of the body along a straight piece in x or y direction; several pieces of one name are one face.
    Tiles& face(std::string name, Point from, Point to);

    /// Cells between two lines by number and grading.
    Tiles& split_x(const TileSplit& split);
    Tiles& split_y(const TileSplit& split);

    /// Short cells on both sides of the line x = at (y = at), growing away from it.
    Tiles& finer_x(const FinerLine& line);
    Tiles& finer_y(const FinerLine& line);

    /// One more grid line x = at (y = at).
    Tiles& line_x(double at);
    Tiles& line_y(double at);

    [[nodiscard]] const detail::TilePlan& plan() const noexcept { return plan_; }

  private:
    detail::TilePlan plan_;
};

/// How a rectangle becomes triangles.
enum class Diagonals {
    alternating, ///< two, the diagonals forming a chequered pattern, which favours no direction
    crossed,     ///< four around a node in the middle: every symmetry of the drawing is kept
    rising,      ///< two, from lower left to upper right
    falling      ///< two, from upper left to lower right
};

/// Options of tiles().
struct TilesOptions {
    double size = 0.0;   ///< longest cell edge [m] where no split says otherwise; 0: every space has a split
    double growth = 1.3; ///< from one cell to the next, away from a finer line; 1.01 .. 10
    Diagonals diagonals = Diagonals::alternating; ///< triangles only
};

/// The mesh of a drawing on grid lines, planar with a depth, or r-z (`Cylindrical{}`, x = r >= 0).
///
/// Cells and nodes are numbered row by row from the lower left. In r-z the edge on the axis r = 0 has no area and is no
/// face. E is any triangle or quadrilateral with its nodes on the equispaced lattice of its order.
/// @throws Error missing          nothing painted, or no cell size
///               bad_name         a region or face without a name
///               bad_value        a number not finite or outside its range
///               bad_geometry     a rectangle without area; a face that is not along x or y or meets no edge of the body; a
///                                cut that removes nothing or whose face has no edge; r < 0; nothing left
///               unused           a region painted over or cut away entirely
///               contradiction    splits that overlap or contradict a line
///               outside          a line beyond the body
///               wrong_dimension  Spherical
///               not_supported    E has nodes off the lattice
///               too_large        more nodes than 32-bit ids hold
/// Cost  O(nodes + tiles of the box)
template <Element E>
requires(E::dim == 2) Mesh<E> tiles(const Tiles& drawing, const TilesOptions& options = {}, Frame frame = Planar{});

// ---------------------------------------------------------------------------------------------------------------------

namespace detail {

/// Fill the arrays of `mesh`, whose element has these reference nodes.
void build_tiles(MeshData& mesh, const TilePlan& plan, const TilesOptions& options, const Frame& frame,
                 const std::vector<Point>& reference_nodes);

} // namespace detail

template <Element E>
requires(E::dim == 2) Mesh<E> tiles(const Tiles& drawing, const TilesOptions& options, Frame frame) {
    std::vector<Point> reference_nodes;
    for (int i = 0; i < E::nodes; ++i) {
        const auto xi = E::reference_node(i);
        reference_nodes.push_back({xi[0], xi[1]});
    }
    Mesh<E> mesh;
    detail::build_tiles(mesh, drawing.plan(), options, frame, reference_nodes);
    return mesh;
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/tiles.hpp>
#endif
