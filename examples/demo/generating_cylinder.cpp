// Demonstration: a cylinder that generates heat, with a conductivity that falls as it gets hot: a pellet of uranium
// dioxide in its metal tube. Temperatures, and the conductivity integral as a check that needs no finite elements.

#include "inputs.hpp"
#include "pictures.hpp"
#include <cmath>
#include <tepor/output/text.hpp>
#include <tepor/tepor.hpp>

using namespace tepor;

namespace {

/// Conductivity of uranium dioxide of 95 percent density [W/(m K)], T in kelvin.
/// Source: J. K. Fink, J. Nuclear Materials 279 (2000) 1-18, from memory.
template <class T>
T dioxide_conductivity(const T& kelvin) {
    using std::exp;
    using std::pow;
    const T t = kelvin / 1000.0;
    return 100.0 / (7.5408 + 17.692 * t + 3.6142 * t * t) + 6400.0 / pow(t, 2.5) * exp(-16.35 / t);
}

/// Simpson's rule, far finer than the check needs.
double conductivity_integral(double from, double to) {
    constexpr int n = 2000;
    const double step = (to - from) / n;
    double sum = dioxide_conductivity(from) + dioxide_conductivity(to);
    for (int i = 1; i < n; ++i) sum += (i % 2 == 1 ? 4.0 : 2.0) * dioxide_conductivity(from + i * step);
    return sum * step / 3.0;
}

} // namespace

int main() {
    fmt::print("A heat-generating ceramic cylinder in a metal tube, in kelvin, for 1 m of length\n\n");
    demo::print({
        {"pellet, radius", "4.10 mm", demo::practice},
        {"pellet, conductivity", "falls from 8 to 2.5 W/(m K)",
         "J. K. Fink, J. Nucl. Mater. 279 (2000) 1-18, from memory"},
        {"power", "20 kW per metre", demo::practice},
        {"gap", "6000 W/(m2 K), taken as thin", demo::practice},
        {"tube", "0.57 mm, 16 W/(m K)", "zirconium alloy, common practice, no source"},
        {"water", "583 K, film 35000 W/(m2 K)", demo::practice},
    });

    const Parameter power{"power per metre", 20000.0}; // W, for the stated length of 1 m
    constexpr double radius = 0.0041;
    Body rod{layers<Segment<3>>({{.region = "pellet", .thickness = radius, .cells = 12},
                                 {.region = "tube", .thickness = 0.00057, .cells = 2}},
                                Cylindrical{.length = 1.0}),
             TemperatureScale::kelvin};
    rod.in("pellet", Material{.conductivity = law([](const auto& s) {
                                                  return dioxide_conductivity(s.temperature);
                                              }).named("own law, Fink 2000")});
    rod.in("pellet", Generation{.total = power});
    rod.in("tube", Material{.conductivity = 16.0});
    rod.between("pellet", "tube", Contact{.conductance = 6000.0});
    rod.on("outer", Film{.coefficient = 35000.0, .fluid = 583.0});

    const Field field = steady(rod);
    demo::picture("generating_cylinder",
                  profile_svg(field, {.title = "Ceramic cylinder in its tube, 20 kW per metre"}));
    fmt::print("\n{}\n", report(rod, field));

    const double centre = field.at(0.0);
    const double surface = field.at(radius, "pellet");
    const double integral = conductivity_integral(surface, centre);
    const double gap = (surface - field.at(radius, "tube")) * 6000.0 * 2.0 * pi * radius;
    fmt::print("Checks by hand\n");
    demo::Checks checks;
    checks.holds(
        std::abs(integral / (20000.0 / (4.0 * pi)) - 1.0) < 1e-6,
        fmt::format("integral of k from {:.1f} K to {:.1f} K: {:.4f} W/m, expected power / 4 pi = {:.4f} W/m\n"
                    "         (Kirchhoff transformation; Carslaw & Jaeger, Conduction of Heat in Solids, ch. I)",
                    surface, centre, integral, 20000.0 / (4.0 * pi)));
    checks.holds(std::abs(gap / 20000.0 - 1.0) < 1e-9, fmt::format("the gap lets {:.4f} W through at its jump", gap));
    checks.holds(field.balance().balanced(), "the heat balance closes within its limit");

    fmt::print("\nThe same rod at other powers\n  {:>12}  {:>10}  {:>11}  {:>9}\n", "power [W/m]", "centre [K]",
               "surface [K]", "tube [K]");
    for (const double watts : {5000.0, 10000.0, 20000.0, 30000.0, 40000.0}) {
        rod.set(power, watts);
        const Field other = steady(rod);
        fmt::print("  {:>12.0f}  {:>10.1f}  {:>11.1f}  {:>9.1f}\n", watts, other.at(0.0), other.at(radius, "pellet"),
                   other[hottest_in("tube")]);
    }

    fmt::print("\nCautions\n"
               "  The centre is not proportional to the power: k falls as the pellet heats, so that the last kilowatts "
               "cost most.\n"
               "  The gap rules the surface and changes in service. Licensing of such parts is for codes and qualified "
               "persons;\n"
               "  this program shows a calculation, not a design.\n");
    return checks.failed();
}
