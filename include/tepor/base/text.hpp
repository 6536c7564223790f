#pragma once
// Building messages from words and numbers, without streams or fmt, independent of the locale.

#include <charconv>
#include <concepts>
#include <string>
#include <string_view>

namespace tepor::detail {

inline void append(std::string& out, std::string_view words) {
    out += words;
}
inline void append(std::string& out, double number) {
    char buffer[32];
    const auto end = std::to_chars(buffer, buffer + sizeof buffer, number, std::chars_format::general, 6).ptr;
    out.append(buffer, end);
}
template <std::integral Integer>
requires(!std::same_as<Integer, char> && !std::same_as<Integer, bool>) void append(std::string& out, Integer number) {
    char buffer[24];
    const auto end = std::to_chars(buffer, buffer + sizeof buffer, number).ptr;
    out.append(buffer, end);
}

/// The parts one after the other; doubles with six significant digits.
template <class... Parts>
std::string text(const Parts&... parts) {
    std::string out;
    (append(out, parts), ...);
    return out;
}

/// `"a", "b", "c"`: the list of valid names shown with a wrong one.
template <class Names>
std::string quoted_list(const Names& names) {
    std::string out;
    for (const auto& name : names) {
        if (!out.empty()) out += ", ";
        out += '"';
        out += name;
        out += '"';
    }
    return out.empty() ? std::string("none") : out;
}

} // namespace tepor::detail
