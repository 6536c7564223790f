#pragma once
// The plan of a supernodal factor: fronts, their rows, and where values go.

#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor::detail {

/// One dense front: `pivots` columns and `below` further rows. Its panel (column by column, `stride()` apart) has the
/// pivot rows ending at row top(), a multiple of four, then the rows below, padded to a multiple of four.
struct Supernode {
    Id first = 0;       ///< position of the first pivot
    Id pivots = 0;      ///< columns
    Id below = 0;       ///< rows under the pivots
    Id parent = -1;     ///< supernode that takes the update; -1 at a root
    Index rows = 0;     ///< position of its rows in SupernodeTree::row
    Index panel = 0;    ///< position of its panel in the factor
    Index scatter = 0;  ///< first entry of the matrix that goes into this panel
    Id depth = 0;       ///< distance from the root: its parity picks one of two stacks of updates
    Id child_begin = 0; ///< children in SupernodeTree::child
    Id child_end = 0;

    [[nodiscard]] Index top() const noexcept { return (static_cast<Index>(pivots) + 3) / 4 * 4; }
    /// Unused rows above the first pivot.
    [[nodiscard]] Index pad() const noexcept { return top() - pivots; }
    [[nodiscard]] Index update_stride() const noexcept { return (static_cast<Index>(below) + 3) / 4 * 4; }
    [[nodiscard]] Index stride() const noexcept { return top() + update_stride(); }
};

/// All supernodes in postorder with everything that does not depend on the values.
struct SupernodeTree {
    std::vector<Id> order;       ///< order[position] = vertex
    std::vector<Supernode> node; ///< children before parents
    std::vector<Id> row;         ///< positions of the rows below, ascending in each supernode
    std::vector<Id> place; ///< where each of these rows stands in the parent's front: < 0: pivot ~place; else below
    std::vector<Id> child;
    std::vector<Id> source; ///< entries of the matrix by supernode ...
    std::vector<Id> target; ///< ... and where they go in its panel
    Index panel_size = 0;   ///< values of the whole factor, padding included
    Index stack_size[2] = {0, 0};
    Index longest = 0; ///< most rows of a front
};

} // namespace tepor::detail
