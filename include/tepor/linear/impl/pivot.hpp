#pragma once
// When a pivot counts as zero.

#include <cmath>
#include <limits>
#include <tepor/base/numbers.hpp>

namespace tepor::detail {

/// A pivot at or below this part of its original diagonal is lost in rounding: the errors of n eliminations add up like
/// a random walk. A pivot that is not a number fails the same comparison.
inline double pivot_floor(Index n) noexcept {
    return 8.0 * std::numeric_limits<double>::epsilon() * std::sqrt(as_double(n));
}

} // namespace tepor::detail
