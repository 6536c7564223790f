// Straight triangles of uniform data are differentiated in closed form: the same as by their integration points, and as moved meshes.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/gradient_march.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/meshes.hpp>

using namespace tepor;

namespace {

const Parameter k{"k", 3.0}, along{"along", 2.0}, across{"across", 5.0}, heat{"heat", 800.0}, source{"source", 300.0};

/// The same body with numbers, or with laws of place that give these numbers: the laws are met at every point.
Body body_on(const Mesh<Triangle<1>>& mesh, bool by_points) {
    const auto value = [by_points](const Parameter& p) {
        return by_points ? Value(of_place({p}, [](const auto& at, auto v) { return v + 0.0 * at.x; })) : Value(p);
    };
    Body body{mesh};
    body.in("left", Material{.conductivity = value(k), .density = 1000.0, .specific_heat = 500.0});
    body.in(
        "right",
        Material{.conductivity = tensor(value(along), 0.7, value(across)), .density = 2000.0, .specific_heat = 700.0});
    body.in("left", Generation{.total = heat});
    body.in("right", Generation{.per_volume = value(source)});
    body.on("bottom", Film{.coefficient = 6.0, .fluid = 20.0});
    body.on("right side", FixedTemperature{40.0});
    return body;
}

Mesh<Triangle<1>> skewed() {
    Mesh<Triangle<1>> mesh = test::unit_mesh<Triangle<1>>(4, 3);
    for (Point& p : mesh.nodes) p = {p.x + 0.1 * p.y * p.x, p.y - 0.07 * p.x * p.x};
    return mesh;
}

void same(const Gradient& a, const Gradient& b) {
    for (const Parameter& p : {k, along, across, heat, source}) {
        CAPTURE(p.name());
        CHECK(std::abs(a[p] - b[p]) <= 1e-12 * (std::abs(b[p]) + std::abs(b.value() / p.value())));
    }
    for (std::size_t n = 0; n < a.nodes().size(); ++n)
        CHECK(distance(a.nodes()[n], b.nodes()[n]) <= 1e-12 * (std::abs(b.value()) + distance(b.nodes()[n], {})));
}

} // namespace

TEST_CASE("uniform straight triangles have the derivatives of their integration points, steady and through time") {
    const Mesh<Triangle<1>> mesh = skewed();
    const Body closed = body_on(mesh, false);
    const Body points = body_on(mesh, true);
    for (const Quantity& q : {at({0.31, 0.42}), mean_in("right"), heat_out_through("bottom"),
                              heat_from("left", "right"), heat_out_through("right side")}) {
        CAPTURE(q.label());
        same(gradient(steady(closed), q), gradient(steady(points), q));
    }
    const auto run = [](const Body& body) {
        March march{body, initial(20.0), Theta{.theta = 0.5, .step = 4000.0}};
        march.record();
        for (int i = 0; i < 8; ++i) march.advance().require();
        return gradient(march, mean_in("left"));
    };
    same(run(closed), run(points));
}

TEST_CASE("node positions of uniform straight triangles agree with solves on moved meshes") {
    const Mesh<Triangle<1>> mesh = skewed();
    const Quantity q = mean_in("right");
    const Gradient slope = gradient(steady(body_on(mesh, false)), q);
    for (std::size_t n = 0; n < mesh.nodes.size(); n += 2)
        for (int d = 0; d < 2; ++d) {
            CAPTURE(n);
            CAPTURE(d);
            const double h = 1e-4;
            const double weight[4] = {8.0, -8.0, -1.0, 1.0};
            const double at[4] = {h, -h, 2.0 * h, -2.0 * h};
            double exact = 0.0;
            for (int i = 0; i < 4; ++i) {
                Mesh<Triangle<1>> moved = mesh;
                (d == 0 ? moved.nodes[n].x : moved.nodes[n].y) += at[i];
                exact += weight[i] / (12.0 * h) * steady(body_on(moved, false))[q];
            }
            const double by_node = d == 0 ? slope.nodes()[n].x : slope.nodes()[n].y;
            CHECK(std::abs(by_node - exact) <= 1e-7 * (1.0 + std::abs(exact)));
        }
}
