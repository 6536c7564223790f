#pragma once
// The points of a table with the present values of its parameters.

#include <cstddef>
#include <tepor/base/numbers.hpp>
#include <tepor/describe/table.hpp>
#include <vector>

namespace tepor::detail {

/// Position of the table interval that holds t: 0 below the first point, size() - 1 at or above the last.
inline std::size_t table_interval(const std::vector<TablePoint>& points, double t) noexcept {
    std::size_t low = 0;
    std::size_t high = points.size();
    while (high - low > 1) {
        const std::size_t middle = (low + high) / 2;
        (points[middle].at <= t ? low : high) = middle;
    }
    return low;
}

inline double table_entry(const TablePoint& point, Id slot, const double* slots) noexcept {
    return slot < 0 ? point.value.number() : slots[slot];
}

/// A table of the usual few points, its present values and rises side by side: the same numbers as from the points themselves.
class ShortTable {
  public:
    static constexpr std::size_t most = 16;

    ShortTable(const std::vector<TablePoint>& points, const std::vector<Id>& slots, const double* values)
        : size_(points.size()) {
        for (std::size_t k = 0; k < size_; ++k) {
            at_[k] = points[k].at;
            value_[k] = table_entry(points[k], slots[k], values);
        }
        for (std::size_t k = 0; k + 1 < size_; ++k) rise_[k] = (value_[k + 1] - value_[k]) / (at_[k + 1] - at_[k]);
    }

    /// Held flat outside; the range is judged on the converged field.
    void read(Index n, const double* temperature, double* value, double* slope) const noexcept {
        for (Index i = 0; i < n; ++i) {
            const double t = temperature[i];
            std::size_t low = 0;
            for (std::size_t k = 1; k < size_; ++k) low += at_[k] <= t ? 1U : 0U;
            const bool outside = low + 1 == size_ || t < at_[0];
            value[i] = outside ? value_[low] : value_[low] + rise_[low] * (t - at_[low]);
            if (slope) slope[i] = outside ? 0.0 : rise_[low];
        }
    }

  private:
    std::size_t size_;
    double at_[most];
    double value_[most];
    double rise_[most] = {};
};

} // namespace tepor::detail
