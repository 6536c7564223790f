// Under a sinusoid until the cycles repeat: amplitudes and lags in the wall, and how far the surface flux leads.
#include <cmath>
#include <complex>
#include <doctest/doctest.h>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/periodic.hpp>
#include <vector>

using namespace tepor;

namespace {

const double day = 86400.0;

/// A wall whose inner face goes by 10 + 15 sin(2 pi t / day); with `deep` 1 m thick, its back held at 10 degC.
Body wall(bool deep) {
    Body body{layers<Segment<1>>({{.region = "wall", .thickness = deep ? 1.0 : 0.3, .cells = deep ? 100 : 30}})};
    body.in("wall", Material{.conductivity = 1.2, .density = 2000.0, .specific_heat = 1000.0});
    body.on("inner", FixedTemperature{
                         .temperature = of_time([](double t) { return 10.0 + 15.0 * std::sin(2.0 * pi * t / day); })});
    if (deep) body.on("outer", FixedTemperature{10.0});
    return body;
}

struct Wave {
    double amplitude = 0.0;
    double lag = 0.0; ///< behind sin(2 pi t / day) [s]; negative: ahead of it
};

/// The part of a quantity that goes with the day, over one more day of steps.
std::vector<Wave> waves_of(March& march, const std::vector<Quantity>& quantities, Index steps) {
    std::vector<Probe> probes;
    for (const Quantity& quantity : quantities) probes.push_back(march.watch(quantity));
    std::vector<std::complex<double>> sum(probes.size());
    for (Index i = 0; i < steps; ++i) {
        CHECK(march.advance().ok());
        const double turn = 2.0 * pi * march.time() / day;
        for (std::size_t q = 0; q < probes.size(); ++q)
            sum[q] += march[probes[q]] * std::complex<double>(std::sin(turn), std::cos(turn));
    }
    std::vector<Wave> waves;
    for (const std::complex<double>& s : sum)
        waves.push_back({2.0 * std::abs(s) / static_cast<double>(steps), -std::arg(s) * day / (2.0 * pi)});
    return waves;
}

struct Row {
    double x, amplitude, lag;
};

void check(March& march, const std::vector<Row>& rows, double flux, double lead) {
    std::vector<Quantity> asked{heat_in_through("inner")};
    for (const Row& row : rows) asked.push_back(at(row.x));
    const std::vector<Wave> waves = waves_of(march, asked, 144);
    CHECK(std::abs(waves[0].amplitude / flux - 1.0) <= 5e-3);
    CHECK(std::abs(-waves[0].lag - lead) <= 120.0);
    for (std::size_t i = 0; i < rows.size(); ++i) {
        CAPTURE(rows[i].x);
        CHECK(std::abs(waves[i + 1].amplitude / rows[i].amplitude - 1.0) <= 5e-3);
        CHECK(std::abs(waves[i + 1].lag - rows[i].lag) <= 120.0);
    }
}

// Source: Carslaw & Jaeger, Conduction of Heat in Solids, 2nd ed., 1959, section 2.6
const std::vector<Row> deep_rows{{0.05, 10.1636202242, 5352.37234846},
                                 {0.1, 6.88661173746, 10704.7446969},
                                 {0.2, 3.16169474817, 21409.4893938},
                                 {0.3, 1.45155761087, 32114.2340907}};
// Source: the same, section 3.6
const std::vector<Row> wall_rows{
    {0.1, 6.58304908274, 10851.1638449}, {0.2, 3.24130620501, 24386.4628236}, {0.3, 2.90411806611, 32242.9407511}};

} // namespace

TEST_CASE("a deep solid under a daily sinusoid, after twenty days, has the amplitudes, lags and the flux of theory") {
    March march{wall(true), initial(10.0), Theta{.theta = 0.5, .step = 600.0}};
    march.advance_to(20.0 * day);
    check(march, deep_rows, 198.16636488, 10800.0);
    CHECK(march.balance().balanced());
    CHECK(march.total().balanced());
}

TEST_CASE("the same found at once by the periodic state") {
    Periodic deep = periodic_steady(wall(true), day, Theta{.theta = 0.5, .step = 600.0});
    check(deep.march, deep_rows, 198.16636488, 10800.0);
}

TEST_CASE("a wall with an adiabatic back, after fifteen days and found at once") {
    March march{wall(false), initial(10.0), Theta{.theta = 0.5, .step = 600.0}};
    march.advance_to(15.0 * day);
    check(march, wall_rows, 198.320626702, 10542.6867954);
    Periodic cycle = periodic_steady(wall(false), day, Theta{.theta = 0.5, .step = 600.0});
    check(cycle.march, wall_rows, 198.320626702, 10542.6867954);
}
