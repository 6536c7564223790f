#pragma once
// Broken models: what a user writes, and what the answer must hold.

#include <limits>
#include <string>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <utility>
#include <vector>

namespace tepor::test {

inline constexpr double nan = std::numeric_limits<double>::quiet_NaN();

/// One wrong model: what a user writes, and what the answer must hold.
struct Broken {
    std::string group;
    std::string what;
    ErrorCode code;
    std::string offender;
    std::vector<std::string> words; ///< the first says the remedy
    void (*write)();
};

/// Two slabs, 0.1 m each, nothing said but the materials.
inline Body two(Material first = {.conductivity = 1.0}, Material second = {.conductivity = 2.0}) {
    Body body{
        layers<Segment<1>>({{.region = "brick", .thickness = 0.1, .cells = 2}, {.region = "felt", .thickness = 0.1}})};
    body.in("brick", std::move(first)).in("felt", std::move(second));
    return body;
}

/// The same, held at both ends: sound.
inline Body sound() {
    Body body = two();
    body.on("inner", FixedTemperature{100.0}).on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    return body;
}

inline void solve(const Body& body) {
    (void)steady(body);
}

inline Tiles square() {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.1, 0.1}).face("part", {0.0, 0.1}, {0.05, 0.1});
    return drawing;
}

inline Body plate() {
    Body body{tiles<Quadrilateral<1>>(square(), {.size = 0.05})};
    body.in("plate", Material{.conductivity = 2.0});
    return body;
}

inline Mesh<Triangle<1>> triangles(std::vector<Point> nodes, std::vector<Id> cells) {
    MeshArrays arrays;
    arrays.nodes = std::move(nodes);
    arrays.cells = std::move(cells);
    return mesh_from_arrays<Triangle<1>>(std::move(arrays));
}

inline const Parameter stray{"stray", 1.0};
inline const Parameter taken{"taken", 5.0};

/// The table, in two parts: wrong values, and wrong statements about a body and its mesh.
std::vector<Broken> broken_values();
std::vector<Broken> broken_statements();

} // namespace tepor::test
