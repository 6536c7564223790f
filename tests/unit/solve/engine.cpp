// Which solver a body gets by itself, and that the roads agree.
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/triangle.hpp>
#include <tepor/linear/cholesky.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/engine_system.hpp>
#include <vector>

using namespace tepor;
using test::form_system;

namespace {

/// More unknowns than a direct solver is chosen for: 261 x 241 nodes, the left ones held.
Body plate() {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.3, 0.2});
    drawing.split_x({.from = 0.0, .to = 0.3, .cells = 260}).split_y({.from = 0.0, .to = 0.2, .cells = 240});
    Body body{tiles<Triangle<1>>(drawing)};
    body.in("plate", Material{.conductivity = of_place([](const auto& p) { return 20.0 + 50.0 * p.x; })});
    body.in("plate", Generation{.per_volume = 4e4});
    body.on("left", FixedTemperature{20.0});
    body.on("top", Film{.coefficient = 30.0, .fluid = 60.0});
    return body;
}

} // namespace

TEST_CASE("one solve of a large body iterates, many make a factor, and both find the same temperatures") {
    const Body body = plate();
    const Model& model = *body.model();
    REQUIRE(model.free == 260 * 241);
    Engine engine(body.model());
    const std::vector<double> start(static_cast<std::size_t>(model.unknowns), 20.0);
    form_system(body, engine, start);

    REQUIRE(engine.factor(Purpose::one_solve));
    CHECK_FALSE(engine.direct());
    std::vector<double> iterated = engine.residual;
    REQUIRE(engine.solve(iterated.data(), 1e-9));
    CHECK(engine.iterations() > 0);
    CHECK(engine.iterations() <= 25);

    REQUIRE(engine.factor(Purpose::many_solves));
    CHECK(engine.direct());
    std::vector<double> direct = engine.residual;
    REQUIRE(engine.solve(direct.data(), 0.0));
    CHECK(engine.iterations() == 0);
    double largest = 0.0;
    double apart = 0.0;
    for (Index u = 0; u < model.free; ++u) {
        const auto i = static_cast<std::size_t>(u);
        largest = std::max(largest, std::abs(direct[i]));
        apart = std::max(apart, std::abs(direct[i] - iterated[i]));
    }
    CHECK(largest > 10.0);
    CHECK(apart <= 1e-9 * largest);

    const Field field = steady(body);
    double worst = 0.0;
    for (Index u = 0; u < model.free; ++u) {
        const auto i = static_cast<std::size_t>(u);
        worst = std::max(worst, std::abs(field.temperature()[i] - (start[i] - direct[i])));
    }
    CHECK(worst <= 1e-8 * largest);
}

TEST_CASE("an iterative solver that is asked again and again gives way to a factor") {
    const Body body = plate();
    Engine engine(body.model());
    form_system(body, engine);
    REQUIRE(engine.factor(Index{1}));
    std::vector<double> first = engine.residual;
    REQUIRE(engine.solve(first.data(), 1e-9));
    CHECK_FALSE(engine.direct());
    std::vector<double> last;
    for (int k = 0; k < 4; ++k) {
        last = engine.residual;
        REQUIRE(engine.solve(last.data(), 1e-9));
    }
    CHECK(engine.direct());
    double apart = 0.0;
    for (std::size_t i = 0; i < first.size(); ++i) apart = std::max(apart, std::abs(first[i] - last[i]));
    CHECK(apart <= 1e-7);
}

TEST_CASE("a matrix that has lost its zeros gives the same bits, and is whole again once it is formed anew") {
    const Body body = plate();
    const Index n = body.model()->free;
    const std::vector<double> cold(static_cast<std::size_t>(body.model()->unknowns), 20.0);
    Engine keeps(body.model());
    Engine drops(body.model());
    drops.may_drop_zeros = true;
    const Index whole = keeps.matrix.entries();
    for (int round = 0; round < 2; ++round) {
        CAPTURE(round);
        for (Engine* engine : {&keeps, &drops}) {
            form_system(body, *engine, cold);
            CHECK(engine->matrix.entries() == whole);
            REQUIRE(engine->factor(Index{1}));
        }
        CHECK(keeps.matrix.entries() == whole);
        CHECK(drops.matrix.entries() < whole * 4 / 5); // right angles: a quarter of the entries is zero
        std::vector<double> by_copy = keeps.residual, in_place = drops.residual;
        REQUIRE(keeps.solve(by_copy.data(), 1e-9));
        REQUIRE(drops.solve(in_place.data(), 1e-9));
        CHECK(by_copy == in_place);
    }
    // the factor that takes over knows the shorter pattern only; a new matrix has to get a new one
    std::vector<double> by_factor;
    for (int k = 0; k < 4; ++k) {
        by_factor = drops.residual;
        REQUIRE(drops.solve(by_factor.data(), 1e-9));
    }
    CHECK(drops.direct());
    form_system(body, drops, cold);
    REQUIRE(drops.factor(Purpose::many_solves));
    std::vector<double> anew = drops.residual;
    REQUIRE(drops.solve(anew.data(), 0.0));
    double apart = 0.0;
    for (Index u = 0; u < n; ++u)
        apart = std::max(apart, std::abs(anew[static_cast<std::size_t>(u)] - by_factor[static_cast<std::size_t>(u)]));
    CHECK(apart <= 1e-9);
}

TEST_CASE("an iteration that crawls gives way to a factor within 30 iterations") {
    // Slender cells whose nodes are moved at random: no aggregate fits them, conjugate gradients take more than 100 iterations.
    Tiles drawing;
    drawing.add("strip", {0.0, 0.0}, {1.0, 0.01});
    drawing.split_x({.from = 0.0, .to = 1.0, .cells = 245}).split_y({.from = 0.0, .to = 0.01, .cells = 245});
    Mesh<Triangle<1>> mesh = tiles<Triangle<1>>(drawing);
    std::uint64_t state = 1;
    const auto between = [&state](double size) {
        state = state * 6364136223846793005U + 1442695040888963407U; // Knuth's MMIX
        return size * (static_cast<double>(state >> 11U) * 0x1p-53 - 0.5);
    };
    for (Point& p : mesh.nodes) {
        const double dx = between(0.5 / 245.0), dy = between(0.005 / 245.0);
        if (p.x > 1e-9 && p.x < 1.0 - 1e-9) p.x += dx;
        if (p.y > 1e-11 && p.y < 0.01 - 1e-11) p.y += dy;
    }
    Body body{std::move(mesh)};
    body.in("strip", Material{.conductivity = 2.0});
    body.in("strip", Generation{.per_volume = 1e4});
    body.on("left", Film{.coefficient = 30.0, .fluid = 60.0});
    Engine engine(body.model());
    form_system(body, engine);
    REQUIRE(engine.factor(Purpose::one_solve));
    CHECK_FALSE(engine.direct());
    std::vector<double> x = engine.residual;
    REQUIRE(engine.solve(x.data(), 1e-9));
    CHECK(engine.iterations() == 30);
    CHECK(engine.direct());
    std::vector<double> product(x.size());
    multiply(engine.matrix, body.model()->free, x.data(), product.data());
    double off = 0.0, size = 0.0;
    for (std::size_t i = 0; i < x.size(); ++i) {
        off += std::abs(product[i] - engine.residual[i]);
        size += std::abs(engine.residual[i]);
    }
    CHECK(off <= 1e-6 * size); // temperatures of 1e4 K through couplings of 200 W/K: rounding
    std::vector<double> again = engine.residual;
    REQUIRE(engine.solve(again.data(), 1e-9));
    CHECK(engine.iterations() == 0);
    CHECK(again == x);
}

TEST_CASE("a steady solve has the same bits with helping threads, and a number of threads below one is refused") {
    const Body body = plate();
    const Field alone = steady(body);
    const Body same = plate();
    const Field helped = steady(same, {.threads = 3});
    CHECK(alone.temperature() == helped.temperature());
    CHECK(alone.reaction() == helped.reaction());
    CHECK_THROWS_WITH_AS(static_cast<void>(steady(body, {.threads = 0})), doctest::Contains("threads = 0"), Error);
}

TEST_CASE("a limit below rounding ends an iteration instead of keeping it busy") {
    const Body body = plate();
    Engine engine(body.model());
    form_system(body, engine);
    REQUIRE(engine.factor(Purpose::one_solve));
    std::vector<double> b = engine.residual;
    CHECK(engine.solve(b.data(), 0.0));
    CHECK(engine.iterations() <= 40);
}

TEST_CASE("a linear solver from outside finds the same field, and is asked again until the heat balances") {
    const Body body = plate();
    int asked = 0;
    struct Rough { // only three digits at a time
        SparseCholesky own;
        int* asked;
        void analyze(const SparseMatrix& pattern, Index n, const Point* places) { own.analyze(pattern, n, places); }
        bool factor(const SparseMatrix& matrix) { return own.factor(matrix); }
        void solve(double* b) {
            ++*asked;
            own.solve(b);
            for (Index i = 0; i < own.size(); ++i) b[i] *= 1.0001;
        }
        [[nodiscard]] Index singular_row() const { return own.singular_row(); }
    };
    const auto outside = any_solver(Rough{{}, &asked});
    const Field theirs = steady(body, {.solver = outside.get()});
    const Field ours = steady(body);
    CHECK(asked >= 3);
    double apart = 0.0;
    for (std::size_t i = 0; i < ours.temperature().size(); ++i)
        apart = std::max(apart, std::abs(ours.temperature()[i] - theirs.temperature()[i]));
    CHECK(apart <= 1e-7);
}

TEST_CASE("a march of few steps iterates and ends where a march of many does") {
    Body body = plate();
    body.replace("plate", Material{.conductivity = of_place([](const auto& p) { return 20.0 + 50.0 * p.x; }),
                                   .density = 7800.0,
                                   .specific_heat = 460.0});
    March few{body, initial(20.0), Theta{.theta = 1.0, .step = 30.0, .expected_steps = 2}};
    March many{body, initial(20.0), Theta{.theta = 1.0, .step = 30.0}};
    for (int k = 0; k < 2; ++k) {
        REQUIRE(few.advance().ok());
        REQUIRE(many.advance().ok());
    }
    const std::vector<double> a = few.field().temperature(), b = many.field().temperature();
    double apart = 0.0, largest = 0.0;
    for (std::size_t i = 0; i < a.size(); ++i) {
        apart = std::max(apart, std::abs(a[i] - b[i]));
        largest = std::max(largest, b[i]);
    }
    CHECK(largest > 20.5);
    CHECK(apart > 0.0); // not the same road
    CHECK(apart <= 1e-8);
    CHECK_THROWS_AS((March{body, initial(20.0), Theta{.step = 1.0, .expected_steps = -1}}), Error);
}
