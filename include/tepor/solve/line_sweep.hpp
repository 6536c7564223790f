#pragma once
// The steady state of a linear 1D body without a matrix: one sweep there and back over its pieces.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/body/line.hpp>
#include <tepor/linear/chain_sweep.hpp>
#include <vector>

namespace tepor {

/// What a sweep over one model keeps between solves. Beside the two vectors it fills it needs two bytes per cell.
///
/// On the way there it integrates the cells and eliminates, on the way back it solves and forms the residual, so that the
/// answer is judged like that of any other solve. One thread at a time.
class LineSweep {
  public:
    TEPOR_INLINE LineSweep(std::shared_ptr<const Model> model, std::shared_ptr<const LinePlan> plan);

    /// What is known of a solution beside itself.
    struct Report {
        double residual = 0.0;       ///< sum of |r| over the free unknowns [W]
        double rounding = 0.0;       ///< what rounding may leave of it [W]
        double given = 0.0;          ///< sum of |heat| given to the nodes [W]
        double source_traffic = 0.0; ///< sum of |source| over cells [W]
        double hottest = 0.0;        ///< largest |T|
    };

    /// Fills T, whose prescribed part is set, and the residual at all unknowns. Cost O(cells); allocates nothing.
    /// @return false when this is no case for a sweep after all: a coefficient that cannot be used, no temperature level
    [[nodiscard]] TEPOR_INLINE bool run(const Values& values, TimeSpan time, double* T, double* residual,
                                        Report& report);

    [[nodiscard]] const Model& model() const noexcept { return *model_; }
    [[nodiscard]] Workspace& work() noexcept { return work_; }

  private:
    [[nodiscard]] TEPOR_INLINE bool go(double left, double* T, double* load);
    TEPOR_INLINE void come_back(double last, double* T, double* residual, Report& report);

    std::shared_ptr<const Model> model_;
    std::shared_ptr<const LinePlan> plan_;
    LineCells cells_;
    Workspace work_;
    std::vector<ChainState> state_; // at the last row of each piece, reached but not entered
    std::vector<ChainLanes> lanes_; // of the pieces laid in lanes
    ChainState end_;
    double carried_ = 0.0; // load on the present node from the cell to its left
    double first_ = 0.0;   // the link at a held left end
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/line_sweep.hpp>
#endif
