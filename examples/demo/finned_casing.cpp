// Demonstration: a finned aluminium profile on a steel block with a hole for hot oil. Drawn in fifteen lines, and its heat flow
// with guaranteed lower and upper bounds: the exact value for this drawing lies between them, mesh, solver and rounding included.

#include "inputs.hpp"
#include "pictures.hpp"
#include <cmath>
#include <tepor/output/text.hpp>
#include <tepor/tepor.hpp>

using namespace tepor;

int main() {
    fmt::print("A finned profile on a block heated by oil: guaranteed bounds of the heat flow\n\n");
    demo::print({
        {"steel block", "120 x 50 mm, 45 W/(m K)", demo::practice},
        {"aluminium profile", "6 fins 3 x 30 mm on a 6 mm base, 200 W/(m K)", demo::practice},
        {"joint between them", "3000 W/(m2 K), dry", demo::practice},
        {"oil in the hole of 24 mm", "180 degC, film 400 W/(m2 K)", demo::practice},
        {"air around", "25 degC, film 12 W/(m2 K)", demo::practice},
        {"length of the profile", "0.5 m", demo::practice},
    });

    // The drawing, in metres
    Section section;
    section.add("steel", rectangle({0.0, 0.0}, {0.120, 0.050}));
    section.add("aluminium", rectangle({0.0, 0.050}, {0.120, 0.056}));
    for (int fin = 0; fin < 6; ++fin) {
        const double x = 0.0085 + 0.020 * fin;
        section.add("aluminium", rectangle({x, 0.056}, {x + 0.003, 0.086}));
    }
    section.cut(circle({0.060, 0.025}, 0.012), "oil");
    section.rest("air");

    Body body{triangulate<Triangle<2>>(section, {.size = 0.01}, Planar{.depth = 0.5})};
    body.in("steel", Material{.conductivity = 45.0}).in("aluminium", Material{.conductivity = 200.0});
    body.between("steel", "aluminium", Contact{.conductance = 3000.0});
    body.on("oil", Film{.coefficient = 400.0, .fluid = 180.0}).on("air", Film{.coefficient = 12.0, .fluid = 25.0});

    demo::picture("finned_casing", map_svg(steady(body), {.title = "Finned profile on a block heated by oil"}));
    const Bracket heat = bracket(body, heat_out_through("air"), {.relative_width = 0.01});
    fmt::print("\nHeat to the air: {:.3f} .. {:.3f} W, to 1 %\n", heat.lower, heat.upper);
    fmt::print("  {:>8}  {:>10}  {:>12}  {:>12}\n", "cells", "unknowns", "lower [W]", "upper [W]");
    for (const BracketPass& pass : heat.passes)
        fmt::print("  {:>8}  {:>10}  {:>12.3f}  {:>12.3f}\n", pass.cells, pass.unknowns, pass.lower, pass.upper);
    fmt::print("  The interval is {}.\n", heat.remark);

    const Bracket sharp = bracket(body, heat_out_through("air"), {.relative_width = 1e-5});
    const Bracket joint = bracket(body, heat_from("steel", "aluminium"), {.relative_width = 1e-4});
    const Bracket tip = bracket(body, at({0.060 + 0.010, 0.080}), {.absolute_width = 0.01});
    fmt::print("\nThe same to 0.001 %:     {:.5f} .. {:.5f} W on {} cells\n", sharp.lower, sharp.upper, sharp.cells);
    fmt::print("Through the joint:       {:.4f} .. {:.4f} W\n", joint.lower, joint.upper);
    fmt::print("In the fourth fin:       {:.3f} .. {:.3f} degC, 6 mm below its tip\n", tip.lower, tip.upper);

    fmt::print("\nChecks by hand\n");
    demo::Checks checks;
    checks.holds(heat.reached && heat.width() <= 0.01 * heat.value, "the interval is at most 1 % wide");
    checks.holds(sharp.lower >= heat.lower && sharp.upper <= heat.upper, "the sharper interval lies inside the first");
    // Everything at the oil's temperature would give the most; films in series the least resistance
    const double hole = pi * 0.024 * 0.5, skin = 2 * (0.120 + 0.056) * 0.5 + 12 * 0.030 * 0.5;
    const double most = 155.0 / (1.0 / (400.0 * hole) + 1.0 / (12.0 * skin));
    checks.holds(heat.upper < most, fmt::format("it is below {:.1f} W, what the two films alone would let pass", most));
    checks.holds(joint.upper < sharp.lower, "part of the heat leaves through the steel, past the joint");
    const Bracket in = bracket(body, heat_in_through("oil"), {.relative_width = 1e-5});
    checks.holds(std::abs(in.value - sharp.value) <= in.width() + sharp.width(),
                 "what the oil gives is what the air takes");
    return checks.failed();
}
