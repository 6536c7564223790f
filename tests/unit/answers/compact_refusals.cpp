// What has no small linear model is refused and named.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/answers/compact.hpp>
#include <tests/support/refused.hpp>
#include <tests/support/two_alloy_plate.hpp>

using namespace tepor;
using namespace tepor::test::two_alloys;

TEST_CASE("compact refuses what has no small linear model and names it") {
    const Body body = plate(0.02);
    const CompactOptions good = plate_options();
    CompactOptions options = good;
    const auto refuse = [&](const Body& of, ErrorCode code, const std::string& who, const std::string& words) {
        test::check_refused([&] { (void)compact(of, options); }, code, who, words);
        options = good;
    };
    options.inputs = {};
    refuse(body, ErrorCode::missing, "", "at least one input");
    options.sample_time = 0.0;
    refuse(body, ErrorCode::missing, "sample_time", "expected > 0");
    options.tolerance = 2.0;
    refuse(body, ErrorCode::bad_value, "tolerance", "0 < tolerance < 1");
    options.input_scale = {1.0};
    refuse(body, ErrorCode::bad_value, "input_scale", "1 entries for 4");
    const Parameter stranger{"stranger", 1.0};
    options.inputs[1] = stranger;
    refuse(body, ErrorCode::unused, "stranger", "no statement");
    options.outputs[0] = hottest_in("steel");
    refuse(body, ErrorCode::not_supported, hottest_in("steel").label(), "no linear output");
    const Parameter film{"film", 50.0};
    Body other = plate(0.02);
    other.replace("left", Film{.coefficient = film, .fluid = ambient});
    options.inputs[0] = film;
    refuse(other, ErrorCode::not_supported, "film", "multiplies temperature");
    const Parameter amps{"amps", 3.0};
    Body squared = plate(0.02);
    squared.also_in("steel", Generation{.per_volume = of_place({amps}, [](const auto&, auto a) { return a * a; })});
    options.inputs[0] = amps;
    refuse(squared, ErrorCode::not_supported, "amps", "enters nonlinearly");
    Body hot = plate(0.02);
    hot.replace("steel",
                Material{.conductivity = table({{0, 10.0}, {1000, 20.0}}), .density = 7900, .specific_heat = 500});
    refuse(hot, ErrorCode::not_supported, "conductivity", "depends on temperature");
    Body timed = plate(0.02);
    timed.also_in("steel", Generation{.per_volume = schedule({{0, 1.0}, {10, 2.0}})});
    refuse(timed, ErrorCode::not_supported, "time", "depend on time");
    Body clocked = plate(0.02);
    clocked.also_in("steel", Generation{.per_volume = of_place_and_time(
                                            [](const auto& p) { return 10.0 + std::sin(p.time) + 0.0 * p.x; })});
    refuse(clocked, ErrorCode::not_supported, "time", "depend on time");
    Body bare = plate(0.02);
    bare.replace("steel", Material{.conductivity = 16.0});
    test::check_refused([&] { (void)compact(bare, good); }, ErrorCode::missing, "steel", "");
}
