// The assembly pass: its matrix is the derivative of its residual, and its weighted sums are those of the residual.

#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/body/assemble.hpp>
#include <tepor/body/body.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/tiles.hpp>
#include <vector>

using namespace tepor;

namespace {

/// Everything at once: two materials with k(T), one of them orthotropic, contact, all kinds of faces, sources, side film.
template <class E>
Body busy_body() {
    Tiles drawing;
    drawing.add("a", {0.1, 0}, {1, 1});
    drawing.add("b", {1, 0}, {2, 1});
    Body body{tiles<E>(drawing, {.size = 0.5}, Planar{.depth = 0.3})};
    body.in("a", Material{.conductivity = law([](const auto& s) { return 1.0 + 0.01 * s.temperature + 0.1 * s.x; })});
    body.in("b", Material{.conductivity = tensor(table({{-500, 1.0}, {500, 3.0}}), 0.2, 2.0)});
    body.in("a", Generation{.per_volume = law([](const auto& s) { return 50.0 * exp(-0.01 * s.temperature); })});
    body.in("b", SideFilm{.coefficient = 3.0, .fluid = 15.0, .thickness = 0.1});
    body.between("a", "b", Contact{.resistance = 0.2});
    body.on("left", Film{.coefficient = law(
                             [](const auto& s) { return 2.0 + 0.1 * pow(abs(s.temperature - s.fluid) + 1.0, 0.25); }),
                         .fluid = 5.0});
    body.on("right", Radiation{.emissivity = 0.7, .surroundings = 10.0});
    body.on("top", Flux{.into = 30.0});
    body.on("bottom", FixedTemperature{of_place([](Point p) { return 20.0 + p.x; })});
    return body;
}

} // namespace

TEST_CASE_TEMPLATE("matrix and transposed product are the derivative of the residual", E, Triangle<1>, Triangle<2>,
                   Quadrilateral<2>) {
    const Body body = busy_body<E>();
    const Model& m = *body.model();
    const Values& values = body.values();
    Workspace work = m.kernels->workspace();
    const auto n = detail::as_size(m.unknowns);
    std::vector<double> T(n);
    for (std::size_t u = 0; u < n; ++u)
        T[u] = 20.0 + 15.0 * std::sin(3.0 * m.places[u].x + m.places[u].y + static_cast<double>(u % 3));
    SparseMatrix J;
    prepare_matrix(m, J);
    CHECK_FALSE(J.symmetric());
    std::vector<double> r(n);
    Pass pass;
    pass.T = T.data();
    pass.residual = r.data();
    pass.matrix = &J;
    assemble(m, values, work, pass);
    REQUIRE_FALSE(bool(pass.fault));

    std::vector<double> direction(n);
    std::vector<double> w(n);
    for (std::size_t u = 0; u < n; ++u) {
        direction[u] = std::cos(static_cast<double>(u));
        w[u] = std::sin(2.0 * static_cast<double>(u) + 1.0);
    }
    std::vector<double> product(n);
    multiply(J, m.unknowns, direction.data(), product.data());
    const auto residual_at = [&](double step) {
        std::vector<double> moved(n);
        for (std::size_t u = 0; u < n; ++u) moved[u] = T[u] + step * direction[u];
        std::vector<double> out(n);
        Pass p;
        p.T = moved.data();
        p.residual = out.data();
        assemble(m, values, work, p);
        return out;
    };
    const double h = 1e-4;
    const std::vector<double> above = residual_at(h);
    const std::vector<double> below = residual_at(-h);
    double scale = 0.0;
    for (const double v : product) scale = std::max(scale, std::abs(v));
    for (std::size_t u = 0; u < n; ++u) CHECK(std::abs(product[u] - (above[u] - below[u]) / (2.0 * h)) <= 1e-7 * scale);

    std::vector<double> transposed(n, 0.0);
    Pass weighed;
    weighed.T = T.data();
    weighed.weights = w.data();
    weighed.transposed = transposed.data();
    assemble(m, values, work, weighed);
    double expected = 0.0;
    for (std::size_t u = 0; u < n; ++u) expected += w[u] * r[u];
    CHECK(std::abs(weighed.weighted - expected) <= 1e-12 * std::abs(expected) + 1e-10);
    std::vector<double> product_t(n);
    multiply_transposed(J, m.unknowns, w.data(), product_t.data());
    for (std::size_t u = 0; u < n; ++u) CHECK(std::abs(transposed[u] - product_t[u]) <= 1e-11 * scale);
}

TEST_CASE("a uniform temperature conducts nothing, whatever the mesh") {
    const Body body = busy_body<Triangle<2>>();
    const Model& m = *body.model();
    Workspace work = m.kernels->workspace();
    std::vector<double> T(detail::as_size(m.unknowns), 37.0);
    std::vector<double> r(T.size());
    Restriction cells;
    cells.regions = {1};
    cells.contacts = {0};
    Pass pass;
    pass.T = T.data();
    pass.residual = r.data();
    pass.only = &cells;
    Accounts accounts;
    pass.accounts = &accounts;
    assemble(m, body.values(), work, pass);
    double sum = 0.0;
    for (const double v : r) sum += v;
    // region "b" only loses heat through its side film: 3 W/(m2 K), two sides of 1 m2 over 0.1 m thickness, depth 0.3 m
    CHECK(std::abs(sum - 3.0 * 2.0 / 0.1 * (37.0 - 15.0) * 0.3) <= 1e-10);
    CHECK(std::abs(accounts.side_loss[1] - sum) <= 1e-10);
    CHECK(std::abs(accounts.contact[0]) <= 1e-12);
}
