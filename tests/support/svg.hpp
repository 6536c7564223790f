#pragma once
// Reads what the library's SVG pictures show: elements with their attributes and texts, and the points of paths.

#include <cstdlib>
#include <string>
#include <utility>
#include <vector>

namespace tepor::test {

struct SvgElement {
    std::string name;
    std::vector<std::pair<std::string, std::string>> attributes;
    std::string text;

    [[nodiscard]] std::string get(const std::string& key) const {
        for (const auto& attribute : attributes)
            if (attribute.first == key) return attribute.second;
        return {};
    }
    [[nodiscard]] double number(const std::string& key) const { return std::atof(get(key).c_str()); }
};

/// All elements in their order; what is wrong with the XML in `fault`, empty when it is well formed.
struct SvgPicture {
    explicit SvgPicture(const std::string& svg) {
        std::vector<std::string> open;
        std::size_t at = 0;
        while (at < svg.size()) {
            const std::size_t less = svg.find('<', at);
            const std::string between = svg.substr(at, less == std::string::npos ? std::string::npos : less - at);
            take_text(between, open);
            if (less == std::string::npos) break;
            const std::size_t more = svg.find('>', less);
            if (more == std::string::npos) {
                fault = "a tag is not closed";
                return;
            }
            std::string tag = svg.substr(less + 1, more - less - 1);
            at = more + 1;
            if (tag.find('<') != std::string::npos) fault = "a tag inside a tag: " + tag;
            if (tag[0] == '/') {
                if (open.empty() || open.back() != tag.substr(1)) fault = "closed out of turn: " + tag;
                if (!open.empty()) open.pop_back();
                continue;
            }
            const bool alone = tag.back() == '/';
            if (alone) tag.pop_back();
            add(tag);
            if (!alone) open.push_back(elements.back().name);
        }
        if (!open.empty()) fault = "not closed: " + open.back();
    }

    /// The first text that holds these words; an empty element when there is none.
    [[nodiscard]] SvgElement with_text(const std::string& words) const {
        for (const SvgElement& e : elements)
            if (e.name == "text" && e.text.find(words) != std::string::npos) return e;
        return {};
    }
    [[nodiscard]] bool says(const std::string& words) const { return !with_text(words).name.empty(); }

    /// Paths with this stroke and width.
    [[nodiscard]] std::vector<SvgElement> paths(const std::string& stroke, const std::string& width) const {
        std::vector<SvgElement> out;
        for (const SvgElement& e : elements)
            if (e.name == "path" && e.get("stroke") == stroke && e.get("stroke-width") == width) out.push_back(e);
        return out;
    }

    std::vector<SvgElement> elements;
    std::string fault;

  private:
    void take_text(const std::string& words, const std::vector<std::string>& open) {
        for (std::size_t i = 0; i < words.size(); ++i)
            if (words[i] == '&') {
                const std::string rest = words.substr(i, 5);
                if (rest.rfind("&amp;", 0) != 0 && rest.rfind("&lt;", 0) != 0 && rest.rfind("&gt;", 0) != 0)
                    fault = "a bare & in: " + words;
            }
        if (!open.empty() && !elements.empty() && elements.back().name == open.back()) elements.back().text += words;
    }
    void add(const std::string& tag) {
        SvgElement e;
        std::size_t i = tag.find_first_of(" \n");
        e.name = tag.substr(0, i);
        while (i != std::string::npos) {
            const std::size_t start = tag.find_first_not_of(" \n", i);
            const std::size_t equals = start == std::string::npos ? start : tag.find("=\"", start);
            if (equals == std::string::npos) break;
            const std::size_t end = tag.find('"', equals + 2);
            if (end == std::string::npos) {
                fault = "an attribute is not closed: " + tag;
                break;
            }
            e.attributes.emplace_back(tag.substr(start, equals - start), tag.substr(equals + 2, end - equals - 2));
            i = end + 1;
        }
        elements.push_back(std::move(e));
    }
};

struct SvgPoint {
    double x = 0.0, y = 0.0;
};

/// The points of a path of M and L.
inline std::vector<SvgPoint> points_of(const std::string& d) {
    std::vector<double> numbers;
    const char* at = d.c_str();
    while (*at) {
        char* end = nullptr;
        const double v = std::strtod(at, &end);
        if (end == at) {
            ++at;
            continue;
        }
        numbers.push_back(v);
        at = end;
    }
    std::vector<SvgPoint> out;
    for (std::size_t i = 0; i + 1 < numbers.size(); i += 2) out.push_back({numbers[i], numbers[i + 1]});
    return out;
}

/// What a reader makes of an axis: two marks with their numbers give the value of any place.
struct SvgAxis {
    double at0 = 0.0, value0 = 0.0, at1 = 1.0, value1 = 1.0;
    [[nodiscard]] double value(double at) const { return value0 + (at - at0) / (at1 - at0) * (value1 - value0); }
};

} // namespace tepor::test
