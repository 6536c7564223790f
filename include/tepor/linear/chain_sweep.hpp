#pragma once
// Chains with few places that are tied to a temperature, solved by running sums, a piece at a time.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>

namespace tepor {

/// Most links of a piece.
inline constexpr int chain_piece = 128;

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
/// From the definition above u_i = T_i / R_i obeys u_{i-1} = u_i + Z_{i-1} r_i / (R_{i-1} R_i): a running sum again.
/// @param r     resistances on entry, temperatures on return: r[0] becomes that of the row before the first link
/// @param load  load[1 .. links - 1] on entry, residuals on return
/// @param from  the state run_chain() was given
/// @param last  temperature of the last row
TEPOR_INLINE ChainSums return_chain(int links, double* r, double* load, const ChainState& from, double last) noexcept;

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/chain_sweep.hpp>
#endif
