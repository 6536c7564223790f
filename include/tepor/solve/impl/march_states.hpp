#pragma once
// Pieces of a recorded march gone through again.

#include <tepor/solve/impl/marcher.hpp>
#include <tepor/solve/impl/marcher_repeat.hpp>
#include <tepor/solve/march_states.hpp>

namespace tepor::detail {

TEPOR_INLINE MarchStates::MarchStates(const March& march)
    : marcher_(march.marcher()), tape_(*march.tape()), linear_(marcher_.linear()), capacity_(march.capacity()) {}

TEPOR_INLINE MarchStates::~MarchStates() = default;

TEPOR_INLINE Engine* MarchStates::factored(double a, const Values& with) const noexcept {
    return marcher_.factored(a, with);
}

TEPOR_INLINE const MarchTape::State& MarchStates::end_of(std::size_t leg) {
    if (tape_.stride == 1) return tape_.kept[leg];
    load(leg / tape_.stride);
    return piece_[leg % tape_.stride];
}

TEPOR_INLINE const MarchTape::State& MarchStates::start_of(std::size_t leg) {
    if (leg == 0) return tape_.start;
    if (leg % tape_.stride == 0) return tape_.kept[leg / tape_.stride - 1];
    return end_of(leg - 1);
}

TEPOR_INLINE void MarchStates::load(std::size_t which) {
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

} // namespace tepor::detail
