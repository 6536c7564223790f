#pragma once
// Aligned columns of text and numbers.

#include <string>
#include <string_view>
#include <tepor/base/config.hpp>
#include <vector>

namespace tepor::detail {

/// A table that is filled row by row and printed with its columns aligned: words to the left, numbers to the right with
/// as many decimals as the largest number of their column can use.
class TextTable {
  public:
    explicit TextTable(std::vector<std::string> header) : header_(std::move(header)) {}

    /// One cell: words, a number, or nothing.
    class Cell {
      public:
        Cell() = default;
        Cell(std::string words) : words_(std::move(words)) {}      // NOLINT: words are a cell
        Cell(const char* words) : words_(words) {}                 // NOLINT
        Cell(double number) : number_(number), is_number_(true) {} // NOLINT: so is a number

        [[nodiscard]] bool is_number() const noexcept { return is_number_; }
        [[nodiscard]] double number() const noexcept { return number_; }
        [[nodiscard]] const std::string& words() const noexcept { return words_; }

      private:
        std::string words_;
        double number_ = 0.0;
        bool is_number_ = false;
    };

    void row(std::vector<Cell> cells) { rows_.push_back(std::move(cells)); }
    [[nodiscard]] bool empty() const noexcept { return rows_.empty(); }

    /// The lines, each starting with `indent` and ended by a new line.
    [[nodiscard]] TEPOR_INLINE std::string text(std::string_view indent = "  ") const;

  private:
    std::vector<std::string> header_;
    std::vector<std::vector<Cell>> rows_;
};

/// A number with `digits` significant digits, without trailing zeros.
[[nodiscard]] TEPOR_INLINE std::string significant(double number, int digits = 6);

/// Characters seen on the screen: bytes that continue a UTF-8 character do not count.
[[nodiscard]] TEPOR_INLINE std::size_t width_of(std::string_view words) noexcept;

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/output/impl/table.hpp>
#endif
