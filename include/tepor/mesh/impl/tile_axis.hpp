#pragma once
// Cell borders along one axis of tiles.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/tile_axis.hpp>

namespace tepor::detail {

TEPOR_INLINE Index TileBorders::nearest(double x) const noexcept {
    const auto above = std::lower_bound(at.begin(), at.end(), x);
    if (above == at.begin()) return 0;
    if (above == at.end()) return cells();
    const Index k = above - at.begin();
    return x - at[as_size(k - 1)] < *above - x ? k - 1 : k;
}

/// Lengths that a cell may have between two lines at distance `length`: at most `start` at the first line, growing by
/// the factor q per cell up to `size`, and the same from the other line. Number of cells from one end is the closed form
/// of the geometric sum, size q^0 + size q^1 + ..., read for any real number of terms.
struct GrowingRun {
    double length, start, end, size, q;
    double left = 0.0;  ///< length of the growing part
    double right = 0.0; ///< length of the shrinking part
    double counts[3]{}; ///< cells, as real numbers, of the growing, the equal and the shrinking part

    GrowingRun(double length_, double start_, double end_, double size_, double q_)
        : length(length_), start(std::min(start_, size_)), end(std::min(end_, size_)), size(size_), q(q_) {
        const double g = q - 1.0;
        left = (size - start) / g;
        right = (size - end) / g;
        if (left + right > length) { // they meet before they reach the full size
            left = std::clamp((end - start + g * length) / (2.0 * g), 0.0, length);
            right = length - left;
        }
        counts[0] = std::log1p(g * left / start) / std::log(q);
        counts[1] = (length - left - right) / size;
        counts[2] = std::log1p(g * right / end) / std::log(q);
    }

    [[nodiscard]] double count() const noexcept { return counts[0] + counts[1] + counts[2]; }

    /// Distance from the first line after `cells` cells, 0 <= cells <= count().
    [[nodiscard]] double place(double cells) const noexcept {
        const double log_q = std::log(q);
        if (cells < counts[0]) return start * std::expm1(cells * log_q) / (q - 1.0);
        if (cells <= counts[0] + counts[1]) return left + (cells - counts[0]) * size;
        return length - end * std::expm1((count() - cells) * log_q) / (q - 1.0);
    }
};

/// The lines within low..high, ascending, those closer than the tolerance taken as one.
TEPOR_INLINE std::vector<double> merged_lines(const TileAxis& axis, double low, double high, double tolerance) {
    std::vector<double> all = axis.lines;
    for (const TileSplit& s : axis.splits) {
        all.push_back(s.from);
        all.push_back(s.to);
    }
    for (const FinerLine& f : axis.finer) all.push_back(f.at);
    std::sort(all.begin(), all.end());
    std::vector<double> lines{low};
    for (const double x : all)
        if (x > lines.back() + tolerance && x < high - tolerance) lines.push_back(x);
    lines.push_back(high);
    return lines;
}

TEPOR_INLINE void check_axis(const TileAxis& axis, double low, double high, double tolerance, double size,
                             double growth, const char* name) {
    const auto inside = [&](double x, const std::string& what) {
        if (!std::isfinite(x)) throw Error(ErrorCode::bad_value, what, text("tiles: ", what, " is not finite"));
        if (x < low - tolerance || x > high + tolerance)
            throw Error(ErrorCode::outside, what,
                        text("tiles: ", what, " = ", x, " m lies outside the body, ", low, " .. ", high, " m"));
    };
    if (!(size >= 0.0 && std::isfinite(size)))
        throw Error(ErrorCode::bad_value, "size", text("tiles: size = ", size, " m, expected > 0"));
    if (!(growth >= 1.01 && growth <= 10.0))
        throw Error(ErrorCode::bad_value, "growth",
                    text("tiles: growth = ", growth, ", expected 1.01 <= growth <= 10"));
    for (const double x : axis.lines) inside(x, text("the line ", name));
    for (const FinerLine& f : axis.finer) {
        inside(f.at, text("finer_", name, ": at"));
        if (!(f.size > 0.0 && std::isfinite(f.size)))
            throw Error(ErrorCode::bad_value, text("finer_", name),
                        text("tiles: finer_", name, " at ", f.at, ": size = ", f.size, " m, expected > 0"));
    }
    for (const TileSplit& s : axis.splits) {
        inside(s.from, text("split_", name, ": from"));
        inside(s.to, text("split_", name, ": to"));
        const auto complain = [&](const std::string& what) {
            throw Error(ErrorCode::bad_value, text("split_", name),
                        text("tiles: split_", name, " from ", s.from, " to ", s.to, " m: ", what));
        };
        if (!(s.to > s.from + tolerance)) complain("expected from < to");
        if (s.cells < 1) complain(text("cells = ", s.cells, ", expected at least 1"));
        if (!usable(s.grading))
            complain(text("grading with ratio ", s.grading.ratio(), ", expected between 1e-6 and 1e6"));
    }
}

/// Borders of one split after its first, with the lines inside it put exactly onto theirs.
TEPOR_INLINE void append_split(const TileSplit& split, const std::vector<double>& lines, std::size_t first,
                               std::size_t last, const char* name, std::vector<double>& out) {
    const auto fraction = graded_fractions(split.cells, split.grading);
    const double from = lines[first];
    const double length = lines[last] - from;
    std::size_t line = first + 1;
    for (std::size_t k = 1; k < fraction.size(); ++k) {
        double x = from + length * fraction[k];
        const double shortest = length * std::min(fraction[k] - fraction[k - 1],
                                                  k + 1 < fraction.size() ? fraction[k + 1] - fraction[k] : 1.0);
        if (line <= last && std::abs(lines[line] - x) <= 1e-6 * shortest) x = lines[line++];
        if (line <= last && lines[line] < x)
            throw Error(ErrorCode::contradiction, text("split_", name),
                        text("tiles: split_", name, " from ", split.from, " to ", split.to, " m: the line ", name,
                             " = ", lines[line],
                             " m lies inside one of its cells; split the pieces on its two sides one by one"));
        out.push_back(x);
    }
}

TEPOR_INLINE TileBorders tile_borders(const TileAxis& axis, double low, double high, double size, double growth,
                                      const char* name) {
    TileBorders borders;
    borders.tolerance = 1e-9 * (high - low);
    check_axis(axis, low, high, borders.tolerance, size, growth, name);
    const auto lines = merged_lines(axis, low, high, borders.tolerance);
    const auto line_at = [&](double x) {
        std::size_t best = 0;
        for (std::size_t i = 1; i < lines.size(); ++i)
            if (std::abs(lines[i] - x) < std::abs(lines[best] - x)) best = i;
        return best;
    };
    auto splits = axis.splits;
    std::sort(splits.begin(), splits.end(), [](const TileSplit& a, const TileSplit& b) { return a.from < b.from; });

    borders.at.push_back(lines.front());
    double total = 0.0;
    std::size_t next_split = 0;
    for (std::size_t i = 0; i + 1 < lines.size();) {
        if (next_split < splits.size() && line_at(splits[next_split].from) < i)
            throw Error(
                ErrorCode::contradiction, text("split_", name),
                text("tiles: two calls of split_", name, " overlap at ", name, " = ", splits[next_split].from, " m"));
        const bool by_hand = next_split < splits.size() && line_at(splits[next_split].from) == i;
        const double length = lines[i + 1] - lines[i];
        double start = std::numeric_limits<double>::infinity();
        double end = start;
        for (const FinerLine& f : axis.finer) {
            if (f.at < lines[i] + borders.tolerance)
                start = std::min(start, f.size + (growth - 1.0) * (lines[i] - f.at));
            if (f.at > lines[i + 1] - borders.tolerance)
                end = std::min(end, f.size + (growth - 1.0) * (f.at - lines[i + 1]));
        }
        if (!by_hand && !(size > 0.0))
            throw Error(ErrorCode::missing, "size",
                        text("tiles: no cells are said between ", name, " = ", lines[i], " and ", lines[i + 1],
                             " m; give .size or a split_", name));
        const GrowingRun run(length, start, end, by_hand ? length : size, growth);
        const double count =
            by_hand ? as_double(splits[next_split].cells) : std::max(1.0, std::ceil(run.count() - 1e-6));
        total += count;
        if (!(total < 1e9))
            throw Error(ErrorCode::too_large, "tiles",
                        text("tiles: more than 1e9 cells along ", name, "; take longer ones"));
        if (by_hand) {
            const std::size_t last = line_at(splits[next_split].to);
            append_split(splits[next_split], lines, i, last, name, borders.at);
            i = last;
            ++next_split;
            continue;
        }
        const auto n = static_cast<Index>(count);
        const bool equal = run.left == 0.0 && run.right == 0.0;
        for (Index k = 1; k < n; ++k) {
            const double part = as_double(k) / count;
            borders.at.push_back(lines[i] + (equal ? length * part : run.place(run.count() * part)));
        }
        borders.at.push_back(lines[++i]);
    }
    return borders;
}

} // namespace tepor::detail
