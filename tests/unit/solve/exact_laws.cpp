// ExactSegment: conductivities of temperature, fins, thin shells, and what it refuses.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/layered.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;

TEST_CASE("a conductivity of temperature is exact in its integral, tables with bends included") {
    // Kirchhoff's variable: H. S. Carslaw, J. C. Jaeger, Conduction of Heat in Solids, 2nd ed., 1959, section 1.6
    const Table k = table({{0.0, 1.0}, {100.0, 1.5}, {250.0, 0.9}, {600.0, 2.0}});
    const auto theta = [](double T) { // integral of the table from 0
        const double at[4] = {0.0, 100.0, 250.0, 600.0};
        const double v[4] = {1.0, 1.5, 0.9, 2.0};
        double sum = 0.0;
        for (int i = 0; i < 3; ++i) {
            const double to = std::min(T, at[i + 1]);
            if (to <= at[i]) break;
            const double v_to = v[i] + (v[i + 1] - v[i]) * (to - at[i]) / (at[i + 1] - at[i]);
            sum += 0.5 * (v[i] + v_to) * (to - at[i]);
        }
        return sum;
    };
    for (const int n : {0, 1, 2})
        for (const Index cells : {1, 4}) {
            CAPTURE(n);
            CAPTURE(cells);
            const Frame frame = n == 0 ? Frame(Planar{}) : n == 1 ? Frame(Cylindrical{}) : Frame(Spherical{});
            Body body(
                layers<ExactSegment>({{.region = "wall", .thickness = 0.2, .cells = cells}}, frame, {.start = 0.1}));
            body.in("wall", Material{.conductivity = k});
            body.in("wall", Generation{.per_volume = 3000.0});
            body.on("inner", FixedTemperature{550.0});
            body.on("outer", FixedTemperature{20.0});
            const Field field = steady(body);
            // theta solves the same wall with k = 1
            const test::LayeredCase truth(0.1, n, frame.factor(1),
                                          {{0.3, [](double) { return 1.0; }, [](double) { return 3000.0; }}}, 1e30,
                                          theta(550.0), 1e30, theta(20.0));
            for (const double r : {0.11, 0.15, 0.2, 0.25, 0.29}) {
                CAPTURE(r);
                CHECK(std::abs(theta(field.at(r)) - truth.at(r)) <= 1e-12 * theta(550.0));
            }
            CHECK(std::abs(field[heat_out_through("outer")] - truth.flow(0.3)) <= 1e-12 * std::abs(truth.flow(0.3)));
            const Balance balance = field.balance();
            CHECK(std::abs(balance.left_over) <= 1e-10 * balance.gross + balance.floor);
        }
}

TEST_CASE("a conductivity law of temperature converges and keeps the solid centre exact") {
    // uranium-like pellet with k = 1 / (A + B T): integral of k = ln((A + B T) / A) / B; common practice, no source
    Body pellet(layers<ExactSegment>({{.region = "fuel", .thickness = 0.004}}, Cylindrical{.length = 1.0}));
    pellet.in("fuel",
              Material{.conductivity = law([](const auto& s) { return 1.0 / (0.05 + 2.2e-4 * s.temperature); })});
    pellet.in("fuel", Generation{.per_volume = 3.5e8});
    pellet.on("outer", FixedTemperature{400.0});
    const Field field = steady(pellet);
    const auto theta = [](double T) { return std::log((0.05 + 2.2e-4 * T) / 0.05) / 2.2e-4; };
    for (const double r : {0.0, 0.001, 0.0025, 0.0039}) {
        CAPTURE(r);
        const double want = theta(400.0) + 3.5e8 * (0.004 * 0.004 - r * r) / 4.0;
        CHECK(std::abs(theta(field.at(r)) - want) <= 1e-11 * want);
    }
    CHECK(std::abs(field.hottest().temperature - field.at(0.0)) <= 1e-9);
    CHECK(field.hottest().place.x == 0.0);
}

TEST_CASE("one exact cell is the exact fin, also when it is very long or hardly loses heat") {
    // Source: F. P. Incropera, D. P. DeWitt, Fundamentals of Heat and Mass Transfer, table 3.4 (convective tip)
    for (const double length : {0.01, 0.3, 20.0})
        for (const double h : {1e-6, 30.0, 4e4})
            for (const Index cells : {1, 3}) {
                CAPTURE(length);
                CAPTURE(h);
                const double k = 180.0;
                const double area = 2e-4;
                const double perimeter = 0.06;
                Body fin(layers<ExactSegment>(
                    {{.region = "fin", .thickness = length, .cells = cells, .grading = finer_at_start(4)}},
                    Planar{.area = area}));
                fin.in("fin", Material{.conductivity = k});
                fin.in("fin", SideFilm{.coefficient = h, .fluid = 25.0, .perimeter = perimeter});
                fin.on("inner", FixedTemperature{120.0});
                fin.on("outer", Film{.coefficient = 15.0, .fluid = 25.0});
                const Field field = steady(fin);
                const double m = std::sqrt(h * perimeter / (k * area));
                const double tip = 15.0 / (m * k);
                const auto T = [&](double x) {
                    // cosh(u) + tip sinh(u) over the same at the base, without overflow
                    const double u = m * (length - x);
                    const double a = m * length;
                    const double up = 0.5 * ((1.0 + tip) * std::exp(u - a) + (1.0 - tip) * std::exp(-u - a));
                    const double down = 0.5 * ((1.0 + tip) + (1.0 - tip) * std::exp(-2.0 * a));
                    return 25.0 + 95.0 * up / down;
                };
                for (const double s : {0.1, 0.4, 0.75, 1.0}) {
                    CAPTURE(s);
                    CHECK(std::abs(field.at(s * length) - T(s * length)) <= 1e-11 * 120.0);
                }
                const double a = m * length;
                const double base = k * area * m * 95.0 * (std::tanh(a) + tip) / (1.0 + tip * std::tanh(a));
                CHECK(std::abs(field[heat_in_through("inner")] - base) <= 1e-11 * base + 1e-13);
                const Balance balance = field.balance();
                CHECK(std::abs(balance.left_over) <= 1e-10 * balance.gross + balance.floor);
                const double to_sides = base - area * 15.0 * (T(length) - 25.0);
                CHECK(std::abs(balance.regions[0].side_loss - to_sides) <= 1e-10 * base + 1e-12);
            }
}

TEST_CASE("a fin with generation and a fluid temperature of place is exact, its mean included") {
    // manufactured: T = 40 + 500 x^2 + 60 sin(7 x) in k T'' = c (T - fluid) - f, c = h P / A
    const double k = 20.0;
    const double h = 12.0;
    const double thickness = 0.008;
    const double c = 2.0 * h / thickness;
    const auto T = [](double x) { return 40.0 + 500.0 * x * x + 60.0 * std::sin(7.0 * x); };
    Body plate(layers<ExactSegment>({{.region = "plate", .thickness = 0.25}}));
    plate.in("plate", Material{.conductivity = k});
    plate.in("plate", SideFilm{.coefficient = h,
                               .fluid = of_place([](const auto& p) { return 40.0 + 500.0 * p.x * p.x; }),
                               .thickness = thickness});
    plate.in("plate", Generation{.per_volume = of_place([=](const auto& p) {
                                     return c * 60.0 * sin(7.0 * p.x) - k * (1000.0 - 49.0 * 60.0 * sin(7.0 * p.x));
                                 })});
    plate.on("inner", FixedTemperature{T(0.0)});
    plate.on("outer", Flux{.into = k * (1000.0 * 0.25 + 420.0 * std::cos(7.0 * 0.25))});
    const Field field = steady(plate);
    for (const double x : {0.02, 0.11, 0.2, 0.25}) CHECK(std::abs(field.at(x) - T(x)) <= 1e-11 * 100.0);
    const double mean = 40.0 + 500.0 * 0.25 * 0.25 / 3.0 + 60.0 * (1.0 - std::cos(7.0 * 0.25)) / (7.0 * 0.25);
    CHECK(std::abs(field[mean_in("plate")] - mean) <= 1e-10);
    const double h_max = field.hottest("plate").temperature;
    double best = 0.0;
    for (int i = 0; i <= 100000; ++i) best = std::max(best, T(0.25 * i / 100000.0));
    CHECK(std::abs(h_max - best) <= 1e-8);
}

TEST_CASE("thin shells and wires in thick lagging lose no digits") {
    // common practice, no source: T falls linearly in ln r and in 1 / r
    for (const int n : {1, 2})
        for (const double ratio : {1.0 + 1e-9, 1.0 + 1e-3, 10.0, 1e4}) {
            if (n == 2 && ratio > 1e3) continue;
            CAPTURE(n);
            CAPTURE(ratio);
            const double a = 0.02;
            const double b = a * ratio;
            const double thickness = b - a;
            Body body(layers<ExactSegment>({{.region = "shell", .thickness = thickness}},
                                           n == 1 ? Frame(Cylindrical{}) : Frame(Spherical{}), {.start = a}));
            body.in("shell", Material{.conductivity = 2.0});
            body.in("shell", Generation{.per_volume = 100.0});
            body.on("inner", FixedTemperature{100.0});
            body.on("outer", FixedTemperature{0.0});
            const Field field = steady(body);
            const double t = thickness / a;
            const double resistance =
                n == 1 ? std::log1p(t) / (2.0 * pi * 2.0) : t / (a * (1.0 + t)) / (4.0 * pi * 2.0);
            // heat into the inner face: 100 / R less the part of the generation that leaves inwards
            const double w = test::integrate(
                0.0, std::log1p(t),
                [&](double u) {
                    const double r = a * std::exp(u);
                    const double share = n == 1 ? u / std::log1p(t) : std::expm1(-u) / std::expm1(-std::log1p(t));
                    return 100.0 * (n == 1 ? 2.0 * pi * r : 4.0 * pi * r * r) * r * (1.0 - share);
                },
                100);
            const double want = 100.0 / resistance - w;
            CHECK(std::abs(field[heat_in_through("inner")] - want) <= 3e-13 * (100.0 / resistance + w));
        }
}

TEST_CASE("what exact cells cannot follow is named, not passed over") {
    const auto wall = [] {
        Body body(layers<ExactSegment>({{.region = "lining", .thickness = 0.2}}));
        body.on("inner", FixedTemperature{100.0});
        body.on("outer", FixedTemperature{0.0});
        return body;
    };
    test::check_refused( // no integral
        [&] {
            Body body = wall();
            body.in("lining", Material{.conductivity = 1.0});
            body.in("lining", Generation{.per_volume = of_place([](Point p) { return 1e3 / std::abs(p.x - 0.0707); })});
            (void)steady(body);
        },
        ErrorCode::not_supported, "generation in \"lining\"", "end a layer where it bends");
    test::check_refused( // a source of temperature beside a conductivity that jumps
        [&] {
            Body body = wall();
            body.in("lining", Material{.conductivity = of_place([](Point p) { return p.x < 0.0707 ? 1.0 : 5.0; })});
            body.in("lining", Generation{.per_volume = law([](const auto& s) { return 10.0 * s.temperature; })});
            (void)steady(body);
        },
        ErrorCode::not_supported, "conductivity of \"lining\"", "give the layer more cells");
    test::check_refused(
        [&] {
            Body body = wall();
            body.in("lining",
                    Material{.conductivity = law([](const auto& s) { return 1.0 + s.x + 0.001 * s.temperature; })});
            (void)steady(body);
        },
        ErrorCode::not_supported, "conductivity of \"lining\"", "use Segment<2> for both");
    test::check_refused(
        [&] {
            Body body = wall();
            body.in("lining", Material{.conductivity = 1.0});
            body.at(0.05, LocalHeat{.total = 10.0});
            (void)steady(body);
        },
        ErrorCode::not_supported, "x = 0.05", "end a layer there");
}

TEST_CASE("a table is judged on what lies between the nodes too") {
    Body body(layers<ExactSegment>({{.region = "slab", .thickness = 0.1}}));
    body.in("slab", Material{.conductivity = table({{0.0, 1.0}, {100.0, 2.0}})});
    body.in("slab", Generation{.per_volume = 2e5});
    body.on("inner", FixedTemperature{20.0});
    body.on("outer", FixedTemperature{20.0});
    test::check_refused([&] { (void)steady(body); }, ErrorCode::outside_table, "conductivity of \"slab\"",
                        "covers 0 to 100");
}

TEST_CASE("a heating plane on a border of exact cells is exact") {
    Body body(layers<ExactSegment>({{.region = "left", .thickness = 0.1}, {.region = "right", .thickness = 0.3}}));
    body.in("left", Material{.conductivity = 2.0});
    body.in("right", Material{.conductivity = 3.0});
    body.at(0.1, LocalHeat{.total = 60.0});
    body.on("inner", FixedTemperature{0.0});
    body.on("outer", FixedTemperature{0.0});
    // 60 W split between 2 / 0.1 and 3 / 0.3 W/K
    CHECK(std::abs(steady(body).at(0.1) - 60.0 / 30.0) <= 1e-14);
}
