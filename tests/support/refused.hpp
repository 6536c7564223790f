#pragma once
// Checking what a refusal says: code, offender, and the words that name the value and the remedy.

#include <doctest/doctest.h>
#include <string>
#include <tepor/base/error.hpp>

namespace tepor::test {

/// `make` must throw an Error with this code and offender whose message holds the words.
template <class Make>
void check_refused(Make make, ErrorCode code, const std::string& offender, const std::string& words) {
    try {
        make();
        FAIL_CHECK("no error, expected: " << words);
    } catch (const Error& error) {
        const std::string message = error.what();
        CAPTURE(message);
        CHECK(name_of(error.code()) == std::string(name_of(code)));
        CHECK(error.offender() == offender);
        CHECK(message.find(words) != std::string::npos);
    }
}

} // namespace tepor::test
