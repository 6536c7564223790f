#pragma once
// A 1D body as one line of two-node cells, cut into pieces, and their resistances and loads: what a sweep needs instead of a
// matrix.

#include <memory>
#include <tepor/assembly/chain_block.hpp>
#include <tepor/base/config.hpp>
#include <tepor/body/assemble.hpp>
#include <tepor/body/model.hpp>
#include <vector>

namespace tepor {

/// How a model lies on a line. Nodes are counted by position from left to right; a prescribed end is position 0 or the last.
struct LinePlan {
    /// A run of cells of one region, or one contact.
    struct Piece {
        Id first = 0; ///< position of its first node
        Id links = 0; ///< cells, or 1 for a contact
        Id cell = 0;  ///< first cell, in the model's numbering
        Id region = 0;
        Id contact = -1; ///< the contact, and the side in it
        Id side = 0;
        Id special = -1; ///< of its first node, in `special`
    };
    std::vector<Piece> pieces;
    std::vector<Id> special; ///< positions where faces or local heats act, ascending
    Id last_special = -1;    ///< of the last node
    bool left_held = false;
    bool right_held = false;
    Restriction acting; ///< what acts at the special positions
    Restriction contacts;

    Index positions = 0;
    /// The unknown at a position.
    [[nodiscard]] Index unknown(Index position) const noexcept {
        if (left_held && position == 0) return left_unknown;
        if (right_held && position == positions - 1) return positions - 1;
        return position - (left_held ? 1 : 0);
    }
    Index left_unknown = 0; ///< of a held left end
};

/// The plan of a model a sweep can solve: linear, Segment<1> or an element like it, all cells in one row, held nowhere but at its
/// ends, no side film. Null for others. Cost O(cells).
[[nodiscard]] TEPOR_INLINE std::unique_ptr<LinePlan> plan_line(const Model& model);

/// Resistances and loads of a line at given values, piece by piece.
class LineCells {
  public:
    TEPOR_INLINE LineCells(const Model& model, const LinePlan& plan);

    /// Reads the values and what acts at single places. `scratch_a` and `scratch_b`: all unknowns, overwritten at some.
    /// @return false when a coefficient cannot be used
    [[nodiscard]] TEPOR_INLINE bool open(const Values& values, TimeSpan time, Workspace& work, double* scratch_a,
                                         double* scratch_b);

    /// Fills block().resistance and, when loaded(), block().load_left and load_right of piece p.
    /// @return false when a coefficient cannot be used
    [[nodiscard]] TEPOR_INLINE bool fill(std::size_t p);

    [[nodiscard]] const ChainBlock& block() const noexcept { return work_.block; }
    /// Piece p is laid in lanes, see chain_lanes.
    [[nodiscard]] bool in_lanes(std::size_t p) const noexcept { return plan_.pieces[p].links == chain_width; }
    /// The piece filled last generates heat.
    [[nodiscard]] bool loaded() const noexcept { return work_.block.source != nullptr; }
    /// Sum of |heat generated| over the cells filled since open() [W].
    [[nodiscard]] double source_traffic() const noexcept { return source_traffic_; }

    /// Load [W] and conductance to ground [W/K] of a special position.
    struct Acting {
        double load = 0.0;
        double sink = 0.0;
    };
    [[nodiscard]] Acting acting(Id special) const noexcept {
        return special < 0 ? Acting{} : acting_[detail::as_size(special)];
    }

  private:
    [[nodiscard]] TEPOR_INLINE bool open_region(Id region);
    [[nodiscard]] TEPOR_INLINE bool sources(const RegionModel& region);
    TEPOR_INLINE void place(const LinePlan::Piece& piece);

    const Model& model_;
    const LinePlan& plan_;
    ChainWorkspace work_;
    const Values* values_ = nullptr;
    TimeSpan time_{};
    Id region_ = -1;
    std::vector<Acting> acting_;
    std::vector<std::vector<double>> gap_; ///< per contact and side: conductance [W/K]
    double source_traffic_ = 0.0;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/line.hpp>
#endif
