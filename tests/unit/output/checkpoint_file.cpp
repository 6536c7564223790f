// Checkpoints in files.
#include "../../support/refused.hpp"
#include <cstdio>
#include <doctest/doctest.h>
#include <string>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/output/checkpoint_file.hpp>
#include <tepor/solve/march.hpp>

using namespace tepor;

TEST_CASE("a checkpoint comes back from a file byte for byte, and goes on from there") {
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.1, .cells = 9}})};
    body.in("bar", Material{.conductivity = 10.0, .density = 8000.0, .specific_heat = 500.0});
    body.on("outer", Film{.coefficient = 100.0, .fluid = 20.0});
    March march{body, initial(300.0), Theta{.step = 5.0}};
    march.advance_to(100.0);
    const std::string path = "checkpoint_file_test.tmp";
    save(march.checkpoint(), path);
    save(march.checkpoint(), path); // over an older one
    const Checkpoint back = load_checkpoint(path);
    CHECK(back.bytes() == march.checkpoint().bytes());
    March again{body, back, Theta{.step = 5.0}};
    march.advance_to(150.0);
    again.advance_to(150.0);
    CHECK(march.field().temperature() == again.field().temperature());
    std::remove(path.c_str());
    test::check_refused([&] { (void)load_checkpoint(path); }, ErrorCode::bad_file, path, "cannot be opened");
    const std::string nowhere = "no such folder/checkpoint";
    test::check_refused([&] { save(back, nowhere); }, ErrorCode::bad_file, nowhere, "cannot be written");
}
