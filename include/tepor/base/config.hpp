#pragma once
// How heavy functions are defined: inline for header-only use, or once in the optional compiled target.

// Header-only (the default): every definition is inline and comes along with its declaration.
// With the target `tepor::compiled` (which defines TEPOR_COMPILED for its users) definitions stand in one library, and
// only declarations are read. The library itself is built with TEPOR_BUILDING as well.
#if defined(TEPOR_COMPILED)
#define TEPOR_INLINE
#else
#define TEPOR_INLINE inline
#endif

// A program built with value-changing floating-point optimisation gives wrong bounds and loses NaN checks: refuse it.
// TEPOR_ALLOW_FAST_MATH gives up those promises.
#if defined(__FAST_MATH__) && !defined(TEPOR_ALLOW_FAST_MATH)
#error "tepor: -ffast-math breaks NaN checks and certified bounds; build without it, or define TEPOR_ALLOW_FAST_MATH"
#endif
