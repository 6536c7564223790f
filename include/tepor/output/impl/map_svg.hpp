#pragma once
// Temperature maps of 2D bodies.

#include <tepor/body/split.hpp>
#include <tepor/output/impl/map_parts.hpp>
#include <tepor/output/svg.hpp>

namespace tepor {

TEPOR_INLINE std::string map_svg(const Field& field, const PictureOptions& options) {
    const Model& model = field.model();
    const MeshData& mesh = field.mesh();
    if (mesh.dim != 2)
        throw Error(ErrorCode::wrong_dimension, "map_svg",
                    "map_svg: the body is one-dimensional; draw it with profile_svg");
    const char* unit = model.scale == TemperatureScale::celsius ? "degC" : "K";
    const detail::MapFrame frame(mesh, options);
    const Spotted hottest = field.hottest();
    const Spotted coldest = field.coldest();
    const double low = coldest.temperature;
    const double high = hottest.temperature > low ? hottest.temperature : low + 1.0;

    detail::Svg svg(frame.width, frame.height, options.title);
    const std::vector<detail::MapTriangle> triangles = detail::map_triangles(field, frame);

    // bands of one colour each, clipped out of every small triangle: no seams, and one path per band
    constexpr int bands = 40;
    std::vector<std::string> band(bands);
    for (const detail::MapTriangle& t : triangles) {
        const double t_low = std::min({t.T[0], t.T[1], t.T[2]});
        const double t_high = std::max({t.T[0], t.T[1], t.T[2]});
        const auto index = [&](double T) {
            return std::clamp(static_cast<int>((T - low) / (high - low) * bands), 0, bands - 1);
        };
        const int first = index(t_low);
        const int last = index(t_high);
        for (int b = first; b <= last; ++b) {
            const double from = b == first ? -HUGE_VAL : low + (high - low) * b / bands;
            const double to = b == last ? HUGE_VAL : low + (high - low) * (b + 1) / bands;
            detail::append_clipped(t, from, to, band[static_cast<std::size_t>(b)]);
        }
    }
    for (int b = 0; b < bands; ++b) {
        if (band[static_cast<std::size_t>(b)].empty()) continue;
        const std::string colour = detail::hex_of(detail::heat_colour((b + 0.5) / bands));
        svg.path(band[static_cast<std::size_t>(b)], colour.c_str(), colour.c_str(), 0.6);
    }

    const std::vector<double> levels =
        options.isotherms > 0 ? detail::round_ticks(low, high, options.isotherms) : std::vector<double>{};
    std::string lines;
    for (const double level : levels)
        for (const detail::MapTriangle& t : triangles) detail::append_isotherm(t, level, lines);
    if (!lines.empty()) svg.path(lines, "none", "#ffffff", 0.9);

    if (options.arrows) svg.raw(detail::map_arrows(field, frame));

    std::string outer;
    std::string inner;
    detail::append_outlines(field, frame, outer, inner);
    svg.path(inner, "none", "#111", 1.2);
    svg.path(outer, "none", "#111", 2.0);

    for (std::size_t f = 0; f < mesh.faces.size(); ++f) detail::label_face(field, frame, f, svg);

    const int decimals = std::clamp(2 - static_cast<int>(std::floor(std::log10(high - low))), 0, 6);
    double label_y = -HUGE_VAL;
    const auto spot = [&](const Spotted& at, const char* words, bool hot) {
        const double x = frame.x(at.place.x);
        const double y = frame.y(at.place.y);
        svg.raw(fmt::format(
            "<circle cx=\"{:.1f}\" cy=\"{:.1f}\" r=\"5\" fill=\"{}\" stroke=\"#111\" stroke-width=\"1.5\"/>\n", x, y,
            hot ? "#fcf0cb" : "#1f2646"));
        const std::string text = fmt::format("{} {:.{}f} {}", words, at.temperature, decimals, unit);
        // beside the body where there is room, else towards the roomier side
        const double room = 9.0 + 7.2 * static_cast<double>(text.size());
        const bool right = x < 0.5 * frame.width ? x < room : x + room < frame.width;
        if (frame.thin) {
            const double below = frame.bottom + (hot ? 30.0 : 48.0);
            svg.line(x, y + 5, x, below - 12.0, "#111", 0.8, "2 3");
            svg.text(right ? x - 4 : x + 4, below, text, right ? "start" : "end", 13);
            return;
        }
        double at_y = y + (y < frame.top + 24.0 ? 18.0 : -8.0);
        if (std::abs(at_y - label_y) < 16.0) at_y = label_y + 16.0; // the two do not run into each other
        label_y = at_y;
        svg.label(right ? x + 9 : x - 9, at_y, text, right ? "start" : "end", 13);
    };
    spot(hottest, "hottest", true);
    spot(coldest, "coldest", false);

    // the scale, below the picture
    const double bar = std::min(360.0, frame.width - 200.0);
    const double x0 = 0.5 * (frame.width - bar);
    const double y0 = frame.height - 58.0;
    for (int b = 0; b < bands; ++b)
        svg.rect(x0 + bar * b / bands, y0, bar / bands + 0.5, 12.0,
                 detail::hex_of(detail::heat_colour((b + 0.5) / bands)));
    // the isotherms again, so that each line of the map can be read; numbers no closer than they are wide
    const std::vector<double> marks = levels.size() > 1 ? levels : detail::round_ticks(low, high, 5);
    double taken = -HUGE_VAL;
    for (const double T : marks) {
        const double x = x0 + bar * (T - low) / (high - low);
        if (!levels.empty()) svg.line(x, y0, x, y0 + 12, "#ffffff", 0.9);
        svg.line(x, y0 + 12, x, y0 + 17, "#444", 1);
        const std::string number = detail::tick_text(T);
        const double half = 4.2 * static_cast<double>(number.size());
        if (x - half < taken) continue;
        svg.text(x, y0 + 31, number, "middle", 13);
        taken = x + half + 4.0;
    }
    std::string words = fmt::format("temperature [{}]", unit);
    if (levels.size() > 1) words += fmt::format(", isotherms every {:.4g}", levels[1] - levels[0]);
    svg.text(0.5 * frame.width, y0 + 50, words, "middle", 13);
    svg.raw(frame.length_bar());
    return std::move(svg).done();
}

} // namespace tepor
