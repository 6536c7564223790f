#pragma once
// Checkpoint: the state of a march as bytes, to go on later or elsewhere.

#include <tepor/base/config.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// The state of a march at a step end: `Checkpoint saved = march.checkpoint();`, later `March again{body, saved, theta};`.
///
/// Bytes: the line `tepor march 1`, then 64-bit words, lowest byte first whatever the machine; doubles bit by bit; a checksum last. With
/// the same body, step and build a march that wrote a checkpoint and one that read it go on bit for bit alike; on a linear
/// body so does the run that never stopped. Files: output/checkpoint_file.hpp. Integrals and peaks go on when they are asked for again in the same order.
class Checkpoint {
  public:
    /// @throws Error bad_file  not a checkpoint, of another version, cut short, or damaged
    TEPOR_INLINE explicit Checkpoint(std::vector<unsigned char> bytes);

    [[nodiscard]] const std::vector<unsigned char>& bytes() const noexcept { return bytes_; }

  private:
    std::vector<unsigned char> bytes_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/checkpoint.hpp>
#endif
