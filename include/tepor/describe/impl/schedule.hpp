#pragma once
// Checks of a schedule.

#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/describe/schedule.hpp>
#include <utility>

namespace tepor {

TEPOR_INLINE Schedule::Schedule(std::vector<ScheduleEntry> entries, Between between) {
    if (entries.empty())
        throw Error(ErrorCode::bad_value, "schedule", "schedule: it has no entries; give at least one {time, value}");
    for (std::size_t i = 0; i < entries.size(); ++i) {
        if (!std::isfinite(entries[i].time) || !std::isfinite(entries[i].value))
            throw Error(ErrorCode::bad_value, "schedule",
                        detail::text("schedule: entry ", i, " is (", entries[i].time, ", ", entries[i].value,
                                     "), expected finite numbers"));
        if (i > 0 && !(entries[i - 1].time < entries[i].time))
            throw Error(ErrorCode::bad_value, "schedule",
                        detail::text("schedule: time ", entries[i].time, " follows ", entries[i - 1].time,
                                     ", expected rising times; sort the entries"));
    }
    data_ = std::make_shared<const Data>(Data{std::move(entries), between});
}

} // namespace tepor
