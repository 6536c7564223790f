// Linear 1D bodies solved by one sweep give what matrix, factor and solve give; and which bodies are left to those.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/exact_segment.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/linear/tridiagonal.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/line_sweep.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using test::check_refused;

namespace {

/// Temperatures and residuals by the assembled matrix and its factor, corrected until nothing changes.
void solve_plainly(const Body& body, std::vector<double>& T, std::vector<double>& residual) {
    const Model& model = *body.model();
    T.assign(detail::as_size(model.unknowns), 0.0);
    residual.assign(T.size(), 0.0);
    model.prescribe(body.values(), {}, T.data());
    Workspace work = model.kernels->workspace();
    SparseMatrix matrix;
    prepare_matrix(model, matrix);
    Tridiagonal factor;
    for (int pass = 0; pass < 3; ++pass) {
        Pass ask;
        ask.T = T.data();
        ask.residual = residual.data();
        ask.matrix = &matrix;
        assemble(model, body.values(), work, ask);
        REQUIRE(!ask.fault);
        REQUIRE(factor.factor(matrix, model.free));
        std::vector<double> step(residual.begin(), residual.begin() + model.free);
        factor.solve(step.data());
        for (Index u = 0; u < model.free; ++u) T[detail::as_size(u)] -= step[detail::as_size(u)];
    }
    Pass ask;
    ask.T = T.data();
    ask.residual = residual.data();
    assemble(model, body.values(), work, ask);
}

void check_same(const Body& body) {
    const std::shared_ptr<const LinePlan> plan = plan_line(*body.model());
    REQUIRE(plan);
    std::vector<double> T;
    std::vector<double> residual;
    solve_plainly(body, T, residual);
    const Field field = steady(body);
    REQUIRE(field.temperature().size() == T.size());
    double largest = 0.0;
    double apart = 0.0;
    for (std::size_t u = 0; u < T.size(); ++u) {
        largest = std::max(largest, std::abs(T[u]));
        apart = std::max(apart, std::abs(T[u] - field.temperature()[u]));
    }
    CAPTURE(largest);
    CHECK(apart <= 1e-12 * largest);
    // it was the sweep: the plain way takes over silently where that fails
    std::vector<double> swept(T.size());
    std::vector<double> left(T.size());
    body.model()->prescribe(body.values(), {}, swept.data());
    LineSweep::Report report;
    CHECK(LineSweep(body.model(), plan).run(body.values(), {}, swept.data(), left.data(), report));
    CHECK(swept == field.temperature());
    CHECK(left == field.reaction());
    REQUIRE(field.passes().size() == 2);
    const double limit = field.passes().back().limit;
    CHECK(field.passes().back().residual <= limit);
    for (std::size_t u = 0; u < T.size(); ++u) CHECK(std::abs(field.reaction()[u] - residual[u]) <= 2.0 * limit);
    const Balance balance = field.balance();
    CHECK(balance.balanced());
}

const auto k_of_place = of_place([](const auto& p) { return 1.0 + 3.0 * p.x * p.x; });
const auto heat_of_place = of_place([](const auto& p) { return 400.0 - 900.0 * p.x; });

Body bar(Index cells, Frame frame = Planar{}, double start = 0.0) {
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.5, .cells = cells}}, frame, {.start = start})};
    body.in("bar", Material{.conductivity = k_of_place}).in("bar", Generation{.per_volume = heat_of_place});
    return body;
}

} // namespace

TEST_CASE("a sweep gives what the matrix gives, at every size around its pieces and with every kind of end") {
    for (const Index cells : {1, 2, 3, 4, 5, 8, 127, 128, 129, 130, 257, 300}) {
        CAPTURE(cells);
        check_same(bar(cells).on("inner", FixedTemperature{50.0}).on("outer", Film{.coefficient = 9.0, .fluid = 20.0}));
        check_same(bar(cells).on("outer", FixedTemperature{50.0}).on("inner", Film{.coefficient = 9.0, .fluid = 20.0}));
        check_same(bar(cells)
                       .on("inner", Film{.coefficient = 2.0, .fluid = 900.0})
                       .on("outer", Film{.coefficient = 9.0, .fluid = 20.0}));
        check_same(bar(cells).on("outer", Film{.coefficient = 9.0, .fluid = 20.0}));
        check_same(bar(cells).on("inner", Film{.coefficient = 9.0, .fluid = 20.0}));
        check_same(bar(cells).on("inner", Flux{.into = 300.0}).on("outer", FixedTemperature{-40.0}));
        check_same(bar(cells).on("inner", FixedTemperature{-40.0}).on("outer", Flux{.out_of = 70.0}));
        if (cells > 1) check_same(bar(cells).on("inner", FixedTemperature{10.0}).on("outer", FixedTemperature{60.0}));
    }
}

TEST_CASE("a sweep takes pipes and balls, their solid centre too") {
    for (const Frame frame : {Frame(Cylindrical{.length = 2.0}), Frame(Spherical{})}) {
        check_same(bar(150, frame, 0.02)
                       .on("inner", Film{.coefficient = 30.0, .fluid = 90.0})
                       .on("outer", FixedTemperature{20.0}));
        check_same(bar(150, frame).on("outer", Film{.coefficient = 12.0, .fluid = 20.0}));
    }
}

TEST_CASE("a sweep takes layers with contacts, heat at a place, totals and parameters, and follows what is set") {
    const Parameter thickness{"thickness", 0.1};
    const Parameter backing{"backing", 0.2};
    const Parameter gas{"gas", 900.0};
    const Parameter joint{"joint", 300.0};
    Body wall{layers<Segment<1>>({{.region = "brick", .thickness = 0.23, .cells = 140, .grading = finer_at_start(5)},
                                  {.region = "backing", .thickness = thickness, .cells = 3},
                                  {.region = "brick", .thickness = 0.05, .cells = 2},
                                  {.region = "casing", .thickness = 0.006}})};
    wall.in("brick", Material{.conductivity = k_of_place}).in("backing", Material{.conductivity = backing});
    wall.in("casing", Material{.conductivity = 48.0}).in("casing", Generation{.total = 20.0});
    wall.in("brick", Generation{.per_volume = heat_of_place}).also_in("brick", Generation{.total = 70.0});
    wall.between("brick", "backing", Contact{.conductance = joint});
    wall.between("brick", "casing", Contact{.resistance = 0.01});
    wall.at(0.28, LocalHeat{.total = 60.0}).at(0.115, LocalHeat{.total = 33.0});
    wall.on("inner", Film{.coefficient = 25.0, .fluid = gas}).on("inner", Flux{.out_of = 11.0});
    wall.on("outer", Film{.coefficient = 8.0, .fluid = 25.0}).also_on("outer", Film{.coefficient = 3.0, .fluid = 15.0});
    check_same(wall);
    wall.set(gas, 400.0);
    check_same(wall);
    wall.set(backing, 5.0).set(joint, 1e-4);
    check_same(wall);
    wall.set(thickness, 0.02);
    check_same(wall);
}

TEST_CASE("a line from arrays is swept in any numbering and with a face inside, but not when it is held there") {
    MeshArrays arrays;
    arrays.nodes = {{0.3, 0.0}, {0.0, 0.0}, {0.1, 0.0}, {0.5, 0.0}, {0.2, 0.0}};
    arrays.cells = {4, 0, 1, 2, 0, 3, 2, 4};
    arrays.faces = {{"left", {{1, 0}}}, {"inside", {{0, 0}}}, {"right", {{2, 1}}}};
    const auto body = [&] {
        Body made{mesh_from_arrays<Segment<1>>(arrays)};
        made.in("body", Material{.conductivity = 2.0}).in("body", Generation{.per_volume = heat_of_place});
        return made;
    };
    check_same(body().on("left", FixedTemperature{5.0}).on("right", Film{.coefficient = 3.0, .fluid = 40.0}));
    check_same(body().on("inside", Film{.coefficient = 3.0, .fluid = 40.0}));
    check_same(body().on("inside", Film{.coefficient = 3.0, .fluid = 40.0}).on("left", FixedTemperature{5.0}));
    Body held = body().on("inside", FixedTemperature{50.0}).on("left", Flux{.into = 10.0});
    CHECK(!plan_line(*held.model()));
    const Field field = steady(held);
    CHECK(std::abs(field.at(0.2) - 50.0) <= 1e-12);
}

TEST_CASE("what is not linear, not of two nodes, or loses heat from its sides is no case for a sweep") {
    const auto refused = [](Body body) {
        body.on("outer", FixedTemperature{20.0});
        CHECK(!plan_line(*body.model()));
    };
    const auto of = [](auto element, Value k) {
        Body body{layers<decltype(element)>({{.region = "bar", .thickness = 0.5, .cells = 4}})};
        body.in("bar", Material{.conductivity = std::move(k)});
        return body;
    };
    CHECK(plan_line(*of(Segment<1>{}, 2.0).on("outer", FixedTemperature{20.0}).model()));
    refused(of(Segment<1>{}, table({{0, 1.0}, {100, 2.0}})));
    refused(of(Segment<2>{}, 2.0));
    refused(of(ExactSegment{}, 2.0));
    refused(of(Segment<1>{}, 2.0).on("inner", Radiation{.emissivity = 0.8, .surroundings = 20.0}));
    refused(of(Segment<1>{}, 2.0).in("bar", SideFilm{.coefficient = 10.0, .fluid = 20.0, .perimeter = 0.1}));
}

TEST_CASE("a sweep that meets a bad value says so in the words of any solve") {
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.5, .cells = 300}})};
    body.in("bar", Material{.conductivity = of_place([](const auto& p) { return 0.3 - p.x; })});
    body.on("inner", FixedTemperature{20.0});
    check_refused([&] { (void)steady(body); }, ErrorCode::bad_law, "own law", "in cell 180");
    Field field;
    check_refused([&] { steady(body, field); }, ErrorCode::bad_law, "own law", "in cell 180");
    CHECK(field.temperature().empty());
}

TEST_CASE("a field can be filled again, by another value, another body, and from itself") {
    const Parameter gas{"gas", 100.0};
    Body linear{layers<Segment<1>>({{.region = "bar", .thickness = 0.5, .cells = 40}})};
    linear.in("bar", Material{.conductivity = 2.0}).on("inner", Film{.coefficient = 5.0, .fluid = gas});
    linear.on("outer", FixedTemperature{20.0});
    Field field;
    steady(linear, field);
    const double* where = field.temperature().data();
    linear.set(gas, 700.0);
    steady(linear, field);
    CHECK(field.temperature().data() == where);
    CHECK(field.temperature() == steady(linear).temperature());
    CHECK(field[heat_in_through("inner")] == steady(linear)[heat_in_through("inner")]);
    CHECK(field.value(gas) == 700.0);

    Body curved{layers<Segment<2>>({{.region = "bar", .thickness = 0.5, .cells = 20}})};
    curved.in("bar", Material{.conductivity = table({{0, 1.0}, {1000, 3.0}})});
    curved.on("inner", Film{.coefficient = 5.0, .fluid = gas}).on("outer", FixedTemperature{20.0});
    curved.set(gas, 900.0);
    steady(curved, field);
    CHECK(field.temperature() == steady(curved).temperature());
    const std::size_t cold = field.passes().size();
    curved.set(gas, 905.0);
    steady(curved, field, {.from = &field});
    CHECK(field.passes().size() < cold);
    const Field again = steady(curved);
    for (const double x : {0.0, 0.2, 0.45}) CHECK(std::abs(field.at(x) - again.at(x)) <= 1e-8);
}
