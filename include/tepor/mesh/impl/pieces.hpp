#pragma once
// The first half of the refiner: edges of the graph cut into pieces, inserted, held as edges, regions flooded between them.

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstdint>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/curve.hpp>
#include <tepor/mesh/edge_grid.hpp>
#include <tepor/mesh/quality.hpp>
#include <tepor/mesh/space_order.hpp>

namespace tepor::detail {

TEPOR_INLINE Refiner::Refiner(const PlaneGraph& graph, const Targets& targets)
    : mesh(
          [&] {
              Point low = graph.points.front();
              for (Point p : graph.points) low = {std::min(low.x, p.x), std::min(low.y, p.y)};
              for (const MeshArc& a : graph.arcs)
                  low = {std::min(low.x, a.centre.x - a.radius), std::min(low.y, a.centre.y - a.radius)};
              return low;
          }(),
          [&] {
              Point high = graph.points.front();
              for (Point p : graph.points) high = {std::max(high.x, p.x), std::max(high.y, p.y)};
              for (const MeshArc& a : graph.arcs)
                  high = {std::max(high.x, a.centre.x + a.radius), std::max(high.y, a.centre.y + a.radius)};
              return high;
          }()),
      graph_(graph), targets_(targets) {}

TEPOR_INLINE void Refiner::fail(Point p, const char* cause) const {
    throw Error(ErrorCode::bad_geometry, "section",
                text("section: cannot be meshed near (", p.x, ", ", p.y, "): ", cause,
                     "; draw them clearly apart, or let section.tolerance(...) merge them (it is now ",
                     graph_.tolerance, " m)"));
}

/// Points where two edges leave within 75 degrees of each other: there pieces end on common circles around the point. (75, not
/// 60: chords of arcs may stand closer than the arcs.)
TEPOR_INLINE void Refiner::mark_sharp_corners() {
    sharp_.assign(graph_.points.size(), 0);
    std::vector<std::pair<Id, double>> rays;
    for (const auto& e : graph_.edges)
        for (Id v : {e.a, e.b}) {
            const Point d = graph_.leaving(e, v);
            rays.emplace_back(v, std::atan2(d.y, d.x));
        }
    std::sort(rays.begin(), rays.end());
    const double sharp = 75.0 * pi / 180.0;
    for (std::size_t i = 0; i < rays.size();) {
        std::size_t j = i;
        while (j < rays.size() && rays[j].first == rays[i].first) ++j;
        for (std::size_t k = i; j - i > 1 && k < j; ++k) {
            const double gap =
                k + 1 < j ? rays[k + 1].second - rays[k].second : rays[i].second + 2.0 * pi - rays[k].second;
            if (gap < sharp) sharp_[as_size(rays[i].first)] = 1;
        }
        i = j;
    }
}

/// Where the piece a-b of edge e is split: the middle; on edges with a sharp corner a place whose distance from the corner is
/// as round a binary number as the middle part of the piece allows, so that all edges at the corner are split alike.
TEPOR_INLINE Point Refiner::split_place(const PlaneGraph::Edge& e, Point a, Point b) const {
    const MeshArc* arc = e.arc < 0 ? nullptr : &graph_.arcs[as_size(e.arc)];
    const Point middle = arc != nullptr ? on_arc(*arc, a, b, 0.5) : 0.5 * (a + b);
    Id corner = -1;
    for (Id v : {e.a, e.b})
        if (sharp_[as_size(v)] != 0 && (corner < 0 || distance(middle, graph_.points[as_size(v)]) <
                                                          distance(middle, graph_.points[as_size(corner)])))
            corner = v;
    if (corner < 0) return middle;
    const Point p = graph_.points[as_size(corner)];
    const Point q = graph_.points[as_size(corner == e.a ? e.b : e.a)];
    double near = distance(a, p);
    double far = distance(b, p);
    if (near > far) std::swap(near, far);
    const double low = near + 0.3 * (far - near);
    const double high = near + 0.7 * (far - near);
    double step = std::exp2(std::ceil(std::log2(high)));
    while (std::ceil(low / step) * step > high) step *= 0.5;
    double r = std::ceil(low / step) * step;
    // Of several equally round places the one nearest the middle.
    while (r + step <= high && std::abs(r + step - 0.5 * (near + far)) < std::abs(r - 0.5 * (near + far))) r += step;
    if (arc == nullptr) return p + (r / distance(p, q)) * (q - p);
    const Point u = p - arc->centre;
    const double turn =
        (cross(u, q - arc->centre) > 0.0 ? 2.0 : -2.0) * std::asin(std::min(1.0, 0.5 * r / arc->radius));
    const double scale = arc->radius / std::hypot(u.x, u.y);
    const double c = scale * std::cos(turn);
    const double s = scale * std::sin(turn);
    return {arc->centre.x + c * u.x - s * u.y, arc->centre.y + s * u.x + c * u.y};
}

TEPOR_INLINE bool Refiner::pieces_too_long(const PlaneGraph::Edge& e, Point a, Point b, bool sized) const {
    const double length = distance(a, b);
    if (sized && length > 1.1 * e.size) return true;
    if (e.arc < 0) return false;
    const MeshArc& arc = graph_.arcs[as_size(e.arc)];
    const double turn = 2.0 * std::asin(std::min(1.0, 0.5 * length / arc.radius));
    // At a sharp corner curved cells may have to give way to straight ones: shorter pieces there keep that error small.
    double most = targets_.turn;
    for (Id v : {e.a, e.b})
        if (sharp_[as_size(v)] != 0 && (graph_.points[as_size(v)] == a || graph_.points[as_size(v)] == b)) most *= 0.25;
    if (turn > most * (1.0 + 1e-9)) return true;
    return sized && arc_height(arc, a, b) > targets_.deviation;
}

TEPOR_INLINE void Refiner::subdivide(bool sized) {
    points_ = graph_.points;
    point_edge_.assign(points_.size(), -1);
    pieces_.clear();
    std::vector<Piece> open;
    for (std::size_t k = 0; k < graph_.edges.size(); ++k) {
        const auto& e = graph_.edges[k];
        const auto edge = as_id(k);
        const Point a = graph_.points[as_size(e.a)];
        const Point b = graph_.points[as_size(e.b)];
        if (sharp_[as_size(e.a)] == 0 && sharp_[as_size(e.b)] == 0) {
            double parts = 1.0;
            double length = distance(a, b);
            if (e.arc >= 0) {
                const MeshArc& arc = graph_.arcs[as_size(e.arc)];
                const double turn = 2.0 * std::asin(std::min(1.0, 0.5 * length / arc.radius));
                length = turn * arc.radius;
                parts = std::max(parts, std::ceil(turn / targets_.turn - 1e-9));
                if (sized && targets_.deviation < arc.radius)
                    parts = std::max(parts,
                                     std::ceil(turn / (2.0 * std::acos(1.0 - targets_.deviation / arc.radius)) - 1e-9));
            }
            if (sized) parts = std::max(parts, std::ceil(length / e.size - 0.1));
            if (!(parts < 1e8))
                throw Error(ErrorCode::too_large, "size",
                            "size: an edge would have more than 1e8 pieces; use a larger size");
            const auto n = static_cast<Index>(parts);
            Id last = e.a;
            for (Index i = 1; i <= n; ++i) {
                Id here = e.b;
                if (i < n) {
                    const double t = as_double(i) / parts;
                    here = as_id(points_.size());
                    points_.push_back(e.arc >= 0 ? on_arc(graph_.arcs[as_size(e.arc)], a, b, t) : a + t * (b - a));
                    point_edge_.push_back(edge);
                }
                pieces_.push_back({last, here, edge});
                last = here;
            }
            continue;
        }
        open.push_back({e.a, e.b, edge});
        while (!open.empty()) {
            const Piece p = open.back();
            open.pop_back();
            const Point u = points_[as_size(p.a)];
            const Point v = points_[as_size(p.b)];
            if (!pieces_too_long(e, u, v, sized)) {
                pieces_.push_back(p);
                continue;
            }
            if (points_.size() > 100000000)
                throw Error(ErrorCode::too_large, "size", "size: more than 1e8 pieces of edges; use a larger size");
            const Id m = as_id(points_.size());
            points_.push_back(split_place(e, u, v));
            point_edge_.push_back(edge);
            open.push_back({m, p.b, edge});
            open.push_back({p.a, m, edge});
        }
    }
}

/// Chords must lie to each other as their arcs do: no point may stand between a chord and its arc, and no two pieces may have
/// the same chord. Arcs that break this are split in halves.
TEPOR_INLINE void Refiner::part_crossing_chords() {
    if (graph_.arcs.empty()) return;
    for (int round = 0; round < 60; ++round) {
        EdgeGrid grid;
        for (Point p : points_) grid.add(p, p);
        grid.build();
        std::vector<std::pair<std::pair<Id, Id>, std::size_t>> chords;
        std::vector<char> bad(pieces_.size(), 0);
        bool any = false;
        for (std::size_t i = 0; i < pieces_.size(); ++i) {
            const Piece& piece = pieces_[i];
            chords.push_back({std::minmax(piece.a, piece.b), i});
            const auto& e = graph_.edges[as_size(piece.edge)];
            if (e.arc < 0) continue;
            const MeshArc& arc = graph_.arcs[as_size(e.arc)];
            const Point a = points_[as_size(piece.a)];
            const Point b = points_[as_size(piece.b)];
            const double height = arc_height(arc, a, b);
            const double length = distance(a, b);
            const double side = cross(b - a, arc.centre - a) > 0.0 ? 1.0 : -1.0;
            grid.visit(a, b, height, [&](std::size_t k) {
                if (k == as_size(piece.a) || k == as_size(piece.b) || bad[i] != 0) return;
                const Point p = points_[k];
                const double along = dot(p - a, b - a);
                if (along <= 0.0 || along >= length * length) return;
                if (side * cross(b - a, p - a) < 1e-3 * height * length && distance(p, arc.centre) < arc.radius)
                    bad[i] = 1;
            });
            any = any || bad[i] != 0;
        }
        std::sort(chords.begin(), chords.end());
        for (std::size_t i = 1; i < chords.size(); ++i)
            if (chords[i].first == chords[i - 1].first)
                for (std::size_t k : {i - 1, i}) {
                    const std::size_t piece = chords[k].second;
                    if (graph_.edges[as_size(pieces_[piece].edge)].arc >= 0) bad[piece] = 1;
                    any = true;
                }
        if (!any) return;
        std::vector<Piece> next;
        for (std::size_t i = 0; i < pieces_.size(); ++i) {
            const Piece piece = pieces_[i];
            if (bad[i] == 0) {
                next.push_back(piece);
                continue;
            }
            const Point a = points_[as_size(piece.a)];
            const Point b = points_[as_size(piece.b)];
            if (distance(a, b) < 8.0 * graph_.tolerance)
                fail(a, "an arc and another edge run closer than the tolerance");
            const Id m = as_id(points_.size());
            points_.push_back(split_place(graph_.edges[as_size(piece.edge)], a, b));
            point_edge_.push_back(piece.edge);
            next.push_back({piece.a, m, piece.edge});
            next.push_back({m, piece.b, piece.edge});
        }
        pieces_.swap(next);
    }
    fail(points_.front(), "arcs and other edges run too close to each other");
}

TEPOR_INLINE void Refiner::insert_pieces() {
    // In rounds of doubling size, each along a space-filling curve: points of one edge in their order would retriangulate
    // everything that faces the edge again and again. (Amenta, Choi & Rote, Symp. Computational Geometry 2003, 211-219.)
    const std::vector<Id> along = space_order(points_);
    constexpr int rounds = 24;
    const auto round_of =
        [](Id k) { // each number falls into the last round with chance 1/2, the one before with 1/4, ...
            std::uint32_t h = static_cast<std::uint32_t>(k) * 0x9E3779B9U;
            h ^= h >> 16U;
            h *= 0x85EBCA6BU;
            h ^= h >> 13U;
            return std::min(std::countr_zero(h | (1U << (rounds - 1))), rounds - 1);
        };
    std::vector<Id> order;
    order.reserve(along.size());
    for (int round = rounds; round-- > 0;)
        for (Id k : along)
            if (round_of(k) == round) order.push_back(k);
    std::vector<Id> vertex(points_.size(), -1);
    Id hint = 0;
    for (Id k : order) {
        const Index before = static_cast<Index>(mesh.points.size());
        vertex[as_size(k)] = mesh.insert(points_[as_size(k)], hint);
        if (static_cast<Index>(mesh.points.size()) == before) fail(points_[as_size(k)], "two points coincide");
        hint = mesh.out[as_size(vertex[as_size(k)])];
    }
    vertex_of_point.assign(vertex.begin(), vertex.begin() + static_cast<Index>(graph_.points.size()));
    const std::size_t n = mesh.points.size();
    vertex_edge_.assign(n, -1);
    vertex_point_.assign(n, -1);
    for (std::size_t k = 0; k < points_.size(); ++k) {
        vertex_edge_[as_size(vertex[k])] = point_edge_[k];
        if (k < graph_.points.size()) vertex_point_[as_size(vertex[k])] = as_id(k);
    }
    for (const Piece& piece : pieces_) {
        const Id a = vertex[as_size(piece.a)];
        const Id b = vertex[as_size(piece.b)];
        const Id end = mesh.force_edge(a, b, as_id(edge_of_segment.size()));
        if (end < 0) fail(mesh.at(mesh.from(-1 - end)), "two edges cross there or run closer than the tolerance");
        if (end != b) fail(mesh.at(end), "a point lies on an edge without being part of it");
        edge_of_segment.push_back(piece.edge);
        // The half-edge in the direction of the graph's edge.
        const Id h = mesh.find_edge(a, b);
        mesh.segment_edge.back() = h;
    }
}

TEPOR_INLINE void Refiner::flood() {
    std::fill(mesh.label.begin(), mesh.label.end(), -2);
    std::vector<Id> stack;
    const auto give = [&](Id half, Id label) {
        if (half < 0) return;
        Id& now = mesh.label[as_size(half / 3)];
        if (now == -2) {
            now = label;
            stack.push_back(half / 3);
        } else if (now != label) {
            fail(mesh.at(mesh.from(half)), "the regions beside an edge contradict each other");
        }
    };
    // After force_edge of later pieces half-edges may have moved: find them by their ends.
    for (std::size_t s = 0; s < pieces_.size(); ++s) {
        const Piece& piece = pieces_[s];
        const auto& e = graph_.edges[as_size(piece.edge)];
        Id h = mesh.segment_edge[s];
        if (!(mesh.at(mesh.from(h)) == points_[as_size(piece.a)])) h = mesh.twin[as_size(h)];
        mesh.segment_edge[s] = h;
        give(h, e.left);
        give(mesh.twin[as_size(h)], e.right);
    }
    while (!stack.empty()) {
        const Id t = stack.back();
        stack.pop_back();
        for (Id h = 3 * t; h < 3 * t + 3; ++h)
            if (mesh.segment[as_size(h)] < 0) give(mesh.twin[as_size(h)], mesh.label[as_size(t)]);
    }
    for (Id& label : mesh.label)
        if (label == -2) label = -1;
}

TEPOR_INLINE void Refiner::start(bool sized) {
    mark_sharp_corners();
    subdivide(sized);
    part_crossing_chords();
    insert_pieces();
    flood();
}

} // namespace tepor::detail
