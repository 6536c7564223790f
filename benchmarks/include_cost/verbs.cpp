// The umbrella header and every verb.
#include <tepor/tepor.hpp>

using namespace tepor;

int main() {
    Parameter gas{"gas", 80.0};
    Parameter power{"power", 500.0};
    Section section;
    section.add("plate", rectangle({0.0, 0.0}, {0.3, 0.2}));
    section.face("left", {0.0, 0.0}, {0.0, 0.2});
    section.face("top", {0.0, 0.2}, {0.3, 0.2});
    Body plate{triangulate<Triangle<1>>(section, {.size = 0.02})};
    plate.in("plate", Material{.conductivity = 45.0, .density = 7850.0, .specific_heat = 470.0});
    plate.in("plate", Generation{.total = power});
    plate.on("left", FixedTemperature{20.0});
    plate.on("top", Film{.coefficient = 30.0, .fluid = gas});
    const Quantity loss = heat_out_through("top");
    const Field field = steady(plate);
    March march{plate, initial(20.0), Theta{.step = 1.0}};
    const Input heater = march.drive(power);
    march.set(heater, 400.0);
    bool fine = march.advance().ok();
    const Gradient slope = gradient(field, loss);
    const Sized sized = size_for(plate, gas, loss, 10.0);
    const Bracket both = bracket(plate, loss, {.relative_width = 0.1});
    const Estimate near = estimate(plate, loss);
    const StateSpace plant =
        compact(plate, {.inputs = {power}, .outputs = {loss}, .sample_time = 1.0, .tolerance = 0.1});
    fine = fine && slope[gas] != 0.0 && both.lower <= both.upper;
    return fine ? 0 : 1;
}
