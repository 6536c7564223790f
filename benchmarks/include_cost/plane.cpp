// The umbrella header and a body in two dimensions.
#include <tepor/tepor.hpp>

using namespace tepor;

int main() {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.3, 0.2});
    Body plate{tiles<Triangle<1>>(drawing, {.size = 0.01})};
    plate.in("plate", Material{.conductivity = 45.0});
    plate.on("left", FixedTemperature{80.0});
    plate.on("top", Film{.coefficient = 30.0, .fluid = 20.0});
    const Field field = steady(plate);
    return field[heat_out_through("top")] > 0.0 ? 0 : 1;
}
