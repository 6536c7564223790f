#pragma once
// Text for people: a body and its result, a heat balance, the self-check, with fmt and with streams.

#include <fmt/format.h>
#include <ostream>
#include <string>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/check/self_check.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor {

/// How much of a self-check is printed.
enum class Detail {
    brief, ///< one line per case, and every row that failed
    full   ///< every row with its source
};

/// A heat balance: every face by kind of condition, regions that generate, lose or store heat, the sums, and what is left
/// over beside the limit it is judged by. All in W for the size that is printed first.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Balance& balance);

/// What has been said about a body: size, mesh, materials, conditions, parameters with their present values.
/// A body that is not complete yet is printed with what is missing.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Body& body);

/// A field: temperatures by region and face, how the solve ended, and the heat balance.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Field& field);

/// What a result asks to keep in mind: faces within reach that burn or could set fire, round walls that may bear pressure,
/// the worth of the data.
[[nodiscard]] TEPOR_INLINE std::string cautions(const Field& field);

/// All in one: the body as described with the parameter values of the field, its temperatures and heat balance, the
/// quantities asked for, the cautions.
/// @throws Error bad_value  the field belongs to another mesh
///               as Field::operator[] for a quantity
[[nodiscard]] TEPOR_INLINE std::string report(const Body& body, const Field& field,
                                              const std::vector<Quantity>& quantities = {});

/// A self-check: build, cases, verdicts.
[[nodiscard]] TEPOR_INLINE std::string to_text(const SelfCheck& check, Detail detail = Detail::brief);

inline std::ostream& operator<<(std::ostream& out, const Balance& balance) {
    return out << to_text(balance);
}
inline std::ostream& operator<<(std::ostream& out, const Body& body) {
    return out << to_text(body);
}
inline std::ostream& operator<<(std::ostream& out, const Field& field) {
    return out << to_text(field);
}
inline std::ostream& operator<<(std::ostream& out, const SelfCheck& check) {
    return out << to_text(check);
}

namespace detail {

/// fmt formatting by to_text(), with the fill, width and alignment of strings.
struct TextFormatter : fmt::formatter<fmt::string_view> {
    template <class Thing, class Context>
    auto format(const Thing& thing, Context& context) const {
        return fmt::formatter<fmt::string_view>::format(to_text(thing), context);
    }
};

} // namespace detail
} // namespace tepor

/// @cond fmt_names
template <>
struct fmt::formatter<tepor::Balance> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::Body> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::Field> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::SelfCheck> : tepor::detail::TextFormatter {};
/// @endcond
#ifndef TEPOR_COMPILED
#include <tepor/output/impl/cautions.hpp>
#include <tepor/output/impl/text_balance.hpp>
#include <tepor/output/impl/text_body.hpp>
#include <tepor/output/impl/text_check.hpp>
#include <tepor/output/impl/text_field.hpp>
#endif
