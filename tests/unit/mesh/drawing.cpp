// What a drawing shows: faces, lines, held points, hidden edges, and drawings made to be difficult.

#include <algorithm>
#include <doctest/doctest.h>
#include <set>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/mesh/sides.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/angles.hpp>
#include <tests/support/meshes.hpp>

using namespace tepor;

namespace {
Point end_of(const MeshData& mesh, CellSide s, int end) {
    return mesh.nodes[detail::as_size(mesh.cell(s.cell)[(s.side + end) % 3])];
}

double length_of(const MeshData& mesh, const std::string& face) {
    const Index f = mesh.find_face(face);
    if (f < 0) return -1.0;
    double sum = 0.0;
    for (CellSide s : mesh.faces[detail::as_size(f)].sides) sum += distance(end_of(mesh, s, 0), end_of(mesh, s, 1));
    return sum;
}

bool has_node(const MeshData& mesh, Point p) {
    return std::any_of(mesh.nodes.begin(), mesh.nodes.end(), [&](Point q) { return distance(p, q) <= 1e-12; });
}

template <class Act>
std::string refusal(Act&& act) {
    try {
        act();
    } catch (const Error& error) {
        return error.what();
    }
    return "accepted";
}

void check_says(const std::string& message, const std::string& words) {
    INFO(message);
    CHECK(message.find(words) != std::string::npos);
}

/// Sum of the lengths of cell sides that lie along the straight piece a-b.
double followed(const MeshData& mesh, Point a, Point b) {
    const SideMap sides = match_sides(mesh);
    const double length = distance(a, b);
    const auto on = [&](Point p) {
        const double t = dot(p - a, b - a) / (length * length);
        return std::abs(cross(b - a, p - a)) / length <= 1e-9 && t >= -1e-9 && t <= 1.0 + 1e-9;
    };
    double sum = 0.0;
    for (Index n = 0; n < sides.count(); ++n) {
        const CellSide s = sides.first[detail::as_size(n)];
        const Point p = end_of(mesh, s, 0);
        const Point q = end_of(mesh, s, 1);
        if (on(p) && on(q)) sum += distance(p, q);
    }
    return sum;
}
} // namespace

TEST_CASE("the platen of five heaters and a coolant bore is what its drawing says") {
    Section section;
    section.add("platen", rectangle({0.0, 0.0}, {0.60, 0.06}));
    for (double x : {0.06, 0.18, 0.30, 0.42, 0.54}) section.add("heater", circle({x, 0.03}, 0.008));
    section.cut(circle({0.12, 0.03}, 0.005), "coolant");
    section.face("working face", {0.0, 0.06}, {0.60, 0.06});
    const Mesh<Triangle<2>> mesh = triangulate<Triangle<2>>(section, {.size = 0.008}, Planar{.depth = 0.40});
    CHECK(verify(mesh).problem == "");
    CHECK(mesh.remarks.empty());
    CHECK(mesh.frame.factor(2) == 0.40);
    CHECK(mesh.region_names == std::vector<std::string>{"platen", "heater"});
    REQUIRE(mesh.faces.size() == 2);
    CHECK(std::abs(length_of(mesh, "working face") - 0.60) <= 1e-12);
    const double heaters = 5.0 * pi * 0.008 * 0.008;
    const double hole = pi * 0.005 * 0.005;
    // A quadratic arc of turn a = 18 degrees: the disc is off by a^4 / 480 = 2.0e-5 of itself.
    CHECK(std::abs(test::area_of(mesh, 1) - heaters) <= 2.5e-5 * heaters);
    CHECK(std::abs(test::area_of(mesh) - (0.036 - hole)) <= 2.5e-5 * hole);
    for (CellSide s : mesh.faces[0].sides)
        for (int j : {s.side, (s.side + 1) % 3, 3 + s.side}) {
            const Point p = mesh.nodes[detail::as_size(mesh.cell(s.cell)[j])];
            CHECK(std::abs(distance(p, {0.12, 0.03}) - 0.005) <= 1e-12);
        }
    const auto angles = test::check_angles(mesh, detail::look_at(section).graph);
    CHECK(angles.least >= 25.0 - 1e-6);
}

TEST_CASE("faces are named by two points, by three, by a shape's edge, by a test, and what is left over") {
    Section section;
    const Drawn plate = section.add("plate", rectangle({0, 0}, {2, 1}));
    const Drawn pin = section.add("pin", circle({2, 0.5}, 0.25)); // half of it stands out on the right
    section.face("short way", {0, 0.25}, {0.5, 0});               // round the corner, 0.75
    section.face("long way", {0.5, 1}, {0, 0.5}, {0.25, 0.0});    // through the left side, ends inside "short way"
    section.face("pin", pin);
    section.face("top", [](Point p) { return p.y > 1.0 - 1e-9; });
    section.rest("air");
    const auto mesh = triangulate<Triangle<1>>(section, {.size = 0.2});
    CHECK(verify(mesh).problem == "");
    CHECK(std::abs(length_of(mesh, "short way") - 0.75) <= 1e-12);
    CHECK(std::abs(length_of(mesh, "long way") - (0.5 + 1.0 + 0.25)) <= 1e-12);
    // chords of the half circle: 2 r sin(a/2) per piece of turn a
    const double half = length_of(mesh, "pin");
    CHECK(half < pi * 0.25);
    CHECK(half > 0.99 * pi * 0.25);
    CHECK(std::abs(length_of(mesh, "top") - 2.0) <= 1e-12);
    CHECK(std::abs(length_of(mesh, "air") - (1.5 + 0.25 + 0.25)) <= 1e-12);
    (void)plate;
}

TEST_CASE("pieces of an arc are named between points on it, at any place, and end at nodes there") {
    Section section;
    section.add("bar", circle({0, 0}, 1.0));
    const auto at = [](double degrees) {
        return Point{std::cos(degrees * pi / 180.0), std::sin(degrees * pi / 180.0)};
    };
    section.face("warm", at(10), at(130));
    section.face("cold", at(130), at(220), at(10));
    const auto mesh = triangulate<Triangle<2>>(section, {.size = 0.2});
    CHECK(verify(mesh).problem == "");
    const auto turn = [&](const std::string& name) {
        double sum = 0.0;
        for (CellSide s : mesh.faces[detail::as_size(mesh.find_face(name))].sides)
            sum += 2.0 * std::asin(0.5 * distance(end_of(mesh, s, 0), end_of(mesh, s, 1)));
        return sum * 180.0 / pi;
    };
    CHECK(std::abs(turn("warm") - 120.0) <= 1e-9);
    CHECK(std::abs(turn("cold") - 240.0) <= 1e-9);
    CHECK(has_node(mesh, at(10)));
    CHECK(has_node(mesh, at(130)));
}

TEST_CASE("faces that cannot be what they say are refused with the reason") {
    const auto with = [](auto&& more) {
        Section section;
        section.add("plate", rectangle({0, 0}, {1, 1}));
        section.add("core", circle({0.5, 0.5}, 0.2));
        section.cut(circle({0.2, 0.2}, 0.1));
        return refusal([&] {
            more(section);
            (void)triangulate<Triangle<1>>(section, {.size = 0.2});
        });
    };
    check_says(with([](Section& s) {
                   s.face("f", {0, 0}, {1, 1});
               }),
               "both ways from (0, 0) to (1, 1) are 2 m long; give a point in between");
    check_says(with([](Section& s) { s.face("f", {0, 0}, {0.5, 0.5}); }), "lies 0.324264 m off the outer edge");
    check_says(with([](Section& s) { s.face("f", {0, 0}, {0.3, 0.2}); }), "different loops");
    check_says(with([](Section& s) { s.face("f", {0, 0}, {0, 0}); }), "both points are the same point");
    check_says(with([](Section& s) { s.face("f", Drawn{1}); }), "no part of the edge of that shape is outer edge");
    check_says(with([](Section& s) { s.face("f", Drawn{7}); }), "does not belong to this section");
    check_says(with([](Section& s) { s.face("f", [](Point p) { return p.x > 2; }); }),
               "no cell side of the outer edge");
    check_says(with([](Section& s) { s.face("", {0, 0}, {1, 0}); }), "face without a name");
    check_says(with([](Section& s) { s.hold({3, 3}); }), "the point (3, 3) lies outside the body");
    check_says(with([](Section& s) { s.hold({0.2, 0.2}); }), "lies outside the body");
    CHECK(with([](Section&) {}) == "accepted");
}

TEST_CASE("cell sides follow interior lines, and nodes stand at held points") {
    Section section;
    section.add("plate", rectangle({0, 0}, {1, 1}));
    section.line({0.2, 0.3}, {0.7, 0.62});
    section.line({0.5, 0.8}, {1.5, 0.8}); // leaves the body: the part outside does not count
    section.line(Outline({0.2, 0.2}).arc_to({0.5, 0.1}, {0.8, 0.2}));
    section.hold({0.123, 0.456});
    section.hold({0.3, 0.0});
    const auto mesh = triangulate<Triangle<2>>(section, {.size = 0.15});
    CHECK(verify(mesh).problem == "");
    CHECK(std::abs(followed(mesh, {0.2, 0.3}, {0.7, 0.62}) - std::hypot(0.5, 0.32)) <= 1e-9);
    CHECK(std::abs(followed(mesh, {0.5, 0.8}, {1, 0.8}) - 0.5) <= 1e-9);
    CHECK(std::abs(test::area_of(mesh) - 1.0) <= 1e-12);
    CHECK(has_node(mesh, {0.123, 0.456}));
    CHECK(has_node(mesh, {0.3, 0}));
    // Each inner side on the arc is listed for both of its cells.
    CHECK(mesh.curved.size() % 2 == 0);
    CHECK(!mesh.curved.empty());
    CHECK(mesh.faces.empty());
}

TEST_CASE("edges hidden by later paint or inside a union leave no trace") {
    Section plain;
    plain.add("plate", rectangle({0, 0}, {1, 1}));
    const auto expected = triangulate<Triangle<1>>(plain, {.size = 0.25});
    Section built;
    built.add("other", polygon({{0.1, 0.1}, {0.5, 0.1000001}, {0.3, 0.7}}));
    built.add("plate", united(rectangle({0, 0}, {0.5000003, 1}), rectangle({0.2, 0}, {1, 1}), circle({0.5, 0.5}, 0.4)));
    const auto mesh = triangulate<Triangle<1>>(built, {.size = 0.25});
    CHECK(mesh.cell_count() == expected.cell_count());
    CHECK(mesh.region_names == std::vector<std::string>{"plate"});
    REQUIRE(mesh.remarks.size() == 1);
    check_says(mesh.remarks[0], "region \"other\" is painted over");
    CHECK(std::abs(test::area_of(mesh) - 1.0) <= 1e-12);
}

TEST_CASE("a wider tolerance closes gaps between shapes that should meet, arcs included") {
    Section section;
    section.add("plate", rectangle({0, 0}, {1, 1}));
    section.add("strip", rectangle({1.00004, 0}, {1.5, 1.00003}));
    section.add("end", enclosed(Outline({1.5, 0.0}).arc_to({2.0, 0.5}, {1.50002, 1.0})));
    // As drawn the gaps stay, and three bodies lie side by side.
    const auto drawn = triangulate<Triangle<2>>(section, {.size = 0.2});
    CHECK(verify(drawn).problem == "");
    section.tolerance(1e-4);
    section.rest("air");
    const auto closed = triangulate<Triangle<2>>(section, {.size = 0.2});
    CHECK(verify(closed).problem == "");
    CHECK(std::abs(test::area_of(closed) - (1.5 + pi / 8.0)) <= 3e-4);
    REQUIRE(closed.remarks.size() == 1);
    check_says(closed.remarks[0], "places up to 5e-05 m apart were merged");
    CHECK(std::abs(length_of(closed, "air") - (1.0 + 3.0 + pi / 2.0)) <= 1e-2);
    section.tolerance(1.0);
    check_says(refusal([&] { (void)triangulate<Triangle<2>>(section); }),
               "tolerance = 1 m, expected less than a hundredth");
    check_says(refusal([&] { section.tolerance(0.0); }), "tolerance = 0, expected a length > 0");
}

TEST_CASE("drawings that show nothing or cannot be told apart are refused with place and cause") {
    check_says(refusal([] { (void)triangulate<Triangle<1>>(Section{}); }), "nothing drawn");
    check_says(refusal([] {
                   Section s;
                   s.add("a", circle({0, 0}, 1));
                   s.cut(rectangle({-2, -2}, {2, 2}), "all");
                   (void)triangulate<Triangle<1>>(s);
               }),
               "nothing is left");
    check_says(refusal([] {
                   Section s;
                   s.add("a", circle({0, 0}, 1));
                   s.add("dot", circle({0, 0}, 1e-10));
                   (void)triangulate<Triangle<1>>(s);
               }),
               "\"dot\") is smaller than the drawing's tolerance");
    check_says(refusal([] { (void)rectangle({0, 0}, {0, 1}); }), "rectangle: width = 0, expected > 0");
    check_says(refusal([] { (void)circle({0, 0}, 0); }), "circle: radius = 0, expected > 0");
    check_says(refusal([] { (void)circle({0, 0}, std::nan("")); }), "circle: radius");
    check_says(refusal([] { (void)circle({std::nan(""), 0}, 1); }), "expected finite coordinates");
    check_says(refusal([] { (void)ring({0, 0}, 2, 1); }), "outer radius = 1, expected more than the inner radius 2");
    check_says(refusal([] { (void)polygon({{0, 0}, {1, 0}}); }), "2 corners, expected at least 3");
    check_says(refusal([] { (void)polygon({{0, 0}, {1, 1}, {2, 2}}); }), "on one line");
    check_says(refusal([] { (void)rounded_rectangle({0, 0}, {1, 1}, 0.6); }), "at most half the shorter side, 0.5 m");
    check_says(refusal([] { (void)Outline({0, 0}).arc_to({1, 1}, {2, 2}); }), "three points that do not lie on a line");
    check_says(refusal([] {
                   (void)Outline({0, 0}).arc_around({1, 0}, {1, 2}, Turn::left);
               }),
               "starts 1 m and ends 2 m from its centre");
    check_says(refusal([] {
                   Section s;
                   s.add("a", rectangle({-1, 0}, {1, 1}));
                   (void)triangulate<Triangle<1>>(s, {}, Cylindrical{});
               }),
               "has a negative radius");
    check_says(refusal([] {
                   Section s;
                   s.add("a", rectangle({0, 0}, {1, 1}));
                   (void)triangulate<Triangle<1>>(s,
                                                  {.size = 1e-5}); // would be 2e10 triangles: told before they are made
               }),
               "size: about 2.32558e+10 triangles, over most_triangles = 4000000");
    check_says(refusal([] {
                   Section s;
                   s.add("a", rectangle({0, 0}, {1, 1}));
                   (void)triangulate<Triangle<1>>(s, {.size = 0.1, .in = {{"b", 0.01}}});
               }),
               "size for region \"b\", expected one of \"a\"");
}
