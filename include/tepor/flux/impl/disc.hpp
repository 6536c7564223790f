#pragma once
// Integration of a polynomial times a radial weight over the intersection of a triangle and a disc.

#include <algorithm>
#include <cmath>
#include <tepor/flux/disc.hpp>
#include <tepor/quadrature/gauss.hpp>
#include <tepor/quadrature/triangle_rules.hpp>

namespace tepor::detail {

/// Adds up the moments of one cell; all places are relative to the centre of the disc.
class DiscCell {
  public:
    DiscCell(const Disc& disc, const Point (&corner)[3])
        : disc_(disc), corner_{corner[0], corner[1], corner[2]},
          inverse_(1.0 / cross(corner[1] - corner[0], corner[2] - corner[0])),
          height_(disc.scale * (disc.power + 1.0) / (pi * disc.radius * disc.radius)) {}

    void add(double weight, Point p) noexcept {
        const double outside = 1.0 - dot(p, p) / (disc_.radius * disc_.radius);
        double w = height_;
        for (int m = 0; m < disc_.power; ++m) w *= outside;
        const double l1 = inverse_ * cross(p - corner_[0], corner_[2] - corner_[0]);
        const double l2 = inverse_ * cross(corner_[1] - corner_[0], p - corner_[0]);
        const double l[3] = {1.0 - l1 - l2, l1, l2};
        const double part = weight * w;
        for (int i = 0; i < 3; ++i) {
            moment[i] += part * l[i] * l[i];
            moment[3 + i] += part * l[i] * l[i == 2 ? 0 : i + 1];
        }
        square += part * w;
    }

    /// The triangle (centre, a, b), its orientation as the sign, by the collapsed rule: polynomials are exact.
    void add_sector_triangle(Point a, Point b) {
        static const Rule<2> rule = collapsed_triangle_rule(10);
        const double twice = cross(a, b);
        for (Index q = 0; q < rule.size(); ++q) {
            const auto x = rule.point(q);
            add(twice * rule.weight(q), {x[0] * a.x + x[1] * b.x, x[0] * a.y + x[1] * b.y});
        }
    }

    /// The circular sector from a to b (turning less than pi), positive counter-clockwise.
    void add_sector(Point a, Point b) {
        static const Rule<1> turn = gauss_legendre(16), outwards = gauss_legendre(6);
        const double from = std::atan2(a.y, a.x);
        const double angle = std::atan2(cross(a, b), dot(a, b));
        for (Index i = 0; i < turn.size(); ++i) {
            const double at = from + angle * turn.point(i)[0];
            const Point d{std::cos(at), std::sin(at)};
            for (Index j = 0; j < outwards.size(); ++j) {
                const double r = disc_.radius * outwards.point(j)[0];
                add(angle * turn.weight(i) * disc_.radius * outwards.weight(j) * r, r * d);
            }
        }
    }

    /// The intersection of the disc with the triangle (centre, a, b), signed: split where the edge crosses the circle.
    void add_edge(Point a, Point b) {
        const Point d = b - a;
        const double dd = dot(d, d), ad = dot(a, d), rr = disc_.radius * disc_.radius;
        const double root = ad * ad - dd * (dot(a, a) - rr);
        double cut[4] = {0.0, 1.0, 1.0, 1.0};
        int pieces = 1;
        if (root > 0.0) {
            const double s = std::sqrt(root), first = (-ad - s) / dd, second = (-ad + s) / dd;
            double inner[2];
            int count = 0;
            if (first > 0.0 && first < 1.0) inner[count++] = first;
            if (second > 0.0 && second < 1.0) inner[count++] = second;
            for (int i = 0; i < count; ++i) cut[1 + i] = inner[i];
            pieces += count;
            cut[pieces] = 1.0;
        }
        for (int i = 0; i < pieces; ++i) {
            const Point p = a + cut[i] * d, q = a + cut[i + 1] * d, middle = 0.5 * (p + q);
            if (dot(middle, middle) <= rr)
                add_sector_triangle(p, q);
            else
                add_sector(p, q);
        }
    }

    double moment[6] = {};
    double square = 0.0; ///< integral of w^2

  private:
    const Disc& disc_;
    Point corner_[3];
    double inverse_, height_;
};

/// Squared norm of the projection on degree 0 (order 1) or 1 (order 2) of a function with these moments on a triangle.
inline double projection_squared(int order, const double (&m)[6], double area) noexcept {
    double v[3]; // moments against lambda_i
    for (int i = 0; i < 3; ++i) v[i] = m[i] + m[3 + i] + m[i == 0 ? 5 : 2 + i];
    const double sum = v[0] + v[1] + v[2];
    if (order == 1) return sum * sum / area;
    // inverse of the mass matrix area/12 (1 + delta): 12/area (delta - 1/4)
    return 12.0 / area * (v[0] * v[0] + v[1] * v[1] + v[2] * v[2] - 0.25 * sum * sum);
}

} // namespace tepor::detail

namespace tepor {

TEPOR_INLINE std::vector<SpreadSource> disc_moments(const MeshData& mesh, const Disc& disc) {
    using namespace detail;
    static const Rule<2> inside = collapsed_triangle_rule(10);
    std::vector<SpreadSource> out;
    const double r = disc.radius;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id* node = mesh.cell(c);
        Point p[3];
        double lowx = r, highx = -r, lowy = r, highy = -r, farthest = 0.0;
        for (int i = 0; i < 3; ++i) {
            p[i] = mesh.nodes[as_size(node[i])] - disc.centre;
            lowx = std::min(lowx, p[i].x), highx = std::max(highx, p[i].x);
            lowy = std::min(lowy, p[i].y), highy = std::max(highy, p[i].y);
            farthest = std::max(farthest, dot(p[i], p[i]));
        }
        if (lowx >= r || highx <= -r || lowy >= r || highy <= -r) continue;
        DiscCell cell(disc, p);
        const double area = 0.5 * cross(p[1] - p[0], p[2] - p[0]);
        if (farthest <= r * r) {
            for (Index q = 0; q < inside.size(); ++q) {
                const auto x = inside.point(q);
                cell.add(2.0 * area * inside.weight(q), p[0] + x[0] * (p[1] - p[0]) + x[1] * (p[2] - p[0]));
            }
        } else {
            for (int i = 0; i < 3; ++i) cell.add_edge(p[i], p[i == 2 ? 0 : i + 1]);
        }
        if (!(cell.square > 0.0)) continue;
        SpreadSource source;
        source.cell = as_id(c);
        std::copy(cell.moment, cell.moment + 6, source.moment);
        // the difference of two close numbers: never below its own rounding
        source.lost_squared =
            std::max(cell.square - projection_squared(mesh.order, cell.moment, area), 0.0) + 1e-15 * cell.square;
        out.push_back(source);
    }
    return out;
}

namespace detail {

TEPOR_INLINE void merge_spread(std::vector<SpreadSource>& to, const std::vector<SpreadSource>& from) {
    to.insert(to.end(), from.begin(), from.end());
    std::stable_sort(to.begin(), to.end(),
                     [](const SpreadSource& a, const SpreadSource& b) { return a.cell < b.cell; });
    std::size_t kept = 0;
    for (std::size_t i = 1; i < to.size(); ++i) {
        if (to[i].cell != to[kept].cell) {
            to[++kept] = to[i];
            continue;
        }
        for (int m = 0; m < 6; ++m) to[kept].moment[m] += to[i].moment[m];
        const double lost = std::sqrt(to[kept].lost_squared) + std::sqrt(to[i].lost_squared);
        to[kept].lost_squared = lost * lost;
    }
    if (!to.empty()) to.resize(kept + 1);
}

} // namespace detail
} // namespace tepor
