#pragma once
// The promise on angles, checked against the drawing: at least 25 degrees but where an input angle below 60 degrees is touched.

#include <cmath>
#include <string>
#include <tepor/base/text.hpp>
#include <tepor/mesh/drawing.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor::test {

struct AngleReport {
    double least = 180.0;           ///< over all triangles [degrees]
    double least_elsewhere = 180.0; ///< over those that touch no input angle below 60 degrees
    Index excused = 0;              ///< triangles below 25 degrees that touch one
    Point where;
};

/// How far p lies off an edge of the graph.
inline double off_edge(const detail::PlaneGraph& graph, const detail::PlaneGraph::Edge& e, Point p) {
    detail::ShapeEdge shape{graph.points[detail::as_size(e.a)], graph.points[detail::as_size(e.b)], false, {}, 0.0};
    if (e.arc >= 0) {
        shape.arc = true;
        shape.centre = graph.arcs[detail::as_size(e.arc)].centre;
        shape.radius = graph.arcs[detail::as_size(e.arc)].radius;
    }
    const auto at = detail::project_on_edge(shape, p);
    if (at.t < 0.0 || at.t > 1.0) return std::min(distance(p, shape.a), distance(p, shape.b));
    return at.off;
}

inline AngleReport check_angles(const MeshData& mesh, const detail::PlaneGraph& graph) {
    struct Corner {
        Point p;
        std::size_t e;
        std::size_t f;
    };
    std::vector<Corner> sharp;
    for (std::size_t i = 0; i < graph.edges.size(); ++i)
        for (std::size_t j = 0; j < i; ++j)
            for (Id v : {graph.edges[i].a, graph.edges[i].b})
                if ((v == graph.edges[j].a || v == graph.edges[j].b) &&
                    dot(graph.leaving(graph.edges[i], v), graph.leaving(graph.edges[j], v)) > 0.5)
                    sharp.push_back({graph.points[detail::as_size(v)], i, j});
    AngleReport report;
    const double near = 2.0 * graph.tolerance;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        Point x[3];
        for (int k = 0; k < 3; ++k) x[k] = mesh.nodes[detail::as_size(mesh.cell(c)[k])];
        double least = 180.0;
        for (int k = 0; k < 3; ++k) {
            const Point u = x[(k + 1) % 3] - x[k];
            const Point v = x[(k + 2) % 3] - x[k];
            least = std::min(least, std::atan2(cross(u, v), dot(u, v)) * 180.0 / pi);
        }
        report.least = std::min(report.least, least);
        if (least >= 25.0 - 1e-6) continue;
        bool touches = false;
        for (const Corner& s : sharp) {
            bool on_e = false;
            bool on_f = false;
            for (Point p : x) {
                if (distance(p, s.p) <= near) touches = true;
                on_e = on_e || off_edge(graph, graph.edges[s.e], p) <= near;
                on_f = on_f || off_edge(graph, graph.edges[s.f], p) <= near;
            }
            touches = touches || (on_e && on_f);
        }
        if (touches) {
            ++report.excused;
        } else if (least < report.least_elsewhere) {
            report.least_elsewhere = least;
            report.where = x[0];
        }
    }
    return report;
}

} // namespace tepor::test
