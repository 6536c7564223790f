#pragma once
// Checkpoint: the state of a march as bytes, to go on later or elsewhere.

#include <string>
#include <tepor/base/config.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// The state of a march at a step end: `Checkpoint saved = march.checkpoint();`, later `March again{body, saved, theta};`.
///
/// Bytes: the line `tepor march 1`, then 64-bit words, lowest byte first whatever the machine; doubles bit by bit; a checksum last. With
/// the same body, step and build a march that wrote a checkpoint and one that read it go on bit for bit alike; on a linear
/// body so does the run that never stopped. Integrals and peaks go on when they are asked for again in the same order.
class Checkpoint {
  public:
    /// @throws Error bad_file  not a checkpoint, of another version, cut short, or damaged
    TEPOR_INLINE explicit Checkpoint(std::vector<unsigned char> bytes);

    /// Reads a file. @throws Error bad_file
    [[nodiscard]] TEPOR_INLINE static Checkpoint load(const std::string& path);
    /// Writes a file, beside the target first, so that a failure leaves an older file whole. @throws Error bad_file
    TEPOR_INLINE void save(const std::string& path) const;

    [[nodiscard]] const std::vector<unsigned char>& bytes() const noexcept { return bytes_; }

  private:
    std::vector<unsigned char> bytes_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/checkpoint.hpp>
#endif
