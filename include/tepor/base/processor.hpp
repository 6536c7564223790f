#pragma once
// Loops compiled twice, for any processor and for one with wide registers.

namespace tepor::detail {

/// TEPOR_IN_BOTH marks a body that is compiled into a plain function and into one marked TEPOR_WIDE; wide_processor() tells which of
/// them to call. Bits of a result are the same on every run of one machine; between machines with and without fused
/// multiply-add they differ by rounding.
#if defined(__GNUC__) && defined(__x86_64__)
#define TEPOR_IN_BOTH inline __attribute__((always_inline))
#define TEPOR_WIDE __attribute__((target("avx2,fma")))
inline bool wide_processor() noexcept {
    return __builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma");
}
#else
#define TEPOR_IN_BOTH inline
#define TEPOR_WIDE
inline bool wide_processor() noexcept {
    return false;
}
#endif

} // namespace tepor::detail
