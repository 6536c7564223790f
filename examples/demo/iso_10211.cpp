// Demonstration: the two-dimensional validation detail of EN ISO 10211, Annex A, case 2, next to the standard's values.
// The body is described in <tepor/check/iso_10211.hpp>, with its drawing; the tests use the same one.

#include "inputs.hpp"
#include "pictures.hpp"
#include <cmath>
#include <tepor/check/iso_10211.hpp>
#include <tepor/output/text.hpp>
#include <tepor/tepor.hpp>

using namespace tepor;

int main() {
    fmt::print("EN ISO 10211, Annex A, case 2: a metal profile in an insulated facing, for 1 m of depth\n\n");
    demo::print({
        {"geometry", "500 mm x 47.5 mm, profile 1.5 mm", "EN ISO 10211, Annex A, case 2, from memory"},
        {"facing, conductivity", "1.15 W/(m K)", "the same"},
        {"wood, conductivity", "0.12 W/(m K)", "the same"},
        {"insulation, conductivity", "0.029 W/(m K)", "the same"},
        {"aluminium, conductivity", "230 W/(m K)", "the same"},
        {"outside", "0 degC, Rse = 0.06 m2 K/W", "the same"},
        {"inside", "20 degC, Rsi = 0.11 m2 K/W", "the same"},
        {"temperatures, heat flow", "9 points, 9.5 W/m",
         "the same; all confirmed by an independent control-volume solution"},
    });

    const Body detail = iso_10211_case_2();
    const Field field = steady(detail);
    fmt::print("\n{}\n", report(detail, field));
    demo::picture("iso_10211", map_svg(field, {.title = "EN ISO 10211, Annex A, case 2"}));

    fmt::print("Beside the standard, which asks for 0.1 K and 0.1 W/m\n");
    fmt::print("  {:<5}  {:>22}  {:>9}  {:>9}  {:>10}\n", "point", "place [m]", "standard", "computed", "difference");
    demo::Checks checks;
    double worst = 0.0;
    for (const IsoPoint& p : iso_10211_case_2_points()) {
        const double T = field.at(p.place);
        worst = std::max(worst, std::abs(T - p.published));
        fmt::print("  {:<5}  {:>22}  {:>9.1f}  {:>9.3f}  {:>+10.3f}\n", p.name,
                   fmt::format("({}, {})", p.place.x, p.place.y), p.published, T, T - p.published);
    }
    const double heat = field[heat_out_through("top")];
    fmt::print("  {:<5}  {:>22}  {:>9.1f}  {:>9.3f}  {:>+10.3f}   W/m\n\n", "heat", "inside to outside",
               iso_10211_case_2_heat_flow, heat, heat - iso_10211_case_2_heat_flow);

    checks.holds(worst <= iso_10211_tolerance,
                 fmt::format("all 9 temperatures within 0.1 K (worst {:.3f} K; the standard "
                             "prints one decimal, so 0.05 K are its own rounding)",
                             worst));
    checks.holds(std::abs(heat - iso_10211_case_2_heat_flow) <= iso_10211_tolerance, "the heat flow within 0.1 W/m");

    const double finer = steady(iso_10211_case_2(0.005))[heat_out_through("top")];
    checks.holds(
        std::abs(finer - heat) <= 0.01 * heat,
        fmt::format("with cells of 5 mm instead of 20 mm the heat flow is {:.4f} W/m, {:.1e} of it away: the standard "
                    "asks for 1 percent",
                    finer, std::abs(finer - heat) / heat));
    checks.holds(field.balance().balanced(), "the heat balance closes within its limit");

    fmt::print("\nCautions\n"
               "  A program that meets a validation case can still be fed wrong details: surface resistances, joints, "
               "air gaps\n"
               "  and moisture decide in practice. Where condensation or mould matters, codes and a qualified person "
               "decide.\n");
    return checks.failed();
}
