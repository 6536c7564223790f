#pragma once
// What every bracket is held to: the exact value inside on every mesh, and how fast its width falls.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/bracket.hpp>

namespace tepor::test {

/// Every pass holds `exact` (known to +- doubt), and so does the result.
inline void holds(const Bracket& b, double exact, double doubt) {
    CAPTURE(exact);
    for (const BracketPass& pass : b.passes) {
        CAPTURE(pass.unknowns);
        CHECK(pass.lower <= exact + doubt);
        CHECK(pass.upper >= exact - doubt);
    }
    CHECK(b.lower <= exact + doubt);
    CHECK(b.upper >= exact - doubt);
    CHECK(b.value >= b.lower);
    CHECK(b.value <= b.upper);
}

/// Slope of log width over log unknowns in the second half of the passes.
inline double rate(const Bracket& b) {
    const BracketPass& first = b.passes[b.passes.size() / 2];
    const BracketPass& last = b.passes.back();
    return std::log((last.upper - last.lower) / (first.upper - first.lower)) /
           std::log(static_cast<double>(last.unknowns) / static_cast<double>(first.unknowns));
}

} // namespace tepor::test
