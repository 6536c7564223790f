// What an outside program does first: include the front door, use something, compare the version.
#include <cmath>
#include <string>
#ifdef EXPECT_OUTPUT
#include <fmt/core.h> // the light variant: the front door is included by the others
#include <tepor/base/frame.hpp>
#include <tepor/version.hpp>
#elif !defined(EXPECT_PRECOMPILED) // which has been read already, or nothing below compiles
#include <tepor/tepor.hpp>
#endif

#ifdef EXPECT_COMPILED
#ifndef TEPOR_COMPILED
#error "tepor::compiled did not tell its user to read declarations only"
#endif
#elif defined(TEPOR_COMPILED)
#error "TEPOR_COMPILED leaked into a header-only user"
#endif

int main() {
    const std::string version = TEPOR_VERSION;
#ifdef EXPECT_VERSION
    if (version != EXPECT_VERSION) return 2;
#endif
#ifdef EXPECT_OUTPUT
    const tepor::Frame pipe{tepor::Cylindrical{.length = 2.0}};
    fmt::print("{} {}\n", version, pipe.power());
#else
    // A slab by hand: 2 W/(m K) x 1 m2 x 30 K / 0.1 m = 600 W.
    tepor::Body slab{tepor::layers<tepor::Segment<1>>({{.region = "slab", .thickness = 0.1, .cells = 3}})};
    slab.in("slab", tepor::Material{.conductivity = 2.0});
    slab.on("inner", tepor::FixedTemperature{50.0});
    slab.on("outer", tepor::FixedTemperature{20.0});
    const tepor::Field field = tepor::steady(slab);
    if (!(std::abs(field[tepor::heat_out_through("outer")] - 600.0) <= 1e-9)) return 3;
#endif
    return version.empty() ? 4 : 0;
}
