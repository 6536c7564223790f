// Broken models: each is refused with its code, the offender's name, and a word that says what to do.
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <string>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <vector>

using namespace tepor;

namespace {

constexpr double nan = std::numeric_limits<double>::quiet_NaN();

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
Body two(Material first = {.conductivity = 1.0}, Material second = {.conductivity = 2.0}) {
    Body body{
        layers<Segment<1>>({{.region = "brick", .thickness = 0.1, .cells = 2}, {.region = "felt", .thickness = 0.1}})};
    body.in("brick", std::move(first)).in("felt", std::move(second));
    return body;
}

/// The same, held at both ends: sound.
Body sound() {
    Body body = two();
    body.on("inner", FixedTemperature{100.0}).on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    return body;
}

void solve(const Body& body) {
    (void)steady(body);
}

Tiles square() {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.1, 0.1}).face("part", {0.0, 0.1}, {0.05, 0.1});
    return drawing;
}

Body plate() {
    Body body{tiles<Quadrilateral<1>>(square(), {.size = 0.05})};
    body.in("plate", Material{.conductivity = 2.0});
    return body;
}

Mesh<Triangle<1>> triangles(std::vector<Point> nodes, std::vector<Id> cells) {
    MeshArrays arrays;
    arrays.nodes = std::move(nodes);
    arrays.cells = std::move(cells);
    return mesh_from_arrays<Triangle<1>>(std::move(arrays));
}

const Parameter stray{"stray", 1.0};
const Parameter taken{"taken", 5.0};

std::vector<Broken> table_of_broken_models() {
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
        // ---- sign
        {"sign",
         "a negative conductivity",
         ErrorCode::bad_value,
         "brick",
         {"check value and unit", "> 0"},
         [] { solve(two({.conductivity = -1.0}).on("inner", FixedTemperature{0.0})); }},
        {"sign",
         "a negative film coefficient",
         ErrorCode::bad_value,
         "outer",
         {"check value and unit", ">= 0"},
         [] { solve(two().on("outer", Film{.coefficient = -8.0, .fluid = 20.0})); }},
        {"sign",
         "a negative thickness",
         ErrorCode::bad_value,
         "brick",
         {"> 0"},
         [] { (void)layers<Segment<1>>({{.region = "brick", .thickness = -0.1}}); }},
        {"sign",
         "a parameter set to a negative conductivity",
         ErrorCode::bad_value,
         "k",
         {"check value and unit"},
         [] {
             const Parameter k{"k", 1.0};
             two({.conductivity = k}).on("inner", FixedTemperature{0.0}).set(k, -2.0);
         }},
        {"sign",
         "a table that dips below zero",
         ErrorCode::bad_value,
         "brick",
         {"> 0"},
         [] {
             solve(two({.conductivity = table({{0, 1.0}, {100, -1.0}})}).on("inner", FixedTemperature{0.0}));
         }},
        // ---- unit scale
        {"unit scale",
         "an emissivity in percent",
         ErrorCode::bad_unit,
         "outer",
         {"0 to 1", "percent"},
         [] { two().on("outer", Radiation{.emissivity = 85.0, .surroundings = 20.0}); }},
        {"unit scale",
         "a specific heat in kJ",
         ErrorCode::bad_unit,
         "brick",
         {"multiply by 1000"},
         [] {
             solve(two({.conductivity = 1.0, .density = 2000.0, .specific_heat = 0.96})
                       .on("inner", FixedTemperature{0.0}));
         }},
        {"unit scale",
         "degrees Celsius on a radiating face of a kelvin body",
         ErrorCode::bad_unit,
         "outer",
         {"kelvin(25)"},
         [] {
             Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.1}}), TemperatureScale::kelvin};
             body.in("bar", Material{.conductivity = 1.0});
             solve(body.on("outer", Radiation{.emissivity = 0.9, .surroundings = 25.0}));
         }},
        {"unit scale",
         "a temperature below absolute zero",
         ErrorCode::bad_value,
         "inner",
         {"-273.15 degC"},
         [] { solve(two().on("inner", FixedTemperature{-300.0})); }},
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
        // ---- table range
        {"table range",
         "conductivity hotter than its table",
         ErrorCode::outside_table,
         "conductivity of \"brick\"",
         {"extend the table", "Outside::hold", "in cell"},
         [] {
             solve(two({.conductivity = table({{20, 1.0}, {60, 1.2}})})
                       .on("inner", FixedTemperature{100.0})
                       .on("outer", FixedTemperature{20.0}));
         }},
        {"table range",
         "a film colder than its table",
         ErrorCode::outside_table,
         "film coefficient on \"outer\"",
         {"extend the table", "50 to 90"},
         [] {
             solve(two()
                       .on("inner", FixedTemperature{30.0})
                       .on("outer", Film{.coefficient = table({{50, 1.0}, {90, 1.2}}), .fluid = 10.0}));
         }},
        {"table range",
         "temperatures that do not rise",
         ErrorCode::bad_value,
         "table",
         {"sort the points"},
         [] {
             (void)table({{100, 1.0}, {50, 2.0}});
         }},
        {"table range",
         "an emissivity hotter than its table",
         ErrorCode::outside_table,
         "emissivity on \"outer\"",
         {"extend the table"},
         [] {
             solve(two()
                       .on("inner", FixedTemperature{500.0})
                       .on("outer", Radiation{.emissivity = table({{0, 0.8}, {90, 0.9}}), .surroundings = 10.0}));
         }},
        // ---- law returning NaN
        {"law returning NaN",
         "a conductivity",
         ErrorCode::bad_law,
         "my law",
         {"guard the law", "nan", "in cell", "temperature"},
         [] {
             solve(two({.conductivity = law([](const auto& s) { return sqrt(s.temperature - 50.0); }).named("my law")})
                       .on("inner", FixedTemperature{0.0})
                       .on("outer", FixedTemperature{20.0}));
         }},
        {"law returning NaN",
         "a source of place",
         ErrorCode::bad_law,
         "own law",
         {"guard the law", "generation in \"felt\""},
         [] {
             solve(
                 sound().in("felt", Generation{.per_volume = of_place([](const auto& p) { return log(p.x - 1.0); })}));
         }},
        {"law returning NaN",
         "a film of plain doubles",
         ErrorCode::bad_law,
         "own law",
         {"guard the law", "film coefficient"},
         [] {
             solve(two()
                       .on("inner", FixedTemperature{0.0})
                       .on("outer", Film{.coefficient = law([](const Spot&) { return nan; }), .fluid = 1.0}));
         }},
        {"law returning NaN",
         "a negative emissivity",
         ErrorCode::bad_law,
         "own law",
         {"from 0 to 1", "guard the law"},
         [] {
             solve(
                 two()
                     .on("inner", FixedTemperature{0.0})
                     .on("outer", Radiation{.emissivity = law([](const auto& s) { return -0.1 + 0.0 * s.temperature; }),
                                            .surroundings = 1.0}));
         }},
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
        // ---- missing
        {"missing",
         "no material",
         ErrorCode::missing,
         "bar",
         {"Material{.conductivity"},
         [] {
             Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.1}})};
             solve(body.on("inner", FixedTemperature{0.0}));
         }},
        {"missing",
         "a material without conductivity",
         ErrorCode::missing,
         "brick",
         {".conductivity"},
         [] { solve(two({.density = 1.0}).on("inner", FixedTemperature{0.0})); }},
        {"missing",
         "a film without fluid",
         ErrorCode::missing,
         "outer",
         {".fluid"},
         [] { two().on("outer", Film{.coefficient = 1.0}); }},
        // ---- not finite
        {"not finite",
         "a NaN temperature",
         ErrorCode::bad_value,
         "inner",
         {"check value and unit"},
         [] { solve(two().on("inner", FixedTemperature{nan})); }},
        {"not finite",
         "an infinite parameter",
         ErrorCode::bad_value,
         "big",
         {"finite"},
         [] { Parameter("big", std::numeric_limits<double>::infinity()); }},
        {"not finite",
         "a tolerance of zero",
         ErrorCode::bad_value,
         "tolerance",
         {"0 < tolerance < 1"},
         [] {
             SteadyOptions options;
             options.tolerance = 0.0;
             (void)steady(sound(), options);
         }},
    };
}

} // namespace

TEST_CASE("every broken model is refused with its code, its offender and the remedy") {
    for (const Broken& broken : table_of_broken_models()) {
        CAPTURE(broken.group);
        CAPTURE(broken.what);
        try {
            broken.write();
            FAIL_CHECK("no error");
        } catch (const Error& error) {
            const std::string message = error.what();
            CAPTURE(message);
            CHECK(std::string(name_of(error.code())) == name_of(broken.code));
            CHECK(error.offender() == broken.offender);
            for (const std::string& word : broken.words) {
                CAPTURE(word);
                CHECK(message.find(word) != std::string::npos);
            }
        }
    }
}

TEST_CASE("the table of broken models has thirty and more, at least two of each group") {
    const std::vector<Broken> all = table_of_broken_models();
    CHECK(all.size() >= 30);
    for (const char* group : {"level", "name", "sign", "unit scale", "geometry", "contact", "table range",
                              "law returning NaN", "contradictory faces", "unused parameter", "wrong dimension"}) {
        CAPTURE(group);
        int count = 0;
        for (const Broken& broken : all) count += broken.group == group ? 1 : 0;
        CHECK(count >= 2);
    }
    CHECK_NOTHROW(solve(sound()));
}
