// Quantities of temperature fields that are known: polynomials the elements hold exactly.
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tests/support/given_field.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using test::check_refused;
using test::given_field;

namespace {

bool close(double a, double b, double relative = 1e-12) {
    return std::abs(a - b) <= relative * (std::abs(a) + std::abs(b));
}

/// 0.3 x 0.2, two regions side by side, depth 0.5.
template <class E>
Body two_regions(double k_left = 2.0, double k_right = 2.0) {
    Tiles drawing;
    drawing.add("left half", {0.0, 0.0}, {0.1, 0.2}).add("right half", {0.1, 0.0}, {0.3, 0.2});
    Body body{tiles<E>(drawing, {.size = 0.05}, Planar{.depth = 0.5})};
    body.in("left half", Material{.conductivity = k_left}).in("right half", Material{.conductivity = k_right});
    return body;
}

double slope_field(Point p) {
    return 20.0 + 100.0 * p.x - 40.0 * p.y;
}

} // namespace

TEST_CASE_TEMPLATE("points, means and extremes of a linear field are exact", E, Triangle<1>, Triangle<2>, Triangle<3>,
                   Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>) {
    const Field field = given_field(two_regions<E>(), slope_field);
    CHECK(close(field.at({0.123, 0.077}), slope_field({0.123, 0.077})));
    CHECK(close(field[at({0.3, 0.2})], slope_field({0.3, 0.2})));
    CHECK(close(field[mean_in("left half")], slope_field({0.05, 0.1})));
    CHECK(close(field[mean_in("right half")], slope_field({0.2, 0.1})));
    CHECK(close(field[mean_on("top")], slope_field({0.15, 0.2})));
    CHECK(close(field[mean_on("right")], slope_field({0.3, 0.1})));
    CHECK(close(field[hottest_in("right half")], slope_field({0.3, 0.0})));
    CHECK(close(field[coldest_in("left half")], slope_field({0.0, 0.2})));
    CHECK(close(field[hottest_on("left")], slope_field({0.0, 0.0})));
    CHECK(close(field[coldest_on("top")], slope_field({0.0, 0.2})));
    CHECK(close(field.hottest().temperature, slope_field({0.3, 0.0})));
    CHECK(distance(field.hottest().place, {0.3, 0.0}) <= 1e-9);
    CHECK(distance(field.coldest("right half").place, {0.1, 0.2}) <= 1e-9);
    const Point flux = field.heat_flux({0.2, 0.1});
    CHECK(close(flux.x, -2.0 * 100.0));
    CHECK(close(flux.y, 2.0 * 40.0));
}

TEST_CASE("a heat flux follows the tensor of the material") {
    Body body = two_regions<Quadrilateral<1>>();
    body.replace("right half", Material{.conductivity = tensor(3.0, 1.0, 5.0)});
    const Point flux = given_field(body, slope_field).heat_flux({0.2, 0.1});
    CHECK(close(flux.x, -(3.0 * 100.0 + 1.0 * -40.0)));
    CHECK(close(flux.y, -(5.0 * -40.0 + 1.0 * 100.0)));
}

TEST_CASE_TEMPLATE("the mean over a disc is that of a linear field's centre, and asks for cells that see it", E,
                   Triangle<2>, Quadrilateral<2>) {
    const Field field = given_field(two_regions<E>(), slope_field);
    check_refused(
        [&] {
            (void)field[mean_around({0.2, 0.1}, -1.0)];
        },
        ErrorCode::bad_value, "mean around (0.2, 0.1)", "> 0");
    check_refused([&] { (void)field[mean_around({0.9, 0.1}, 0.01)]; }, ErrorCode::outside, "(0.9, 0.1)", "metres");
}

TEST_CASE_TEMPLATE("heat through faces and between regions of a linear field is k grad T times the area", E,
                   Triangle<1>, Triangle<2>, Quadrilateral<2>, Quadrilateral<3>) {
    Body body = two_regions<E>();
    // held all round, so that every edge has a reaction; the field is the solution
    for (const char* side : {"left", "right", "bottom", "top"})
        body.on(side, FixedTemperature{of_place([](const Point& p) { return slope_field(p); })});
    const Field field = given_field(body, slope_field);
    CHECK(close(field[heat_out_through("left")], 2.0 * 100.0 * 0.2 * 0.5, 1e-10));
    CHECK(close(field[heat_in_through("right")], 2.0 * 100.0 * 0.2 * 0.5, 1e-10));
    CHECK(close(field[heat_in_through("bottom")], 2.0 * 40.0 * 0.3 * 0.5, 1e-10));
    CHECK(close(field[heat_out_through("top")], 2.0 * 40.0 * 0.3 * 0.5, 1e-10));
    CHECK(close(field[heat_from("right half", "left half")], 2.0 * 100.0 * 0.2 * 0.5, 1e-10));
    CHECK(close(field[heat_from("left half", "right half")], -2.0 * 100.0 * 0.2 * 0.5, 1e-10));
    const Balance balance = field.balance();
    CHECK(balance.balanced());
    for (const FaceHeat& f : balance.faces) CHECK(close(f.prescribed, f.out, 1e-10));
}

TEST_CASE("generation is read per region, local heat included") {
    Body body = two_regions<Quadrilateral<1>>();
    body.in("left half", Generation{.per_volume = 1000.0}).also_in("left half", Generation{.total = 3.0});
    body.at({0.2, 0.1}, LocalHeat{.total = 7.0, .radius = 0.01});
    body.on("left", FixedTemperature{0.0});
    const Field field = given_field(body, slope_field);
    CHECK(close(field[generated_in("left half")], 1000.0 * 0.1 * 0.2 * 0.5 + 3.0));
    CHECK(close(field[generated_in("right half")], 7.0));
    const Balance balance = field.balance();
    CHECK(close(balance.generated, 20.0));
    CHECK(close(balance.regions[0].generated, 13.0));
    CHECK(close(balance.regions[1].generated, 7.0));
    CHECK(balance.stored == 0.0);
}

TEST_CASE("a face of one kind of condition reports what its formula says at the field's temperatures") {
    Body body = two_regions<Quadrilateral<2>>();
    body.on("left", FixedTemperature{0.0});
    body.on("right", Film{.coefficient = 8.0, .fluid = 10.0});
    body.on("top", Flux{.into = 30.0});
    const Field field = given_field(body, slope_field);
    CHECK(close(field[heat_out_through("right")], 8.0 * (slope_field({0.3, 0.1}) - 10.0) * 0.2 * 0.5));
    CHECK(close(field[heat_in_through("top")], 30.0 * 0.3 * 0.5));
    const Balance balance = field.balance();
    CHECK(!balance.balanced()); // this field is no solution: what is left over is not hidden
    CHECK(std::abs(balance.left_over) > 1.0);
    for (const FaceHeat& f : balance.faces) {
        if (f.name == "bottom") CHECK(f.adiabatic);
        if (f.name == "top") CHECK(close(f.flux, -4.5));
        if (f.name == "right") CHECK(close(f.area, 0.1));
    }
}

TEST_CASE("node and cell temperatures come back in the user's numbering, jumps of contacts kept") {
    Body body = two_regions<Triangle<1>>();
    body.between("left half", "right half", Contact{.conductance = 1.0});
    body.on("left", FixedTemperature{0.0});
    const Field field = given_field(body, slope_field);
    const MeshData& mesh = field.mesh();
    const std::vector<double> nodes = field.node_temperatures();
    CHECK(nodes.size() == mesh.nodes.size());
    for (std::size_t n = 0; n < nodes.size(); ++n) CHECK(close(nodes[n], slope_field(mesh.nodes[n])));
    const std::vector<double> cells = field.cell_temperatures();
    CHECK(cells.size() == mesh.cells.size());
    for (std::size_t i = 0; i < cells.size(); ++i)
        CHECK(close(cells[i], slope_field(mesh.nodes[detail::as_size(mesh.cells[i])])));
    CHECK(field.temperature().size() > nodes.size());
}

TEST_CASE("in 1D a parabola's extremes, means and fluxes are exact in every frame") {
    for (const Frame& frame : {Frame(Planar{.area = 2.0}), Frame(Cylindrical{.length = 3.0}), Frame(Spherical{})}) {
        Body body{layers<Segment<2>>({{.region = "a", .thickness = 0.1}, {.region = "b", .thickness = 0.2, .cells = 2}},
                                     frame, {.start = 0.1})};
        body.in("a", Material{.conductivity = 2.0}).in("b", Material{.conductivity = 2.0});
        const auto parabola = [](Point p) { return 100.0 * (p.x - 0.13) * (p.x - 0.13); };
        const Field field = given_field(body, parabola);
        CHECK(std::abs(field[coldest_in("a")]) <= 1e-12);
        CHECK(std::abs(field.coldest().place.x - 0.13) <= 1e-6);
        CHECK(close(field[hottest_in("b")], parabola({0.4, 0.0})));
        CHECK(close(field[mean_on("outer")], parabola({0.4, 0.0})));
        CHECK(close(field.heat_flux(0.3).x, -2.0 * 200.0 * 0.17));
        // mean over a: integral of r^n T / integral of r^n by hand-made Simpson on 2000 pieces
        const int n = frame.power();
        double above = 0.0;
        double below = 0.0;
        for (int i = 0; i <= 2000; ++i) {
            const double r = 0.1 + 0.1 * i / 2000.0;
            const double w = (i == 0 || i == 2000 ? 1.0 : (i % 2 == 1 ? 4.0 : 2.0)) * std::pow(r, n);
            above += w * parabola({r, 0.0});
            below += w;
        }
        CHECK(close(field[mean_in("a")], above / below, 1e-10));
    }
}

TEST_CASE("stored heat is the heat content above zero of the body's scale, and asks for what it needs") {
    Body body = two_regions<Triangle<2>>();
    body.on("left", FixedTemperature{0.0});
    check_refused([&] { (void)given_field(body, slope_field)[stored_in("left half")]; }, ErrorCode::missing,
                  "left half", "density");
    body.replace("left half", Material{.conductivity = 2.0, .density = 1000.0, .specific_heat = 500.0});
    const Field field = given_field(body, slope_field);
    CHECK(close(field[stored_in("left half")], 1000.0 * 500.0 * slope_field({0.05, 0.1}) * 0.1 * 0.2 * 0.5));
}

TEST_CASE("a flow between a region and itself is refused") {
    const Field field = given_field(two_regions<Quadrilateral<1>>().on("left", FixedTemperature{0.0}), slope_field);
    check_refused([&] { (void)field[heat_from("left half", "left half")]; }, ErrorCode::bad_name, "left half",
                  "different");
}
