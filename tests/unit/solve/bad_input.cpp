// Broken models: each is refused with its code, the offender's name, and a word that says what to do.
#include <doctest/doctest.h>
#include <tests/support/broken_models.hpp>

using namespace tepor;
using test::Broken;

namespace {

std::vector<Broken> table_of_broken_models() {
    std::vector<Broken> all = test::broken_values();
    for (Broken& broken : test::broken_statements()) all.push_back(std::move(broken));
    return all;
}

} // namespace

TEST_CASE("every broken model is refused with its code, its offender and the remedy") {
    for (const Broken& broken : table_of_broken_models()) {
        CAPTURE(broken.group);
        CAPTURE(broken.what);
        try {
            broken.write();
            FAIL_CHECK("no error");
        } catch (const Error& error) {
            const std::string message = error.what();
            CAPTURE(message);
            CHECK(std::string(name_of(error.code())) == name_of(broken.code));
            CHECK(error.offender() == broken.offender);
            for (const std::string& word : broken.words) {
                CAPTURE(word);
                CHECK(message.find(word) != std::string::npos);
            }
        }
    }
}

TEST_CASE("the table of broken models has thirty and more, at least two of each group") {
    const std::vector<Broken> all = table_of_broken_models();
    CHECK(all.size() >= 30);
    for (const char* group : {"level", "name", "sign", "unit scale", "geometry", "contact", "table range",
                              "law returning NaN", "contradictory faces", "unused parameter", "wrong dimension"}) {
        CAPTURE(group);
        int count = 0;
        for (const Broken& broken : all) count += broken.group == group ? 1 : 0;
        CHECK(count >= 2);
    }
    CHECK_NOTHROW(test::solve(test::sound()));
}
