#pragma once
// Temperature along a 1D body.

#include <tepor/output/file.hpp>
#include <tepor/output/svg.hpp>

namespace tepor {

namespace detail {

/// What stands beyond a face, in words and as the temperature to mark (NaN: none).
struct Beyond {
    std::vector<std::string> words;
    double temperature = std::nan("");
};

inline Beyond beyond_face(const Field& field, const std::string& name) {
    Beyond out;
    const Model& model = field.model();
    const char* unit = model.scale == TemperatureScale::celsius ? "degC" : "K";
    const TimeSpan now{field.time(), field.time(), 1.0};
    for (const FaceModel& face : model.faces) {
        if (face.name != name) continue;
        const auto number = [&](const Coefficient& c) {
            return c.uniform() ? tick_text(c.uniform_value(field.values().slots.data(), now)) : std::string("by law");
        };
        if (face.fixed.given()) out.words.push_back(fmt::format("held at {} {}", number(face.fixed), unit));
        for (const FaceTerm& term : face.terms) {
            if (term.kind == FaceTerm::Kind::film)
                out.words.push_back(fmt::format("film {} W/(m2 K)", number(term.amount)));
            if (term.kind == FaceTerm::Kind::radiation)
                out.words.push_back(fmt::format("emissivity {}", number(term.amount)));
            if (term.kind == FaceTerm::Kind::flux)
                out.words.push_back(fmt::format("flux {} W/m2 {}", number(term.amount), term.sign < 0 ? "in" : "out"));
            if (term.kind == FaceTerm::Kind::flux || !term.outside.uniform()) continue;
            const double outside = term.outside.uniform_value(field.values().slots.data(), now);
            if (!(out.temperature == outside)) out.words.push_back(fmt::format("to {} {}", tick_text(outside), unit));
            out.temperature = outside;
        }
        if (out.words.empty()) out.words.push_back("adiabatic");
    }
    return out;
}

} // namespace detail

TEPOR_INLINE std::string profile_svg(const Field& field, const PictureOptions& options) {
    const Model& model = field.model();
    const MeshData& mesh = field.mesh();
    if (mesh.dim != 1)
        throw Error(ErrorCode::wrong_dimension, "profile_svg",
                    "profile_svg: the body is two-dimensional; draw it with map_svg");
    const char* unit = model.scale == TemperatureScale::celsius ? "degC" : "K";
    const Point* place = model.places_of(field.values());

    // cells from left to right, and points along each
    std::vector<Id> cells(model.user_cell.size());
    for (std::size_t c = 0; c < cells.size(); ++c) cells[c] = static_cast<Id>(c);
    std::sort(cells.begin(), cells.end(),
              [&](Id a, Id b) { return place[model.cell(a)[0]].x < place[model.cell(b)[0]].x; });
    struct Sample {
        double x, T;
    };
    std::vector<Sample> curve;
    const int pieces = cells.size() > 300 ? 1 : 12;
    for (const Id c : cells) {
        const std::string& region = mesh.region_names[detail::as_size(model.region_of_cell(c))];
        const double a = place[model.cell(c)[0]].x;
        const double b = place[model.cell(c)[1]].x;
        for (int i = 0; i <= pieces; ++i) {
            const double x = a + (b - a) * (1e-9 + (1.0 - 2e-9) * i / pieces);
            curve.push_back({x, field.at(x, region)});
        }
    }
    const detail::Beyond left = detail::beyond_face(field, "inner");
    const detail::Beyond right = detail::beyond_face(field, "outer");
    double low = curve[0].T;
    double high = low;
    const auto cover = [&](double T) {
        if (std::isnan(T)) return;
        low = std::min(low, T);
        high = std::max(high, T);
    };
    for (const Sample& s : curve) cover(s.T);
    cover(left.temperature);
    cover(right.temperature);
    if (!(high > low)) high = low + 1.0;
    const double pad = 0.06 * (high - low);
    low -= pad;
    high += pad;

    const double w = options.width;
    const double h = options.height;
    const double beyond = 130.0; // room for what stands beyond each face
    const double x0 = 66.0 + beyond;
    const double x1 = w - 16.0 - beyond;
    const double y0 = h - 56.0;
    const double y1 = options.title.empty() ? 40.0 : 64.0;
    const double from = curve.front().x;
    const double to = curve.back().x;
    const bool millimetres = to - from < 1.0;
    const auto px = [&](double x) { return x0 + (x - from) / (to - from) * (x1 - x0); };
    const auto py = [&](double T) { return y0 + (T - low) / (high - low) * (y1 - y0); };
    detail::Svg svg(w, h, options.title);

    // layers as bands; names above, at two heights where they would run into each other
    struct Band {
        double a, b;
        Id region;
    };
    std::vector<Band> bands;
    for (const Id c : cells) {
        const Id r = model.region_of_cell(c);
        const double a = place[model.cell(c)[0]].x;
        const double b = place[model.cell(c)[1]].x;
        if (!bands.empty() && bands.back().region == r)
            bands.back().b = b;
        else
            bands.push_back({a, b, r});
    }
    double taken = -1e9;
    bool raised = false;
    for (std::size_t i = 0; i < bands.size(); ++i) {
        svg.rect(px(bands[i].a), y1, px(bands[i].b) - px(bands[i].a), y0 - y1, i % 2 == 0 ? "#f2eee4" : "#e3e8ea");
        const std::string& name = mesh.region_names[detail::as_size(bands[i].region)];
        const double middle = 0.5 * (px(bands[i].a) + px(bands[i].b));
        const double half = 3.6 * static_cast<double>(name.size());
        raised = middle - half < taken && !raised;
        svg.text(middle, y1 - (raised ? 20 : 5), name, "middle", 13);
        taken = middle + half;
    }
    for (const double T : detail::round_ticks(low, high, 6)) {
        svg.line(x0 - beyond, py(T), x1 + beyond, py(T), "#d7d7d7", 0.7);
        svg.text(x0 - beyond - 6, py(T) + 5, detail::tick_text(T), "end", 13);
    }
    svg.text(18, 0.5 * (y0 + y1), fmt::format("temperature [{}]", unit), "middle", 14,
             fmt::format("transform=\"rotate(-90 18 {:.1f})\"", 0.5 * (y0 + y1)).c_str());
    for (const double x : detail::round_ticks(from * (millimetres ? 1000 : 1), to * (millimetres ? 1000 : 1), 6)) {
        const double at = px(millimetres ? x / 1000 : x);
        svg.line(at, y0, at, y0 + 5, "#444", 1);
        svg.text(at, y0 + 20, detail::tick_text(x), "middle", 13);
    }
    svg.text(0.5 * (x0 + x1), h - 14,
             fmt::format("{} [{}]", mesh.frame.power() > 0 ? "radius" : "x", millimetres ? "mm" : "m"), "middle", 14);
    svg.line(x0, y0, x1, y0, "#444", 1);

    std::string d;
    for (std::size_t i = 0; i < curve.size(); ++i)
        d += fmt::format("{}{:.2f} {:.2f} ", i == 0 ? 'M' : 'L', px(curve[i].x), py(curve[i].T));
    svg.path(d, "none", "#1f2646", 2.5);

    const auto mark = [&](const detail::Beyond& side, double edge, double away, const char* anchor, double surface,
                          double surface_shift) {
        const double end = edge + away;
        if (!std::isnan(side.temperature)) {
            svg.line(edge + 0.25 * away, py(side.temperature), end, py(side.temperature), "#b4562a", 2.0, "6 4");
            svg.path(fmt::format("M{:.1f} {:.1f} Q{:.1f} {:.1f} {:.1f} {:.1f}", edge, py(surface), edge + 0.12 * away,
                                 py(side.temperature), edge + 0.25 * away, py(side.temperature)),
                     "none", "#b4562a", 1.4, "3 3");
        }
        // words stand on the inner side of the picture, clear of the marked line and of the number at the surface
        const double number_at = py(surface) + surface_shift;
        const bool downward = py(std::isnan(side.temperature) ? surface : side.temperature) < 0.5 * (y0 + y1);
        const double line = std::isnan(side.temperature) ? number_at : py(side.temperature);
        double y = downward ? std::max(line, number_at) + 20
                            : std::min(line, number_at) - 20 - 16 * (static_cast<double>(side.words.size()) - 1);
        for (const std::string& words : side.words) {
            svg.label(edge + 0.06 * away, y, words, anchor, 12);
            y += 16;
        }
    };
    // surface temperatures beside the faces, on the side the curve does not run to
    const bool rising = curve.back().T > curve.front().T;
    const double left_shift = rising ? -8 : 18;
    const double right_shift = rising ? 18 : -8;
    mark(left, x0, -beyond, "end", curve.front().T, left_shift);
    mark(right, x1, beyond, "start", curve.back().T, right_shift);
    svg.label(px(from) - 6, py(curve.front().T) + left_shift, fmt::format("{:.4g}", curve.front().T), "end", 13);
    svg.label(px(to) + 6, py(curve.back().T) + right_shift, fmt::format("{:.4g}", curve.back().T), "start", 13);
    return std::move(svg).done();
}

TEPOR_INLINE void write_svg(const std::string& path, const std::string& picture) {
    detail::write_file(path, picture);
}

} // namespace tepor
