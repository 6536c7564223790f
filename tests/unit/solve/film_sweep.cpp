// Sweeps over values of a linear body: what a small change of the matrix costs, and that no road changes the answer.
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/engine_system.hpp>
#include <vector>

using namespace tepor;
using test::form_system;

namespace {

struct Bar {
    Parameter film{"film", 25.0}, k{"k", 3.0}, fluid{"fluid", 60.0}, long_film{"long film", 5.0};

    /// 121 x 11 nodes; `film` acts on the 11 of the left end, `long film` on the 121 of the top.
    [[nodiscard]] Body body() const {
        Tiles drawing;
        drawing.add("bar", {0.0, 0.0}, {0.6, 0.05});
        drawing.split_x({.from = 0.0, .to = 0.6, .cells = 120}).split_y({.from = 0.0, .to = 0.05, .cells = 10});
        Body made{tiles<Triangle<1>>(drawing)};
        made.in("bar", Material{.conductivity = k});
        made.in("bar", Generation{.per_volume = 2e4});
        made.on("left", Film{.coefficient = film, .fluid = fluid});
        made.on("top", Film{.coefficient = long_film, .fluid = 10.0});
        made.on("right", FixedTemperature{20.0});
        return made;
    }
};

double difference(const Field& a, const Field& b) {
    double worst = 0.0;
    for (std::size_t i = 0; i < a.temperature().size(); ++i)
        worst = std::max(worst, std::abs(a.temperature()[i] - b.temperature()[i]));
    return worst;
}

} // namespace

TEST_CASE("a factor serves other films of a small face by an update, as a new factor would") {
    const Bar bar;
    Body body = bar.body();
    Engine engine(body.model()), plain(body.model());
    form_system(body, engine);
    REQUIRE(engine.factor(Purpose::one_solve));
    REQUIRE(engine.updatable());
    engine.key = {1.0};
    engine.keep_base();
    for (const double film : {26.0, 0.0, 1e5, 25.0}) {
        CAPTURE(film);
        body.set(bar.film, film);
        form_system(body, engine);
        form_system(body, plain);
        REQUIRE(engine.update(11) == 0);
        REQUIRE(plain.factor(Purpose::one_solve));
        std::vector<double> a = engine.residual, b = plain.residual;
        REQUIRE(engine.solve(a.data(), 0.0));
        REQUIRE(plain.solve(b.data(), 0.0));
        double worst = 0.0, largest = 0.0;
        for (Index u = 0; u < body.model()->free; ++u) {
            worst = std::max(worst, std::abs(a[static_cast<std::size_t>(u)] - b[static_cast<std::size_t>(u)]));
            largest = std::max(largest, std::abs(b[static_cast<std::size_t>(u)]));
        }
        CHECK(largest > 1.0);
        CHECK(worst <= 1e-10 * largest);
    }
    body.set(bar.film, 30.0);
    form_system(body, engine);
    CHECK(engine.update(10) == 11); // one row too many: the old factor stands
    const std::vector<double> changed = engine.matrix.lower;
    engine.restore_base();
    CHECK(engine.key == std::vector<double>{1.0});
    CHECK(engine.matrix.lower != changed);
}

TEST_CASE("values set one after the other are solved as on a fresh body, whatever they change") {
    const Bar bar;
    Body body = bar.body();
    Field field = steady(body);
    struct Change {
        double film, k, fluid, long_film;
    };
    std::vector<Change> changes;
    for (int i = 0; i < 12; ++i) changes.push_back({30.0 + 7.0 * i, 3.0, 60.0, 5.0});    // the small film
    for (int i = 0; i < 3; ++i) changes.push_back({30.0, 3.0, 50.0 + i, 5.0});           // loads alone
    for (int i = 0; i < 12; ++i) changes.push_back({30.0, 3.0, 50.0, 6.0 + i});          // the long film
    for (int i = 0; i < 3; ++i) changes.push_back({30.0 + i, 3.0 + 0.1 * i, 50.0, 6.0}); // all over the body
    for (int i = 0; i < 3; ++i) changes.push_back({1e6 * (i + 1), 3.2, 50.0, 1e-9});     // ten decades
    changes.push_back({0.0, 3.2, 50.0, 0.0});
    changes.push_back(changes.front());
    for (const Change& change : changes) {
        CAPTURE(change.film);
        CAPTURE(change.k);
        CAPTURE(change.long_film);
        body.set(bar.film, change.film);
        body.set(bar.k, change.k);
        body.set(bar.fluid, change.fluid);
        body.set(bar.long_film, change.long_film);
        steady(body, field);
        Body fresh = bar.body();
        fresh.set(bar.film, change.film);
        fresh.set(bar.k, change.k);
        fresh.set(bar.fluid, change.fluid);
        fresh.set(bar.long_film, change.long_film);
        CHECK(difference(field, steady(fresh)) <= 1e-7);
        CHECK(field.passes().back().residual <= field.passes().back().limit);
    }
}
