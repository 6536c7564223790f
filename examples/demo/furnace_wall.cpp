// Demonstration: the wall of a heating furnace, with conductivity that depends on temperature, a contact between the
// linings, and film and radiation on the casing. Heat loss and casing temperature, and what a thicker backing brings.

#include "inputs.hpp"
#include "pictures.hpp"
#include <cmath>
#include <tepor/output/text.hpp>
#include <tepor/tepor.hpp>

using namespace tepor;

int main() {
    fmt::print("A furnace wall: brick, backing and steel casing, for 1 m2 of wall\n\n");
    demo::print({
        {"working lining, thickness", "0.230 m", "one brick length, common practice, no source"},
        {"working lining, conductivity", "1.10 / 1.35 / 1.53 W/(m K)",
         "fireclay at 200 / 800 / 1300 degC, common practice, no source"},
        {"backing, thickness", "0.115 m", "half a brick length, common practice, no source"},
        {"backing, conductivity", "0.28 W/(m K)", "insulating brick, common practice, no source"},
        {"casing", "6 mm, 48 W/(m K)", "carbon steel, common practice, no source"},
        {"contact of lining and backing", "650 W/(m2 K)", "dry joint, common practice, no source"},
        {"film inside", "90 W/(m2 K)", "flame and gas together, common practice, no source"},
        {"gas", "1250 degC", "the duty asked for"},
        {"film outside", "8 W/(m2 K)", "calm air, common practice, no source"},
        {"emissivity of the casing", "0.85", "oxidised or painted steel, common practice, no source"},
        {"surroundings", "25 degC", "hall in summer, common practice, no source"},
        {"Stefan-Boltzmann constant", "5.670374419e-8 W/(m2 K4)", "CODATA 2018, exact since the SI of 2019"},
    });

    const Parameter backing_thickness{"backing thickness", 0.115};
    Body wall{layers<Segment<2>>({{.region = "working lining", .thickness = 0.230, .cells = 8},
                                  {.region = "backing", .thickness = backing_thickness, .cells = 6},
                                  {.region = "casing", .thickness = 0.006, .cells = 1}})};
    wall.in("working lining", Material{.conductivity = table({{200, 1.10}, {800, 1.35}, {1300, 1.53}})});
    wall.in("backing", Material{.conductivity = 0.28});
    wall.in("casing", Material{.conductivity = 48.0});
    wall.between("working lining", "backing", Contact{.conductance = 650.0});
    wall.on("inner", Film{.coefficient = 90.0, .fluid = 1250.0});
    wall.on("outer", Film{.coefficient = 8.0, .fluid = 25.0});
    wall.on("outer", Radiation{.emissivity = 0.85, .surroundings = 25.0});

    const Field field = steady(wall);
    fmt::print("\n{}\n", report(wall, field));
    demo::picture("furnace_wall", profile_svg(field, {.title = "Furnace wall, 1 m2"}));

    const Quantity loss = heat_out_through("outer");
    const Quantity shell = mean_on("outer");
    const double T = field[shell];
    const double by_hand =
        8.0 * (T - 25.0) +
        0.85 * stefan_boltzmann * (std::pow(T + zero_celsius, 4.0) - std::pow(25.0 + zero_celsius, 4.0));
    const double jump = field.at(0.230, "working lining") - field.at(0.230, "backing");
    fmt::print("Checks by hand\n");
    demo::Checks checks;
    checks.holds(
        std::abs(by_hand - field[loss]) < 1e-6 * by_hand,
        fmt::format("film and radiation at the casing of {:.2f} degC carry away {:.3f} W, the loss is {:.3f} W", T,
                    by_hand, field[loss]));
    checks.holds(std::abs(jump * 650.0 - field[loss]) < 1e-6 * field[loss],
                 fmt::format("the joint lets {:.3f} W through at its jump of {:.3f} K", jump * 650.0, jump));
    checks.holds(field.balance().balanced(), "the heat balance closes within its limit");

    fmt::print(
        "\nWhat a thicker backing brings (the thickness is a Parameter: nothing but its layer is computed anew)\n");
    fmt::print("  {:>12}  {:>10}  {:>14}  {:>20}\n", "backing [m]", "loss [W]", "casing [degC]",
               "lining/backing [degC]");
    double last = HUGE_VAL;
    bool falling = true;
    for (const double thickness : {0.065, 0.115, 0.165, 0.230, 0.345}) {
        wall.set(backing_thickness, thickness);
        const Field thick = steady(wall);
        fmt::print("  {:>12.3f}  {:>10.1f}  {:>14.1f}  {:>20.1f}\n", thickness, thick[loss], thick[shell],
                   thick.at(0.230, "backing"));
        falling = falling && thick[loss] < last;
        last = thick[loss];
    }
    checks.holds(falling, "more backing, less loss");

    fmt::print(
        "\nCautions\n"
        "  A thicker backing makes the lining hotter throughout: check the brick's service limit before the fuel "
        "bill.\n"
        "  A casing above some 60 degC can burn who touches it; what is allowed is for local codes to say, not for "
        "this\n"
        "  program. The film and emissivity values above are worth 20 percent either way: compute the extremes too.\n");
    return checks.failed();
}
