#pragma once
// One axis of tiles: the lines a drawing asks for, and the cell borders between them.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/mesh/grading.hpp>
#include <vector>

namespace tepor {

/// A run of cells along x or y between two lines.
struct TileSplit {
    double from = 0.0; ///< [m]
    double to = 0.0;   ///< [m], > from
    Index cells = 0;   ///< at least 1
    Grading grading{}; ///< equal cells unless said
};

/// Short cells on both sides of a line, growing away from it.
struct FinerLine {
    double at = 0.0;   ///< [m]
    double size = 0.0; ///< longest cell that touches the line [m]
};

namespace detail {

/// All that was said about one axis.
struct TileAxis {
    std::vector<double> lines; ///< the edges of what is drawn
    std::vector<TileSplit> splits;
    std::vector<FinerLine> finer;
};

/// Cell borders of one axis, ascending.
struct TileBorders {
    std::vector<double> at;
    double tolerance = 0.0; ///< lines closer than this are one [m]

    [[nodiscard]] Index cells() const noexcept { return static_cast<Index>(at.size()) - 1; }
    /// The border nearest to x.
    [[nodiscard]] Index nearest(double x) const noexcept;
};

/// Borders between low and high: every line inside is one; splits give the cells between theirs; elsewhere cells are at most
/// `size` long, and beside a finer line at most its size, growing by the factor `growth` from cell to cell.
///
/// @param name  "x" or "y", for messages
/// @throws Error missing (neither split nor size), outside (line, split or finer line beyond low..high), bad_value,
///               contradiction (overlapping splits, a line that cuts a cell of a split), too_large
TileBorders tile_borders(const TileAxis& axis, double low, double high, double size, double growth, const char* name);

} // namespace detail
} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/tile_axis.hpp>
#endif
