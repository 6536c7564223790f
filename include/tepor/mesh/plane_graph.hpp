#pragma once
// PlaneGraph: what is left of a drawing once everything hidden is gone: points, edges between them, regions beside them.

#include <string>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor::detail {

/// Edges meet at their ends alone. An arc turns by less than half a circle, the shorter way from a to b.
struct PlaneGraph {
    struct Edge {
        Id a = -1;
        Id b = -1;
        Id arc = -1;  ///< position in arcs, -1 for a straight edge
        Id left = -1; ///< region on the left of a -> b, -1 outside
        Id right = -1;
        Id face_set = -1;    ///< position in face_sets, -1 for none
        double size = 1e300; ///< largest length of its pieces asked for [m]
    };
    std::vector<Point> points;
    std::vector<Edge> edges;
    std::vector<Id> held; ///< points that are no end of an edge
    std::vector<MeshArc> arcs;
    std::vector<std::vector<Id>> face_sets; ///< faces an edge belongs to
    double tolerance = 0.0;
    double diagonal = 0.0;

    /// Direction in which edge e leaves its end v (a unit vector, tangent to an arc).
    [[nodiscard]] Point leaving(const Edge& e, Id v) const noexcept {
        const Point p = points[as_size(v)];
        const Point q = points[as_size(v == e.a ? e.b : e.a)];
        Point d = q - p;
        if (e.arc >= 0) {
            const Point r = p - arcs[as_size(e.arc)].centre;
            d = cross(r, q - arcs[as_size(e.arc)].centre) > 0.0 ? Point{-r.y, r.x} : Point{r.y, -r.x};
        }
        return (1.0 / std::hypot(d.x, d.y)) * d;
    }
};

} // namespace tepor::detail
