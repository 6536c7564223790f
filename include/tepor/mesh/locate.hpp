#pragma once
// Locator: the cell that holds a place, and the place in its reference coordinates.

#include <tepor/base/config.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor {

/// Where a place lies in a mesh.
struct Location {
    Index cell = -1; ///< -1: outside
    Point reference; ///< in the reference cell; y = 0 in 1D

    /// True when a cell was found.
    explicit operator bool() const noexcept { return cell >= 0; }
};

/// A tree of boxes over the cells of a mesh. The mesh must outlive it and keep its nodes in place.
///
/// A place on a side shared by several cells belongs to all of them; find() then takes the cell of lowest number. A place
/// outside by no more than 1e-9 of the body's size, or between an arc and the cell side that stands for it, counts as inside
/// the cell there; its reference coordinates may then lie outside the reference cell by as much.
///
/// Const and safe from many threads. Cost: O(cells log cells) to build; a find costs O(log cells) on shape-regular meshes;
/// no allocation in find().
class Locator {
  public:
    Locator() = default;

    template <Element E>
    explicit Locator(const Mesh<E>& mesh) : Locator(mesh, detail::cell_kind<E>()) {}

    Locator(const MeshData& mesh, const detail::CellKind& kind);

    /// The cell that holds p.
    [[nodiscard]] Location find(Point p) const;

    /// The same among the cells of one region, for places on an interface.
    [[nodiscard]] Location find_in(Index region, Point p) const;

    /// Every cell that holds p (several on sides and at vertices), by increasing number.
    void find_all(Point p, std::vector<Location>& found) const;

  private:
    struct Box {
        Point low;
        Point high;
    };

    template <class Act>
    void visit(Point p, Act&& act) const;
    [[nodiscard]] Location search(Index region, Point p) const;
    [[nodiscard]] double breach_at(Id cell, Point p, Point* xi, double* slack) const;

    const MeshData* mesh_ = nullptr;
    const detail::CellKind* kind_ = nullptr;
    double size_ = 0.0;
    std::vector<Id> cells_;       ///< in the order of a space-filling curve
    std::vector<Box> boxes_;      ///< binary tree over groups of cells_, root first
    std::vector<Id> bulge_start_; ///< position in bulges_ by cell; empty without curves
    std::vector<CurvedSide> bulges_;
    Index leaves_ = 0;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/locate.hpp>
#endif
