#pragma once
// Point location: descent of a tree of boxes, then the inverse map of the few cells left.

#include <algorithm>
#include <cmath>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/locate.hpp>
#include <tepor/mesh/space_order.hpp>

namespace tepor {
namespace detail {
inline constexpr Index cells_per_leaf = 4;
}

TEPOR_INLINE Locator::Locator(const MeshData& mesh, const detail::CellKind& kind) : mesh_(&mesh), kind_(&kind) {
    using detail::as_size;
    const Index n = mesh.cell_count();
    if (n == 0) return;

    if (!mesh.curved.empty()) {
        bulge_start_.assign(as_size(n + 1), 0);
        for (const CurvedSide& c : mesh.curved) ++bulge_start_[as_size(c.side.cell) + 1];
        for (std::size_t c = 1; c < bulge_start_.size(); ++c) bulge_start_[c] += bulge_start_[c - 1];
        bulges_.resize(mesh.curved.size());
        std::vector<Id> fill(bulge_start_.begin(), bulge_start_.end() - 1);
        for (const CurvedSide& c : mesh.curved) bulges_[as_size(fill[as_size(c.side.cell)]++)] = c;
    }

    Point low = mesh.nodes.front();
    Point high = low;
    for (Point p : mesh.nodes) {
        low = {std::min(low.x, p.x), std::min(low.y, p.y)};
        high = {std::max(high.x, p.x), std::max(high.y, p.y)};
    }
    size_ = mesh.dim == 1 ? high.x - low.x : distance(low, high);

    std::vector<Box> own(as_size(n));
    std::vector<Point> middle(as_size(n));
    for (Index c = 0; c < n; ++c) {
        Box b{{1e300, 1e300}, {-1e300, -1e300}};
        Point x[detail::max_cell_nodes];
        detail::cell_points(mesh, c, x);
        for (int i = 0; i < kind.nodes; ++i) {
            if (kind.dim == 1) x[i].y = 0.0;
            b.low = {std::min(b.low.x, x[i].x), std::min(b.low.y, x[i].y)};
            b.high = {std::max(b.high.x, x[i].x), std::max(b.high.y, x[i].y)};
        }
        // A curved side may leave the box of its nodes: by less than a quarter of it for orders 2 and 3.
        double margin = 2e-9 * size_;
        const double extent = std::max(b.high.x - b.low.x, b.high.y - b.low.y);
        if (kind.order > 1) margin += (kind.dim == 1 ? 0.0 : 0.25) * extent;
        if (!bulge_start_.empty())
            for (Id k = bulge_start_[as_size(c)]; k < bulge_start_[as_size(c) + 1]; ++k) {
                const CurvedSide& s = bulges_[as_size(k)];
                margin += detail::arc_height(mesh.arcs[as_size(s.arc)], x[s.side.side],
                                             x[s.side.side + 1 == kind.sides ? 0 : s.side.side + 1]);
            }
        b.low = b.low - Point{margin, margin};
        b.high = b.high + Point{margin, margin};
        own[as_size(c)] = b;
        middle[as_size(c)] = 0.5 * (b.low + b.high);
    }
    cells_ = detail::space_order(middle);

    leaves_ = 1;
    while (leaves_ * detail::cells_per_leaf < n) leaves_ *= 2;
    boxes_.assign(as_size(2 * leaves_), Box{{1e300, 1e300}, {-1e300, -1e300}});
    const auto join = [](Box& a, const Box& b) {
        a.low = {std::min(a.low.x, b.low.x), std::min(a.low.y, b.low.y)};
        a.high = {std::max(a.high.x, b.high.x), std::max(a.high.y, b.high.y)};
    };
    // Node k has children 2k and 2k + 1; leaf l holds cells_[l * n / leaves .. (l + 1) * n / leaves).
    for (Index l = 0; l < leaves_; ++l)
        for (Index i = l * n / leaves_; i < (l + 1) * n / leaves_; ++i)
            join(boxes_[as_size(leaves_ + l)], own[as_size(cells_[as_size(i)])]);
    for (Index k = leaves_ - 1; k > 0; --k) {
        join(boxes_[as_size(k)], boxes_[as_size(2 * k)]);
        join(boxes_[as_size(k)], boxes_[as_size(2 * k + 1)]);
    }
}

/// How far p lies outside a cell, in reference coordinates (<= 0 inside); more than *slack means not this cell.
TEPOR_INLINE double Locator::breach_at(Id cell, Point p, Point* xi, double* slack) const {
    using detail::as_size;
    Point x[detail::max_cell_nodes];
    detail::cell_points(*mesh_, cell, x);
    *slack = 0.0;
    if (kind_->dim == 2 && kind_->shape == CellShape::triangle && kind_->order == 1) {
        const Point a = x[1] - x[0];
        const Point b = x[2] - x[0];
        const Point r = p - x[0];
        const double det = cross(a, b);
        *xi = {cross(r, b) / det, cross(a, r) / det};
    } else if (!kind_->invert(x, p, xi)) {
        return 1e300;
    }
    double side_breach[4] = {-xi->x, xi->x - 1.0, 0.0, 0.0};
    int sides = 2;
    if (kind_->shape == CellShape::triangle) {
        side_breach[0] = -xi->y;
        side_breach[1] = xi->x + xi->y - 1.0;
        side_breach[2] = -xi->x;
        sides = 3;
    } else if (kind_->dim == 2) {
        side_breach[0] = -xi->y;
        side_breach[2] = xi->y - 1.0;
        side_breach[3] = -xi->x;
        sides = 4;
    }
    const double width =
        kind_->dim == 1 ? std::abs(x[1].x - x[0].x) : std::sqrt(std::abs(cross(x[1] - x[0], x[2] - x[0])));
    *slack = std::min(0.1, 1e-9 * size_ / width + 1e-12);

    double worst = -1e300;
    for (int s = 0; s < sides; ++s) {
        if (side_breach[s] > *slack && side_breach[s] < 0.5 && !bulge_start_.empty())
            for (Id k = bulge_start_[as_size(cell)]; k < bulge_start_[as_size(cell) + 1]; ++k) {
                const CurvedSide& c = bulges_[as_size(k)];
                if (c.side.side != s) continue;
                // Beyond the side but on the body's side of its arc (seen from the chord, within the circle).
                const MeshArc& arc = mesh_->arcs[as_size(c.arc)];
                const Point a = x[s];
                const Point z = x[s + 1 == sides ? 0 : s + 1];
                const bool bulges_out = cross(z - a, arc.centre - a) > 0.0;
                if (bulges_out && distance(p, arc.centre) <= arc.radius + 1e-9 * size_ && dot(p - a, z - a) >= 0.0 &&
                    dot(p - z, a - z) >= 0.0)
                    side_breach[s] = 0.5 * *slack;
            }
        worst = std::max(worst, side_breach[s]);
    }
    return worst;
}

template <class Act>
void Locator::visit(Point p, Act&& act) const {
    if (leaves_ == 0) return;
    if (kind_->dim == 1) p.y = 0.0;
    if (!(std::isfinite(p.x) && std::isfinite(p.y))) return;
    Index stack[80];
    int top = 0;
    stack[top++] = 1;
    const auto n = static_cast<Index>(cells_.size());
    while (top > 0) {
        const Index k = stack[--top];
        const Box& b = boxes_[detail::as_size(k)];
        if (!(p.x >= b.low.x && p.x <= b.high.x && p.y >= b.low.y && p.y <= b.high.y)) continue;
        if (k < leaves_) {
            stack[top++] = 2 * k + 1;
            stack[top++] = 2 * k;
            continue;
        }
        const Index l = k - leaves_;
        for (Index i = l * n / leaves_; i < (l + 1) * n / leaves_; ++i) act(cells_[detail::as_size(i)]);
    }
}

TEPOR_INLINE Location Locator::search(Index region, Point p) const {
    // Inside beats near; among cells that hold p the lowest number, so that the answer does not hang on the tree.
    Location best;
    double best_breach = 1e300;
    visit(p, [&](Id c) {
        if (region >= 0 && mesh_->region[detail::as_size(c)] != region) return;
        Point xi;
        double slack = 0.0;
        double breach = breach_at(c, p, &xi, &slack);
        if (!(breach <= slack)) return;
        if (breach <= 1e-12) breach = 0.0;
        if (breach < best_breach || (breach == best_breach && c < best.cell)) {
            best_breach = breach;
            best = {c, xi};
        }
    });
    return best;
}

TEPOR_INLINE Location Locator::find(Point p) const {
    return search(-1, p);
}

TEPOR_INLINE Location Locator::find_in(Index region, Point p) const {
    return region < 0 ? Location{} : search(region, p);
}

TEPOR_INLINE void Locator::find_all(Point p, std::vector<Location>& found) const {
    found.clear();
    visit(p, [&](Id c) {
        Point xi;
        double slack = 0.0;
        if (breach_at(c, p, &xi, &slack) <= slack) found.push_back({c, xi});
    });
    std::sort(found.begin(), found.end(), [](const Location& a, const Location& b) { return a.cell < b.cell; });
}

} // namespace tepor
