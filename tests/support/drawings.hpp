#pragma once
// Random drawings with an independent calculation of what they show: the painting rule on scan lines.

#include <algorithm>
#include <cmath>
#include <random>
#include <string>
#include <tepor/mesh/section.hpp>
#include <vector>

namespace tepor::test {

/// A shape told twice: once for the library, once as plain numbers.
struct PlainShape {
    bool cut = false;
    int region = 0;
    bool round = false;
    std::vector<Point> corners; ///< of a polygon
    Point centre;
    double radius = 0.0;

    /// Winding number of the polygon around p (crossings of the ray to the right), or distance from the centre.
    [[nodiscard]] bool holds(Point p) const {
        if (round) return std::hypot(p.x - centre.x, p.y - centre.y) < radius;
        int winding = 0;
        for (std::size_t i = 0; i < corners.size(); ++i) {
            const Point a = corners[i];
            const Point b = corners[(i + 1) % corners.size()];
            const double side = (b.x - a.x) * (p.y - a.y) - (b.y - a.y) * (p.x - a.x);
            if (a.y <= p.y && b.y > p.y && side > 0.0) ++winding;
            if (a.y > p.y && b.y <= p.y && side < 0.0) --winding;
        }
        return winding != 0;
    }
    /// Appends the y where the outline crosses the vertical line at x.
    void crossings(double x, std::vector<double>& y) const {
        if (round) {
            const double d = radius * radius - (x - centre.x) * (x - centre.x);
            if (d > 0.0) y.insert(y.end(), {centre.y - std::sqrt(d), centre.y + std::sqrt(d)});
            return;
        }
        for (std::size_t i = 0; i < corners.size(); ++i) {
            const Point a = corners[i];
            const Point b = corners[(i + 1) % corners.size()];
            if ((a.x <= x) != (b.x <= x)) y.push_back(a.y + (x - a.x) * (b.y - a.y) / (b.x - a.x));
        }
    }
    [[nodiscard]] double perimeter_of_arcs() const { return round ? 2.0 * 3.14159265358979 * radius : 0.0; }
};

struct PlainDrawing {
    Section section;
    std::vector<PlainShape> shapes;
    std::vector<std::string> names{"steel", "copper", "brick", "wool"};

    void add(const PlainShape& s) {
        shapes.push_back(s);
        Shape shape = s.round ? circle(s.centre, s.radius) : polygon(s.corners);
        if (s.cut)
            section.cut(std::move(shape), "hole");
        else
            section.add(names[static_cast<std::size_t>(s.region)], std::move(shape));
    }

    /// The painting rule, straight from its words.
    [[nodiscard]] int region_at(Point p) const {
        int region = -1;
        for (const PlainShape& s : shapes)
            if (!s.cut && s.holds(p)) region = s.region;
        for (const PlainShape& s : shapes)
            if (s.cut && s.holds(p)) region = -1;
        return region;
    }

    /// Lengths of the regions on the vertical line at x.
    [[nodiscard]] std::vector<double> lengths(double x) const {
        std::vector<double> y;
        for (const PlainShape& s : shapes) s.crossings(x, y);
        std::sort(y.begin(), y.end());
        std::vector<double> sum(names.size(), 0.0);
        for (std::size_t i = 1; i < y.size(); ++i) {
            const int r = y[i] - y[i - 1] > 0.0 ? region_at({x, 0.5 * (y[i] + y[i - 1])}) : -1;
            if (r >= 0) sum[static_cast<std::size_t>(r)] += y[i] - y[i - 1];
        }
        return sum;
    }

    /// Areas of the regions. Between two neighbouring x of corners, crossings of straight edges and ends of circles the
    /// lengths are smooth; for polygons they are linear, so that the middle gives the area exactly. With circles the interval
    /// is divided by cosines (the lengths have square-root ends) into `parts`.
    [[nodiscard]] std::vector<double> areas(int parts) const {
        std::vector<double> x;
        struct Line {
            Point a;
            Point b;
        };
        std::vector<Line> lines;
        bool any_round = false;
        for (const PlainShape& s : shapes) {
            if (s.round) {
                x.insert(x.end(), {s.centre.x - s.radius, s.centre.x + s.radius});
                any_round = true;
            }
            for (std::size_t i = 0; i < s.corners.size(); ++i) {
                x.push_back(s.corners[i].x);
                lines.push_back({s.corners[i], s.corners[(i + 1) % s.corners.size()]});
            }
        }
        for (std::size_t i = 0; i < lines.size(); ++i)
            for (std::size_t j = 0; j < i; ++j) {
                const Point d = lines[i].b - lines[i].a;
                const Point e = lines[j].b - lines[j].a;
                const double det = cross(d, e);
                if (det == 0.0) continue;
                const double t = cross(lines[j].a - lines[i].a, e) / det;
                if (t > 0.0 && t < 1.0) x.push_back(lines[i].a.x + t * d.x);
            }
        std::sort(x.begin(), x.end());
        std::vector<double> sum(names.size(), 0.0);
        const int n = any_round ? parts : 1;
        for (std::size_t i = 1; i < x.size(); ++i) {
            const double width = x[i] - x[i - 1];
            if (!(width > 1e-15)) continue;
            for (int k = 0; k < n; ++k) {
                const double u = n == 1 ? 0.0 : 0.5 * (1.0 - std::cos(3.141592653589793 * k / n));
                const double v = n == 1 ? 1.0 : 0.5 * (1.0 - std::cos(3.141592653589793 * (k + 1) / n));
                const auto l = lengths(x[i - 1] + 0.5 * (u + v) * width);
                for (std::size_t r = 0; r < sum.size(); ++r) sum[r] += (v - u) * width * l[r];
            }
        }
        return sum;
    }
};

/// Overlapping polygons; every other drawing on a coarse grid, so that edges coincide, touch and share corners.
inline PlainDrawing random_polygons(unsigned seed) {
    std::mt19937 random(seed);
    const auto real = [&](double a, double b) { return std::uniform_real_distribution<double>(a, b)(random); };
    const auto whole = [&](int a, int b) { return std::uniform_int_distribution<int>(a, b)(random); };
    PlainDrawing drawing;
    const bool grid = seed % 2 == 1;
    const auto place = [&] {
        return grid ? Point{0.1 * whole(0, 10), 0.1 * whole(0, 8)} : Point{real(0.0, 1.0), real(0.0, 0.8)};
    };
    const int count = whole(2, 8);
    for (int i = 0; i < count; ++i) {
        PlainShape s;
        s.region = whole(0, 3);
        s.cut = i > 0 && whole(0, 4) == 0;
        const int kind = whole(0, 2);
        if (kind == 0) {
            const Point a = place();
            Point b = place();
            if (a.x == b.x) b.x += 0.1;
            if (a.y == b.y) b.y += 0.1;
            s.corners = {{a.x, a.y}, {b.x, a.y}, {b.x, b.y}, {a.x, b.y}};
        } else if (kind == 1) {
            do s.corners = {place(), place(), place()};
            while (std::abs(cross(s.corners[1] - s.corners[0], s.corners[2] - s.corners[0])) < 0.02);
        } else {
            const Point m = place();
            const int n = whole(4, 7);
            for (int k = 0; k < n; ++k) {
                const double r = real(0.1, 0.35);
                const double a = 2.0 * 3.14159265358979 * k / n;
                s.corners.push_back({m.x + r * std::cos(a), m.y + r * std::sin(a)});
            }
        }
        drawing.add(s);
    }
    return drawing;
}

/// Circles, rectangles and triangles; every other drawing on a coarse grid, so that circles touch and coincide.
inline PlainDrawing random_circles(unsigned seed) {
    std::mt19937 random(seed + 5000);
    const auto real = [&](double a, double b) { return std::uniform_real_distribution<double>(a, b)(random); };
    const auto whole = [&](int a, int b) { return std::uniform_int_distribution<int>(a, b)(random); };
    PlainDrawing drawing;
    const bool grid = seed % 2 == 1;
    const int count = whole(2, 7);
    for (int i = 0; i < count; ++i) {
        PlainShape s;
        s.region = whole(0, 3);
        s.cut = i > 0 && whole(0, 4) == 0;
        const Point m = grid ? Point{0.1 * whole(0, 10), 0.1 * whole(0, 8)} : Point{real(0.0, 1.0), real(0.0, 0.8)};
        if (whole(0, 2) > 0) {
            s.round = true;
            s.centre = m;
            s.radius = grid ? 0.1 * whole(1, 3) : real(0.05, 0.35);
        } else {
            const double w = grid ? 0.1 * whole(1, 5) : real(0.1, 0.6);
            const double h = grid ? 0.1 * whole(1, 5) : real(0.1, 0.6);
            s.corners = {{m.x, m.y}, {m.x + w, m.y}, {m.x + w, m.y + h}, {m.x, m.y + h}};
        }
        drawing.add(s);
    }
    return drawing;
}

} // namespace tepor::test
