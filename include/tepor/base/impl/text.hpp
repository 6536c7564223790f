#pragma once
// Joining the parts of a message.

#include <charconv>
#include <tepor/base/text.hpp>

namespace tepor::detail {

TEPOR_INLINE void TextPart::append_to(std::string& out) const {
    char buffer[32];
    char* const end = buffer + sizeof buffer;
    std::to_chars_result done{};
    switch (size_) {
    case real: done = std::to_chars(buffer, end, real_, std::chars_format::general, 6); break;
    case whole: done = std::to_chars(buffer, end, whole_); break;
    case count: done = std::to_chars(buffer, end, static_cast<unsigned long long>(whole_)); break;
    default: out.append(words_, size_); return;
    }
    out.append(buffer, done.ptr);
}

TEPOR_INLINE std::string joined(std::initializer_list<TextPart> parts) {
    std::string out;
    for (const TextPart& part : parts) part.append_to(out);
    return out;
}

} // namespace tepor::detail
