// Parameter, Number, Table, Schedule, Value and Conductivity: what they keep and what they refuse.
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/describe/conditions.hpp>
#include <tests/support/refused.hpp>

using namespace tepor;
using test::check_refused;

namespace {

constexpr double not_a_number = std::numeric_limits<double>::quiet_NaN();

} // namespace

TEST_CASE("a parameter is itself in all its copies, and another one of equal name and value is not it") {
    const Parameter a{"power", 500.0};
    const Parameter copy = a;
    const Parameter other{"power", 500.0};
    CHECK(copy == a);
    CHECK(!(other == a));
    CHECK(copy.name() == "power");
    CHECK(copy.value() == 500.0);
    check_refused([] { Parameter("", 1.0); }, ErrorCode::bad_name, "", "name");
    check_refused([] { Parameter("power", not_a_number); }, ErrorCode::bad_value, "power", "finite");
}

TEST_CASE("a number stands for itself or for a parameter") {
    const Parameter p{"thickness", 0.2};
    CHECK(Number(3).number() == 3.0);
    CHECK(Number(3).parameter() == nullptr);
    CHECK(Number(p).number() == 0.2);
    CHECK(*Number(p).parameter() == p);
}

TEST_CASE("a value knows what it was made from") {
    const Parameter p{"k", 0.2};
    CHECK(!Value().given());
    CHECK(Value(7).is_number());
    CHECK(Value(7).number() == 7.0);
    CHECK(Value(p).is_parameter());
    CHECK(Value(p).parameter() == p);
    CHECK(Value(Number(p)).is_parameter());
    CHECK(Value(table({{0, 1.0}})).kind() == Value::Kind::table);
    CHECK(Value(schedule({{0, 1.0}})).kind() == Value::Kind::schedule);
    CHECK(Value(of_time([](double t) { return t; })).kind() == Value::Kind::law);
    CHECK(!Value(20.0).is_kelvin());
    CHECK(kelvin(20).is_kelvin());
    CHECK(kelvin(20).number() == 20.0);
    CHECK(kelvin(p).is_parameter());
}

TEST_CASE("a conductivity is one value, one per direction, or a tensor") {
    const Material isotropic{.conductivity = 2.0};
    CHECK(isotropic.conductivity.isotropic());
    CHECK(!isotropic.conductivity.full_tensor());
    const Conductivity two = orthotropic(1.0, 3.0);
    CHECK(!two.isotropic());
    CHECK(!two.full_tensor());
    CHECK(two.xx().number() == 1.0);
    CHECK(two.yy().number() == 3.0);
    const Conductivity full = tensor(1.0, 0.5, 3.0);
    CHECK(full.full_tensor());
    CHECK(full.xy().number() == 0.5);
    CHECK(!Conductivity().given());
}

TEST_CASE("a table keeps its points in rising order and refuses what it cannot use") {
    const Parameter end{"end", 1.5};
    const Table t = table({{200, 1.10}, {800, end}}, Outside::hold);
    CHECK(t.first() == 200.0);
    CHECK(t.last() == 800.0);
    CHECK(t.outside() == Outside::hold);
    CHECK(*t.points()[1].value.parameter() == end);
    CHECK(table({{0, 1.0}}).outside() == Outside::refuse);
    check_refused([] { (void)table(std::vector<TablePoint>{}); }, ErrorCode::bad_value, "table", "at least one");
    check_refused([] { (void)table({{0, 1.0}, {0, 2.0}}); }, ErrorCode::bad_value, "table", "sort");
    check_refused([] { (void)table({{0, 1.0}, {not_a_number, 2.0}}); }, ErrorCode::bad_value, "table", "finite");
    check_refused([] { (void)table({{0, not_a_number}}); }, ErrorCode::bad_value, "table", "finite");
}

TEST_CASE("a schedule of steps holds each value until the next entry, and the first before it") {
    const Schedule s = schedule({{10.0, 500.0}, {20.0, 0.0}, {25.0, 80.0}});
    CHECK(s.at(0.0) == 500.0);
    CHECK(s.at(10.0) == 500.0);
    CHECK(s.at(19.999) == 500.0);
    CHECK(s.at(20.0) == 0.0); // at a jump the value after it
    CHECK(s.at(1e9) == 80.0);
    CHECK(s.next_event(0.0) == 10.0);
    CHECK(s.next_event(10.0) == 20.0);
    CHECK(s.next_event(25.0) == std::numeric_limits<double>::infinity());
}

TEST_CASE("the mean of a schedule over any span is exact: energies add up whatever the step") {
    const Schedule steps = schedule({{10.0, 500.0}, {20.0, 0.0}, {25.0, 80.0}});
    CHECK(std::abs(steps.mean(0.0, 30.0) * 30.0 - (500.0 * 20.0 + 0.0 + 80.0 * 5.0)) <= 1e-9);
    CHECK(std::abs(steps.mean(19.0, 21.0) - 250.0) <= 1e-12);
    CHECK(steps.mean(20.0, 20.0) == 0.0);
    const Schedule ramps = schedule({{0.0, 0.0}, {10.0, 100.0}, {30.0, 0.0}}, Between::ramps);
    CHECK(ramps.at(5.0) == 50.0);
    CHECK(ramps.at(20.0) == 50.0);
    CHECK(std::abs(ramps.mean(0.0, 30.0) - 50.0) <= 1e-12);
    CHECK(std::abs(ramps.mean(-10.0, 10.0) - 25.0) <= 1e-12);
    for (const Schedule* s : {&steps, &ramps}) {
        double sum = 0.0;
        for (int i = 0; i < 97; ++i) sum += s->mean(40.0 * i / 97.0, 40.0 * (i + 1) / 97.0) * 40.0 / 97.0;
        CHECK(std::abs(sum - s->mean(0.0, 40.0) * 40.0) <= 1e-9 * sum);
    }
}

TEST_CASE("a schedule refuses entries out of order, none, or not finite") {
    check_refused([] { (void)schedule(std::vector<ScheduleEntry>{}); }, ErrorCode::bad_value, "schedule",
                  "at least one");
    check_refused([] { (void)schedule({{5.0, 1.0}, {5.0, 2.0}}); }, ErrorCode::bad_value, "schedule", "sort");
    check_refused([] { (void)schedule({{0.0, not_a_number}}); }, ErrorCode::bad_value, "schedule", "finite");
}
