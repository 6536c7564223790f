// From a drawing to a guaranteed interval: the heat a floor heating pipe gives to the room, whatever the mesh.

#include "numbers.hpp"
#include <fmt/core.h>
#include <tepor/tepor.hpp>

using namespace tepor;

int main() {
    // One pipe of a floor heating and half the distance to the next on both sides; metres.
    Section floor;
    floor.add("screed", rectangle({0.0, 0.03}, {0.15, 0.095}));
    floor.add("insulation", rectangle({0.0, 0.0}, {0.15, 0.03}));
    floor.cut(circle({0.075, 0.045}, 0.008), "water");
    floor.face("room", {0.0, 0.095}, {0.15, 0.095});
    floor.face("below", {0.0, 0.0}, {0.15, 0.0});

    Body body{triangulate<Triangle<2>>(floor, {.size = 0.02}, Planar{.depth = 1.0})};
    body.in("screed", Material{.conductivity = 1.2}); // W/(m K)
    body.in("insulation", Material{.conductivity = 0.035});
    body.on("water", Film{.coefficient = 900.0, .fluid = 38.0}); // W/(m2 K), degC
    body.on("room", Film{.coefficient = 10.8, .fluid = 20.0});
    body.on("below", Film{.coefficient = 5.9, .fluid = 15.0});

    const Bracket heat = bracket(body, heat_out_through("room"), {.relative_width = 0.001});
    fmt::print("to the room: between {:.4f} and {:.4f} W per metre of pipe\n", heat.lower, heat.upper);
    fmt::print("found on {} cells in {} passes; the interval is {}\n", heat.cells, heat.passes.size(), heat.remark);

    const Bracket surface = bracket(body, at({0.075, 0.095 - 0.001}), {.absolute_width = 0.01});
    fmt::print("1 mm under the surface above the pipe: between {:.3f} and {:.3f} degC\n", surface.lower, surface.upper);

    example::number("heat, lower", heat.lower);
    example::number("heat, upper", heat.upper);
    example::number("cells", static_cast<double>(heat.cells));
    example::number("surface, lower", surface.lower);
    example::number("surface, upper", surface.upper);

    // By hand: what the water gives leaves upwards or downwards.
    const Bracket water = bracket(body, heat_in_through("water"), {.relative_width = 0.001});
    const Bracket below = bracket(body, heat_out_through("below"), {.relative_width = 0.01});
    const double gap = water.value - heat.value - below.value;
    return heat.reached && surface.reached && gap <= water.width() + heat.width() + below.width() ? 0 : 1;
}
