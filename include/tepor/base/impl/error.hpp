#pragma once
// Making an Error: apart, because messages are made in hundreds of places.

#include <tepor/base/error.hpp>

namespace tepor {

TEPOR_INLINE Error::Error(ErrorCode code, std::string_view offender, std::string_view message, Index cell)
    : std::runtime_error(std::string(message)), code_(code), offender_(offender), cell_(cell) {}

TEPOR_INLINE Error::~Error() = default;

} // namespace tepor
