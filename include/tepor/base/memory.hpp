#pragma once
// What compilers can be told about memory, where they offer it.

#include <tepor/base/numbers.hpp>

#if defined(__GNUC__)
#define TEPOR_RESTRICT __restrict__
#else
#define TEPOR_RESTRICT __restrict
#endif

namespace tepor::detail {

/// Asks for `count` values from `from` on to be brought near; for walks that the processor does not foresee.
inline void fetch_ahead([[maybe_unused]] const double* from, [[maybe_unused]] Index count) noexcept {
#if defined(__GNUC__)
    for (Index i = 0; i < count; i += 8) __builtin_prefetch(from + i, 1);
#endif
}

/// The same for values that are only read; what is fetched may lie beyond an array's end.
inline void fetch_to_read([[maybe_unused]] const double* from, [[maybe_unused]] Index count) noexcept {
#if defined(__GNUC__)
    for (Index i = 0; i < count; i += 8) __builtin_prefetch(from + i);
#endif
}

} // namespace tepor::detail
