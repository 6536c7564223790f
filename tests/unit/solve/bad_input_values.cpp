// Broken models: values that cannot be.
#include <cmath>
#include <tests/support/broken_models.hpp>

namespace tepor::test {

std::vector<Broken> broken_values() {
    return {
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

} // namespace tepor::test
