#pragma once
// Quantities over time.

#include <tepor/output/svg.hpp>

namespace tepor {

TEPOR_INLINE std::string strip_svg(const Record& record, const PictureOptions& options) {
    if (record.times().size() < 2)
        throw Error(ErrorCode::missing, "strip_svg",
                    "strip_svg: fewer than two instants were recorded; add them in the loop with Record::add");
    // one panel per unit
    std::vector<std::string> units;
    for (const Quantity& q : record.quantities())
        if (std::find(units.begin(), units.end(), q.unit()) == units.end()) units.emplace_back(q.unit());
    const double w = options.width;
    const double h = options.height;
    const double top = options.title.empty() ? 20.0 : 44.0;
    std::size_t longest = 0; // room for names at the curves' ends
    for (const Quantity& q : record.quantities()) longest = std::max(longest, q.label().size());
    const double labels = std::min(44.0 + 6.6 * static_cast<double>(longest), 0.45 * w);
    const double x0 = 74.0;
    const double x1 = w - labels;
    const double gap = 26.0;
    const double bottom = h - 50.0;
    const double panel =
        (bottom - top - gap * static_cast<double>(units.size() - 1)) / static_cast<double>(units.size());
    const double from = record.times().front();
    const double to = record.times().back();
    const double second = to - from > 3.0 * 3600.0 ? 3600.0 : (to - from > 300.0 ? 60.0 : 1.0);
    const auto px = [&](double t) { return x0 + (t - from) / (to - from) * (x1 - x0); };
    detail::Svg svg(w, h, options.title);
    for (std::size_t p = 0; p < units.size(); ++p) {
        const double y1 = top + static_cast<double>(p) * (panel + gap);
        const double y0 = y1 + panel;
        double low = 1e300;
        double high = -1e300;
        for (std::size_t q = 0; q < record.quantities().size(); ++q)
            if (record.quantities()[q].unit() == units[p])
                for (const double v : record.values(q)) {
                    low = std::min(low, v);
                    high = std::max(high, v);
                }
        const double pad = high > low ? 0.06 * (high - low) : 1.0;
        low -= pad;
        high += pad;
        const auto py = [&](double v) { return y0 + (v - low) / (high - low) * (y1 - y0); };
        svg.rect(x0, y1, x1 - x0, y0 - y1, "#f7f5ef");
        for (const double v : detail::round_ticks(low, high, 5)) {
            svg.line(x0, py(v), x1, py(v), "#d7d7d7", 0.7);
            svg.text(x0 - 6, py(v) + 5, detail::tick_text(v), "end", 13);
        }
        svg.text(18, 0.5 * (y0 + y1), fmt::format("[{}]", units[p]), "middle", 14,
                 fmt::format("transform=\"rotate(-90 18 {:.1f})\"", 0.5 * (y0 + y1)).c_str());
        struct End {
            double y;
            std::size_t quantity, stroke;
        };
        std::vector<End> ends;
        for (std::size_t q = 0; q < record.quantities().size(); ++q) {
            if (record.quantities()[q].unit() != units[p]) continue;
            const detail::Stroke stroke = detail::stroke_of(ends.size());
            std::string d;
            // no more points than the picture can show, first and last of each column kept
            const std::size_t n = record.times().size();
            const std::size_t stride = std::max<std::size_t>(1, n / 2000);
            for (std::size_t i = 0; i < n; i += (i + stride < n || i == n - 1) ? stride : n - 1 - i)
                d +=
                    fmt::format("{}{:.2f} {:.2f} ", i == 0 ? 'M' : 'L', px(record.times()[i]), py(record.values(q)[i]));
            svg.path(d, "none", stroke.colour, 2.0, stroke.dash);
            ends.push_back({py(record.values(q).back()), q, ends.size()});
        }
        std::sort(ends.begin(), ends.end(), [](const End& a, const End& b) { return a.y < b.y; });
        double last = -1e9;
        for (End& end : ends) {
            end.y = std::max(end.y, last + 16.0);
            last = end.y;
            const detail::Stroke stroke = detail::stroke_of(end.stroke);
            svg.line(x1 + 4, end.y, x1 + 24, end.y, stroke.colour, 2.0, stroke.dash);
            svg.text(x1 + 28, end.y + 4, record.quantities()[end.quantity].label(), "start", 12);
        }
    }
    for (const double t : detail::round_ticks(from / second, to / second, 7)) {
        svg.line(px(t * second), bottom, px(t * second), bottom + 5, "#444", 1);
        svg.text(px(t * second), bottom + 20, detail::tick_text(t), "middle", 13);
    }
    svg.text(0.5 * (x0 + x1), h - 10, fmt::format("time [{}]", second == 3600.0 ? "h" : (second == 60.0 ? "min" : "s")),
             "middle", 14);
    return std::move(svg).done();
}

} // namespace tepor
