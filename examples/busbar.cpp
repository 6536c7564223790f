// A copper bar carrying current: laws of one's own for its heat and its film, with exact slopes.

#include "numbers.hpp"
#include <cmath>
#include <fmt/core.h>
#include <tepor/output/answers.hpp>
#include <tepor/output/text.hpp>
#include <tepor/tepor.hpp>
using namespace tepor;

int main() {
    constexpr double radius = 0.010, area = 3.14159265358979323846 * radius * radius; // m, m2
    Parameter current{"current", 800.0};                                              // A
    Body bar{layers<Segment<2>>({{.region = "copper", .thickness = radius, .cells = 4}}, Cylindrical{.length = 1.0})};
    bar.in("copper", Material{.conductivity = 390.0});
    // Resistivity of annealed copper 1.72e-8 ohm m at 20 degC, 0.39 % per kelvin (IEC 60028, rounded; from memory).
    bar.in("copper", Generation{.per_volume = law({current}, [](const auto& spot, auto amps) {
                                    auto j = amps / area;
                                    return 1.72e-8 * (1.0 + 0.0039 * (spot.temperature - 20.0)) * j * j;
                                })});
    // Free convection about a horizontal bar: h rises with the fourth root of the difference (common practice, no source).
    bar.on("outer", Film{.coefficient = law(
                             [](const auto& s) { return 1.3 * pow(abs(s.temperature - s.fluid) + 1e-3, 0.25) * 2.6; }),
                         .fluid = 35.0});

    Quantity surface = mean_on("outer");
    Field field = steady(bar);
    fmt::print("{}\n", field.balance());
    fmt::print("{:.0f} A: surface at {:.1f} degC, {:.3f} K per ampere\n", field.value(current), field[surface],
               gradient(field, surface)[current]);
    Sized rating = size_for(bar, current, surface, at_most(90.0), {.from = 100.0, .to = 3000.0});
    fmt::print("{}\n", rating);
    fmt::print("Bars at such temperatures burn the skin: guard them, and let local codes rate them.\n");

    example::number("surface", field[surface]);
    example::number("slope", gradient(field, surface)[current]);
    example::number("rating", rating.value);

    // By hand: the heat of the whole resistance at the surface temperature leaves through the film (the bar is all but even).
    const double t = field[surface], amps = 800.0;
    const double heat = 1.72e-8 * (1.0 + 0.0039 * (t - 20.0)) * amps * amps / area;
    const double film =
        1.3 * std::pow(t - 35.0 + 1e-3, 0.25) * 2.6 * (t - 35.0) * 2.0 * 3.14159265358979323846 * radius;
    return rating && std::abs(heat - film) < 1e-3 * film ? 0 : 1;
}
