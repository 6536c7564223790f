// The exception type and its list of codes.

#include <doctest/doctest.h>
#include <set>
#include <string>
#include <tepor/base/error.hpp>

using namespace tepor;

TEST_CASE("an error carries its code, offender, message and cell") {
    const Error error(ErrorCode::bad_mesh, "cell 17", "mesh: cell 17 is clockwise; list its nodes counter-clockwise",
                      17);
    CHECK(error.code() == ErrorCode::bad_mesh);
    CHECK(error.offender() == "cell 17");
    CHECK(std::string(error.what()).find("counter-clockwise") != std::string::npos);
    CHECK(error.cell() == 17);
    CHECK(Error(ErrorCode::bad_value, "k", "k = 0").cell() == -1);
}

TEST_CASE("every code has a value, a name and a sentence of its own") {
    std::set<int> values;
    std::set<std::string> names;
    std::set<std::string> sentences;
    int count = 0;
#define TEPOR_ENTRY(name, value, sentence)                                                                             \
    ++count;                                                                                                           \
    values.insert(value);                                                                                              \
    names.insert(name_of(ErrorCode::name));                                                                            \
    sentences.insert(text_of(ErrorCode::name));
    TEPOR_ERROR_CODES(TEPOR_ENTRY)
#undef TEPOR_ENTRY
    CHECK(values.size() == static_cast<std::size_t>(count));
    CHECK(names.size() == static_cast<std::size_t>(count));
    CHECK(sentences.size() == static_cast<std::size_t>(count));
}

TEST_CASE("the codes that other languages see keep their values") {
    CHECK(static_cast<int>(ErrorCode::bad_value) == 10);
    CHECK(static_cast<int>(ErrorCode::bad_geometry) == 20);
    CHECK(static_cast<int>(ErrorCode::no_level) == 30);
    CHECK(static_cast<int>(ErrorCode::not_converged) == 50);
    CHECK(static_cast<int>(ErrorCode::internal) == 90);
}

TEST_CASE("a value outside the list of codes is named unknown") {
    CHECK(std::string(name_of(static_cast<ErrorCode>(7777))) == "unknown");
    CHECK(std::string(text_of(static_cast<ErrorCode>(7777))) == "unknown code");
}
