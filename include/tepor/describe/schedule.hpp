#pragma once
// A value over time whose integral over any step is exact, and whose jumps marching lands on.

#include <initializer_list>
#include <limits>
#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// From `time` [s] on the value is `value` (steps), or it passes through (time, value) (ramps).
struct ScheduleEntry {
    double time = 0.0;
    double value = 0.0;
};

/// What happens between the entries of a schedule.
enum class Between {
    steps, ///< each value holds until the next entry
    ramps  ///< straight lines from entry to entry
};

/// A value over time. Before the first entry its value holds, after the last one likewise. Copies share their entries.
class Schedule {
  public:
    /// @throws Error bad_value: no entries, something not finite, times not strictly rising
    TEPOR_INLINE explicit Schedule(std::vector<ScheduleEntry> entries, Between between = Between::steps);

    /// Value at time t; at a jump the value after it.
    [[nodiscard]] double at(double t) const noexcept {
        const auto& e = data_->entries;
        if (!(t >= e.front().time)) return e.front().value;
        const std::size_t i = last_not_after(t);
        if (i + 1 == e.size() || data_->between == Between::steps) return e[i].value;
        const double s = (t - e[i].time) / (e[i + 1].time - e[i].time);
        return e[i].value + s * (e[i + 1].value - e[i].value);
    }

    /// Value just before time t: differs from at(t) where t is a jump.
    [[nodiscard]] double before(double t) const noexcept {
        const auto& e = data_->entries;
        if (!(t > e.front().time)) return e.front().value;
        const std::size_t i = last_not_after(t);
        if (data_->between == Between::steps && e[i].time == t) return e[i - 1].value;
        return at(t);
    }

    /// Mean over [from, to], exact; the value at `from` when the two are equal.
    [[nodiscard]] double mean(double from, double to) const noexcept {
        if (!(to > from)) return at(from);
        const auto& e = data_->entries;
        double sum = 0.0;
        double t = from;
        std::size_t next = from < e.front().time ? 0 : last_not_after(from) + 1;
        while (t < to) {
            const double end = next < e.size() && e[next].time < to ? e[next].time : to;
            // within a piece the value is linear, and steps have their jump at the start of the next piece
            const double begin_value = at(t);
            double end_value = begin_value;
            if (data_->between == Between::ramps) end_value = at(end);
            sum += 0.5 * (begin_value + end_value) * (end - t);
            t = end;
            ++next;
        }
        return sum / (to - from);
    }

    /// First entry time after t, infinity when there is none: where a marching step has to end.
    [[nodiscard]] double next_event(double t) const noexcept {
        for (const ScheduleEntry& e : data_->entries)
            if (e.time > t) return e.time;
        return std::numeric_limits<double>::infinity();
    }

    [[nodiscard]] const std::vector<ScheduleEntry>& entries() const noexcept { return data_->entries; }
    [[nodiscard]] Between between() const noexcept { return data_->between; }

  private:
    struct Data {
        std::vector<ScheduleEntry> entries;
        Between between;
    };

    /// Position of the last entry with time <= t; t is not before the first one.
    [[nodiscard]] std::size_t last_not_after(double t) const noexcept {
        const auto& e = data_->entries;
        std::size_t low = 0;
        std::size_t high = e.size();
        while (high - low > 1) {
            const std::size_t middle = (low + high) / 2;
            (e[middle].time <= t ? low : high) = middle;
        }
        return low;
    }

    std::shared_ptr<const Data> data_;
};

/// `schedule({{0, 500}, {600, 0}})`: 500 from t = 0, nothing from t = 600 s on.
inline Schedule schedule(std::initializer_list<ScheduleEntry> entries, Between between = Between::steps) {
    return Schedule(std::vector<ScheduleEntry>(entries), between);
}
inline Schedule schedule(std::vector<ScheduleEntry> entries, Between between = Between::steps) {
    return Schedule(std::move(entries), between);
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/describe/impl/schedule.hpp>
#endif
