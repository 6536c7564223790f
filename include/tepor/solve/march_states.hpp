#pragma once
// The states of a recorded march: as they were kept, or gone through again from the checkpoint before. For derivatives.

#include <memory>
#include <optional>
#include <tepor/base/config.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/tape.hpp>
#include <vector>

namespace tepor::detail {

class Marcher;

/// Reads a tape; cheap from its end to its start or the other way round, where it goes through each piece once.
class MarchStates {
  public:
    TEPOR_INLINE explicit MarchStates(const March& march);
    MarchStates(const MarchStates&) = delete;
    MarchStates& operator=(const MarchStates&) = delete;
    TEPOR_INLINE ~MarchStates();

    [[nodiscard]] const MarchTape& tape() const noexcept { return tape_; }
    /// Nothing depends on temperature and no matrix on time.
    [[nodiscard]] bool linear() const noexcept { return linear_; }
    [[nodiscard]] Capacity capacity() const noexcept { return capacity_; }
    /// The factor of M + a K that the march holds; null when it has none, or was driven away from these values.
    [[nodiscard]] TEPOR_INLINE Engine* factored(double a, const Values& with) const noexcept;

    /// At the end of a leg; good until another piece of the run is asked for. @throws Error as the step itself would
    TEPOR_INLINE const MarchTape::State& end_of(std::size_t leg);
    /// Before it; stands together with end_of() of the same leg.
    TEPOR_INLINE const MarchTape::State& start_of(std::size_t leg);

  private:
    TEPOR_INLINE void load(std::size_t which);

    Marcher& marcher_;
    const MarchTape& tape_;
    bool linear_;
    Capacity capacity_;
    std::unique_ptr<Marcher> again_;
    std::vector<MarchTape::State> piece_;
    std::optional<std::size_t> loaded_;
};

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/march_states.hpp>
#endif
