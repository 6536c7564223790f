#include <cstdlib>
#include <doctest/doctest.h>
#include <sstream>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/output/csv.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

std::vector<std::string> lines_of(const std::string& text) {
    std::vector<std::string> out;
    std::istringstream in(text);
    for (std::string line; std::getline(in, line);) out.push_back(line);
    return out;
}

/// The fields of a line, quotes taken off (RFC 4180).
std::vector<std::string> fields_of(const std::string& line) {
    std::vector<std::string> out(1);
    bool quoted = false;
    for (std::size_t i = 0; i < line.size(); ++i) {
        if (line[i] == '"' && quoted && i + 1 < line.size() && line[i + 1] == '"') {
            out.back() += '"';
            ++i;
        } else if (line[i] == '"') {
            quoted = !quoted;
        } else if (line[i] == ',' && !quoted) {
            out.emplace_back();
        } else {
            out.back() += line[i];
        }
    }
    return out;
}

} // namespace

TEST_CASE(
    "the CSV of a field has units in its header and every node's temperature to the last bit, both sides of a joint") {
    Body b{layers<Segment<2>>(
        {{.region = "brick, \"hard\"", .thickness = 0.2, .cells = 2}, {.region = "felt", .thickness = 0.1}})};
    b.in("brick, \"hard\"", Material{.conductivity = 1.2}).in("felt", Material{.conductivity = 0.15});
    b.between("brick, \"hard\"", "felt", Contact{.resistance = 0.1});
    b.on("inner", FixedTemperature{900.0}).on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    const Field field = steady(b);
    const auto lines = lines_of(csv_of(field));
    CHECK(lines[0] == "node,region,x [m],temperature [degC]");
    REQUIRE(lines.size() == 1 + 7 + 1); // the node at the joint twice
    int at_joint = 0;
    for (std::size_t i = 1; i < lines.size(); ++i) {
        const auto f = fields_of(lines[i]);
        REQUIRE(f.size() == 4);
        const double x = std::atof(f[2].c_str());
        CHECK(std::abs(std::strtod(f[3].c_str(), nullptr) - field.at(x, f[1])) <= 1e-12 * 900.0);
        const double own = field.node_temperatures()[static_cast<std::size_t>(std::atoi(f[0].c_str()))];
        if (x == 0.2)
            ++at_joint;
        else
            CHECK(std::strtod(f[3].c_str(), nullptr) == own);
    }
    CHECK(at_joint == 2);
}

TEST_CASE("the CSV of a plane body in kelvin has x, y and K") {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.2, 0.1});
    Body b{tiles<Quadrilateral<1>>(drawing, {.size = 0.1}), TemperatureScale::kelvin};
    b.in("plate", Material{.conductivity = 1.2});
    b.on("left", FixedTemperature{300.0}).on("right", FixedTemperature{340.0});
    const auto lines = lines_of(csv_of(steady(b)));
    CHECK(lines[0] == "node,region,x [m],y [m],temperature [K]");
    CHECK(lines.size() == 7);
    CHECK(fields_of(lines[2])[2] == "0.10000000000000001");
}

TEST_CASE("the CSV of a record has the label and unit of each quantity and every value to the last bit") {
    Record record({mean_on("top"), heat_out_through("top").named("loss, upper")});
    record.add(0.0, {20.0, 0.1});
    record.add(1.0 / 3.0, {20.0 + 1.0 / 7.0, -1e-300});
    const auto lines = lines_of(csv_of(record));
    REQUIRE(lines.size() == 3);
    const auto head = fields_of(lines[0]);
    REQUIRE(head.size() == 3);
    CHECK(head[0] == "time [s]");
    CHECK(head[1] == "mean on \"top\" [degC]");
    CHECK(head[2] == "loss, upper [W]");
    const auto last = fields_of(lines[2]);
    CHECK(std::strtod(last[0].c_str(), nullptr) == 1.0 / 3.0);
    CHECK(std::strtod(last[1].c_str(), nullptr) == 20.0 + 1.0 / 7.0);
    CHECK(std::strtod(last[2].c_str(), nullptr) == -1e-300);
}
