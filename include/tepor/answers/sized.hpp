#pragma once
// Sized: how a sizing is asked for, and what it found.

#include <optional>
#include <string>
#include <tepor/base/numbers.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor {

/// Where the answer is sought and how closely.
struct SizeOptions {
    std::optional<double>
        from{};                 ///< bounds of the parameter; without them a positive one is searched from 1/100 to 100
    std::optional<double> to{}; ///< times its value
    double tolerance = 1e-8; ///< of the target, as a share of max(|target|, spread of the quantity between the bounds)
    bool scan = false;       ///< look for several answers even when the slope keeps its sign between the bounds
    /// For limits on a quantity that bracket() certifies: the bad end of its interval keeps the limit.
    bool certified_side = false;
    double certified_width = 1e-3; ///< relative width of that interval
    Index most_solves = 100;
};

/// Why a sizing ended as it did.
enum class SizeReason {
    found,       ///< one answer
    always_met,  ///< every value between the bounds keeps the limit; the present one stays
    several,     ///< more than one answer: `answers` lists them, `value` is the one nearest to the present value
    unreachable, ///< no value between the bounds meets the target; `value` comes nearest
    runaway,     ///< beyond `failed_at` no steady state was found, and the target was not met before
    failed ///< beyond `failed_at` the body has no meaning (a table's range, a law), and the target was not met before
};

/// What a sizing found.
struct Sized {
    double value = 0.0;   ///< of the parameter: the answer, or what comes nearest
    Field field;          ///< there
    double reached = 0.0; ///< the quantity there
    SizeReason reason = SizeReason::found;
    std::string message;         ///< the reason in words, with numbers
    std::vector<double> answers; ///< all answers, rising
    double failed_at = 0.0;      ///< for runaway and failed
    Index solves = 0;            ///< steady solves it took, brackets aside
    double lower = 0.0;          ///< with certified_side: guaranteed bounds of the quantity at the answer
    double upper = 0.0;

    /// There is one answer (or the limit is kept everywhere).
    explicit operator bool() const noexcept { return reason == SizeReason::found || reason == SizeReason::always_met; }
};

} // namespace tepor
