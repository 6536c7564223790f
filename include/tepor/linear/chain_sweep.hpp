#pragma once
// Chains with few places that are tied to a temperature, solved by running sums, a piece at a time.

#include <tepor/assembly/chain_block.hpp>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>

namespace tepor {

/// Most links of a piece.
inline constexpr int chain_piece = chain_width;

/// What eliminating all rows left of a row, and itself, leaves behind.
///
/// Grounded: seen from the row the chain to its left is one resistance to ground, and `sum` the temperature the row would
/// have if its link to the right were cut. Otherwise nothing on the left takes up heat, and `sum` is the heat that flows on.
struct ChainState {
    bool grounded = false;
    double resistance = 0.0; ///< to ground; 0 at a row held at `sum`
    double sum = 0.0;

    /// Takes in a row with a load and a conductance `sink` >= 0 to ground.
    void enter(double load, double sink) noexcept {
        if (!grounded) {
            sum += load;
            if (!(sink > 0.0)) return;
            grounded = true;
            resistance = 1.0 / sink;
            sum *= resistance;
            return;
        }
        const double share = 1.0 / (1.0 + sink * resistance);
        sum = (sum + resistance * load) * share;
        resistance *= share;
    }

    /// Heat that reaches the row from its left, through at least one link, when its temperature is T.
    [[nodiscard]] double flow_to(double T) const noexcept { return grounded ? (sum - T) / resistance : sum; }
};

/// What one piece adds to the accounts of a sweep.
struct ChainSums {
    double residual = 0.0;    ///< sum of |r| over its inner rows
    double hottest = 0.0;     ///< largest |T| over its rows but the last
    double conductance = 0.0; ///< sum over its links
    double flow_first = 0.0;  ///< heat through its first link, to the right
    double flow_last = 0.0;   ///< and through its last
};

/// Runs on from the row before a piece's first link to its last row, which is reached but not yet entered.
///
/// Elimination of a chain of links with resistances r_i and no sinks is R_i = R_{i-1} + r_i, Z_i = Z_{i-1} + R_i b_i (written
/// for the resistance to ground R and Z = R times what elimination makes of the load): no subtraction, no division in the
/// recurrence, so that latency does not count and no digits are lost however long the chain.
/// @param links  1 to chain_piece
/// @param r      resistance of each link [K/W], > 0
/// @param load   load[j] of row j for the rows 1 .. links - 1 between the links [W]
TEPOR_INLINE void run_chain(int links, const double* r, const double* load, ChainState& state) noexcept;

/// The way back over the same piece: temperatures of its rows but the last, whose temperature is known, and the residuals
/// of its inner rows r_j = (T_j - T_{j-1}) / r_{j-1} + (T_j - T_{j+1}) / r_j - load_j.
///
/// The heat through the last link is known from the state there; link by link to the left it loses the loads, and the
/// temperature rises by resistance times heat: running sums again. What rounding leaves in one piece's heat moves its temperatures by
/// no more than the same share of the piece's resistance in all that is left of it, so that pieces do not add up their errors.
/// @param r        resistances on entry, temperatures on return: r[0] becomes that of the row before the first link
/// @param load     load[1 .. links - 1] on entry, residuals on return
/// @param reached  the state run_chain() left
/// @param last     temperature of the last row
/// @param held     temperature of the row before the first link where that is held; null elsewhere
TEPOR_INLINE ChainSums return_chain(int links, double* r, double* load, const ChainState& reached, double last,
                                    const double* held = nullptr) noexcept;

/// Sums over the lanes of a full piece: of resistances, of loads between its links, and of loads times the resistance from the
/// lane's beginning.
struct ChainLanes {
    double resistance[chain_lanes];
    double load[chain_lanes];
    double moment[chain_lanes];
};

/// run_chain() for a full piece laid in lanes (see chain_lanes). Keeps resistances and loads in that order for the way back.
/// @param resistance  of each link
/// @param left        load of each link on its left row and, `right`, on its right; null for no loads
/// @param r           chain_width entries: takes the resistances
/// @param load        chain_width entries: takes the loads of the rows; that of the first is not touched
TEPOR_INLINE void run_lanes(const double* resistance, const double* left, const double* right, double* r, double* load,
                            ChainLanes& lanes, ChainState& state) noexcept;

/// return_chain() for a piece that run_lanes() has passed; temperatures and residuals come out in the order of the rows.
TEPOR_INLINE ChainSums return_lanes(double* r, double* load, const ChainLanes& lanes, const ChainState& reached,
                                    double last) noexcept;

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/chain_lanes.hpp>
#include <tepor/linear/impl/chain_sweep.hpp>
#endif
