// What an outside program does first: include the front door, use something, compare the version.
#include <string>
#include <tepor/tepor.hpp>

#ifdef EXPECT_COMPILED
#ifndef TEPOR_COMPILED
#error "tepor::compiled did not tell its user to read declarations only"
#endif
#elif defined(TEPOR_COMPILED)
#error "TEPOR_COMPILED leaked into a header-only user"
#endif

#ifdef EXPECT_OUTPUT
#include <fmt/core.h>
#endif

int main() {
    const tepor::Frame pipe{tepor::Cylindrical{.length = 2.0}};
    if (pipe.power() != 1) return 1;
    const std::string version = TEPOR_VERSION;
#ifdef EXPECT_OUTPUT
    fmt::print("{}\n", version);
#endif
#ifdef EXPECT_VERSION
    if (version != EXPECT_VERSION) return 2;
#endif
    return version.empty() ? 3 : 0;
}
