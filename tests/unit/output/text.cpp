#include <doctest/doctest.h>
#include <fmt/core.h>
#include <sstream>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/output/table.hpp>
#include <tepor/output/text.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

bool holds(const std::string& text, const std::string& words) {
    const bool found = text.find(words) != std::string::npos;
    if (!found) MESSAGE("missing: " << words << "\nin:\n" << text);
    return found;
}

const Parameter gas{"gas temperature", 900.0};

Body wall() {
    Body b{layers<Segment<1>>({{.region = "brick", .thickness = 0.2, .cells = 4}, {.region = "felt", .thickness = 0.1}},
                              Planar{.area = 2.0})};
    b.in("brick", Material{.conductivity = 1.2}).in("felt", Material{.conductivity = 0.15});
    b.between("brick", "felt", Contact{.resistance = 0.004});
    b.on("inner", Film{.coefficient = 50.0, .fluid = gas});
    b.on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    return b;
}

} // namespace

TEST_CASE("columns of a table are aligned, numbers by their decimals, in characters not bytes") {
    detail::TextTable table({"name", "W"});
    table.row({"a", 1234.5});
    table.row({"m\xC3\xBCller", -0.25});
    table.row({"zero", -1e-9});
    CHECK(table.text("") == "name          W\n"
                            "a       1234.50\n"
                            "m\xC3\xBCller    -0.25\n"
                            "zero       0.00\n");
    CHECK(detail::significant(-0.0) == "0");
    CHECK(detail::significant(0.0475) == "0.0475");
}

TEST_CASE("fmt and streams print a balance with its size, faces, sums, left over, limit and rounding floor") {
    const Field field = steady(wall());
    const Balance balance = field.balance();
    const std::string text = fmt::format("{}\n", balance);
    CHECK(text == to_text(balance) + "\n");
    std::ostringstream stream;
    stream << balance << '\n';
    CHECK(stream.str() == text);
    CHECK(holds(text, "Heat balance for 2 m2 of wall"));
    CHECK(holds(text, "\"inner\""));
    CHECK(holds(text, "by film"));
    CHECK(!balance.faces.empty());
    CHECK(holds(text, "in [W]"));
    CHECK(holds(text, "left over"));
    CHECK(holds(text, "balanced"));
    CHECK(holds(text, "gross traffic"));
    CHECK(holds(text, "rounding floor"));
    CHECK(text.find("by radiation") == std::string::npos); // no radiation, no column
}

TEST_CASE("a balance that does not close is printed as such") {
    Balance b = steady(wall()).balance();
    b.left_over = 1.0;
    CHECK(holds(to_text(b), "NOT BALANCED"));
}

TEST_CASE("the report of a body shows statements, present parameter values, temperatures and the balance") {
    Body body = wall();
    body.set(gas, 850.0);
    const Field field = steady(body);
    body.set(gas, 10.0); // the report speaks of the field
    const std::string text = report(body, field);
    CHECK(holds(text, "2 m2 of wall, 5 cells of order 1, 6 nodes, temperatures in degC"));
    CHECK(holds(text, "\"brick\": conductivity 1.2 W/(m K)"));
    CHECK(holds(text, "\"brick\" and \"felt\": contact resistance 0.004 m2 K/W"));
    CHECK(holds(text, "film 50 W/(m2 K) to 850 degC (parameter \"gas temperature\")"));
    CHECK(holds(text, "Solved in 1 pass"));
    CHECK(holds(text, "x = 0.3"));
    CHECK(holds(text, "Heat balance for 2 m2 of wall"));
    CHECK(holds(fmt::format("{}", body), "to 10 degC (parameter"));
    CHECK(holds(fmt::format("{}", field), "Temperatures [degC]"));
}

TEST_CASE("faces with nothing said, unbounded flows and generation are named in the balance") {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.2, 0.1});
    Body plate{tiles<Quadrilateral<1>>(drawing, {.size = 0.02}, Planar{.depth = 0.5}), TemperatureScale::kelvin};
    plate.in("plate", Material{.conductivity = 2.0});
    plate.in("plate", Generation{.total = 10.0});
    plate.on("left", FixedTemperature{400.0}).on("bottom", FixedTemperature{300.0});
    const std::string text = to_text(steady(plate));
    CHECK(holds(text, "Temperatures [K]"));
    CHECK(holds(text, "a depth of 0.5 m"));
    CHECK(holds(text, "adiabatic: nothing was said on it"));
    CHECK(holds(text, "unbounded at (0, 0), where two prescribed temperatures differ"));
    CHECK(holds(text, "generated [W]"));
}

TEST_CASE("a body that cannot be solved yet is printed with what is missing") {
    Body body{layers<Segment<1>>({{.region = "brick", .thickness = 0.2}})};
    CHECK(holds(to_text(body), "\"brick\": no material yet"));
    CHECK(holds(to_text(body), "not ready to be solved: region \"brick\" has no Material"));
}

TEST_CASE("a report refuses a field of another mesh") {
    CHECK_THROWS_AS((void)report(wall(), steady(wall())), Error);
}

TEST_CASE("a self-check is printed with build, verdicts, sources on request, and failed rows always") {
    SelfCheck check;
    check.build = build_facts();
    check.cases.push_back({"S1", "a slab", "a book", {{"T at 0.1 m", 50.0, 50.0, 1e-6, "degC"}}, ""});
    std::string text = to_text(check);
    CHECK(holds(text, "Self-check of tepor"));
    CHECK(holds(text, check.build.compiler));
    CHECK(holds(text, "ok     S1"));
    CHECK(holds(text, "self-check passed"));
    CHECK(text.find("a book") == std::string::npos);
    CHECK(holds(to_text(check, Detail::full), "source: a book"));
    CHECK(holds(to_text(check, Detail::full), "T at 0.1 m"));

    check.cases.push_back({"S2", "a pipe", "a book", {{"heat", 50.0, 51.0, 1e-6, "W"}}, ""});
    check.cases.push_back({"S3", "a ring", "a book", {}, "steady: not converged"});
    check.build.fast_math = true;
    text = fmt::format("{}", check);
    CHECK(holds(text, "FAILED S2"));
    CHECK(holds(text, "51"));
    CHECK(holds(text, "stopped: steady: not converged"));
    CHECK(holds(text, "fast-math"));
    CHECK(holds(text, "SELF-CHECK FAILED"));
}

TEST_CASE("a report ends with the quantities asked for and the cautions that the result asks for") {
    Body hot = wall();
    const Field field = steady(hot);
    const Quantity loss = heat_out_through("outer");
    const std::string text = report(hot, field, {loss, mean_on("outer").named("casing")});
    CHECK(holds(text, "Quantities\n"));
    CHECK(holds(text, "heat out through \"outer\""));
    CHECK(holds(text, fmt::format("{:.6g}", field[loss])));
    CHECK(holds(text, "casing"));
    CHECK(text.find("Heat balance") < text.find("Quantities"));
    CHECK(text.find("Quantities") < text.find("Cautions"));
    CHECK(field[hottest_on("outer")] > 80.0);
    CHECK(holds(text, fmt::format("\"outer\" reaches {:.1f} degC: it can burn", field[hottest_on("outer")])));
    CHECK(holds(text, "fire resistance are never decided"));
    CHECK(text.find("\"inner\" reaches") == std::string::npos); // nobody stands in gas of 900 degC
    CHECK(holds(text, "no better than 20 percent"));
    CHECK(text.find("pressure") == std::string::npos);
    hot.set(gas, 60.0);
    CHECK(cautions(steady(hot)).find("burn") == std::string::npos);
    CHECK_THROWS_AS((void)report(hot, field, {mean_on("nowhere")}), Error);
}

TEST_CASE("a hot pipe in kelvin is told to bear pressure perhaps, and its surface is judged in degrees Celsius") {
    Body pipe{layers<Segment<2>>({{.region = "steel", .thickness = 0.01}}, Cylindrical{}, {.start = 0.05}),
              TemperatureScale::kelvin};
    pipe.in("steel", Material{.conductivity = 40.0});
    pipe.on("inner", Film{.coefficient = 500.0, .fluid = 473.15})
        .on("outer", Film{.coefficient = 8.0, .fluid = 293.15});
    const std::string text = cautions(steady(pipe));
    CHECK(holds(text, "bear pressure"));
    CHECK(holds(text, "K: it can burn"));
    pipe.replace("inner", Film{.coefficient = 500.0, .fluid = 310.0});
    CHECK(cautions(steady(pipe)).find("burn") == std::string::npos); // 310 K is 37 degC
}
