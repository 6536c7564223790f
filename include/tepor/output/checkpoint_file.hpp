#pragma once
// Checkpoints of a march in files.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/solve/checkpoint.hpp>

namespace tepor {

/// Writes a checkpoint, beside the target first, so that a failure leaves an older file whole. @throws Error bad_file
TEPOR_INLINE void save(const Checkpoint& checkpoint, const std::string& path);

/// Reads a checkpoint. @throws Error bad_file  cannot be opened, or is none
[[nodiscard]] TEPOR_INLINE Checkpoint load_checkpoint(const std::string& path);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/output/impl/checkpoint_file.hpp>
#endif
