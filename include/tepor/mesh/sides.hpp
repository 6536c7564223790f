#pragma once
// Which cell lies across each side, and one number for every side of the mesh.

#include <tepor/base/config.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor {

/// The sides of a mesh, each counted once however many cells (one or two) it belongs to.
struct SideMap {
    int sides_per_cell = 0;
    std::vector<Id> id;           ///< number of side s of cell c at c * sides_per_cell + s
    std::vector<CellSide> first;  ///< the cell of lower number, by side number
    std::vector<CellSide> second; ///< the other cell, or cell = -1 on the edge of the body

    [[nodiscard]] Index count() const noexcept { return static_cast<Index>(first.size()); }

    [[nodiscard]] Id number(Index cell, int side) const noexcept {
        return id[static_cast<std::size_t>(cell * sides_per_cell + side)];
    }

    /// The cell and side across, cell = -1 on the edge of the body.
    [[nodiscard]] CellSide across(Index cell, int side) const noexcept {
        const auto n = static_cast<std::size_t>(number(cell, side));
        return first[n].cell == cell && first[n].side == side ? second[n] : first[n];
    }
};

/// Match the sides of all cells by their end vertices.
///
/// @throws Error bad_mesh  a side belongs to three cells, or two cells walk it in the same direction (one is inverted)
/// Cost   O(cells)
SideMap match_sides(const MeshData& mesh);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/sides.hpp>
#endif
