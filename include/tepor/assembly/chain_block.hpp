#pragma once
// Work arrays of a run of two-node cells in one line, for the sweep over a 1D body that keeps no matrix.

#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor {

/// Most cells handled together.
inline constexpr int chain_width = 128;

/// A full run may be laid in lanes: cut into `chain_lanes` runs of `chain_steps` cells that are walked side by side, so that sums
/// along the chain take whole registers. Cell lane * chain_steps + step is then entry step * chain_lanes + lane.
inline constexpr int chain_lanes = 8;
inline constexpr int chain_steps = chain_width / chain_lanes;

/// A run of `count` two-node cells, each beginning where the one before ends: nodes in, quadrature points out, then
/// coefficients in, resistances and loads out. Entry (point q, cell c) of an array is at [q * count + c].
struct ChainBlock {
    int count = 0;
    int next = 1;        ///< the cell of x[c] ends at x[c + next]: 1, or chain_lanes where laid in lanes
    double* x = nullptr; ///< count + next nodes, set by the caller

    double* point_x = nullptr; ///< set by CellKernels::open_chain
    double* weight = nullptr;  ///< quadrature weight times measure of the frame

    const double* k = nullptr; ///< at points [W/(m K)]; null: k_value everywhere
    double k_value = 0.0;
    const double* source = nullptr; ///< heat generated per volume at points [W/m3]; null for none

    double* resistance = nullptr; ///< set by CellKernels::form_chain: per cell [K/W]
    double* load_left = nullptr;  ///< heat of the source to the left node [W]; untouched without a source
    double* load_right = nullptr;
    double traffic = 0.0; ///< sum of |load_left + load_right| [W]
};

/// Owns the arrays of a ChainBlock and room for coefficients.
class ChainWorkspace {
  public:
    explicit ChainWorkspace(int points) {
        const Index at_points = static_cast<Index>(points) * chain_width;
        store_.resize(detail::as_size(6 * at_points + 4 * (chain_width + chain_lanes)), 0.0);
        double* next = store_.data();
        const auto take = [&next](Index entries) {
            double* here = next;
            next += entries;
            return here;
        };
        block.point_x = take(at_points);
        block.weight = take(at_points);
        zeros = take(at_points);
        k = take(at_points);
        source = take(at_points);
        amount = take(at_points);
        block.x = take(chain_width + chain_lanes);
        block.resistance = take(chain_width + 1);
        block.load_left = take(chain_width + 1);
        block.load_right = take(chain_width + 1);
    }
    ChainWorkspace(const ChainWorkspace&) = delete;
    ChainWorkspace& operator=(const ChainWorkspace&) = delete;
    ChainWorkspace(ChainWorkspace&&) = default;
    ChainWorkspace& operator=(ChainWorkspace&&) = default;
    ~ChainWorkspace() = default;

    ChainBlock block;
    double* zeros = nullptr; ///< y of the points
    double* k = nullptr;
    double* source = nullptr;
    double* amount = nullptr;

  private:
    std::vector<double> store_;
};

} // namespace tepor
