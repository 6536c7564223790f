#include <doctest/doctest.h>
#include <string>
#include <tepor/describe/quantity.hpp>

using namespace tepor;

TEST_CASE("a quantity tells what it asks, and in which unit") {
    CHECK(heat_out_through("outer").label() == "heat out through \"outer\"");
    CHECK(heat_in_through("outer").label() == "heat in through \"outer\"");
    CHECK(heat_from("a", "b").label() == "heat from \"a\" to \"b\"");
    CHECK(at(0.1).label() == "temperature at (0.1, 0)");
    CHECK(at({0.1, 0.2}, "a").label() == "temperature at (0.1, 0.2) in \"a\"");
    CHECK(mean_in("a").label() == "mean in \"a\"");
    CHECK(mean_on("f").label() == "mean on \"f\"");
    CHECK(hottest_in("a").label() == "hottest in \"a\"");
    CHECK(coldest_in("a").label() == "coldest in \"a\"");
    CHECK(hottest_on("f").label() == "hottest on \"f\"");
    CHECK(coldest_on("f").label() == "coldest on \"f\"");
    CHECK(generated_in("a").label() == "generated in \"a\"");
    CHECK(stored_in("a").label() == "stored in \"a\"");
    CHECK(conductance_between("f", "g").label() == "conductance between \"f\" and \"g\"");
    CHECK(mean_around({1.0, 2.0}, 0.1).label() == "mean around (1, 2)");
    CHECK(std::string(mean_in("a").unit()) == "degC");
    CHECK(std::string(heat_from("a", "b").unit()) == "W");
    CHECK(std::string(generated_in("a").unit()) == "W");
    CHECK(std::string(stored_in("a").unit()) == "J");
    CHECK(std::string(conductance_between("f", "g").unit()) == "W/K");
    CHECK(hottest_on("f").is_temperature());
    CHECK(!heat_from("a", "b").is_temperature());
}

TEST_CASE("a name of one's own replaces the label and nothing else") {
    const Quantity loss = heat_in_through("outer").named("gain");
    CHECK(loss.label() == "gain");
    CHECK(loss.kind() == Quantity::Kind::heat_out_through);
    CHECK(loss.sign() == -1.0);
    CHECK(loss.first() == "outer");
    CHECK(heat_out_through("outer").sign() == 1.0);
}
