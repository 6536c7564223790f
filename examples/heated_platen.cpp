// A heated platen: a plane section marched under control, its useful heat bracketed, a small model of it for the controller.

#include "numbers.hpp"
#include <algorithm>
#include <cmath>
#include <fmt/core.h>
#include <tepor/output/text.hpp>
#include <tepor/tepor.hpp>
using namespace tepor;

namespace {

// Proportional heating towards 60 degC, between off and 2500 W.
double control_law(double temperature) noexcept {
    return std::clamp(200.0 * (60.0 - temperature), 0.0, 2500.0);
}

void trip(Verdict verdict) {
    fmt::print("heaters off: {}\n", text_of(verdict));
}

} // namespace

int main() {
    Parameter power{"heater power", 500.0}; // W in all heaters together, for the stated depth
    Section section;
    section.add("platen", rectangle({0.0, 0.0}, {0.60, 0.06}));
    for (double x : {0.06, 0.18, 0.30, 0.42, 0.54}) section.add("heater", circle({x, 0.03}, 0.008));
    section.cut(circle({0.12, 0.03}, 0.005), "coolant"); // a hole; its edge is the face "coolant"
    section.face("working face", {0.0, 0.06}, {0.60, 0.06});
    Body platen{triangulate<Triangle<2>>(section, {.size = 0.008}, Planar{.depth = 0.40})};
    platen.in("platen", Material{.conductivity = 45.0, .density = 7850, .specific_heat = 470});
    platen.in("heater", Material{.conductivity = 16.0, .density = 7900, .specific_heat = 500});
    platen.in("heater", Generation{.total = power});
    platen.on("working face", Film{.coefficient = 25.0, .fluid = 22.0});
    platen.on("coolant", Film{.coefficient = 1500.0, .fluid = 18.0});
    Quantity sensor = at({0.30, 0.055});
    Quantity useful = heat_out_through("working face");

    March march{platen, initial(22.0), Theta{.theta = 0.5, .step = 2.0}};
    Probe reading = march.watch(sensor); // names and places are resolved here, once
    Input heater = march.drive(power);
    while (march.time() < 1800.0) {
        march.set(heater, control_law(march[reading])); // noexcept, no allocation, bounded time
        if (Step step = march.advance(); !step.ok()) {
            trip(step.verdict());
            return 1;
        }
    }
    const double held = march[reading];
    fmt::print("after half an hour: {:.1f} degC at the sensor\n", held);

    Bracket certain = bracket(platen, useful, {.relative_width = 0.01}); // refines until upper - lower is small enough
    fmt::print("at 500 W between {:.1f} and {:.1f} W leave through the working face\n", certain.lower, certain.upper);
    StateSpace plant = compact(platen, {.inputs = {power}, .outputs = {sensor}, .sample_time = 1.0, .tolerance = 1e-3});
    fmt::print("{} states follow the sensor within {:.2g} degC of the largest gain\n", plant.order, plant.error_bound);

    example::number("after half an hour", held);
    example::number("lower", certain.lower);
    example::number("upper", certain.upper);
    example::number("states", static_cast<double>(plant.order));
    example::number("error bound", plant.error_bound);

    // The march against its own heat account, and the interval against the steady heat of a mesh with round bores, which
    // differs from that of the bracket's polygons by far less than the width asked for.
    const double heat = steady(platen)[useful];
    const bool inside = certain.lower - 0.002 * heat <= heat && heat <= certain.upper + 0.002 * heat;
    return march.balance().balanced() && held > 55.0 && held < 60.0 && certain.reached && inside ? 0 : 1;
}
