// Compact models as C source and as CSV.

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <doctest/doctest.h>
#include <filesystem>
#include <fstream>
#include <random>
#include <sstream>
#include <tepor/answers/compact.hpp>
#include <tests/support/refused.hpp>
#include <tests/support/two_alloy_plate.hpp>

using namespace tepor;
using namespace tepor::test::two_alloys;

namespace {

const char* driver =
    "\n#include <stdio.h>\nint main(void) {\n    plate_state s;\n    double u[4], y[4];\n    int k;\n"
    "    plate_reset(&s);\n    for (k = 0; k < 200; ++k) {\n        u[0] = 40.0 + (k % 7) * 3.5;\n"
    "        u[1] = 40.0 - (k % 5);\n        u[2] = 0.25 * k;\n        u[3] = 20.0 + 0.125 * (k % 3);\n"
    "        plate_advance(&s, u, y);\n"
    "        printf(\"%a %a %a %a\\n\", y[0], y[1], y[2], y[3]);\n    }\n    return 0;\n}\n";

/// The outputs of the C program over its 200 steps; empty when it does not compile or run.
std::vector<double> run_c(const std::string& source, const std::string& flags) {
    std::random_device chance;
    const std::filesystem::path where =
        std::filesystem::temp_directory_path() / ("compact_c_source_" + std::to_string(chance()));
    std::filesystem::create_directories(where);
    std::ofstream(where / "plate.c") << source << driver;
    const std::string dir = where.string();
    std::vector<double> out;
    if (std::system(("cc -std=c99 -pedantic -Wall -Wextra -Werror -O2 " + flags + " -o '" + dir + "/run' '" + dir +
                     "/plate.c' && '" + dir + "/run' > '" + dir + "/out'")
                        .c_str()) == 0) {
        std::ifstream in(where / "out");
        for (std::string word; in >> word;) out.push_back(std::strtod(word.c_str(), nullptr));
    }
    std::filesystem::remove_all(where);
    return out;
}

} // namespace

TEST_CASE(
    "the C source compiles as C99 and gives the bits of advance, and its numbers where products and sums are fused") {
    StateSpace model = compact(plate(0.02), plate_options());
    const std::string source = model.c_source("plate");
    CHECK(source.find("0x1.") != std::string::npos);
    CHECK(source.find("plate_advance(plate_state *s, const double *u, double *y)") != std::string::npos);
    test::check_refused([&] { (void)model.c_source("2 plate"); }, ErrorCode::bad_name, "2 plate", "C identifier");
    if (std::system("cc --version > /dev/null 2>&1") != 0) return; // no C compiler here
    std::vector<double> here;
    for (int k = 0; k < 200; ++k)
        for (const double y : model.advance({40.0 + (k % 7) * 3.5, 40.0 - (k % 5), 0.25 * k, 20.0 + 0.125 * (k % 3)}))
            here.push_back(y);
    double scale = 0.0;
    for (const double y : here) scale = std::max(scale, std::abs(y));
    const auto largest = [&](const std::vector<double>& c) {
        REQUIRE(c.size() == here.size());
        double most = 0.0;
        for (std::size_t i = 0; i < here.size(); ++i) most = std::max(most, std::abs(c[i] - here[i]));
        return most;
    };
    const std::vector<double> plain = run_c(source, "-ffp-contract=off");
    CHECK(largest(plain) <= 1e-13 * scale);
#if !defined(__FMA__)
    CHECK(largest(plain) == 0.0);
#endif
    const std::vector<double> fused = run_c(source, "-march=native -ffp-contract=fast");
    CHECK(largest(fused) <= 1e-13 * scale);
}

TEST_CASE("the CSV holds every number of the model to the last bit") {
    const StateSpace model = compact(plate(0.02), plate_options());
    std::istringstream lines(model.csv());
    std::string line;
    REQUIRE(std::getline(lines, line));
    CHECK(line == "name,row,values");
    std::vector<double> A, B, C, D, u0, y0, rest;
    while (std::getline(lines, line)) {
        std::istringstream cells(line);
        std::string name, row, cell;
        std::getline(cells, name, ',');
        std::getline(cells, row, ',');
        std::vector<double>& to = name == "A"    ? A
                                  : name == "B"  ? B
                                  : name == "C"  ? C
                                  : name == "D"  ? D
                                  : name == "u0" ? u0
                                  : name == "y0" ? y0
                                                 : rest;
        while (std::getline(cells, cell, ',')) to.push_back(std::strtod(cell.c_str(), nullptr));
    }
    CHECK(A == model.A);
    CHECK(B == model.B);
    CHECK(C == model.C);
    CHECK(D == model.D);
    CHECK(u0 == model.u0);
    CHECK(y0 == model.y0);
    std::vector<double> expected = model.x0;
    expected.push_back(model.sample_time);
    expected.push_back(model.error_bound);
    CHECK(rest == expected);
}
