// Broken models: statements that do not fit the body, its mesh or each other.
#include <cmath>
#include <tests/support/broken_models.hpp>

namespace tepor::test {

std::vector<Broken> broken_statements() {
    return {
        // ---- level
        {"level",
         "only fluxes",
         ErrorCode::no_level,
         "brick",
         {"Film", "temperature level", "FixedTemperature"},
         [] { solve(two().on("inner", Flux{.into = 1.0}).on("outer", Flux{.out_of = 1.0})); }},
        {"level", "nothing at all", ErrorCode::no_level, "brick", {"FixedTemperature"}, [] { solve(two()); }},
        {"level",
         "a film of coefficient zero",
         ErrorCode::no_level,
         "brick",
         {"Radiation"},
         [] { solve(two().on("outer", Film{.coefficient = 0.0, .fluid = 20.0})); }},
        {"level",
         "a piece without a hold",
         ErrorCode::no_level,
         "island",
         {"Contact", "island"},
         [] {
             Tiles drawing;
             drawing.add("plate", {0.0, 0.0}, {0.1, 0.1}).add("island", {0.2, 0.0}, {0.3, 0.1});
             Body body{tiles<Quadrilateral<1>>(drawing, {.size = 0.05})};
             body.in("plate", Material{.conductivity = 2.0}).in("island", Material{.conductivity = 2.0});
             solve(body.on("left", FixedTemperature{20.0}));
         }},
        // ---- name
        {"name",
         "a region that does not exist",
         ErrorCode::bad_name,
         "brik",
         {"\"brick\"", "\"felt\""},
         [] { two().in("brik", Generation{.total = 1.0}); }},
        {"name",
         "a face that does not exist",
         ErrorCode::bad_name,
         "outside",
         {"\"inner\"", "\"outer\""},
         [] { two().on("outside", Flux{.into = 1.0}); }},
        {"name",
         "a quantity of an unknown face",
         ErrorCode::bad_name,
         "shell",
         {"\"outer\"", "heat out through"},
         [] { (void)steady(sound())[heat_out_through("shell")]; }},
        {"name",
         "a quantity of an unknown region",
         ErrorCode::bad_name,
         "wool",
         {"\"felt\""},
         [] { (void)steady(sound())[mean_in("wool")]; }},
        {"name",
         "two parameters of one name",
         ErrorCode::bad_name,
         "taken",
         {"one Parameter object", "another name"},
         [] {
             solve(two().on("inner", FixedTemperature{taken}).on("outer", FixedTemperature{Parameter{"taken", 7.0}}));
         }},
        {"name",
         "a parameter without a name",
         ErrorCode::bad_name,
         "",
         {"give it the name"},
         [] { Parameter("", 1.0); }},
        // ---- geometry
        {"geometry",
         "a rectangle without area",
         ErrorCode::bad_geometry,
         "plate",
         {"two opposite corners"},
         [] {
             Tiles().add("plate", {0.0, 0.0}, {0.1, 0.0});
         }},
        {"geometry",
         "a cut beside the body",
         ErrorCode::bad_geometry,
         "duct",
         {"body"},
         [] {
             (void)tiles<Quadrilateral<1>>(square().cut({0.3, 0.3}, {0.4, 0.4}, "duct"), {.size = 0.05});
         }},
        {"geometry",
         "a face inside the body",
         ErrorCode::bad_geometry,
         "middle",
         {"edge"},
         [] {
             (void)tiles<Quadrilateral<1>>(square().face("middle", {0.0, 0.05}, {0.1, 0.05}), {.size = 0.05});
         }},
        {"geometry",
         "a clockwise triangle",
         ErrorCode::bad_mesh,
         "mesh",
         {"counter-clockwise", "cell 0"},
         [] {
             (void)triangles({{0, 0}, {1, 0}, {0, 1}}, {0, 2, 1});
         }},
        {"geometry",
         "a node that no cell uses",
         ErrorCode::bad_mesh,
         "mesh",
         {"remove it", "node 3"},
         [] {
             (void)triangles({{0, 0}, {1, 0}, {0, 1}, {5, 5}}, {0, 1, 2});
         }},
        {"geometry",
         "a place outside the body",
         ErrorCode::outside,
         "x = 5",
         {"metres"},
         [] { (void)steady(sound()).at(5.0); }},
        // ---- contact
        {"contact",
         "regions that share no side",
         ErrorCode::bad_contact,
         "brick",
         {"check the names or the drawing"},
         [] {
             Body body{layers<Segment<1>>({{.region = "brick", .thickness = 0.1},
                                           {.region = "felt", .thickness = 0.1},
                                           {.region = "steel", .thickness = 0.1}})};
             for (const char* r : {"brick", "felt", "steel"}) body.in(r, Material{.conductivity = 1.0});
             solve(body.between("brick", "steel", Contact{.conductance = 1.0}).on("inner", FixedTemperature{0.0}));
         }},
        {"contact",
         "a region with itself",
         ErrorCode::bad_contact,
         "brick",
         {"two different regions"},
         [] { two().between("brick", "brick", Contact{.conductance = 1.0}); }},
        {"contact",
         "neither conductance nor resistance",
         ErrorCode::missing,
         "brick",
         {".conductance", ".resistance"},
         [] { two().between("brick", "felt", Contact{}); }},
        {"contact",
         "the same contact twice, the other way round",
         ErrorCode::contradiction,
         "felt",
         {"replace()", "set()"},
         [] {
             two()
                 .between("brick", "felt", Contact{.conductance = 1.0})
                 .between("felt", "brick", Contact{.resistance = 1.0});
         }},
        {"contact",
         "a conductance of zero",
         ErrorCode::bad_value,
         "brick\" and \"felt",
         {"> 0"},
         [] { solve(two().between("brick", "felt", Contact{.conductance = 0.0}).on("inner", FixedTemperature{0.0})); }},
        // ---- contradictory faces
        {"contradictory faces",
         "two films",
         ErrorCode::contradiction,
         "outer",
         {"replace()", "also_on()", "Parameter"},
         [] { sound().on("outer", Film{.coefficient = 1.0, .fluid = 0.0}); }},
        {"contradictory faces",
         "two temperatures",
         ErrorCode::contradiction,
         "inner",
         {"replace()"},
         [] { sound().on("inner", FixedTemperature{1.0}); }},
        {"contradictory faces",
         "two temperatures through two faces of one edge",
         ErrorCode::contradiction,
         "part",
         {"keep one", "\"top\""},
         [] { solve(plate().on("top", FixedTemperature{1.0}).on("part", FixedTemperature{2.0})); }},
        {"contradictory faces",
         "two fluxes through two faces of one edge",
         ErrorCode::contradiction,
         "part",
         {"also_on", "\"top\""},
         [] {
             solve(
                 plate().on("left", FixedTemperature{0.0}).on("top", Flux{.into = 1.0}).on("part", Flux{.into = 2.0}));
         }},
        {"contradictory faces",
         "into and out of",
         ErrorCode::missing,
         "inner",
         {"either .into or .out_of"},
         [] { two().on("inner", Flux{.into = 1.0, .out_of = 1.0}); }},
        {"contradictory faces",
         "flow through a corner of two temperatures",
         ErrorCode::no_answer,
         "",
         {"ask for the faces together", "unbounded"},
         [] {
             (void)steady(plate()
                              .on("left", FixedTemperature{0.0})
                              .on("bottom", FixedTemperature{1.0}))[heat_out_through("left")];
         }},
        // ---- unused parameter
        {"unused parameter",
         "set, but in no statement",
         ErrorCode::unused,
         "stray",
         {"its parameters are", "\"taken\""},
         [] { two().on("inner", FixedTemperature{taken}).set(stray, 2.0); }},
        {"unused parameter",
         "set after it was replaced",
         ErrorCode::unused,
         "taken",
         {"its parameters are none"},
         [] { two().on("inner", FixedTemperature{taken}).replace("inner", FixedTemperature{3.0}).set(taken, 2.0); }},
        {"unused parameter",
         "a region painted over",
         ErrorCode::unused,
         "under",
         {"change the order or leave it out"},
         [] {
             Tiles drawing;
             drawing.add("under", {0.0, 0.0}, {0.1, 0.1}).add("over", {0.0, 0.0}, {0.1, 0.1});
             (void)tiles<Quadrilateral<1>>(drawing, {.size = 0.05});
         }},
        // ---- wrong dimension
        {"wrong dimension",
         "a conductivity per direction in 1D",
         ErrorCode::wrong_dimension,
         "brick",
         {"one number in 1D"},
         [] { solve(two({.conductivity = orthotropic(1.0, 2.0)}).on("inner", FixedTemperature{0.0})); }},
        {"wrong dimension",
         "a wetted perimeter in 2D",
         ErrorCode::wrong_dimension,
         "plate",
         {".thickness"},
         [] { solve(plate().in("plate", SideFilm{.coefficient = 1.0, .fluid = 0.0, .perimeter = 1.0})); }},
        {"wrong dimension",
         "a spherical drawing",
         ErrorCode::wrong_dimension,
         "tiles",
         {"Cylindrical"},
         [] { (void)tiles<Quadrilateral<1>>(square(), {.size = 0.05}, Spherical{}); }},
        {"wrong dimension",
         "a disc in 1D",
         ErrorCode::wrong_dimension,
         "mean around (0.1, 0)",
         {"at(x)"},
         [] {
             (void)steady(sound())[mean_around({0.1, 0.0}, 0.01)];
         }},
    };
}

} // namespace tepor::test
