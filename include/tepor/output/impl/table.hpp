#pragma once
// Laying out tables.

#include <algorithm>
#include <cmath>
#include <fmt/format.h>
#include <tepor/base/numbers.hpp>
#include <tepor/output/table.hpp>

namespace tepor::detail {

TEPOR_INLINE std::string significant(double number, int digits) {
    return fmt::format("{:.{}g}", number == 0.0 ? 0.0 : number, digits); // no minus before zero
}

TEPOR_INLINE std::size_t width_of(std::string_view words) noexcept {
    std::size_t width = 0;
    for (const char c : words)
        if ((static_cast<unsigned char>(c) & 0xC0U) != 0x80U) ++width;
    return width;
}

/// How the numbers of one column are written: the largest gets six significant digits, the others the same decimals.
struct NumberStyle {
    int decimals = 0;
    bool scientific = false;

    [[nodiscard]] std::string write(double v) const {
        if (!std::isfinite(v)) return fmt::format("{}", v);
        if (scientific) return fmt::format("{:.5e}", v);
        std::string words = fmt::format("{:.{}f}", v, decimals);
        // what rounds to zero is zero, whatever its sign
        if (words.find_first_not_of("-0.") == std::string::npos && words[0] == '-') words.erase(0, 1);
        return words;
    }
};

template <class Rows>
NumberStyle style_of(const Rows& rows, std::size_t column) {
    double largest = 0.0;
    bool whole = true;
    for (const auto& row : rows)
        if (column < row.size() && row[column].is_number() && std::isfinite(row[column].number())) {
            largest = std::max(largest, std::abs(row[column].number()));
            whole = whole && row[column].number() == std::round(row[column].number());
        }
    NumberStyle style;
    if (largest == 0.0 || (whole && largest < 1e6)) return style;
    const int magnitude = static_cast<int>(std::floor(std::log10(largest)));
    style.scientific = magnitude >= 9 || magnitude < -4;
    style.decimals = std::clamp(5 - magnitude, 0, 9);
    return style;
}

TEPOR_INLINE std::string TextTable::text(std::string_view indent) const {
    const std::size_t columns = header_.size();
    std::vector<std::vector<std::string>> words(rows_.size() + 1, std::vector<std::string>(columns));
    std::vector<std::size_t> width(columns, 0);
    std::vector<bool> numbers(columns, false);
    for (std::size_t c = 0; c < columns; ++c) {
        const NumberStyle style = style_of(rows_, c);
        words[0][c] = header_[c];
        width[c] = width_of(header_[c]);
        for (std::size_t r = 0; r < rows_.size(); ++r) {
            if (c >= rows_[r].size()) continue;
            const Cell& cell = rows_[r][c];
            words[r + 1][c] = cell.is_number() ? style.write(cell.number()) : cell.words();
            numbers[c] = numbers[c] || cell.is_number();
            // words that end a row may run on over the columns behind it
            if (c + 1 < rows_[r].size() || c + 1 == columns) width[c] = std::max(width[c], width_of(words[r + 1][c]));
        }
    }
    std::string out;
    for (std::size_t r = 0; r < words.size(); ++r) {
        const std::size_t filled = r == 0 ? columns : std::min(columns, rows_[r - 1].size());
        std::string line(indent);
        for (std::size_t c = 0; c < filled; ++c) {
            if (c > 0) line += "  ";
            const std::string& w = words[r][c];
            const std::size_t seen = width_of(w);
            const std::string pad(width[c] > seen ? width[c] - seen : 0, ' ');
            const bool right = numbers[c] && (r == 0 || rows_[r - 1][c].is_number());
            line += right ? pad + w : w + pad;
        }
        line.erase(line.find_last_not_of(' ') + 1);
        out += line + '\n';
    }
    return out;
}

} // namespace tepor::detail
