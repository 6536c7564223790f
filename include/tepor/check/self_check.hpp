#pragma once
// self_check: the verified cases run by the user, on the user's machine, with the user's compiler and flags.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/check/check_case.hpp>
#include <vector>

namespace tepor {

/// What one case came to.
struct CheckResult {
    std::string id;
    std::string title;
    std::string source;
    std::vector<CheckRow> rows;
    std::string error; ///< text of an Error the case stopped with; empty when it ran

    [[nodiscard]] TEPOR_INLINE bool passed() const noexcept;
};

/// How this build computes: read with the compiler that made it, and tried when the check ran.
struct BuildFacts {
    std::string version;    ///< of the library
    std::string compiler;   ///< name and version
    std::string flags;      ///< what the compiler tells of its options
    bool fast_math = false; ///< value-changing optimisation was on (it is refused unless TEPOR_ALLOW_FAST_MATH)
    bool keeps_nan = true;  ///< comparisons with NaN are false, as the checks of input need
    bool keeps_denormals =
        true; ///< numbers below 2.2e-308 are not flushed to zero (a program linked with fast-math does)
    bool rounds_to_nearest = true;

    /// Nothing of it endangers results.
    [[nodiscard]] bool sound() const noexcept {
        return !fast_math && keeps_nan && keeps_denormals && rounds_to_nearest;
    }
};

/// The report of self_check(); print it with <tepor/output/text.hpp>.
struct SelfCheck {
    std::vector<CheckResult> cases;
    BuildFacts build;

    [[nodiscard]] TEPOR_INLINE Index row_count() const noexcept;
    /// Rows out of tolerance, and cases that stopped with an Error.
    [[nodiscard]] TEPOR_INLINE Index failed() const noexcept;
    /// Every row of every case within its tolerance, and a sound build.
    [[nodiscard]] bool passed() const noexcept { return failed() == 0 && build.sound() && !cases.empty(); }
};

/// Runs all verified cases. Never throws for a failing case: the report says so.
/// Cost  a few seconds on one core
[[nodiscard]] TEPOR_INLINE SelfCheck self_check();

/// What can be told of this build without running a case.
[[nodiscard]] TEPOR_INLINE BuildFacts build_facts();

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/check/impl/self_check.hpp>
#endif
