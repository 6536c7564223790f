#pragma once
// Building messages from words and numbers, without streams or fmt, independent of the locale.

#include <concepts>
#include <cstddef>
#include <initializer_list>
#include <string>
#include <string_view>
#include <tepor/base/config.hpp>
#include <type_traits>

namespace tepor::detail {

/// A part of a message: words, or a number. Plain data, so that a message costs the code that writes it next to nothing.
class TextPart {
  public:
    template <class Words>
    requires std::convertible_to<const Words&, std::string_view>
    constexpr TextPart(const Words& words) noexcept // NOLINT
        : TextPart(std::string_view(words)) {}
    constexpr TextPart(std::string_view words) noexcept
        : size_(words.size()), words_(words.data()) {}                         // NOLINT: all convert
    constexpr TextPart(double number) noexcept : size_(real), real_(number) {} // NOLINT
    template <std::integral Integer>
    requires(!std::same_as<Integer, char> &&
             !std::same_as<Integer, bool>) constexpr TextPart(Integer number) noexcept // NOLINT
        : size_(std::is_signed_v<Integer> ? whole : count), whole_(static_cast<long long>(number)) {}

    TEPOR_INLINE void append_to(std::string& out) const;

  private:
    // instead of a size, what kind of number it is
    static constexpr std::size_t real = static_cast<std::size_t>(-1);
    static constexpr std::size_t whole = static_cast<std::size_t>(-2);
    static constexpr std::size_t count = static_cast<std::size_t>(-3);
    std::size_t size_;
    union {
        const char* words_;
        double real_;
        long long whole_;
    };
};

[[gnu::cold]] TEPOR_INLINE std::string joined(std::initializer_list<TextPart> parts);

/// The parts one after the other; doubles with six significant digits.
template <class... Parts>
std::string text(const Parts&... parts) {
    return joined({TextPart(parts)...});
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

#ifndef TEPOR_COMPILED
#include <tepor/base/impl/text.hpp>
#endif
