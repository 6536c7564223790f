#pragma once
// Points on arcs, and the inner nodes of cells with sides on arcs.

#include <cmath>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>

namespace tepor::detail {

/// The point at fraction t of the turn from a to b on the shorter way round the arc's circle; a and b lie on it.
inline Point on_arc(const MeshArc& arc, Point a, Point b, double t) noexcept {
    const Point u = a - arc.centre;
    const Point v = b - arc.centre;
    const double turn = t * std::atan2(cross(u, v), dot(u, v));
    const double c = std::cos(turn);
    const double s = std::sin(turn);
    const double scale = arc.radius / std::hypot(u.x, u.y);
    return {arc.centre.x + scale * (c * u.x - s * u.y), arc.centre.y + scale * (s * u.x + c * u.y)};
}

/// Height of the arc over its chord a b.
inline double arc_height(const MeshArc& arc, Point a, Point b) noexcept {
    const double half = 0.5 * distance(a, b);
    if (half >= arc.radius) return arc.radius;
    return half * half / (arc.radius + std::sqrt((arc.radius - half) * (arc.radius + half)));
}

/// Coordinates of the nodes of one cell from its vertices: side nodes on their arc (arcs[s], null for a straight side) or on
/// the chord, inner nodes moved along by (la + lb)^2 times the offset of the arc from its chord, la and lb being the area
/// coordinates of the side's ends; that keeps polynomials of degree 2 on the side exact in the inner nodes of order 3.
/// The weight follows Lenoir, SIAM J. Numer. Anal. 23 (1986) 562-580 (from memory). Cells of other shapes than triangles keep
/// straight sides' nodes and take the side offsets linearly to the opposite side.
inline void place_cell_nodes(const CellKind& kind, const MeshArc* const* arcs, Point* x) noexcept {
    const int corners = kind.vertices();
    const bool triangle = kind.shape == CellShape::triangle;
    for (int i = corners; i < kind.nodes; ++i) {
        const Point r = kind.reference_nodes[as_size(i)];
        double weight[4] = {1.0 - r.x, r.x, 0.0, 0.0};
        if (triangle) {
            weight[0] = 1.0 - r.x - r.y;
            weight[2] = r.y;
        } else if (kind.dim == 2) {
            weight[0] = (1.0 - r.x) * (1.0 - r.y);
            weight[1] = r.x * (1.0 - r.y);
            weight[2] = r.x * r.y;
            weight[3] = (1.0 - r.x) * r.y;
        }
        Point p;
        for (int k = 0; k < corners; ++k) p = p + weight[k] * x[k];
        if (kind.dim == 2)
            for (int s = 0; s < corners; ++s) {
                if (arcs[s] == nullptr) continue;
                const int z = s + 1 == corners ? 0 : s + 1;
                const double near = weight[s] + weight[z];
                if (!(near > 0.0)) continue;
                const double t = weight[z] / near;
                const Point chord = (1.0 - t) * x[s] + t * x[z];
                p = p + (triangle ? near * near : near) * (on_arc(*arcs[s], x[s], x[z], t) - chord);
            }
        x[i] = p;
    }
}

/// Smallest Jacobian determinant over a lattice of a cell (vertices, sides and inside); exact for affine cells.
inline double least_jacobian(const CellKind& kind, const Point* x) noexcept {
    const int n = kind.order == 1 && kind.shape != CellShape::quadrilateral ? 1 : 2 * kind.order;
    double least = 1e300;
    for (int j = 0; j <= (kind.dim == 1 ? 0 : n); ++j)
        for (int i = 0; i <= n - (kind.shape == CellShape::triangle ? j : 0); ++i) {
            const double d = jacobian_in_cell(kind, x, {as_double(i) / n, as_double(j) / n});
            if (!(d >= least)) least = d;
        }
    return least;
}

} // namespace tepor::detail
