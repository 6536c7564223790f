// The derivative of the residual by slots: columns against differences, contractions against columns.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/body/body.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <vector>

using namespace tepor;

namespace {

/// Every statement with a Parameter of its own; the slots are looked up by the compiled model.
template <class E>
Body busy_body(bool lumped) {
    Tiles drawing;
    drawing.add("a", {0.1, 0}, {1, 1});
    drawing.add("b", {1, 0}, {2, 1});
    Body body{tiles<E>(drawing, {.size = 0.5}, Planar{.depth = 0.3}), BodyOptions{.lumped_faces = lumped}};
    const Parameter slope{"slope", 0.01}, k{"k", 3.0}, source{"source", 50.0}, total{"total", 70.0}, side{"side", 3.0},
        side_fluid{"side fluid", 15.0}, plate{"plate", 0.1}, joint{"joint", 0.2}, film{"film", 2.0},
        fluid{"fluid", 5.0}, grey{"grey", 0.7}, around{"around", 10.0}, flux{"flux", 30.0}, held{"held", 20.0},
        spot{"spot", 8.0};
    body.in("a", Material{.conductivity = law({slope}, [](const auto& s, auto c) { return 1.0 + c * s.temperature; })});
    body.in("b", Material{.conductivity = tensor(table({{-500, 1.0}, {500, k}}), 0.2, k)});
    body.in("a", Generation{.per_volume =
                                law({source}, [](const auto& s, auto g) { return g * exp(-0.01 * s.temperature); })});
    body.in("b", Generation{.total = total});
    body.in("b", SideFilm{.coefficient = side, .fluid = side_fluid, .thickness = plate});
    body.between("a", "b", Contact{.resistance = joint});
    body.on("left", Film{.coefficient =
                             law({film},
                                 [](const auto& s, auto h) {
                                     return h * pow((s.temperature - s.fluid) * (s.temperature - s.fluid) + 1.0, 0.125);
                                 }),
                         .fluid = fluid});
    body.on("right", Radiation{.emissivity = grey, .surroundings = around});
    body.on("top", Flux{.out_of = flux});
    body.on("bottom", FixedTemperature{held});
    body.at({1.4, 0.6}, LocalHeat{.total = spot, .radius = 0.05});
    return body;
}

std::vector<double> residual(const Model& m, const Values& values, const std::vector<double>& T) {
    Workspace work = m.kernels->workspace();
    std::vector<double> r(T.size());
    Pass pass;
    pass.T = T.data();
    pass.residual = r.data();
    assemble(m, values, work, pass);
    REQUIRE_FALSE(bool(pass.fault));
    return r;
}

void check_slopes(const Body& body) {
    const Model& m = *body.model();
    const Values& values = body.values();
    Workspace work = m.kernels->workspace();
    const auto n = detail::as_size(m.unknowns);
    std::vector<double> T(n);
    std::vector<double> weights(n);
    for (std::size_t u = 0; u < n; ++u) {
        T[u] = 20.0 + 15.0 * std::sin(3.0 * m.places[u].x + m.places[u].y + static_cast<double>(u % 3));
        weights[u] = std::cos(static_cast<double>(u));
    }
    SlopeSums sums(m, true);
    contract_slopes(m, values, work, {T.data(), weights.data(), {}, nullptr, 2.0}, sums);
    chain_places(m, sums);
    std::vector<double> column(n);
    for (std::size_t s = 0; s < m.parameters.size(); ++s) {
        CAPTURE(m.parameters[s].name());
        residual_by_slot(m, values, work, T.data(), {}, detail::as_id(s), column.data());
        const double p = values.slots[s];
        const double h = 1e-3 * std::abs(p);
        std::vector<double> exact(n, 0.0);
        double size = 0.0;
        for (int i = -2; i <= 2; ++i) {
            if (i == 0) continue;
            std::vector<double> slots = values.slots;
            slots[s] = p + i * h;
            const std::vector<double> r = residual(m, m.values_for(slots), T);
            const double weight = (i == 1 || i == -1 ? 8.0 : -1.0) * (i > 0 ? 1.0 : -1.0) / (12.0 * h);
            for (std::size_t u = 0; u < n; ++u) {
                exact[u] += weight * r[u];
                size = std::max(size, std::abs(r[u]));
            }
        }
        double largest = 0.0;
        double sum = 0.0;
        double scale = 0.0;
        for (std::size_t u = 0; u < n; ++u) {
            largest = std::max(largest, std::abs(exact[u]));
            sum += 2.0 * weights[u] * column[u];
            scale += std::abs(2.0 * weights[u] * column[u]);
        }
        for (std::size_t u = 0; u < n; ++u) CHECK(std::abs(column[u] - exact[u]) <= 1e-8 * largest + 1e-14 * size / h);
        CHECK(std::abs(sums.slots[s] - sum) <= (m.roles[s].place ? 1e-11 : 1e-13) * scale); // places cancel
        std::vector<double> held(n, 0.0);
        const bool any = prescribed_by_slot(m, values, {}, detail::as_id(s), held.data());
        CHECK(any == (m.parameters[s].name() == "held"));
        if (any)
            for (Index u = m.free; u < m.unknowns; ++u) CHECK(held[detail::as_size(u)] == 1.0);
    }
}

} // namespace

TEST_CASE_TEMPLATE("columns of the residual's slope agree with differences, and contractions with columns", E,
                   Triangle<1>, Triangle<2>, Quadrilateral<2>) {
    check_slopes(busy_body<E>(false));
    check_slopes(busy_body<E>(true));
}

TEST_CASE_TEMPLATE("columns by thickness agree with differences in every frame", E, Segment<1>, Segment<3>) {
    for (const Frame frame : {Frame(Planar{}), Frame(Cylindrical{}), Frame(Spherical{})}) {
        const Parameter a{"a", 0.1}, b{"b", 0.05}, start{"start", 0.2}, total{"total", 500.0}, joint{"joint", 30.0};
        Body body{layers<E>({{.region = "core", .thickness = a, .cells = 40},
                             {.region = "shell", .thickness = b, .cells = 2},
                             {.region = "cover", .thickness = a, .cells = 1}},
                            frame, {.start = start})};
        body.in("core", Material{.conductivity = 2.0});
        body.in("shell",
                Material{.conductivity = law([](const auto& s) { return 0.5 + s.x + 0.001 * s.temperature; })});
        body.in("cover", Material{.conductivity = 10.0});
        body.in("core", Generation{.total = total});
        body.between("core", "shell", Contact{.conductance = joint});
        body.on("outer", Film{.coefficient = of_place([](const auto& p) { return 9.0 + p.x; }), .fluid = 4.0});
        check_slopes(body);
    }
}

TEST_CASE("a restricted contraction takes part of the weak form only") {
    const Body body = busy_body<Triangle<2>>(false);
    const Model& m = *body.model();
    Workspace work = m.kernels->workspace();
    const auto n = detail::as_size(m.unknowns);
    const std::vector<double> T(n, 40.0);
    const std::vector<double> ones(n, 1.0);
    Restriction only;
    only.regions = {1};
    SlopeSums sums(m, false);
    contract_slopes(m, body.values(), work, {T.data(), ones.data(), {}, &only, 1.0}, sums);
    for (std::size_t s = 0; s < sums.slots.size(); ++s) {
        const std::string& name = m.parameters[s].name();
        CAPTURE(name);
        // region b alone, summed over all rows: its total generation, and its side film on 0.3 m3 at 25 K excess
        if (name == "total") CHECK(std::abs(sums.slots[s] + 1.0) <= 1e-12);
        if (name == "side") CHECK(std::abs(sums.slots[s] - 0.3 * 25.0 * 2.0 / 0.1) <= 1e-9);
        if (name == "slope" || name == "film" || name == "joint" || name == "spot") CHECK(sums.slots[s] == 0.0);
    }
}
