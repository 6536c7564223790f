// The smallest step that makes sense: where it lies, and that a step below it says so.
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/march.hpp>
#include <vector>

using namespace tepor;

namespace {

const double diffusivity = 1e-6;
const Material solid{.conductivity = 2.0, .density = 2000.0, .specific_heat = 1000.0};

/// 20 cells of 1 mm, at 0 degC, its inner end held at 100 degC.
template <class E>
Body stepped() {
    Body body{layers<E>({{.region = "slab", .thickness = 0.02, .cells = 20}})};
    body.in("slab", solid);
    body.on("inner", FixedTemperature{.temperature = 100.0});
    return body;
}

/// An equilateral triangle of side 16 h, cut into 256 of side h; its lower side is "bottom".
Mesh<Triangle<1>> triangle_of_triangles(double h) {
    const int n = 16;
    Mesh<Triangle<1>> mesh;
    mesh.region_names = {"plate"};
    mesh.faces = {{"bottom", {}}};
    std::vector<std::vector<Id>> id(n + 1);
    for (int j = 0; j <= n; ++j)
        for (int i = 0; i <= n - j; ++i) {
            id[static_cast<std::size_t>(j)].push_back(static_cast<Id>(mesh.nodes.size()));
            mesh.nodes.push_back({h * (i + 0.5 * j), h * j * std::sqrt(0.75)});
        }
    const auto add = [&](Id a, Id b, Id c) {
        mesh.cells.insert(mesh.cells.end(), {a, b, c});
        mesh.region.push_back(0);
    };
    for (std::size_t j = 0; j < n; ++j)
        for (std::size_t i = 0; i + j < n; ++i) {
            if (j == 0) mesh.faces[0].sides.push_back({static_cast<Id>(mesh.region.size()), 0});
            add(id[j][i], id[j][i + 1], id[j + 1][i]);
            if (i + j + 1 < n) add(id[j][i + 1], id[j + 1][i + 1], id[j + 1][i]);
        }
    return mesh;
}

struct First {
    double coldest = 0.0;
    bool reported = false;
};
First first_step(const Body& body, double theta, double step) {
    March march{body, initial(0.0),
                Theta{.theta = theta, .step = step, .capacity = Capacity::consistent, .damped_start = false}};
    const Step done = march.advance();
    return {march.field().coldest().temperature, done.below_minimum()};
}

} // namespace

TEST_CASE(
    "in 1D the smallest sensible step is h^2 / (6 theta a), and just there a step at the surface begins to swing") {
    const Body body = stepped<Segment<1>>();
    for (const double theta : {0.5, 0.75, 1.0}) {
        March march{body, initial(0.0), Theta{.theta = theta, .step = 1.0, .capacity = Capacity::consistent}};
        const double exact = 1e-6 / (6.0 * theta * diffusivity);
        CHECK(std::abs(march.sensible_step() - exact) <= 1e-12 * exact);
        const First below = first_step(body, theta, 0.98 * exact);
        CHECK(below.coldest < -1e-6);
        CHECK(below.reported);
        const First above = first_step(body, theta, 1.0001 * exact);
        CHECK(above.coldest >= -1e-12);
        CHECK(!above.reported);
    }
}

TEST_CASE("on equilateral triangles it is h^2 / (8 theta a)") {
    const double h = 2e-3;
    Body body{triangle_of_triangles(h)};
    body.in("plate", solid).on("bottom", FixedTemperature{.temperature = 100.0});
    March march{body, initial(0.0), Theta{.theta = 1.0, .step = 1.0, .capacity = Capacity::consistent}};
    const double exact = h * h / (8.0 * diffusivity);
    CHECK(std::abs(march.sensible_step() - exact) <= 1e-9 * exact);
    CHECK(first_step(body, 1.0, 0.95 * exact).coldest < -1e-6);
    CHECK(first_step(body, 1.0, 0.95 * exact).reported);
    CHECK(first_step(body, 1.0, 1.0001 * exact).coldest >= -1e-12);
    CHECK(!first_step(body, 1.0, 1.0001 * exact).reported);
}

TEST_CASE("lumped capacity knows no smallest step, half lumped half of it, and order 2 has one that swings show") {
    const Body body = stepped<Segment<1>>();
    March lumped{body, initial(0.0), Theta{.step = 1e-9}};
    CHECK(lumped.sensible_step() == 0.0);
    CHECK(!lumped.advance().below_minimum());
    March blended{body, initial(0.0), Theta{.theta = 1.0, .step = 1.0, .capacity = Capacity::blended}};
    CHECK(std::abs(blended.sensible_step() - 0.5 * 1e-6 / (6.0 * diffusivity)) <= 1e-12);
    const Body second = stepped<Segment<2>>();
    March march{second, initial(0.0), Theta{.theta = 1.0, .step = 1.0}};
    const double smallest = march.sensible_step();
    CHECK(smallest > 0.01);
    CHECK(smallest < 0.2);
    CHECK(first_step(second, 1.0, 0.1 * smallest).reported);
    CHECK(first_step(second, 1.0, 0.1 * smallest).coldest < -1.0);
    CHECK(!first_step(second, 1.0, 2.0 * smallest).reported);
}

TEST_CASE("a step cut short by an event is reported, one of Adaptive too, and a driven capacity moves the limit") {
    const Parameter density{"density", 2000.0};
    Body body = stepped<Segment<1>>();
    body.replace("slab", Material{.conductivity = 2.0, .density = density, .specific_heat = 1000.0});
    body.replace("inner", FixedTemperature{.temperature = schedule({{0.0, 0.0}, {1.95, 100.0}})});
    March march{body, initial(0.0),
                Theta{.theta = 1.0, .step = 1.0, .capacity = Capacity::consistent, .damped_start = false}};
    CHECK(!march.advance().below_minimum());
    CHECK(march.advance().below_minimum()); // 0.95 s and 0.05 s
    CHECK(march.field().coldest().temperature < -1e-6);
    CHECK(!march.advance().below_minimum());
    const double before = march.sensible_step();
    march.set(march.drive(density), 20000.0);
    CHECK(march.advance().below_minimum());
    CHECK(std::abs(march.sensible_step() - 10.0 * before) <= 1e-12 * before);

    March adaptive{body, initial(0.0),
                   Adaptive{.tolerance = 0.1, .first_step = 0.01, .capacity = Capacity::consistent}};
    CHECK(adaptive.advance().below_minimum());
    const double implicit = 1.0 - std::sqrt(0.5); // of TR-BDF2, in place of theta
    CHECK(std::abs(adaptive.sensible_step() * implicit - before) <= 1e-9 * before);
}

TEST_CASE("bodies whose properties depend on temperature have a smallest step as well") {
    Body body{layers<Segment<2>>({{.region = "slab", .thickness = 0.02, .cells = 20}})};
    body.in("slab", Material{.conductivity = table({{0, 1.0}, {1000, 5.0}}),
                             .density = 2000.0,
                             .specific_heat = table({{0, 800.0}, {1000, 1300.0}})});
    body.on("inner", FixedTemperature{.temperature = 300.0});
    // at 250 degC: k 2 W/(m K), c 925 J/(kg K)
    March hot{body, initial(250.0), Theta{.theta = 1.0, .step = 1.0}};
    Body constant = stepped<Segment<2>>();
    constant.replace("slab", Material{.conductivity = 2.0, .density = 2000.0, .specific_heat = 925.0});
    March same{constant, initial(250.0), Theta{.theta = 1.0, .step = 1.0}};
    CHECK(std::abs(hot.sensible_step() / same.sensible_step() - 1.0) <= 1e-9);
    CHECK(!hot.advance().below_minimum());
}
