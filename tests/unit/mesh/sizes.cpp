// Cell sizes: everywhere, by region, by face, by place, and how fast they may grow.

#include <doctest/doctest.h>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/mesh/sides.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/angles.hpp>
#include <tests/support/meshes.hpp>

using namespace tepor;

namespace {
struct Lengths {
    double mean = 0.0;
    double longest = 0.0;
    Index count = 0;
};

/// Cell sides whose middle passes a test.
template <class Test>
Lengths lengths(const MeshData& mesh, Test&& test) {
    const SideMap sides = match_sides(mesh);
    Lengths l;
    for (Index n = 0; n < sides.count(); ++n) {
        const CellSide s = sides.first[detail::as_size(n)];
        const Point a = mesh.nodes[detail::as_size(mesh.cell(s.cell)[s.side])];
        const Point b = mesh.nodes[detail::as_size(mesh.cell(s.cell)[(s.side + 1) % 3])];
        if (!test(0.5 * (a + b))) continue;
        l.mean += distance(a, b);
        l.longest = std::max(l.longest, distance(a, b));
        ++l.count;
    }
    l.mean /= static_cast<double>(l.count);
    return l;
}

const auto everywhere = [](Point) { return true; };
} // namespace

TEST_CASE("cell sides are as long as asked, on average, and never much longer") {
    Section section;
    section.add("plate", rectangle({0, 0}, {2, 1}));
    for (double size : {0.2, 0.05, 0.02}) {
        CAPTURE(size);
        const auto mesh = triangulate<Triangle<1>>(section, {.size = size});
        const auto l = lengths(mesh, everywhere);
        CHECK(l.mean >= 0.85 * size);
        CHECK(l.mean <= 1.05 * size);
        CHECK(l.longest <= 1.6 * size);
        const auto angles = test::check_angles(mesh, {});
        CHECK(angles.least >= 25.0);
    }
}

TEST_CASE("the smallest of the sizes that apply counts, in regions, on faces and by place") {
    Section section;
    section.add("plate", rectangle({0, 0}, {2, 1}));
    section.add("insert", rectangle({1.5, 0.3}, {1.9, 0.7}));
    section.face("hot", {0, 0}, {0, 1});
    const auto by_region = triangulate<Triangle<1>>(section, {.size = 0.2, .in = {{"insert", 0.03}}});
    CHECK(verify(by_region).problem == "");
    const auto inside = lengths(by_region, [](Point p) { return p.x > 1.5 && p.x < 1.9 && p.y > 0.3 && p.y < 0.7; });
    CHECK(inside.mean <= 1.05 * 0.03);
    CHECK(inside.mean >= 0.75 * 0.03);
    CHECK(lengths(by_region, [](Point p) { return p.x < 0.5; }).mean >= 0.15);

    const auto by_face = triangulate<Triangle<1>>(section, {.size = 0.2, .on = {{"hot", 0.02}}});
    const auto on_hot = lengths(by_face, [](Point p) { return p.x < 1e-9; });
    CHECK(on_hot.longest <= 0.0201);
    CHECK(on_hot.mean >= 0.0199);
    CHECK(lengths(by_face, [](Point p) { return p.x > 1.0; }).mean >= 0.1);

    const Point spot{0.7, 0.4};
    const auto by_place = triangulate<Triangle<1>>(
        section, {.size = 0.2, .law = [&](Point p) { return 0.01 + 0.25 * distance(p, spot); }});
    CHECK(lengths(by_place, [&](Point p) { return distance(p, spot) < 0.03; }).mean <= 0.022);
    CHECK(by_place.cell_count() < 6000);
}

TEST_CASE("faces named by a test and what is left over take sizes too, straight and on arcs") {
    Section section;
    section.add("plate", rectangle({0, 0}, {2, 1}));
    section.cut(circle({1.4, 0.5}, 0.2));
    section.face("hot", {0, 0}, {0, 1});
    section.face("top", [](Point p) { return p.y > 1.0 - 1e-9; });
    section.rest("air");
    const auto on_top = [](Point p) { return p.y > 1.0 - 1e-9; };
    const auto on_hot = [](Point p) { return p.x < 1e-9; };
    const auto on_base = [](Point p) { return p.y < 1e-9; };
    const auto on_hole = [](Point p) { return distance(p, {1.4, 0.5}) < 0.2001; };
    const auto plain = triangulate<Triangle<1>>(section, {.size = 0.25});
    const auto by_test = triangulate<Triangle<1>>(section, {.size = 0.25, .on = {{"top", 0.02}}});
    CHECK(verify(by_test).problem == "");
    CHECK(lengths(by_test, on_top).longest <= 0.0201);
    CHECK(lengths(by_test, on_base).mean >= 0.8 * lengths(plain, on_base).mean);
    const auto by_rest = triangulate<Triangle<1>>(section, {.size = 0.25, .on = {{"air", 0.02}}});
    CHECK(verify(by_rest).problem == "");
    CHECK(lengths(by_rest, on_base).longest <= 0.0201);
    CHECK(lengths(by_rest, on_hole).longest <= 0.0201);
    CHECK(lengths(by_rest, on_top).mean >= 0.05); // taken by a test
    CHECK(lengths(by_rest, on_hot).mean >= 0.05); // and by points
}

TEST_CASE("sizes grow by no more than the growth allows") {
    // From a size of 0.01 on one face, at distance d sides are at most about 0.01 + growth d.
    Section section;
    section.add("plate", rectangle({0, 0}, {2, 1}));
    section.face("hot", {0, 0}, {0, 1});
    Index previous = 0;
    for (double growth : {1.0, 0.3, 0.1}) {
        CAPTURE(growth);
        const auto mesh = triangulate<Triangle<1>>(section, {.size = 0.5, .on = {{"hot", 0.01}}, .growth = growth});
        for (double d : {0.1, 0.2, 0.4, 0.8}) {
            CAPTURE(d);
            const auto band = lengths(mesh, [&](Point p) { return std::abs(p.x - d) < 0.05 + 0.05 * d; });
            if (band.count == 0) continue;
            const double size = 0.01 + growth * 1.2 * d;
            CHECK(band.longest <= 1.7 * size + growth * 0.05);
        }
        CHECK(mesh.cell_count() > previous);
        previous = mesh.cell_count();
    }
}

TEST_CASE("chords lie off their arcs by no more than the deviation asked for") {
    Section section;
    section.add("disc", circle({0, 0}, 1.0));
    for (double deviation : {1e-2, 1e-3, 1e-4}) {
        const auto mesh = triangulate<Triangle<1>>(section, {.size = 0.5, .deviation = deviation});
        CHECK(!mesh.curved.empty());
        for (const CurvedSide& c : mesh.curved) {
            const Point a = mesh.nodes[detail::as_size(mesh.cell(c.side.cell)[c.side.side])];
            const Point b = mesh.nodes[detail::as_size(mesh.cell(c.side.cell)[(c.side.side + 1) % 3])];
            CHECK(1.0 - distance(0.5 * (a + b), {0, 0}) <= deviation * (1.0 + 1e-9));
        }
    }
}

TEST_CASE("options outside their range are refused by name and value") {
    Section section;
    section.add("plate", rectangle({0, 0}, {1, 1}));
    section.rest("air");
    const auto refused = [&](const Meshing& m, const std::string& words) {
        try {
            (void)triangulate<Triangle<1>>(section, m);
            FAIL_CHECK("accepted: ", words);
        } catch (const Error& error) {
            INFO(std::string(error.what()));
            CHECK(std::string(error.what()).find(words) != std::string::npos);
        }
    };
    refused({.size = -1.0}, "size = -1, expected a finite length");
    refused({.size = std::nan("")}, "size = nan");
    refused({.size = 0.1, .growth = 0.0}, "growth = 0, expected 0.05 to 1");
    refused({.size = 0.1, .turn = 45.0}, "turn = 45, expected");
    refused({.size = 0.1, .deviation = -1.0}, "deviation = -1");
    refused({.size = 0.1, .in = {{"plate", 0.0}}}, "size for \"plate\" = 0");
    refused({.size = 0.1, .on = {{"floor", 0.1}}}, "size for face \"floor\", expected one of \"air\"");
    refused({.size = 0.1, .law = [](Point p) { return p.x - 0.5; }}, "expected a finite size > 0");
}
