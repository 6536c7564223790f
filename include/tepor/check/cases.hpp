#pragma once
// The one table of verified cases: used by the tests, by self_check() and by users who want to see a case for themselves.

#include <tepor/base/config.hpp>
#include <tepor/check/check_case.hpp>
#include <vector>

namespace tepor {

/// All cases, in the order of their ids. Expected values are copied from the sources named; how far the mesh of the case
/// may leave them is the tolerance of each row.
[[nodiscard]] TEPOR_INLINE std::vector<CheckCase> verified_cases();

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/check/impl/cases.hpp>
#endif
