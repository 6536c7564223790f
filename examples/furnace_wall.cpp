// A furnace wall: heat loss, casing temperature, their slopes, the backing that meets a limit, another gas temperature.

#include "numbers.hpp"
#include <cmath>
#include <fmt/core.h>
#include <tepor/output/text.hpp> // printing with fmt
#include <tepor/tepor.hpp>       // everything numerical; no streams, no fmt
using namespace tepor;

int main() {
    Parameter backing_thickness{"backing thickness", 0.115}; // m; free-standing, belongs to no body
    Parameter gas{"gas temperature", 1250.0};                // degC
    Parameter k_backing{"backing conductivity", 0.28};       // W/(m K)

    Body wall{layers<Segment<2>>({{.region = "working lining", .thickness = 0.230, .cells = 8},
                                  {.region = "backing", .thickness = backing_thickness, .cells = 6},
                                  {.region = "casing", .thickness = 0.006, .cells = 1}})};
    wall.in("working lining", Material{.conductivity = table({{200, 1.10}, {800, 1.35}, {1300, 1.53}}),
                                       .density = 2100,
                                       .specific_heat = 960});
    wall.in("backing", Material{.conductivity = k_backing, .density = 800, .specific_heat = 900});
    wall.in("casing", Material{.conductivity = 48.0, .density = 7850, .specific_heat = 470});
    wall.between("working lining", "backing", Contact{.conductance = 650.0}); // W/(m2 K)
    wall.on("inner", Film{.coefficient = 90.0, .fluid = gas});                // W/(m2 K), degC
    wall.on("outer", Film{.coefficient = 8.0, .fluid = 25.0});
    wall.on("outer", Radiation{.emissivity = 0.85, .surroundings = 25.0}); // different kinds on a face add up

    Quantity loss = heat_out_through("outer"); // W, for the 1 m2 of this wall
    Quantity shell = mean_on("outer");         // degC

    Field field = steady(wall);
    fmt::print("{:.1f} W, {:.1f} degC, {:.1f} degC at x = 0.1 m\n", field[loss], field[shell], field.at(0.1));
    fmt::print("{}\n", field.balance()); // in, out, generated, stored, left over and its rounding floor
    const double casing = field[shell];
    const double loss_before = field[loss];
    Gradient slope = gradient(field, loss); // adjoint: one extra solve for all parameters
    fmt::print("{:.0f} W per W/(m K) of the backing\n", slope[k_backing]);
    Sized sized = size_for(wall, backing_thickness, loss, 900.0); // value, field, or the reason there is none
    fmt::print("{:.0f} W needs a backing of {:.3f} m: {}\n", sized.reached, sized.value, sized.message);

    example::number("loss", field[loss]);
    example::number("casing", field[shell]);
    example::number("inside", field.at(0.1));
    example::number("slope", slope[k_backing]);
    example::number("backing for 900 W", sized.value);
    example::number("reached", sized.reached);

    wall.set(gas, 1180.0); // steady(wall) again redoes only what depends on it
    field = steady(wall);
    fmt::print("{:.1f} W, {:.1f} degC at 1180 degC\n", field[loss], field[shell]);

    example::number("loss at 1180 degC", field[loss]);

    // by hand: what leaves the casing by film and radiation is the loss
    const double by_hand =
        8.0 * (casing - 25.0) + 0.85 * 5.670374419e-8 * (std::pow(casing + 273.15, 4) - std::pow(298.15, 4));
    bool right = std::abs(by_hand - loss_before) < 1e-6 * loss_before && field[loss] < loss_before;
    // and the answers by trying them
    wall.set(gas, 1250.0).set(k_backing, 0.2801);
    right = right && std::abs((steady(wall)[loss] - loss_before) / 0.0001 / slope[k_backing] - 1.0) < 1e-3;
    wall.set(k_backing, 0.28).set(backing_thickness, sized.value);
    right = right && sized && std::abs(steady(wall)[loss] - 900.0) < 1e-3;
    return right ? 0 : 1;
}
