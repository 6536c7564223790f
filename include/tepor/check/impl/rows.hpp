#pragma once
// Collecting the rows of a case.

#include <tepor/base/text.hpp>
#include <tepor/check/check_case.hpp>
#include <tepor/field/field.hpp>
#include <utility>

namespace tepor::detail {

class CheckRows {
  public:
    void add(std::string what, double expected, double got, double tolerance, std::string unit) {
        rows_.push_back({std::move(what), expected, got, tolerance, std::move(unit)});
    }
    void temperature(std::string what, double expected, double got, double tolerance) {
        add(std::move(what), expected, got, tolerance, "degC");
    }
    /// T at one place of a 1D body.
    void at(const Field& field, double x, double expected, double tolerance, const char* region = "") {
        std::string what = text("T at ", x, " m");
        if (*region != '\0') what += text(", ", region);
        temperature(std::move(what), expected, field.at(x, region), tolerance);
    }
    void at(const Field& field, Point p, double expected, double tolerance) {
        temperature(text("T at (", p.x, ", ", p.y, ") m"), expected, field.at(p), tolerance);
    }
    /// What the heat balance leaves over, against the limit it states itself.
    void balance(const Field& field) {
        const Balance b = field.balance();
        add("heat left over", 0.0, b.left_over, 1e-10 * b.gross + b.floor, "W");
    }
    [[nodiscard]] std::vector<CheckRow> take() { return std::move(rows_); }

  private:
    std::vector<CheckRow> rows_;
};

} // namespace tepor::detail
