#pragma once
// A property tabled over temperature, linear between its points.

#include <initializer_list>
#include <memory>
#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/describe/number.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// What a table answers outside its range.
enum class Outside {
    refuse, ///< an Error, judged on the converged field (iterates are held flat meanwhile)
    hold    ///< the end value
};

/// One point of a table: the temperature, in the body's scale, and the property there.
struct TablePoint {
    double at = 0.0;
    Number value = 0.0;
};

/// A property over temperature. Copies share their points.
class Table {
  public:
    /// @throws Error bad_value: no points, a temperature or value not finite, temperatures not strictly rising
    TEPOR_INLINE explicit Table(std::vector<TablePoint> points, Outside outside = Outside::refuse);

    [[nodiscard]] const std::vector<TablePoint>& points() const noexcept { return data_->points; }
    [[nodiscard]] Outside outside() const noexcept { return data_->outside; }
    [[nodiscard]] double first() const noexcept { return data_->points.front().at; }
    [[nodiscard]] double last() const noexcept { return data_->points.back().at; }

  private:
    struct Data {
        std::vector<TablePoint> points;
        Outside outside;
    };
    std::shared_ptr<const Data> data_;
};

/// A property tabled over temperature: `table({{200, 1.10}, {800, 1.35}})`, in the body's temperature scale.
inline Table table(std::initializer_list<TablePoint> points, Outside outside = Outside::refuse) {
    return Table(std::vector<TablePoint>(points), outside);
}
inline Table table(std::vector<TablePoint> points, Outside outside = Outside::refuse) {
    return Table(std::move(points), outside);
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/describe/impl/table.hpp>
#endif
