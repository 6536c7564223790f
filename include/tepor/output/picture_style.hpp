#pragma once
// What all pictures share: size, fonts, colours, round numbers on axes, and the building of SVG text.

#include <algorithm>
#include <array>
#include <cmath>
#include <fmt/format.h>
#include <string>
#include <string_view>
#include <vector>

namespace tepor {

/// Size and words of a picture.
struct PictureOptions {
    double width = 720.0;  ///< [px]
    double height = 480.0; ///< [px]; maps take the height the body's shape asks for
    std::string title{};
    int isotherms = 10; ///< about as many lines in a map; 0: none
    bool arrows = true; ///< heat-flow arrows in a map
};

namespace detail {

struct Colour {
    double r = 0.0, g = 0.0, b = 0.0; ///< 0..255
};

/// Cold to hot: slate, sea, moss, sand, cream. Lightness rises all the way, so order survives grey printing and colour
/// blindness. Our own choice.
inline Colour heat_colour(double share) {
    static constexpr std::array<Colour, 6> stops = {
        {{31, 38, 70}, {44, 84, 112}, {70, 128, 118}, {139, 163, 96}, {221, 190, 106}, {252, 240, 203}}};
    const double s = std::clamp(share, 0.0, 1.0) * static_cast<double>(stops.size() - 1);
    const auto i = std::min(static_cast<std::size_t>(s), stops.size() - 2);
    const double t = s - static_cast<double>(i);
    const auto mix = [t](double a, double b) { return a + t * (b - a); };
    return {mix(stops[i].r, stops[i + 1].r), mix(stops[i].g, stops[i + 1].g), mix(stops[i].b, stops[i + 1].b)};
}

inline std::string hex_of(Colour c) {
    const auto byte = [](double v) { return static_cast<int>(std::lround(v)); };
    return fmt::format("#{:02x}{:02x}{:02x}", byte(c.r), byte(c.g), byte(c.b));
}

/// Line colours told apart by colour-blind eyes, each with a dash pattern of its own for grey print.
struct Stroke {
    const char* colour;
    const char* dash;
};
inline Stroke stroke_of(std::size_t i) {
    static constexpr std::array<Stroke, 5> strokes = {
        {{"#1f2646", ""}, {"#b4562a", "9 4"}, {"#2f7f79", "2 4"}, {"#8a6fae", "9 3 2 3"}, {"#6d6d2c", "5 5"}}};
    return strokes[i % strokes.size()];
}

/// Words inside SVG.
inline std::string escaped(std::string_view words) {
    std::string out;
    for (const char c : words) {
        if (c == '&')
            out += "&amp;";
        else if (c == '<')
            out += "&lt;";
        else if (c == '>')
            out += "&gt;";
        else
            out += c;
    }
    return out;
}

/// Round numbers that cover [low, high] in about `count` steps of 1, 2 or 5 times a power of ten.
inline std::vector<double> round_ticks(double low, double high, int count) {
    if (!(high > low)) high = low + 1.0;
    const double raw = (high - low) / std::max(count, 1);
    const double power = std::pow(10.0, std::floor(std::log10(raw)));
    double step = power;
    for (const double m : {1.0, 2.0, 5.0, 10.0})
        if (m * power >= raw * 0.999) {
            step = m * power;
            break;
        }
    std::vector<double> ticks;
    const double first = std::ceil(low / step - 1e-9);
    const int lines = 1 + static_cast<int>(std::floor(high / step + 1e-9 - first));
    for (int i = 0; i < lines; ++i) {
        const double tick = (first + i) * step;
        ticks.push_back(tick == 0.0 ? 0.0 : tick);
    }
    return ticks;
}

/// A number on an axis: no more digits than needed.
inline std::string tick_text(double v) {
    return fmt::format("{:.6g}", v);
}

/// The SVG document under way.
class Svg {
  public:
    Svg(double width, double height, const std::string& title) {
        out_ = fmt::format("<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {0:.0f} {1:.0f}\" "
                           "width=\"{0:.0f}\" height=\"{1:.0f}\" "
                           "font-family=\"Helvetica, Arial, sans-serif\" font-size=\"14\" fill=\"#222\">\n<rect "
                           "width=\"100%\" height=\"100%\" fill=\"white\"/>\n",
                           width, height);
        if (!title.empty()) {
            out_ += "<title>" + escaped(title) + "</title>\n";
            text(width / 2, 24, title, "middle", 16, "font-weight=\"bold\"");
        }
    }
    void line(double x0, double y0, double x1, double y1, const char* colour, double width, const char* dash = "") {
        out_ += fmt::format(
            "<line x1=\"{:.1f}\" y1=\"{:.1f}\" x2=\"{:.1f}\" y2=\"{:.1f}\" stroke=\"{}\" stroke-width=\"{}\"{}/>\n", x0,
            y0, x1, y1, colour, width, *dash ? fmt::format(" stroke-dasharray=\"{}\"", dash) : "");
    }
    void rect(double x, double y, double w, double h, const std::string& fill, const char* more = "") {
        out_ += fmt::format("<rect x=\"{:.1f}\" y=\"{:.1f}\" width=\"{:.1f}\" height=\"{:.1f}\" fill=\"{}\" {}/>\n", x,
                            y, w, h, fill, more);
    }
    void text(double x, double y, const std::string& words, const char* anchor, double size, const char* more = "") {
        out_ += fmt::format("<text x=\"{:.1f}\" y=\"{:.1f}\" text-anchor=\"{}\" font-size=\"{}\" {}>{}</text>\n", x, y,
                            anchor, size, more, escaped(words));
    }
    /// Words with a white rim, readable on any ground.
    void label(double x, double y, const std::string& words, const char* anchor, double size) {
        text(x, y, words, anchor, size,
             "stroke=\"white\" stroke-width=\"3\" stroke-linejoin=\"round\" paint-order=\"stroke\"");
    }
    void path(const std::string& d, const char* fill, const char* stroke, double width, const char* dash = "") {
        out_ +=
            fmt::format("<path d=\"{}\" fill=\"{}\" stroke=\"{}\" stroke-width=\"{}\" stroke-linejoin=\"round\"{}/>\n",
                        d, fill, stroke, width, *dash ? fmt::format(" stroke-dasharray=\"{}\"", dash) : "");
    }
    void raw(const std::string& svg) { out_ += svg; }
    [[nodiscard]] std::string done() && { return std::move(out_) + "</svg>\n"; }

  private:
    std::string out_;
};

} // namespace detail
} // namespace tepor
