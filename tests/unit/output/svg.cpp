#include <array>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/output/svg.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/svg.hpp>

using namespace tepor;
using test::SvgAxis;
using test::SvgElement;
using test::SvgPicture;

namespace {

Body wall() {
    Body b{layers<Segment<2>>(
        {{.region = "brick & <mortar>", .thickness = 0.2, .cells = 4}, {.region = "felt", .thickness = 0.1}})};
    b.in("brick & <mortar>", Material{.conductivity = 1.2}).in("felt", Material{.conductivity = 0.15});
    b.between("brick & <mortar>", "felt", Contact{.resistance = 0.1});
    b.on("inner", Film{.coefficient = 35000.0, .fluid = 900.0});
    b.on("outer", Film{.coefficient = 12.0, .fluid = 25.0});
    b.on("outer", Radiation{.emissivity = 0.8, .surroundings = 25.0});
    return b;
}

/// Left at 0, right at 100 degC: the temperature is 250 x.
Field slope(TemperatureScale scale = TemperatureScale::celsius) {
    Tiles drawing;
    drawing.add("west", {0.0, 0.0}, {0.2, 0.3}).add("east", {0.2, 0.0}, {0.4, 0.3});
    Body b{tiles<Quadrilateral<2>>(drawing, {.size = 0.05}), scale};
    b.in("west", Material{.conductivity = 2.0}).in("east", Material{.conductivity = 2.0});
    const double shift = scale == TemperatureScale::kelvin ? 300.0 : 0.0;
    b.on("left", FixedTemperature{shift}).on("right", FixedTemperature{shift + 100.0});
    return steady(b);
}

/// The numbers beside an axis: texts of one anchor and, along the other direction, one place.
SvgAxis axis_of(const SvgPicture& picture, bool vertical, const std::string& anchor, double other, double within) {
    std::vector<SvgElement> marks;
    for (const SvgElement& e : picture.elements) {
        if (e.name != "text" || e.get("text-anchor") != anchor) continue;
        if (std::abs(e.number(vertical ? "x" : "y") - other) > within) continue;
        char* end = nullptr;
        std::strtod(e.text.c_str(), &end);
        if (end != e.text.c_str() && *end == '\0') marks.push_back(e);
    }
    REQUIRE(marks.size() >= 2);
    const auto at = [&](const SvgElement& e) { return vertical ? e.number("y") - 5.0 : e.number("x"); };
    return {at(marks.front()), std::atof(marks.front().text.c_str()), at(marks.back()),
            std::atof(marks.back().text.c_str())};
}

void expect_self_contained(const std::string& svg) {
    const SvgPicture picture(svg);
    CHECK(picture.fault == "");
    REQUIRE(!picture.elements.empty());
    CHECK(picture.elements[0].name == "svg");
    CHECK(picture.elements[0].get("xmlns") == "http://www.w3.org/2000/svg");
    for (const char* outside : {"href", "url(", "<script", "<image", "@import", "nan", "inf"})
        CHECK_MESSAGE(svg.find(outside) == std::string::npos, outside);
}

/// Lightness CIE L* of an sRGB colour. Source: IEC 61966-2-1, CIE 15.
double lightness(double r, double g, double b) {
    const auto linear = [](double v) {
        v = std::clamp(v / 255.0, 0.0, 1.0);
        return v <= 0.04045 ? v / 12.92 : std::pow((v + 0.055) / 1.055, 2.4);
    };
    const double y = 0.2126 * linear(r) + 0.7152 * linear(g) + 0.0722 * linear(b);
    return y > 0.008856 ? 116.0 * std::cbrt(y) - 16.0 : 903.3 * y;
}

} // namespace

TEST_CASE("a profile shows the temperatures of the body on its axis, the jump of a contact included") {
    const Body body = wall();
    const Field field = steady(body);
    const std::string svg = profile_svg(field, {.title = "Wall"});
    expect_self_contained(svg);
    const SvgPicture picture(svg);
    const auto curves = picture.paths("#1f2646", "2.5");
    REQUIRE(curves.size() == 1);
    const auto curve = test::points_of(curves[0].get("d"));
    const SvgAxis T = axis_of(picture, true, "end", 60.0, 1.0);
    const SvgAxis x = axis_of(picture, false, "middle", 480.0 - 56.0 + 20.0, 1.0);
    const double px = std::abs(T.value(1.0) - T.value(0.0)); // of one picture point [K]
    double jump = 0.0;
    for (std::size_t i = 0; i < curve.size(); ++i) {
        const double place = 0.001 * x.value(curve[i].x); // the axis is in mm
        const bool first = place < 0.2 || (i + 1 < curve.size() && curve[i + 1].x == curve[i].x);
        CAPTURE(place);
        const double shown = field.at(std::clamp(place, 0.0, 0.3), first ? "brick & <mortar>" : "felt");
        CHECK(std::abs(T.value(curve[i].y) - shown) <= 1.5 * px);
        if (i > 0 && std::abs(curve[i].x - curve[i - 1].x) < 0.01)
            jump = std::max(jump, std::abs(T.value(curve[i].y) - T.value(curve[i - 1].y)));
    }
    CHECK(std::abs(jump - (field.at(0.2, "brick & <mortar>") - field.at(0.2, "felt"))) <= px);
}

TEST_CASE("a profile names layers, films, surroundings, surface temperatures and units") {
    const Field field = steady(wall());
    const SvgPicture picture(profile_svg(field));
    for (const char* words : {"brick &amp; &lt;mortar&gt;", "felt", "film 35000 W/(m2 K)", "to 900 degC",
                              "film 12 W/(m2 K)", "to 25 degC", "emissivity 0.8", "temperature [degC]", "x [mm]"})
        CHECK_MESSAGE(picture.says(words), words);
    CHECK(picture.says(fmt::format("{:.4g}", field[mean_on("inner")])));
    CHECK(picture.says(fmt::format("{:.4g}", field[mean_on("outer")])));
    // words beyond the faces do not lie on each other
    std::vector<SvgElement> words;
    for (const SvgElement& e : picture.elements)
        if (e.name == "text" && e.get("paint-order") == "stroke") words.push_back(e);
    CHECK(words.size() == 7);
    for (std::size_t i = 0; i < words.size(); ++i)
        for (std::size_t j = 0; j < i; ++j)
            if (words[i].get("text-anchor") == words[j].get("text-anchor"))
                CHECK(std::abs(words[i].number("y") - words[j].number("y")) >= 14.0);
}

TEST_CASE("isotherms of a map lie where the temperature has their value, and the scale says which") {
    const Field field = slope();
    const std::string svg = map_svg(field, {.title = "Slope"});
    expect_self_contained(svg);
    const SvgPicture picture(svg);
    CHECK(picture.says("temperature [degC], isotherms every 10"));
    const auto lines = picture.paths("#ffffff", "0.9");
    REQUIRE(lines.size() == 1);
    const auto outline = picture.paths("#111", "2");
    REQUIRE(outline.size() == 1);
    double low = 1e9;
    double high = -1e9;
    for (const auto& p : test::points_of(outline[0].get("d"))) {
        low = std::min(low, p.x);
        high = std::max(high, p.x);
    }
    CHECK(std::abs(high - low - 500.0) <= 0.1); // 720 less 110 on either side
    for (const auto& p : test::points_of(lines[0].get("d"))) {
        const double T = 100.0 * (p.x - low) / (high - low);
        CHECK(std::abs(T - 10.0 * std::round(T / 10.0)) <= 0.02);
    }
    // the number under the scale and the colour above it
    const SvgAxis scale = axis_of(picture, false, "middle", picture.elements[0].number("height") - 27.0, 1.0);
    std::vector<SvgElement> bars;
    for (const SvgElement& e : picture.elements)
        if (e.name == "rect" && e.get("height") == "12.0") bars.push_back(e);
    REQUIRE(bars.size() == 40);
    for (const SvgElement& bar : bars) {
        const double T = scale.value(bar.number("x") + 0.5 * 360.0 / 40);
        CHECK(bar.get("fill") == detail::hex_of(detail::heat_colour(T / 100.0)));
    }
}

TEST_CASE(
    "a map marks the extremes, names faces and regions' edges, and its arrows run from hot to cold inside the body") {
    const Field field = slope(TemperatureScale::kelvin);
    const SvgPicture picture(map_svg(field));
    CHECK(picture.says("hottest 400 K"));
    CHECK(picture.says("coldest 300 K"));
    for (const char* face : {"left", "right", "top", "bottom"}) CHECK(picture.says(face));
    CHECK(picture.says("temperature [K]"));
    CHECK(picture.says("50 mm")); // the bar of length
    const auto inner = picture.paths("#111", "1.2");
    REQUIRE(inner.size() == 1);
    for (const auto& p : test::points_of(inner[0].get("d"))) CHECK(std::abs(p.x - 360.0) <= 0.1);
    const auto arrows = picture.paths("#111", "1.1");
    CHECK(arrows.size() >= 60);
    for (const SvgElement& arrow : arrows) {
        const auto p = test::points_of(arrow.get("d"));
        CHECK(p[1].x < p[0].x - 10.0); // heat runs to the left, where it is cold
        CHECK(std::abs(p[1].y - p[0].y) <= 0.2);
        CHECK(p[1].x >= 110.0);
        CHECK(p[0].x <= 610.0);
    }
    CHECK(SvgPicture(map_svg(field, {.arrows = false})).paths("#111", "1.1").empty());
    CHECK(SvgPicture(map_svg(field, {.isotherms = 0})).paths("#ffffff", "0.9").empty());
}

TEST_CASE("the heat colours rise in lightness for every eye, strokes differ in grey or dash") {
    // what protanopes and deuteranopes see: G. M. Machado et al., IEEE TVCG 15 (2009) 1291, severity 1; from memory
    const std::array<std::array<double, 9>, 3> eyes = {
        {{1, 0, 0, 0, 1, 0, 0, 0, 1},
         {0.152286, 1.052583, -0.204868, 0.114503, 0.786281, 0.099216, -0.003882, -0.048116, 1.051998},
         {0.367322, 0.860646, -0.227968, 0.280085, 0.672501, 0.047413, -0.011820, 0.042940, 0.968881}}};
    for (const auto& eye : eyes) {
        double last = -1.0;
        for (int i = 0; i <= 20; ++i) {
            const detail::Colour c = detail::heat_colour(i / 20.0);
            const double L =
                lightness(eye[0] * c.r + eye[1] * c.g + eye[2] * c.b, eye[3] * c.r + eye[4] * c.g + eye[5] * c.b,
                          eye[6] * c.r + eye[7] * c.g + eye[8] * c.b);
            CHECK(L > last + 1.5);
            last = L;
        }
        CHECK(last > 90.0);
    }
    for (std::size_t i = 0; i < 5; ++i)
        for (std::size_t j = 0; j < i; ++j)
            CHECK(std::string(detail::stroke_of(i).dash) != std::string(detail::stroke_of(j).dash));
}

TEST_CASE("a strip chart has a panel per unit, and its curves end at the last values, named") {
    Record record({at({0.1, 0.1}).named("sensor < limit"), mean_on("top"), heat_out_through("top")});
    for (int i = 0; i <= 100; ++i) {
        const double t = 10.0 * i;
        record.add(t, {20.0 + 0.1 * t, 20.0 + 0.05 * t, 300.0 - 0.2 * t});
    }
    const std::string svg = strip_svg(record, {.title = "Warm up"});
    expect_self_contained(svg);
    const SvgPicture picture(svg);
    CHECK(picture.says("[degC]"));
    CHECK(picture.says("[W]"));
    CHECK(picture.says("time [min]"));
    const SvgAxis time = axis_of(picture, false, "middle", 480.0 - 50.0 + 20.0, 1.0);
    struct Wanted {
        const char* name;
        const char* stroke;
        double last;
        bool upper;
    };
    for (const Wanted& w :
         {Wanted{"sensor &lt; limit", "#1f2646", 120.0, true}, Wanted{"mean on", "#b4562a", 70.0, true},
          Wanted{"heat out through", "#1f2646", 100.0, false}}) {
        CAPTURE(w.name);
        const SvgElement label = picture.with_text(w.name);
        REQUIRE(!label.name.empty());
        std::vector<SvgElement> marks; // numbers at the left of this panel
        for (const SvgElement& e : picture.elements)
            if (e.name == "text" && e.get("text-anchor") == "end" && (e.number("y") < 245.0) == w.upper)
                marks.push_back(e);
        REQUIRE(marks.size() >= 2);
        const SvgAxis axis{marks.front().number("y") - 5.0, std::atof(marks.front().text.c_str()),
                           marks.back().number("y") - 5.0, std::atof(marks.back().text.c_str())};
        bool found = false;
        for (const SvgElement& path : picture.paths(w.stroke, "2")) {
            const auto p = test::points_of(path.get("d"));
            if ((p.back().y < 230.0) != w.upper) continue;
            found = true;
            CHECK(std::abs(axis.value(p.back().y) - w.last) <= 0.8);
            CHECK(std::abs(time.value(p.back().x) - 1000.0 / 60.0) <= 0.01);
            CHECK(std::abs(label.number("y") - 4.0 - p.back().y) <= 16.0);
        }
        CHECK(found);
    }
}

TEST_CASE("pictures refuse bodies of the other dimension, and charts of nothing") {
    const auto text = [](auto call) {
        try {
            call();
        } catch (const Error& error) {
            return std::string(error.what());
        }
        return std::string("no error");
    };
    CHECK(text([] { (void)profile_svg(slope()); }).find("map_svg") != std::string::npos);
    CHECK(text([] { (void)map_svg(steady(wall())); }).find("profile_svg") != std::string::npos);
    Record record({mean_on("top")});
    record.add(0.0, {1.0});
    CHECK(text([&] { (void)strip_svg(record); }).find("fewer than two instants") != std::string::npos);
    CHECK(text([&] { record.add(1.0, {1.0, 2.0}); }).find("2 values for 1 quantities") != std::string::npos);
    CHECK(text([] { write_svg("/nonexistent folder/a.svg", "<svg/>"); }).find("cannot write") != std::string::npos);
}
