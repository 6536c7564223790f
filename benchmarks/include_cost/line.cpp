// A wall in one dimension.
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

int main() {
    Body wall{layers<Segment<1>>({{.region = "brick", .thickness = 0.230, .cells = 8}})};
    wall.in("brick", Material{.conductivity = 1.1});
    wall.on("inner", Film{.coefficient = 90.0, .fluid = 1250.0});
    wall.on("outer", Film{.coefficient = 8.0, .fluid = 25.0});
    const Field field = steady(wall);
    return field[heat_out_through("outer")] > 0.0 ? 0 : 1;
}
