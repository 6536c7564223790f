// Messages built from words and numbers.

#include <doctest/doctest.h>
#include <limits>
#include <string>
#include <tepor/base/text.hpp>
#include <vector>

using tepor::detail::quoted_list;
using tepor::detail::text;

TEST_CASE("words and numbers are joined without blanks of their own") {
    CHECK(text("film: coefficient = ", -2.5, ", expected > 0") == "film: coefficient = -2.5, expected > 0");
    CHECK(text("cell ", 17, " of ", 20L) == "cell 17 of 20");
    CHECK(text() == "");
}

TEST_CASE("a double is written with six significant digits and never with a comma") {
    CHECK(text(1.0 / 3.0) == "0.333333");
    CHECK(text(1234567.0) == "1.23457e+06");
    CHECK(text(-2.0e-3) == "-0.002");
}

TEST_CASE("not-a-number and infinity are named in a message") {
    CHECK(text(std::numeric_limits<double>::quiet_NaN()) == "nan");
    CHECK(text(-std::numeric_limits<double>::infinity()) == "-inf");
}

TEST_CASE("a list of names is quoted, and an empty one says none") {
    CHECK(quoted_list(std::vector<std::string>{"inner", "outer"}) == "\"inner\", \"outer\"");
    CHECK(quoted_list(std::vector<std::string>{}) == "none");
}
