#pragma once
// The states of a recorded march: as they were kept, or gone through again from the checkpoint before.

#include <memory>
#include <optional>
#include <tepor/solve/impl/marcher.hpp>
#include <tepor/solve/march.hpp>

namespace tepor::detail {

class MarchStates {
  public:
    explicit MarchStates(const March& march) : marcher_(march.marcher()), tape_(*march.tape()) {}

    [[nodiscard]] const MarchTape& tape() const noexcept { return tape_; }
    [[nodiscard]] Marcher& marcher() const noexcept { return marcher_; }

    /// At the end of a leg; good until another piece of the run is asked for.
    const MarchTape::State& end_of(std::size_t leg) {
        if (tape_.stride == 1) return tape_.kept[leg];
        load(leg / tape_.stride);
        return piece_[leg % tape_.stride];
    }
    /// Before it; stands together with end_of() of the same leg.
    const MarchTape::State& start_of(std::size_t leg) {
        if (leg == 0) return tape_.start;
        if (leg % tape_.stride == 0) return tape_.kept[leg / tape_.stride - 1];
        return end_of(leg - 1);
    }

  private:
    void load(std::size_t which) {
        if (loaded_ == which) return;
        const std::size_t first = which * tape_.stride;
        const std::size_t last = std::min(first + tape_.stride, tape_.legs.size());
        if (!again_)
            again_ = std::make_unique<Marcher>(marcher_.model, tape_.values[tape_.legs[first].values],
                                               initial(tape_.start.T.front()), marcher_.scheme);
        loaded_.reset();
        piece_.resize(last - first);
        for (std::size_t i = first; i < last; ++i) {
            const MarchTape::State& start = i > first ? piece_[i - first - 1] : start_of(i);
            again_->repeat(tape_.legs[i], tape_.values[tape_.legs[i].values], start, piece_[i - first]);
        }
        loaded_ = which;
    }

    Marcher& marcher_;
    const MarchTape& tape_;
    std::unique_ptr<Marcher> again_;
    std::vector<MarchTape::State> piece_;
    std::optional<std::size_t> loaded_;
};

} // namespace tepor::detail
