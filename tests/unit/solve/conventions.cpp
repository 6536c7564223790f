// The conventions of statements and frames that two readers must understand alike.
#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using test::check_refused;

namespace {

/// A slab of 0.1 m, k = 2, the outer face held at 20 degC.
Body slab(Frame frame = Planar{}, BodyOptions options = {}) {
    Body body{layers<Segment<2>>({{.region = "slab", .thickness = 0.1, .cells = 3}}, frame, {.start = 0.05}), options};
    body.in("slab", Material{.conductivity = 2.0});
    body.on("outer", FixedTemperature{20.0});
    return body;
}

Body plate(Frame frame = Planar{}) {
    Tiles drawing;
    drawing.add("plate", {0.1, 0.0}, {0.3, 0.1});
    Body body{tiles<Quadrilateral<1>>(drawing, {.size = 0.05}, frame)};
    body.in("plate", Material{.conductivity = 2.0});
    return body;
}

bool close(double a, double b, double relative = 1e-12) {
    return std::abs(a - b) <= relative * (std::abs(a) + std::abs(b));
}

const FaceHeat& face_of(const Balance& balance, const std::string& name) {
    for (const FaceHeat& f : balance.faces)
        if (f.name == name) return f;
    FAIL("no face " << name);
    return balance.faces.front();
}

} // namespace

TEST_CASE("a flux into the body warms it, out of the body cools it, by q L / k") {
    const Field warm = steady(slab().on("inner", Flux{.into = 5000}));
    const Field cold = steady(slab().on("inner", Flux{.out_of = 5000}));
    CHECK(close(warm.at(0.05), 20.0 + 5000.0 * 0.1 / 2.0));
    CHECK(close(cold.at(0.05), 20.0 - 5000.0 * 0.1 / 2.0));
}

TEST_CASE("heat in through a face is the negative of heat out, and both name their direction") {
    const Field field = steady(slab().on("inner", Flux{.into = 5000}));
    CHECK(close(field[heat_in_through("inner")], 5000.0));
    CHECK(close(field[heat_out_through("inner")], -5000.0));
    CHECK(close(field[heat_out_through("outer")], 5000.0));
    CHECK(close(field.heat_flux(0.1).x, 5000.0, 1e-9));
}

TEST_CASE("heat from one region to another is positive from the first to the second") {
    Body body{layers<Segment<1>>({{.region = "a", .thickness = 0.1}, {.region = "b", .thickness = 0.1}})};
    body.in("a", Material{.conductivity = 1.0}).in("b", Material{.conductivity = 4.0});
    body.on("inner", FixedTemperature{100.0}).on("outer", FixedTemperature{0.0});
    const Field field = steady(body);
    const double flow = 100.0 / (0.1 / 1.0 + 0.1 / 4.0);
    CHECK(close(field[heat_from("a", "b")], flow));
    CHECK(close(field[heat_from("b", "a")], -flow));
}

TEST_CASE("watts are for the size of the frame: area, length, whole sphere, depth, revolution") {
    const auto heat = [](Body body) { return steady(body.on("inner", Flux{.into = 1000}))[heat_out_through("outer")]; };
    CHECK(close(heat(slab(Planar{.area = 1.0})), 1000.0));
    CHECK(close(heat(slab(Planar{.area = 3.0})), 3000.0));
    CHECK(close(heat(slab(Cylindrical{.length = 1.0})), 1000.0 * 2.0 * pi * 0.05));
    CHECK(close(heat(slab(Cylindrical{.length = 2.5})), 2500.0 * 2.0 * pi * 0.05));
    CHECK(close(heat(slab(Spherical{})), 1000.0 * 4.0 * pi * 0.05 * 0.05));
    const auto through = [](Body body) {
        return steady(
            body.on("right", FixedTemperature{20.0}).on("left", Flux{.into = 1000}))[heat_out_through("right")];
    };
    CHECK(close(through(plate(Planar{.depth = 1.0})), 1000.0 * 0.1));
    CHECK(close(through(plate(Planar{.depth = 0.4})), 1000.0 * 0.1 * 0.4));
    CHECK(close(through(plate(Cylindrical{})), 1000.0 * 0.1 * 2.0 * pi * 0.1));
}

TEST_CASE("generation per volume counts the volume, a total is what it says, whatever the size") {
    const auto heat = [](Body body, Generation g) {
        return steady(body.in("slab", std::move(g)))[heat_out_through("outer")];
    };
    CHECK(close(heat(slab(Planar{.area = 3.0}), Generation{.per_volume = 1e4}), 1e4 * 0.1 * 3.0));
    CHECK(close(heat(slab(Planar{.area = 3.0}), Generation{.total = 500}), 500.0));
    CHECK(close(heat(slab(Cylindrical{.length = 2.0}), Generation{.per_volume = 1e4}),
                1e4 * pi * (0.15 * 0.15 - 0.05 * 0.05) * 2.0));
    CHECK(close(heat(slab(Spherical{}), Generation{.total = 500}), 500.0));
}

TEST_CASE("a second statement of the same kind is refused and points to Parameter and to replace") {
    const auto refused = [](auto second) {
        for (const char* remedy : {"Parameter", "replace"})
            check_refused(second, ErrorCode::contradiction, "inner", remedy);
        check_refused(second, ErrorCode::contradiction, "inner", "already");
    };
    Body body = slab();
    body.on("inner", Film{.coefficient = 10.0, .fluid = 0.0});
    refused([&] { body.on("inner", Film{.coefficient = 10.0, .fluid = 0.0}); });
    body.on("inner", Flux{.into = 1.0});
    refused([&] { body.on("inner", Flux{.out_of = 1.0}); });
    body.on("inner", Radiation{.emissivity = 0.5, .surroundings = 0.0});
    refused([&] { body.on("inner", Radiation{.emissivity = 0.5, .surroundings = 0.0}); });
    for (const char* remedy : {"Parameter", "replace"}) {
        check_refused([&] { body.on("outer", FixedTemperature{30.0}); }, ErrorCode::contradiction, "outer", remedy);
        check_refused([&] { body.in("slab", Material{.conductivity = 3.0}); }, ErrorCode::contradiction, "slab",
                      remedy);
    }
    body.in("slab", Generation{.total = 1.0});
    check_refused([&] { body.in("slab", Generation{.per_volume = 1.0}); }, ErrorCode::contradiction, "slab", "also_in");
    body.in("slab", SideFilm{.coefficient = 5.0, .fluid = 0.0, .thickness = 0.01});
    check_refused([&] { body.in("slab", SideFilm{.coefficient = 5.0, .fluid = 0.0, .thickness = 0.01}); },
                  ErrorCode::contradiction, "slab", "replace");
}

TEST_CASE("a refused statement leaves the body as it was") {
    Body body = slab();
    body.on("inner", Flux{.into = 1000});
    CHECK_THROWS_AS(body.on("inner", Flux{.into = 9000}), Error);
    CHECK(close(steady(body)[heat_in_through("inner")], 1000.0));
}

TEST_CASE("different kinds on a face add, and the balance keeps them apart") {
    Body body = slab();
    body.on("inner", Film{.coefficient = 10.0, .fluid = 220.0});
    body.on("inner", Flux{.into = 300});
    body.on("inner", Radiation{.emissivity = 0.8, .surroundings = 220.0});
    const Field field = steady(body);
    const double T = field.at(0.05);
    const double film = 10.0 * (220.0 - T);
    const double radiation = 0.8 * stefan_boltzmann * (std::pow(220.0 + 273.15, 4) - std::pow(T + 273.15, 4));
    CHECK(close(field[heat_in_through("inner")], film + 300.0 + radiation, 1e-9));
    const Balance balance = field.balance();
    const FaceHeat& face = face_of(balance, "inner");
    CHECK(close(face.film, -film, 1e-9));
    CHECK(close(face.flux, -300.0));
    CHECK(close(face.radiation, -radiation, 1e-9));
    CHECK(close(face.out, -(film + 300.0 + radiation), 1e-9));
}

TEST_CASE("also_on and also_in add another of the same kind on purpose") {
    Body two = slab();
    two.on("inner", Film{.coefficient = 10.0, .fluid = 100.0});
    two.also_on("inner", Film{.coefficient = 30.0, .fluid = 60.0});
    two.in("slab", Generation{.total = 50.0}).also_in("slab", Generation{.total = 70.0});
    Body one = slab();
    one.on("inner", Film{.coefficient = 40.0, .fluid = 70.0}); // the same film as both together
    one.in("slab", Generation{.total = 120.0});
    CHECK(close(steady(two).at(0.05), steady(one).at(0.05)));
    Body flux = slab();
    flux.on("inner", Flux{.into = 500}).also_on("inner", Flux{.out_of = 200});
    CHECK(close(steady(flux)[heat_in_through("inner")], 300.0));
}

TEST_CASE("replace takes back all statements of the kind and leaves the others") {
    Body body = slab();
    body.on("inner", Film{.coefficient = 10.0, .fluid = 100.0})
        .also_on("inner", Film{.coefficient = 30.0, .fluid = 60.0});
    body.on("inner", Flux{.into = 500});
    body.replace("inner", Film{.coefficient = 5.0, .fluid = 20.0});
    Body fresh = slab();
    fresh.on("inner", Film{.coefficient = 5.0, .fluid = 20.0}).on("inner", Flux{.into = 500});
    CHECK(close(steady(body).at(0.05), steady(fresh).at(0.05)));
    check_refused([&] { body.replace("inner", Radiation{.emissivity = 0.5, .surroundings = 0.0}); }, ErrorCode::missing,
                  "inner", "first");
    body.replace("slab", Material{.conductivity = 4.0});
    CHECK(steady(body).at(0.05) < steady(fresh).at(0.05));
}

TEST_CASE("a prescribed temperature may be a number, a parameter or a function of place") {
    const Parameter held{"held", 40.0};
    Body body = plate();
    body.on("left", FixedTemperature{held});
    body.on("right", FixedTemperature{of_place([](const auto& p) { return 40.0 + 100.0 * p.y; })});
    const Field field = steady(body);
    CHECK(close(field.at({0.1, 0.05}), 40.0));
    CHECK(close(field.at({0.3, 0.0}), 40.0));
    CHECK(close(field.at({0.3, 0.05}), 45.0));
    CHECK(close(field.at({0.3, 0.1}), 50.0));
    body.set(held, 60.0);
    CHECK(close(steady(body).at({0.1, 0.05}), 60.0));
    Body wrong = plate();
    wrong.on("left", FixedTemperature{law([](const auto& s) { return 1.0 * s.temperature; })});
    check_refused([&] { (void)steady(wrong); }, ErrorCode::not_supported, "temperature of \"left\"", "of_place");
}

TEST_CASE("a face with nothing said is adiabatic and listed so; a surface without a name is told of") {
    const Balance balance = steady(slab()).balance();
    CHECK(face_of(balance, "inner").adiabatic);
    CHECK(!face_of(balance, "outer").adiabatic);
    CHECK(!balance.has_unnamed);
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.2, 0.2}).cut({0.05, 0.05}, {0.1, 0.1});
    Body holed{tiles<Quadrilateral<1>>(drawing, {.size = 0.05})};
    holed.in("plate", Material{.conductivity = 1.0}).on("left", FixedTemperature{0.0});
    CHECK(steady(holed).balance().has_unnamed);
    CHECK(!steady(plate().on("left", FixedTemperature{0.0})).balance().has_unnamed);
}

TEST_CASE("an edge may belong to several faces: each reports it, the balance counts it once") {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.2, 0.1}).face("half", {0.0, 0.1}, {0.1, 0.1});
    const auto body = [&] {
        Body b{tiles<Quadrilateral<1>>(drawing, {.size = 0.05})};
        b.in("plate", Material{.conductivity = 2.0}).on("bottom", FixedTemperature{0.0});
        return b;
    };
    Body films = body();
    films.on("top", Film{.coefficient = 10.0, .fluid = 100.0});
    const Field field = steady(films);
    const double all = field[heat_in_through("top")];
    const double half = field[heat_in_through("half")];
    CHECK(close(half, 0.5 * all, 1e-9));
    CHECK(!face_of(field.balance(), "half").adiabatic);
    CHECK(close(field.balance().in, all, 1e-9));
    CHECK(field.balance().balanced());

    films.on("half", Film{.coefficient = 5.0, .fluid = 100.0});
    check_refused([&] { (void)steady(films); }, ErrorCode::contradiction, "half", "also_on");
    Body meant = body();
    meant.on("top", Film{.coefficient = 10.0, .fluid = 100.0})
        .also_on("half", Film{.coefficient = 5.0, .fluid = 100.0});
    CHECK(steady(meant)[heat_in_through("half")] > 0.5 * steady(meant)[heat_in_through("top")]);
    Body kinds = body();
    kinds.on("top", Film{.coefficient = 10.0, .fluid = 100.0}).on("half", Flux{.into = 100.0});
    const Field both = steady(kinds);
    CHECK(both.balance().balanced());
    CHECK(close(face_of(both.balance(), "half").flux, -10.0));
    CHECK(close(both[heat_in_through("top")], both[heat_out_through("bottom")], 1e-9));
}

TEST_CASE("in degrees and in kelvin one body has one answer; laws and tables read the body's scale") {
    const auto body = [](TemperatureScale scale) {
        const double zero = scale == TemperatureScale::kelvin ? 273.15 : 0.0;
        Body b{layers<Segment<2>>({{.region = "slab", .thickness = 0.1, .cells = 4}}), scale};
        b.in("slab", Material{.conductivity = table({{zero, 1.0}, {zero + 1000.0, 3.0}})});
        b.in("slab", Generation{.per_volume = law([zero](const auto& s) { return 100.0 * (s.temperature - zero); })});
        b.on("inner", Film{.coefficient = 20.0, .fluid = zero + 800.0});
        b.on("outer", Radiation{.emissivity = 0.9, .surroundings = zero + 20.0});
        return b;
    };
    const Field celsius = steady(body(TemperatureScale::celsius));
    const Field kelvin = steady(body(TemperatureScale::kelvin));
    for (const double x : {0.0, 0.03, 0.1}) CHECK(std::abs(kelvin.at(x) - celsius.at(x) - 273.15) <= 1e-9);
    CHECK(close(kelvin[heat_out_through("outer")], celsius[heat_out_through("outer")], 1e-10));
}

TEST_CASE("below 100 K on a radiating face of a kelvin body is refused unless written kelvin(20)") {
    const auto body = [](Value surroundings, Value fluid) {
        Body b{layers<Segment<1>>({{.region = "slab", .thickness = 0.1}}), TemperatureScale::kelvin};
        b.in("slab", Material{.conductivity = 2.0}).on("inner", FixedTemperature{300.0});
        b.on("outer", Radiation{.emissivity = 0.9, .surroundings = std::move(surroundings)});
        b.on("outer", Film{.coefficient = 5.0, .fluid = std::move(fluid)});
        return b;
    };
    check_refused([&] { (void)steady(body(20.0, 300.0)); }, ErrorCode::bad_unit, "outer", "kelvin(20)");
    check_refused([&] { (void)steady(body(300.0, 20.0)); }, ErrorCode::bad_unit, "outer", "kelvin(20)");
    const Field cold = steady(body(kelvin(20), kelvin(20)));
    const double T = cold.at(0.1);
    CHECK(close(cold[heat_out_through("outer")],
                0.9 * stefan_boltzmann * (std::pow(T, 4) - std::pow(20.0, 4)) + 5.0 * (T - 20.0), 1e-9));
    Body set_later = body(Parameter{"surroundings", 300.0}, 300.0);
    check_refused([&] { set_later.set(set_later.parameters()[0], 20.0); }, ErrorCode::bad_value, "surroundings",
                  "kelvin");
    // no radiation, no suspicion
    Body film{layers<Segment<1>>({{.region = "slab", .thickness = 0.1}}), TemperatureScale::kelvin};
    film.in("slab", Material{.conductivity = 2.0}).on("outer", Film{.coefficient = 5.0, .fluid = 20.0});
    CHECK(close(steady(film).at(0.1), 20.0));
}

TEST_CASE("a field owns a snapshot: later calls on the body do not touch it") {
    const Parameter power{"power", 100.0};
    Body body = slab();
    body.in("slab", Generation{.total = power});
    const Field field = steady(body);
    const double before = field.at(0.05);
    body.set(power, 900.0);
    body.on("inner", Film{.coefficient = 50.0, .fluid = 0.0});
    CHECK(field.at(0.05) == before);
    CHECK(field.value(power) == 100.0);
    CHECK(close(field[heat_out_through("outer")], 100.0));
    CHECK(body.value(power) == 900.0);
}

TEST_CASE("set keeps its value through later statements, and each body has its own") {
    const Parameter power{"power", 100.0};
    Body body = slab();
    body.in("slab", Generation{.total = power});
    Body other = body;
    body.set(power, 250.0);
    body.on("inner", Flux{.into = 10.0});
    CHECK(body.value(power) == 250.0);
    CHECK(close(steady(body)[heat_out_through("outer")], 260.0));
    CHECK(close(steady(other)[heat_out_through("outer")], 100.0));
    body.set(power, 100.0); // and back
    CHECK(close(steady(body)[heat_out_through("outer")], 110.0));
}
