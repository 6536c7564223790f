#include <cstdint>
#include <cstdio>
#include <cstring>
#include <doctest/doctest.h>
#include <fstream>
#include <sstream>
#include <tepor/element/exact_segment.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/output/vtu.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>

using namespace tepor;

namespace {

/// The block of numbers that stands under a name.
template <class T>
std::vector<T> block(const std::string& vtu, const std::string& name) {
    const std::size_t at = vtu.find("Name=\"" + name + "\"");
    REQUIRE(at != std::string::npos);
    const std::size_t offset = vtu.find("offset=\"", at);
    const std::size_t base = vtu.find("<AppendedData encoding=\"raw\">\n_") + 31;
    const std::size_t from = base + static_cast<std::size_t>(std::atoll(vtu.c_str() + offset + 8));
    std::uint64_t bytes = 0;
    std::memcpy(&bytes, vtu.data() + from, sizeof bytes);
    REQUIRE(bytes % sizeof(T) == 0);
    std::vector<T> out(bytes / sizeof(T));
    std::memcpy(out.data(), vtu.data() + from + sizeof bytes, bytes);
    return out;
}

Body plate() {
    Tiles drawing;
    drawing.add("west", {0.0, 0.0}, {0.2, 0.2}).add("east", {0.2, 0.0}, {0.4, 0.2});
    Body b{tiles<Quadrilateral<3>>(drawing, {.size = 0.1})};
    for (const char* region : {"west", "east"})
        b.in(region, Material{.conductivity = 2.0, .density = 1000.0, .specific_heat = 900.0});
    b.between("west", "east", Contact{.conductance = 40.0});
    b.on("left", Film{.coefficient = 30.0, .fluid = 100.0}).on("right", Film{.coefficient = 10.0, .fluid = 20.0});
    return b;
}

} // namespace

TEST_CASE("a VTU file holds places, temperatures, regions and fluxes of a body of order 3 with a joint") {
    const Field field = steady(plate());
    const std::string vtu = vtu_bytes(field);
    const MeshData& mesh = field.mesh();
    const auto T = block<double>(vtu, "temperature [degC]");
    const auto places = block<double>(vtu, "places [m]");
    const auto cells = block<std::int64_t>(vtu, "connectivity");
    const auto types = block<std::uint8_t>(vtu, "types");
    const auto regions = block<std::int32_t>(vtu, "region");
    const auto flux = block<double>(vtu, "heat flux [W/m2]");
    CHECK(T.size() == mesh.nodes.size() + 7); // seven nodes on the joint have a second temperature
    CHECK(places.size() == 3 * T.size());
    CHECK(types == std::vector<std::uint8_t>(8, 70)); // VTK file formats: Lagrange quadrilateral
    CHECK(block<std::int64_t>(vtu, "offsets").back() == 8 * 16);
    CHECK(flux.size() == 24);
    CHECK(flux[0] == field.cell_heat_flux(0).x);
    const std::vector<double> own = field.cell_temperatures();
    for (std::size_t c = 0; c < 8; ++c) {
        CHECK(regions[c] == mesh.region[c]);
        for (std::size_t i = 0; i < 16; ++i) {
            const auto p = static_cast<std::size_t>(cells[16 * c + i]);
            const std::string& region = mesh.region_names[static_cast<std::size_t>(mesh.region[c])];
            CHECK(std::abs(T[p] - field.at({places[3 * p], places[3 * p + 1]}, region)) <= 1e-10);
            CHECK(places[3 * p + 2] == 0.0);
        }
    }
    CHECK(vtu.find("Name=\"TimeValue\" NumberOfTuples=\"1\" format=\"ascii\">0<") != std::string::npos);
    // "west", 0, "east", 0 as numbers
    CHECK(vtu.find(">119 101 115 116 0 101 97 115 116 0 <") != std::string::npos);
}

TEST_CASE("the exact cell is written as straight segments") {
    Body b{layers<ExactSegment>({{.region = "slab", .thickness = 0.2, .cells = 3}})};
    b.in("slab", Material{.conductivity = 1.0});
    b.on("inner", FixedTemperature{10.0}).on("outer", FixedTemperature{40.0});
    const std::string vtu = vtu_bytes(steady(b));
    CHECK(block<std::uint8_t>(vtu, "types") == std::vector<std::uint8_t>(3, 3)); // VTK file formats: line
    CHECK(block<double>(vtu, "temperature [degC]").size() == 4);
}

TEST_CASE("a series numbers its files and indexes them by time") {
    March march{plate(), initial(20.0), Theta{.theta = 0.5, .step = 60.0}};
    VtuSeries series("tepor_series_of_a_test");
    series.add(march.field());
    march.advance_to(600.0);
    series.add(march.field());
    std::ifstream in("tepor_series_of_a_test.csv");
    std::ostringstream index;
    index << in.rdbuf();
    CHECK(index.str() == "time [s],file\n0,tepor_series_of_a_test_0000.vtu\n600,tepor_series_of_a_test_0001.vtu\n");
    std::ifstream second(series.files()[1], std::ios::binary);
    std::ostringstream bytes;
    bytes << second.rdbuf();
    CHECK(bytes.str().find("format=\"ascii\">600<") != std::string::npos);
    CHECK(bytes.str() == vtu_bytes(march.field()));
    second.close();
    in.close();
    for (const std::string& file : series.files()) std::remove(file.c_str());
    std::remove("tepor_series_of_a_test.csv");
    VtuSeries nowhere("/nonexistent folder/a");
    CHECK_THROWS_WITH_AS(nowhere.add(march.field()), doctest::Contains("cannot write"), Error);
}
