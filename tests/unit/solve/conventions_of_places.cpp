// The conventions of corners, contacts, extremes, local heat and balances.
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <string>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using test::check_refused;

namespace {

bool close(double a, double b, double relative = 1e-12) {
    return std::abs(a - b) <= relative * (std::abs(a) + std::abs(b));
}

template <class E>
Body plate(double width, double height, double size) {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {width, height});
    Body body{tiles<E>(drawing, {.size = size})};
    body.in("plate", Material{.conductivity = 2.0});
    return body;
}

const FaceHeat& face_of(const Balance& balance, const std::string& name) {
    for (const FaceHeat& f : balance.faces)
        if (f.name == name) return f;
    FAIL("no face " << name);
    return balance.faces.front();
}

} // namespace

TEST_CASE_TEMPLATE("differing temperatures at a shared node: it takes the mean, each flow is unbounded, the sum counts",
                   E, Triangle<1>, Quadrilateral<2>) {
    Body body = plate<E>(0.2, 0.1, 0.02);
    body.on("left", FixedTemperature{100.0}).on("bottom", FixedTemperature{40.0});
    body.on("right", Film{.coefficient = 10.0, .fluid = 0.0});
    const Field field = steady(body);
    CHECK(close(field.at({0.0, 0.0}), 70.0));
    CHECK(close(field.at({0.0, 0.02}), 100.0));
    CHECK(close(field.at({0.02, 0.0}), 40.0));
    check_refused([&] { (void)field[heat_out_through("left")]; }, ErrorCode::no_answer, "", "unbounded at (0, 0)");
    check_refused([&] { (void)field[heat_in_through("bottom")]; }, ErrorCode::no_answer, "", "unbounded at (0, 0)");
    const Balance balance = field.balance();
    for (const char* name : {"left", "bottom"}) {
        CHECK(face_of(balance, name).unbounded);
        CHECK(face_of(balance, name).unbounded_x == 0.0);
        CHECK(face_of(balance, name).unbounded_y == 0.0);
    }
    CHECK(!face_of(balance, "right").unbounded);
    CHECK(std::abs(balance.in - balance.out) <= 1e-10 * balance.gross + balance.floor);
    CHECK(std::isfinite(balance.in));
    CHECK(balance.in > field[heat_out_through("right")]);
    CHECK(balance.balanced());
}

TEST_CASE("temperatures that meet at a corner but for rounding are one temperature there") {
    Body body = plate<Quadrilateral<2>>(0.2, 0.1, 0.02);
    body.on("left", FixedTemperature{100.0});
    body.on("bottom",
            FixedTemperature{of_place([](const Point& p) { return 100.0 / 3.0 * (3.0 - 6.0 * p.x) + 1e-11; })});
    const Field field = steady(body);
    CHECK(std::isfinite(field[heat_out_through("left")]));
    CHECK(!face_of(field.balance(), "bottom").unbounded);
}

TEST_CASE("two temperatures on one cell side are refused") {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.2, 0.1}).face("part", {0.0, 0.1}, {0.1, 0.1});
    Body body{tiles<Quadrilateral<1>>(drawing, {.size = 0.05})};
    body.in("plate", Material{.conductivity = 2.0});
    body.on("top", FixedTemperature{100.0}).on("part", FixedTemperature{40.0});
    check_refused([&] { (void)steady(body); }, ErrorCode::contradiction, "part", "keep one");
}

TEST_CASE_TEMPLATE("where two held faces meet, the corner's heat is shared, by no chance of numbering", E, Triangle<1>,
                   Quadrilateral<1>, Quadrilateral<2>) {
    // a generating plate, all sides at one temperature: opposite sides are alike, and all four give the whole
    Body body = plate<E>(0.2, 0.1, 0.0125);
    body.in("plate", Generation{.per_volume = 1e5});
    for (const char* side : {"left", "right", "bottom", "top"}) body.on(side, FixedTemperature{0.0});
    const Field field = steady(body);
    const double left = field[heat_out_through("left")];
    const double bottom = field[heat_out_through("bottom")];
    CHECK(close(left, field[heat_out_through("right")], E::sides == 4 ? 1e-9 : 2e-2));
    CHECK(close(bottom, field[heat_out_through("top")], E::sides == 4 ? 1e-9 : 2e-2));
    CHECK(close(left + bottom + field[heat_out_through("right")] + field[heat_out_through("top")], 1e5 * 0.2 * 0.1,
                1e-10));
    // series of the torsion problem (Timoshenko & Goodier), u = sum over odd n of 4 q b^2 / (k n^3 pi^3)
    // (1 - cosh(n pi (x - a / 2) / b) / cosh(n pi a / 2 b)) sin(n pi y / b), its flux at x = 0 integrated over y
    const double a = 0.2;
    const double b = 0.1;
    double exact = 0.0;
    for (int n = 1; n < 200; n += 2)
        exact += 8.0 * 1e5 * b * b / std::pow(n * pi, 3) * std::tanh(n * pi * a / (2.0 * b));
    CHECK(close(left, exact, E::order == 1 ? 0.03 : 0.003));
}

TEST_CASE("at a contact a place has two temperatures: at(x) asks which, at(x, region) answers") {
    Body body{layers<Segment<2>>(
        {{.region = "brick", .thickness = 0.2, .cells = 2}, {.region = "backing", .thickness = 0.1}})};
    body.in("brick", Material{.conductivity = 1.2}).in("backing", Material{.conductivity = 0.15});
    body.between("backing", "brick", Contact{.conductance = 250.0});
    body.on("inner", FixedTemperature{500.0}).on("outer", FixedTemperature{0.0});
    const Field field = steady(body);
    check_refused([&] { (void)field.at(0.2); }, ErrorCode::outside, "x = 0.2", "two temperatures");
    check_refused([&] { (void)field.at(0.2); }, ErrorCode::outside, "x = 0.2", "\"backing\"");
    check_refused([&] { (void)field[at(0.2)]; }, ErrorCode::outside, "x = 0.2", "\"brick\"");
    const double q = 500.0 / (0.2 / 1.2 + 1.0 / 250.0 + 0.1 / 0.15);
    CHECK(close(field.at(0.2, "brick"), 500.0 - q * 0.2 / 1.2));
    CHECK(close(field.at(0.2, "backing"), q * 0.1 / 0.15));
    CHECK(close(field[at(0.2, "backing")], field.at(0.2, "backing")));
    CHECK(close(field[heat_from("brick", "backing")], q, 1e-10));
    check_refused([&] { (void)field.at(0.05, "backing"); }, ErrorCode::outside, "x = 0.05",
                  "outside region \"backing\"");
}

TEST_CASE("a resistance may stand for the conductance, and either alone must be said") {
    const auto flow = [](Contact contact) {
        Body body{layers<Segment<1>>({{.region = "a", .thickness = 0.1}, {.region = "b", .thickness = 0.1}})};
        body.in("a", Material{.conductivity = 1.0}).in("b", Material{.conductivity = 1.0});
        body.between("a", "b", std::move(contact));
        body.on("inner", FixedTemperature{100.0}).on("outer", FixedTemperature{0.0});
        return steady(body)[heat_out_through("outer")];
    };
    CHECK(close(flow(Contact{.resistance = 0.05}), flow(Contact{.conductance = 20.0})));
    CHECK(close(flow(Contact{.resistance = 0.05}), 100.0 / 0.25));
    check_refused([&] { (void)flow(Contact{}); }, ErrorCode::missing, "a", ".resistance");
    check_refused([&] { (void)flow(Contact{.conductance = 20.0, .resistance = 0.05}); }, ErrorCode::missing, "a",
                  "either");
}

TEST_CASE("a contact is well conditioned from a perfect joint to an insulating gap") {
    for (const double h : {1e-9, 1e-3, 1.0, 1e6, 1e12}) {
        CAPTURE(h);
        Body body{layers<Segment<1>>(
            {{.region = "a", .thickness = 0.1, .cells = 3}, {.region = "b", .thickness = 0.1, .cells = 3}})};
        body.in("a", Material{.conductivity = 2.0}).in("b", Material{.conductivity = 0.5});
        body.between("a", "b", Contact{.conductance = h});
        body.on("inner", FixedTemperature{100.0}).on("outer", Film{.coefficient = 10.0, .fluid = 0.0});
        const Field field = steady(body);
        const double q = 100.0 / (0.05 + 1.0 / h + 0.2 + 0.1);
        CHECK(std::abs(field[heat_out_through("outer")] - q) <= 1e-9 * q + 1e-9);
        CHECK(std::abs(field.at(0.2) - q / 10.0) <= 1e-8);
        CHECK(field.balance().balanced());
    }
}

TEST_CASE("all interfaces between the two regions count, and none is refused") {
    Body body{layers<Segment<1>>({{.region = "a", .thickness = 0.1},
                                  {.region = "b", .thickness = 0.1},
                                  {.region = "a", .thickness = 0.1},
                                  {.region = "c", .thickness = 0.1}})};
    for (const char* r : {"a", "b", "c"}) body.in(r, Material{.conductivity = 1.0});
    body.on("inner", FixedTemperature{100.0}).on("outer", FixedTemperature{0.0});
    Body apart = body;
    body.between("b", "a", Contact{.resistance = 0.1});
    CHECK(close(steady(body)[heat_out_through("outer")], 100.0 / (0.4 + 2 * 0.1)));
    apart.between("b", "c", Contact{.resistance = 0.1});
    check_refused([&] { (void)steady(apart); }, ErrorCode::bad_contact, "b", "share no side");
}

TEST_CASE("where a third region joins both sides of a contact the jump closes at that point, and only there") {
    Tiles drawing;
    drawing.add("a", {0.0, 0.0}, {0.1, 0.1}).add("b", {0.1, 0.0}, {0.2, 0.1}).add("lid", {0.0, 0.1}, {0.2, 0.12});
    Body body{tiles<Quadrilateral<2>>(drawing, {.size = 0.02})};
    for (const char* r : {"a", "b", "lid"}) body.in(r, Material{.conductivity = 1.0});
    body.between("a", "b", Contact{.conductance = 5.0});
    body.on("left", FixedTemperature{100.0}).on("right", FixedTemperature{0.0});
    const Field field = steady(body);
    CHECK(field.at({0.1, 0.0}, "a") - field.at({0.1, 0.0}, "b") > 5.0);
    CHECK(close(field.at({0.1, 0.1}, "a"), field.at({0.1, 0.1}, "b")));
    CHECK(close(field.at({0.1, 0.1}), field.at({0.1, 0.1}, "lid")));
    // what leaves a goes through the contact and through the lid
    const double through = field[heat_from("a", "b")] + field[heat_from("a", "lid")];
    const double left = field[heat_in_through("left")];
    CHECK(field[heat_from("a", "b")] > 0.0);
    CHECK(std::abs(through - left) <= 0.2 * left); // the lid has a piece of "left" of its own
    CHECK(field.balance().balanced());
}

TEST_CASE("hottest_in is the maximum of the finite element function, inside cells too") {
    Body body{layers<Segment<2>>({{.region = "slab", .thickness = 0.2}})}; // one cell: the parabola itself
    body.in("slab", Material{.conductivity = 2.0}).in("slab", Generation{.per_volume = 2e4});
    body.on("inner", FixedTemperature{10.0}).on("outer", FixedTemperature{50.0});
    const Field field = steady(body);
    // T = 10 + 200 x + 5000 x (0.2 - x): the maximum lies at x = 0.12
    const double x = 0.5 * (0.2 + 200.0 / 5000.0);
    const double top = 10.0 + 200.0 * x + 5000.0 * x * (0.2 - x);
    CHECK(close(field[hottest_in("slab")], top, 1e-10));
    CHECK(std::abs(field.hottest("slab").place.x - x) <= 1e-6);
    CHECK(std::abs(field.hottest().temperature - top) <= 1e-9);
    CHECK(close(field[coldest_in("slab")], 10.0));
    CHECK(field.coldest().place.x == 0.0);

    Body square = plate<Quadrilateral<2>>(0.3, 0.1, 0.1); // three cells, the middle of the middle one is hottest
    square.in("plate", Generation{.per_volume = 1e5});
    for (const char* side : {"left", "right", "bottom", "top"}) square.on(side, FixedTemperature{0.0});
    const Field flat = steady(square);
    CHECK(distance(flat.hottest("plate").place, {0.15, 0.05}) <= 1e-6);
    CHECK(close(flat[hottest_in("plate")], flat.at({0.15, 0.05}), 1e-12));
    CHECK(close(flat[hottest_on("top")], 0.0));
}

TEST_CASE("in a field without slope a node is named as the hottest place, not a spot found in rounding") {
    Body body = plate<Quadrilateral<2>>(0.3, 0.1, 0.1);
    body.on("left", FixedTemperature{21.7}).on("right", Film{.coefficient = 7.0, .fluid = 21.7});
    const Field field = steady(body);
    const Point place = field.hottest("plate").place;
    double nearest = 1.0;
    for (const Point& node : field.node_places()) nearest = std::min(nearest, distance(node, place));
    CHECK(nearest <= 1e-12);
}

TEST_CASE("a heating plane in 1D delivers its heat at its place") {
    Body body{layers<Segment<1>>({{.region = "slab", .thickness = 0.2, .cells = 4}}, Planar{.area = 2.0})};
    body.in("slab", Material{.conductivity = 1.0});
    body.on("inner", FixedTemperature{0.0}).on("outer", FixedTemperature{0.0});
    body.at(0.05, LocalHeat{.total = 300.0});
    const Field field = steady(body);
    CHECK(close(field.at(0.05), 150.0 * (0.05 * 0.15 / 0.2)));
    CHECK(close(field[heat_out_through("inner")], 225.0));
    CHECK(close(field[generated_in("slab")], 300.0));
    CHECK(close(field.balance().generated, 300.0));
    CHECK(field.balance().balanced());
}

TEST_CASE("a line source in 2D has a radius, inside which no temperature is read") {
    const auto body = [](double radius) {
        Body b = plate<Quadrilateral<2>>(0.2, 0.2, 0.01);
        for (const char* side : {"left", "right", "bottom", "top"}) b.on(side, FixedTemperature{0.0});
        b.at({0.1, 0.1}, LocalHeat{.total = 100.0, .radius = radius});
        return b;
    };
    check_refused([&] { (void)steady(body(0.0)); }, ErrorCode::missing, "(0.1, 0.1)", ".radius");
    const Field field = steady(body(0.01));
    check_refused([&] { (void)field.at({0.105, 0.1}); }, ErrorCode::outside, "(0.105, 0.1)", "inside the radius");
    check_refused([&] { (void)field[at({0.1, 0.1})]; }, ErrorCode::outside, "(0.1, 0.1)", "outside it");
    // far from it, the field of a line source in a square (images of sign +-): rises as ln(1 / r) / (2 pi k) toward it
    const double rise = field.at({0.1 + 0.02, 0.1}) - field.at({0.1 + 0.04, 0.1});
    CHECK(std::abs(rise - 100.0 * std::log(2.0) / (2.0 * pi * 2.0)) <= 0.03 * rise);
    CHECK(close(field.balance().generated, 100.0));
    CHECK(field.balance().balanced());
    Body away = plate<Quadrilateral<2>>(0.2, 0.2, 0.05);
    away.on("left", FixedTemperature{0.0}).at({0.5, 0.1}, LocalHeat{.total = 1.0, .radius = 0.01});
    check_refused([&] { (void)steady(away); }, ErrorCode::outside, "(0.5, 0.1)", "metres");
}

TEST_CASE(
    "gross traffic is half the sum of absolute flows of faces and sources; balanced is 1e-10 of it and the floor") {
    Body body{layers<Segment<1>>({{.region = "slab", .thickness = 0.1, .cells = 4}})};
    body.in("slab", Material{.conductivity = 2.0}).in("slab", Generation{.per_volume = 1e4});
    body.on("inner", Flux{.into = 500.0}).on("outer", Film{.coefficient = 10.0, .fluid = 20.0});
    const Balance b = steady(body).balance();
    CHECK(close(b.in, 500.0));
    CHECK(close(b.generated, 1000.0));
    CHECK(close(b.out, 1500.0, 1e-10));
    CHECK(close(b.gross, 0.5 * (500.0 + 1000.0 + 1500.0), 1e-10));
    // eps max|T| max(k/h) max(16, sqrt n) per area, over both faces that let heat through
    const double hottest = steady(body).at(0.0);
    CHECK(close(b.floor, std::numeric_limits<double>::epsilon() * hottest * (2.0 / 0.025) * 16.0 * 2.0, 1e-6));
    CHECK(b.balanced());
    Balance off = b;
    off.left_over = 1.1 * (1e-10 * b.gross + b.floor);
    CHECK(!off.balanced());
    off.left_over = -off.left_over;
    CHECK(!off.balanced());
    off.left_over = std::numeric_limits<double>::quiet_NaN();
    CHECK(!off.balanced());
}

TEST_CASE("a table is judged on the converged field, held flat meanwhile, and asked to hold it does") {
    const auto body = [](Outside outside, double fluid) {
        Body b{layers<Segment<2>>({{.region = "slab", .thickness = 0.1, .cells = 4}})};
        b.in("slab", Material{.conductivity = table({{0, 1.0}, {100, 2.0}}, outside)});
        b.on("inner", FixedTemperature{10.0}).on("outer", Film{.coefficient = 50.0, .fluid = fluid});
        return b;
    };
    const auto outside = [&] { (void)steady(body(Outside::refuse, 300.0)); };
    check_refused(outside, ErrorCode::outside_table, "conductivity of \"slab\"", "0 to 100");
    check_refused(outside, ErrorCode::outside_table, "conductivity of \"slab\"", "Outside::hold");
    check_refused(outside, ErrorCode::outside_table, "conductivity of \"slab\"", "in cell");
    const Field held = steady(body(Outside::hold, 300.0));
    CHECK(held.at(0.1) > 100.0);
    // start far outside, end inside: no error
    SteadyOptions from_afar;
    from_afar.start = 900.0;
    const Field inside = steady(body(Outside::refuse, 90.0), from_afar);
    CHECK(std::abs(inside.at(0.05) - steady(body(Outside::refuse, 90.0)).at(0.05)) <= 1e-6);
}

TEST_CASE("a law that returns what is no number is named with cell, place and temperature") {
    Body body{layers<Segment<1>>({{.region = "slab", .thickness = 0.1, .cells = 4}})};
    body.in("slab",
            Material{.conductivity = law([](const auto& s) { return sqrt(50.0 - s.temperature); }).named("my k")});
    body.on("inner", FixedTemperature{10.0}).on("outer", FixedTemperature{100.0});
    for (const char* words : {"my k", "in cell", "temperature", "conductivity of \"slab\"", "guard the law", "nan"})
        check_refused([&] { (void)steady(body); }, ErrorCode::bad_law, "my k", words);
    Body place{layers<Segment<1>>({{.region = "slab", .thickness = 0.1, .cells = 4}})};
    place.in("slab", Material{.conductivity = 1.0}).on("inner", FixedTemperature{10.0});
    place.in("slab", Generation{.per_volume = of_place([](const Point& p) { return 1.0 / (p.x > 0.06 ? 0.0 : 1.0); })});
    check_refused([&] { (void)steady(place); }, ErrorCode::bad_law, "own law", "inf");
}

TEST_CASE("a temperature a rounding beyond the end of a table is no reason to refuse it") {
    for (const double end : {100.0, 1250.0}) {
        Body body = plate<Quadrilateral<2>>(0.3, 0.2, 0.03);
        body.replace("plate", Material{.conductivity = table({{0, 1.0}, {end, 2.0}})});
        body.on("left", Film{.coefficient = 30.0, .fluid = end});
        body.on("top", Film{.coefficient = table({{0, 3.0}, {end, 7.0}}), .fluid = end});
        SteadyOptions options;
        options.start = 0.37 * end; // so that the end is reached through rounding
        CHECK(std::abs(steady(body, options).hottest().temperature - end) <= 1e-9 * end);
    }
}
