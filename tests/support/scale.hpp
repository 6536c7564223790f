#pragma once
// One factor by which sanitizer builds cut the sizes of tests.

#include <algorithm>

#ifndef TEPOR_TEST_SCALE
#define TEPOR_TEST_SCALE 1.0
#endif

namespace tepor::test {

/// n times the build's scale, at least `least`.
constexpr long scaled(long n, long least = 1) {
    return std::max(least, static_cast<long>(static_cast<double>(n) * TEPOR_TEST_SCALE));
}

} // namespace tepor::test
