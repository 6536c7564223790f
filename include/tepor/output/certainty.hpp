#pragma once
// Text for people: brackets, error bounds and estimates, with fmt and with streams.

#include <ostream>
#include <string>
#include <tepor/answers/bracket.hpp>
#include <tepor/answers/estimate.hpp>
#include <tepor/base/config.hpp>
#include <tepor/field/error_bound.hpp>
#include <tepor/output/text.hpp>

namespace tepor {

/// Lower, value and upper, whether that was as narrow as asked, and the passes that led there.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Bracket& bracket);
/// The bound, its parts, and the cells that hold most of it.
[[nodiscard]] TEPOR_INLINE std::string to_text(const ErrorBound& bound);
/// Value and likely error, said to be no bound, and the meshes they come from.
[[nodiscard]] TEPOR_INLINE std::string to_text(const Estimate& estimate);

inline std::ostream& operator<<(std::ostream& out, const Bracket& bracket) {
    return out << to_text(bracket);
}
inline std::ostream& operator<<(std::ostream& out, const ErrorBound& bound) {
    return out << to_text(bound);
}
inline std::ostream& operator<<(std::ostream& out, const Estimate& estimate) {
    return out << to_text(estimate);
}

} // namespace tepor

/// @cond fmt_names
template <>
struct fmt::formatter<tepor::Bracket> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::ErrorBound> : tepor::detail::TextFormatter {};
template <>
struct fmt::formatter<tepor::Estimate> : tepor::detail::TextFormatter {};
/// @endcond
#ifndef TEPOR_COMPILED
#include <tepor/output/impl/certainty.hpp>
#endif
