#pragma once
// A verified case: a body whose answers are published or derived elsewhere, and the rows that compare them.

#include <cmath>
#include <string>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor {

/// One number of a case beside the value it has to have.
struct CheckRow {
    std::string what;       ///< such as "T at x = 0.1 m"
    double expected = 0.0;  ///< of the source
    double got = 0.0;       ///< of this build of the library
    double tolerance = 0.0; ///< largest allowed difference, in the unit of the row
    std::string unit;

    /// Within the tolerance; a value that is not finite never is.
    [[nodiscard]] bool passed() const noexcept { return std::abs(got - expected) <= tolerance; }
};

/// A case of the table `verified_cases()`.
struct CheckCase {
    std::string id;     ///< such as "S1D-03"
    std::string title;  ///< one line on the body
    std::string source; ///< where the expected values come from
    /// Builds the body, solves it and compares. @throws Error  when the library refuses what it should solve
    std::vector<CheckRow> (*run)() = nullptr;
};

} // namespace tepor
