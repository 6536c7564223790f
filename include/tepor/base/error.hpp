#pragma once
// The one exception type: a cause as a code, the offender's name, and a message that says what to do.

#include <stdexcept>
#include <string>
#include <string_view>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>

// Code, value (pinned: the C wrapper shows it), and its short text, in one list.
// clang-format off
#define TEPOR_ERROR_CODES(entry)                                                                                       \
    entry(bad_value, 10, "a value is not finite or outside its physical range")                                        \
    entry(bad_name, 11, "a region, face, parameter or quantity of that name does not exist or exists twice")           \
    entry(bad_unit, 12, "a value looks like another unit")                                                             \
    entry(wrong_dimension, 13, "the statement does not fit the dimension or frame of the body")                        \
    entry(bad_geometry, 20, "the geometry cannot be used")                                                             \
    entry(bad_mesh, 21, "the mesh breaks an invariant")                                                                \
    entry(outside, 22, "the place lies outside the body or has no single value")                                       \
    entry(no_level, 30, "nothing sets the temperature level")                                                          \
    entry(missing, 31, "something needed was not said")                                                                \
    entry(contradiction, 32, "two statements contradict each other")                                                   \
    entry(unused, 33, "a statement or parameter has no effect")                                                        \
    entry(bad_contact, 34, "a contact joins nothing or cannot be split")                                               \
    entry(outside_table, 40, "a table was read outside its range")                                                     \
    entry(bad_law, 41, "an own law returned a value that cannot be used")                                              \
    entry(not_converged, 50, "the iteration did not reach its tolerance")                                              \
    entry(singular, 51, "the system has no unique solution")                                                           \
    entry(no_answer, 52, "the question has no answer within its limits")                                               \
    entry(not_certifiable, 53, "no guaranteed bound exists for this body or quantity")                                 \
    entry(not_supported, 54, "the combination is not supported")                                                       \
    entry(cancelled, 55, "the caller cancelled the run")                                                               \
    entry(bad_file, 60, "a file or buffer cannot be read or written")                                                  \
    entry(too_large, 61, "a count exceeds what 32-bit ids hold")                                                       \
    entry(internal, 90, "the library broke one of its own rules; please report it")
// clang-format on

namespace tepor {

/// Causes of an Error; the values are pinned.
enum class ErrorCode : int {
#define TEPOR_ENTRY(name, value, text) name = value,
    TEPOR_ERROR_CODES(TEPOR_ENTRY)
#undef TEPOR_ENTRY
};

/// Short name of a code, such as "bad_value"; never null.
constexpr const char* name_of(ErrorCode code) noexcept {
    switch (code) {
#define TEPOR_ENTRY(name, value, text)                                                                                 \
    case ErrorCode::name: return #name;
        TEPOR_ERROR_CODES(TEPOR_ENTRY)
#undef TEPOR_ENTRY
    }
    return "unknown";
}

/// One sentence on a code; never null.
constexpr const char* text_of(ErrorCode code) noexcept {
    switch (code) {
#define TEPOR_ENTRY(name, value, text)                                                                                 \
    case ErrorCode::name: return text;
        TEPOR_ERROR_CODES(TEPOR_ENTRY)
#undef TEPOR_ENTRY
    }
    return "unknown code";
}

/// Thrown at the door of every call that cannot do what was asked.
///
/// `what()` names what was given, what is wrong and what to do about it.
class Error : public std::runtime_error {
  public:
    [[gnu::cold]] TEPOR_INLINE Error(ErrorCode code, std::string_view offender, std::string_view message,
                                     Index cell = -1);
    Error(const Error&) = default;
    Error& operator=(const Error&) = default;
    [[gnu::cold]] TEPOR_INLINE ~Error() override;

    /// The cause, for programs to act on.
    [[nodiscard]] ErrorCode code() const noexcept { return code_; }
    /// Name of the region, face, parameter, law or option at fault; may be empty.
    [[nodiscard]] const std::string& offender() const noexcept { return offender_; }
    /// The cell at fault in the user's numbering, or -1.
    [[nodiscard]] Index cell() const noexcept { return cell_; }

  private:
    ErrorCode code_;
    std::string offender_;
    Index cell_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/base/impl/error.hpp>
#endif
