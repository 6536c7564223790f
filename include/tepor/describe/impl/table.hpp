#pragma once
// Checks of a table.

#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/describe/table.hpp>
#include <utility>

namespace tepor {

TEPOR_INLINE Table::Table(std::vector<TablePoint> points, Outside outside) {
    if (points.empty())
        throw Error(ErrorCode::bad_value, "table", "table: it has no points; give at least one {temperature, value}");
    for (std::size_t i = 0; i < points.size(); ++i) {
        const TablePoint& p = points[i];
        if (!std::isfinite(p.at) || !std::isfinite(p.value.number()))
            throw Error(
                ErrorCode::bad_value, "table",
                detail::text("table: point ", i, " is (", p.at, ", ", p.value.number(), "), expected finite numbers"));
        if (i > 0 && !(points[i - 1].at < p.at))
            throw Error(ErrorCode::bad_value, "table",
                        detail::text("table: temperature ", p.at, " at point ", i, " follows ", points[i - 1].at,
                                     ", expected rising temperatures; sort the points"));
    }
    data_ = std::make_shared<const Data>(Data{std::move(points), outside});
}

} // namespace tepor
