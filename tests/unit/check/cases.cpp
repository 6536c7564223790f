#include <algorithm>
#include <doctest/doctest.h>
#include <string>
#include <tepor/check/cases.hpp>
#include <vector>

using namespace tepor;

namespace {

/// Runs the case of an id and checks every row.
void run(const std::string& id) {
    for (const CheckCase& c : verified_cases()) {
        if (c.id != id) continue;
        CAPTURE(c.title);
        CAPTURE(c.source);
        const std::vector<CheckRow> rows = c.run();
        CHECK(!rows.empty());
        for (const CheckRow& row : rows) {
            CAPTURE(row.what);
            CAPTURE(row.expected);
            CAPTURE(row.got);
            CAPTURE(row.tolerance);
            CHECK(row.passed());
        }
        return;
    }
    FAIL("there is no case " << id);
}

} // namespace

TEST_CASE("every verified case has an id of its own, a title, a source and a run") {
    std::vector<std::string> ids;
    for (const CheckCase& c : verified_cases()) {
        CHECK(!c.id.empty());
        CHECK(!c.title.empty());
        CHECK(!c.source.empty());
        CHECK((c.run != nullptr));
        CHECK(std::find(ids.begin(), ids.end(), c.id) == ids.end());
        ids.push_back(c.id);
    }
    CHECK(ids.size() >= 20);
}

TEST_CASE("S1D-01: a generating slab is exact at the nodes, order 2 also between them") {
    run("S1D-01");
}
TEST_CASE("S1D-02: nodes stay exact on unequal cells with a source falling exponentially") {
    run("S1D-02");
}
TEST_CASE("S1D-03: resistances in series, a contact among them") {
    run("S1D-03");
}
TEST_CASE("S1D-04: a generating hollow cylinder, its maximum and its place") {
    run("S1D-04");
}
TEST_CASE("S1D-05: a cold sphere of two layers") {
    run("S1D-05");
}
TEST_CASE("S1D-06: insulation about its critical radius, its thickness a parameter") {
    run("S1D-06");
}
TEST_CASE("S1D-07: conductivity linear in temperature is exact at equal nodes") {
    run("S1D-07");
}
TEST_CASE("S1D-08: a generating cylinder whose conductivity falls with temperature") {
    run("S1D-08");
}
TEST_CASE("S1D-09: a straight fin with a convecting tip") {
    run("S1D-09");
}
TEST_CASE("S1D-10: annular fins") {
    run("S1D-10");
}
TEST_CASE("S1D-E1: slabs with one exact cell per layer keep every digit of the sources") {
    run("S1D-E1");
}
TEST_CASE("S1D-E2: cylinders, a sphere and a fin with one exact cell per layer keep every digit of the sources") {
    run("S1D-E2");
}
TEST_CASE("S2D-19: a rectangle with one hot side") {
    run("S2D-19");
}
TEST_CASE("S2D-20: a generating square") {
    run("S2D-20");
}
TEST_CASE("S2D-21: shape factors of concentric squares") {
    run("S2D-21");
}
TEST_CASE("S2D-22: an eccentric annulus on a mesh from arrays") {
    run("S2D-22");
}
TEST_CASE("S2D-23: a re-entrant corner") {
    run("S2D-23");
}
TEST_CASE("S2D-24: spreading resistance of a strip on a slab") {
    run("S2D-24");
}
TEST_CASE("S2D-25: ISO 10211 case 1, 28 points") {
    run("S2D-25.1");
}
TEST_CASE("S2D-25: ISO 10211 case 2, 9 points and the heat flow") {
    run("S2D-25.2");
}
TEST_CASE("S2D-26: NAFEMS T2, a radiating bar") {
    run("S2D-26.T2");
}
TEST_CASE("S2D-26: NAFEMS T4, a plate with films") {
    run("S2D-26.T4");
}
TEST_CASE("T1D-11: a slab after a step of its surface temperature keeps its bounds and follows the series") {
    run("T1D-11");
}
TEST_CASE("T1D-12 to T1D-14: slab, cylinder and sphere cool by their series") {
    run("T1D-12.14");
}
TEST_CASE("T1D-15: a semi-infinite solid takes in heat by erfc") {
    run("T1D-15");
}
TEST_CASE("T1D-18: a thin slab cools all but alike throughout") {
    run("T1D-18");
}
TEST_CASE("S2D-26: NAFEMS T3, a bar under a sine of temperature") {
    run("S2D-26.T3");
}
TEST_CASE("T2D-27: a rectangular bar cools by the product of two slabs") {
    run("T2D-27");
}
TEST_CASE("T2D-28: a finite cylinder cools by the product of cylinder and slab") {
    run("T2D-28");
}
