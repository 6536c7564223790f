// The steady gradient on handbook cases, by moved meshes, and what it refuses.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/gradient.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/meshes.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;

TEST_CASE("derivatives of a generating annulus are those of its closed form") {
    // Hollow cylinder insulated inside, film outside: T(ri) = Tf + q (ro^2 - ri^2) / (2 ro h) + q (ro^2 - ri^2) / (4 k)
    // + q ri^2 / (2 k) ln(ri / ro). Source: Carslaw & Jaeger, Conduction of Heat in Solids, 2nd ed., section 7.9 (method).
    const double ri = 0.02, ro = 0.05;
    const Parameter k{"k", 3.0}, h{"h", 40.0}, q{"q", 2e5}, Tf{"Tf", 30.0}, wall{"wall", ro - ri};
    Body body{layers<Segment<3>>({{.region = "ring", .thickness = wall, .cells = 16}}, Cylindrical{}, {.start = ri})};
    body.in("ring", Material{.conductivity = k});
    body.in("ring", Generation{.per_volume = q});
    body.on("outer", Film{.coefficient = h, .fluid = Tf});
    const Gradient slope = gradient(steady(body), mean_on("inner"));
    const double area = ro * ro - ri * ri;
    const double within = area / 4.0 + ri * ri / 2.0 * std::log(ri / ro);
    CHECK(std::abs(slope.value() - (30.0 + 2e5 * (area / (2.0 * ro * 40.0) + within / 3.0))) <= 1e-7);
    CHECK(std::abs(slope[k] + 2e5 * within / 9.0) <= 1e-7);
    CHECK(std::abs(slope[h] + 2e5 * area / (2.0 * ro * 1600.0)) <= 1e-9);
    CHECK(std::abs(slope[q] - (area / (2.0 * ro * 40.0) + within / 3.0)) <= 1e-12);
    CHECK(std::abs(slope[Tf] - 1.0) <= 1e-10);
    // by the outer radius: d/dro of q ((ro^2 - ri^2) / (2 ro h) + (ro^2 - ri^2) / (4 k) + ri^2 ln(ri / ro) / (2 k))
    const double by_ro = 2e5 * ((1.0 + ri * ri / (ro * ro)) / 80.0 + (ro - ri * ri / ro) / 6.0);
    CHECK(std::abs(slope[wall] - by_ro) <= 1e-6 * by_ro);
}

TEST_CASE("derivatives of a fin's heat are those of its closed form") {
    // Straight fin, insulated tip: Q = sqrt(h P k A) (Tb - Tf) tanh(m L), m^2 = h P / (k A).
    // Source: Harper & Brown, NACA report 158 (1922).
    const double P = 0.06, A = 2e-4, L = 0.08, dT = 75.0;
    const Parameter k{"k", 180.0}, h{"h", 25.0}, base{"base", 100.0}, length{"length", L};
    Body fin{layers<Segment<3>>({{.region = "fin", .thickness = length, .cells = 16}}, Planar{.area = A})};
    fin.in("fin", Material{.conductivity = k});
    fin.in("fin", SideFilm{.coefficient = h, .fluid = 25.0, .perimeter = P});
    fin.on("inner", FixedTemperature{base});
    const Gradient slope = gradient(steady(fin), heat_in_through("inner"));
    const double m = std::sqrt(25.0 * P / (180.0 * A));
    const double G = std::sqrt(25.0 * P * 180.0 * A);
    const double t = std::tanh(m * L);
    const double s = 1.0 - t * t;
    CHECK(std::abs(slope.value() - G * dT * t) <= 1e-9 * G * dT);
    CHECK(std::abs(slope[h] - dT * (G * t + G * s * m * L) / (2.0 * 25.0)) <= 1e-9);
    CHECK(std::abs(slope[k] - dT * (G * t - G * s * m * L) / (2.0 * 180.0)) <= 1e-9);
    CHECK(std::abs(slope[base] - G * t) <= 1e-9);
    CHECK(std::abs(slope[length] - G * dT * s * m) <= 1e-6);
    CHECK(slope.ranked()[0].parameter == base);
    for (const Gradient::Entry& e : slope.entries())
        CHECK(std::abs(e.relative - e.value * e.derivative / slope.value()) <= 1e-12);
}

namespace {

/// A section with two fixed faces that meet, a film, an own law of plain doubles on request.
Body section_on(Mesh<Triangle<2>> mesh, bool plain = false) {
    Body body{std::move(mesh)};
    const Parameter slope{"slope", 0.004};
    const Value by_law = plain ? Value(law({slope}, [](const Spot& s, double b) { return 1.0 + b * s.temperature; }))
                               : Value(law({slope}, [](const auto& s, auto b) { return 1.0 + b * s.temperature; }));
    body.in("left", Material{.conductivity = by_law});
    body.in("right", Material{.conductivity = orthotropic(2.0, law([](const auto& s) { return 1.5 + s.y * s.x; }))});
    body.in("left", Generation{.per_volume = of_place([](const auto& p) { return 300.0 * (1.0 + p.y); })});
    // one function for both, so that the corner keeps one temperature wherever it is moved
    const Value held = of_place([](const auto& p) { return 20.0 + 30.0 * p.y + 4.0 * p.x * p.x; });
    body.on("bottom", FixedTemperature{held});
    body.on("right side", FixedTemperature{held});
    body.on("top", Film{.coefficient = 6.0, .fluid = 5.0});
    return body;
}

Mesh<Triangle<2>> unit_square() {
    Mesh<Triangle<2>> mesh = test::unit_mesh<Triangle<2>>(4, 5);
    mesh.faces.push_back({"top", {}});
    for (Index c = 0; c < mesh.cell_count(); ++c)
        for (int s = 0; s < 3; ++s) {
            const Point a = mesh.nodes[static_cast<std::size_t>(mesh.cell(c)[s])];
            const Point b = mesh.nodes[static_cast<std::size_t>(mesh.cell(c)[(s + 1) % 3])];
            if (a.y == 1.0 && b.y == 1.0) mesh.faces[2].sides.push_back({static_cast<Id>(c), s});
        }
    return mesh;
}

std::vector<Quantity> questions() {
    return {at({0.31, 0.62}),
            mean_on("top"),
            mean_around({0.5, 0.5}, 0.3),
            hottest_in("left"),
            hottest_on("top"),
            mean_in("right"),
            heat_out_through("bottom"),
            heat_out_through("right side"),
            heat_out_through("top"),
            heat_from("left", "right"),
            generated_in("left")};
}

} // namespace

TEST_CASE("derivatives by node positions agree with solves on moved meshes for every quantity") {
    const Mesh<Triangle<2>> mesh = unit_square();
    const Field field = steady(section_on(mesh), {.tolerance = 1e-14});
    // nodes: a corner where two fixed faces meet, its neighbours, the edge of a face, some inside
    std::vector<std::size_t> moved;
    for (std::size_t n = 0; n < mesh.nodes.size(); ++n) {
        const Point p = mesh.nodes[n];
        if ((p.x == 1.0 && p.y == 0.0) || distance(p, {0.45, 0.5}) < 0.2 || (p.x == 1.0 && p.y == 0.25) ||
            (p.y == 1.0 && std::abs(p.x - 0.5) < 0.01))
            moved.push_back(n);
    }
    REQUIRE(moved.size() >= 6);
    for (const Quantity& quantity : questions()) {
        CAPTURE(quantity.label());
        const Gradient slope = gradient(field, quantity);
        for (const std::size_t n : moved) {
            for (int d = 0; d < 2; ++d) {
                const double h = 1e-4;
                double value[4];
                for (int i = 0; i < 4; ++i) {
                    Mesh<Triangle<2>> other = mesh;
                    const double by = (i < 2 ? (i == 0 ? 1.0 : -1.0) : (i == 2 ? 2.0 : -2.0)) * h;
                    (d == 0 ? other.nodes[n].x : other.nodes[n].y) += by;
                    value[i] = steady(section_on(other), {.tolerance = 1e-14})[quantity];
                }
                const double by_difference = (8.0 * (value[0] - value[1]) - (value[2] - value[3])) / (12.0 * h);
                CAPTURE(mesh.nodes[n].x);
                CAPTURE(mesh.nodes[n].y);
                CAPTURE(d);
                const Point by_node = slope.nodes()[n];
                CHECK(std::abs((d == 0 ? by_node.x : by_node.y) - by_difference) <=
                      2e-7 * (1.0 + std::abs(by_difference)));
            }
        }
    }
}

TEST_CASE("moving every node alike changes nothing but what is fixed in space") {
    const Mesh<Triangle<1>> mesh = test::unit_mesh<Triangle<1>>(4, 2);
    Body body{mesh};
    body.in("left", Material{.conductivity = 1.0});
    body.in("right", Material{.conductivity = 4.0});
    body.in("left", Generation{.per_volume = 100.0});
    body.on("bottom", Film{.coefficient = 5.0, .fluid = 0.0});
    const Field field = steady(body);
    const Gradient loss = gradient(field, heat_out_through("bottom"));
    CHECK(std::abs(loss.along([](Point) { return Point{1.0, 0.0}; })) <= 1e-9 * loss.value());
    // twice the size is four times the heat, in a depth that stays
    CHECK(std::abs(loss.along([](Point p) { return p; }) - 2.0 * loss.value()) <= 1e-9 * loss.value());
    // a probe that stays behind while the body moves sees minus the slope of the field
    const Point place{0.21, 0.37};
    const double eps = 1e-6;
    const double by_x = (field.at({place.x + eps, place.y}) - field.at({place.x - eps, place.y})) / (2.0 * eps);
    CHECK(std::abs(gradient(field, at(place)).along([](Point) { return Point{1.0, 0.0}; }) + by_x) <= 1e-6);
}

TEST_CASE("laws of plain doubles give six digits and say so") {
    const Mesh<Triangle<2>> mesh = unit_square();
    const Gradient exact = gradient(steady(section_on(mesh), {.tolerance = 1e-14}), heat_out_through("top"));
    const Gradient plain = gradient(steady(section_on(mesh, true), {.tolerance = 1e-14}), heat_out_through("top"));
    CHECK(exact.exact());
    CHECK_FALSE(plain.exact());
    const double a = exact.entries()[0].derivative;
    CHECK(std::abs(plain.entries()[0].derivative - a) <= 1e-6 * std::abs(a));
    for (std::size_t n = 0; n < mesh.nodes.size(); ++n)
        CHECK(distance(plain.nodes()[n], exact.nodes()[n]) <= 1e-6 * (1.0 + std::abs(exact.value())));
}

TEST_CASE("layer thickness, start and total generation agree with solves at other values") {
    const Parameter a{"a", 0.1}, b{"b", 0.05}, start{"start", 0.2}, total{"total", 500.0};
    for (const Frame frame : {Frame(Planar{}), Frame(Cylindrical{}), Frame(Spherical{})}) {
        Body body{layers<Segment<2>>({{.region = "core", .thickness = a, .cells = 3},
                                      {.region = "shell", .thickness = b, .cells = 2},
                                      {.region = "cover", .thickness = a, .cells = 1}},
                                     frame, {.start = start})};
        body.in("core", Material{.conductivity = 2.0});
        body.in("shell",
                Material{.conductivity = law([](const auto& s) { return 0.5 + s.x + 0.001 * s.temperature; })});
        body.in("cover", Material{.conductivity = 10.0});
        body.between("core", "shell",
                     Contact{.conductance = of_place([](const auto& p) { return 40.0 + 100.0 * p.x; })});
        body.in("core", Generation{.total = total});
        body.on("inner", FixedTemperature{of_place([](const auto& p) { return 10.0 + 20.0 * p.x; })});
        body.on("outer", Film{.coefficient = 9.0, .fluid = 4.0});
        const SteadyOptions tight{.tolerance = 1e-14};
        for (const Quantity& quantity :
             {at(0.28), at(0.33, "shell"), mean_in("shell"), mean_on("outer"), heat_out_through("inner"),
              heat_out_through("outer"), hottest_in("core"), heat_from("core", "shell"), heat_from("shell", "cover")}) {
            CAPTURE(quantity.label());
            const Gradient slope = gradient(steady(body, tight), quantity);
            for (const Parameter& p : {a, b, start, total}) {
                CAPTURE(p.name());
                const double h = 2e-4 * p.value();
                double value[4];
                for (int i = 0; i < 4; ++i) {
                    Body other = body;
                    other.set(p, p.value() + (i < 2 ? (i == 0 ? 1.0 : -1.0) : (i == 2 ? 2.0 : -2.0)) * h);
                    value[i] = steady(other, tight)[quantity];
                }
                const double by_difference = (8.0 * (value[0] - value[1]) - (value[2] - value[3])) / (12.0 * h);
                CHECK(std::abs(slope[p] - by_difference) <= 1e-6 * (1e-3 + std::abs(by_difference)));
            }
        }
    }
}

TEST_CASE("the gradient is the same after the body is gone or has been changed") {
    const Parameter k{"k", 2.0};
    const auto make = [&] {
        Body body{layers<Segment<1>>({{.region = "wall", .thickness = 0.1, .cells = 4}})};
        body.in("wall", Material{.conductivity = k});
        body.on("inner", FixedTemperature{100.0});
        body.on("outer", Film{.coefficient = 5.0, .fluid = 0.0});
        return body;
    };
    const Quantity loss = heat_out_through("outer");
    const Field orphan = steady(make());
    // q = T / (d / k + 1 / h), dq/dk = T d / k^2 / (d / k + 1 / h)^2
    const double resistance = 0.1 / 2.0 + 0.2;
    const double exact = 100.0 * 0.1 / 4.0 / (resistance * resistance);
    CHECK(std::abs(gradient(orphan, loss)[k] - exact) <= 1e-9);
    Body body = make();
    const Field field = steady(body);
    body.set(k, 7.0);
    (void)steady(body);
    CHECK(std::abs(gradient(field, loss)[k] - exact) <= 1e-9);
    body.on("outer", Flux{.into = 50.0});
    CHECK(std::abs(gradient(field, loss)[k] - exact) <= 1e-9);
    CHECK(std::abs(gradient(field, loss).value() - field[loss]) <= 0.0);
}

TEST_CASE("the gradient refuses what has no derivative and names it") {
    const Parameter k{"k", 2.0}, stranger{"stranger", 1.0};
    Body body{layers<Segment<1>>({{.region = "wall", .thickness = 0.1, .cells = 4}})};
    body.in("wall", Material{.conductivity = k});
    body.on("inner", FixedTemperature{100.0});
    const Field field = steady(body);
    const Gradient slope = gradient(field, mean_in("wall"));
    test::check_refused([&] { (void)slope[stranger]; }, ErrorCode::unused, "stranger", "its parameters are \"k\"");
    test::check_refused([&] { (void)gradient(field, mean_in("roof")); }, ErrorCode::bad_name, "roof", "no region");
    const Field later(field.shared_model(), field.values(), field.temperature(), field.reaction(), 3.0);
    test::check_refused([&] { (void)gradient(later, mean_in("wall")); }, ErrorCode::not_supported, "", "march");
}
