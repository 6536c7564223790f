#pragma once
// Text for people: sensitivities, sizings, fits and compact models, with fmt and with streams.

#include <ostream>
#include <string>
#include <tepor/answers/compact.hpp>
#include <tepor/answers/fit.hpp>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/size_for.hpp>
#include <tepor/base/config.hpp>
#include <tepor/output/text.hpp>

namespace tepor {

/// A table of sensitivities, the largest relative one first.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Gradient& gradient);
/// The answer, or why there is none.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Sized& sized);
/// Fitted values with their 95 % intervals, correlations, and how well they agree with the readings.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Fitted& fitted);
/// What a compact model keeps: states, inputs, outputs, error bound.
[[nodiscard]] TEPOR_INLINE std::string to_text(const StateSpace& model);

inline std::ostream& operator<<(std::ostream& out, const Gradient& gradient) {
    return out << to_text(gradient);
}
inline std::ostream& operator<<(std::ostream& out, const Sized& sized) {
    return out << to_text(sized);
}
inline std::ostream& operator<<(std::ostream& out, const Fitted& fitted) {
    return out << to_text(fitted);
}
inline std::ostream& operator<<(std::ostream& out, const StateSpace& model) {
    return out << to_text(model);
}

} // namespace tepor

/// @cond fmt_names
template <>
struct fmt::formatter<tepor::Gradient> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::Sized> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::Fitted> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::StateSpace> : tepor::detail::TextFormatter {};
/// @endcond
#ifndef TEPOR_COMPILED
#include <tepor/output/impl/answers.hpp>
#endif
