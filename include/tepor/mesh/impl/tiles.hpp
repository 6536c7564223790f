#pragma once
// Building the mesh of a drawing on grid lines.

#include <algorithm>
#include <array>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/layers.hpp> // check_frame
#include <tepor/mesh/tiles.hpp>

namespace tepor {

namespace detail {

TEPOR_INLINE TileRectangle tile_rectangle(std::string name, Point a, Point b, const char* what) {
    for (const double v : {a.x, a.y, b.x, b.y})
        if (!std::isfinite(v))
            throw Error(ErrorCode::bad_value, name, text("Tiles: ", what, " \"", name, "\": a corner is not finite"));
    if (a.x == b.x || a.y == b.y)
        throw Error(ErrorCode::bad_geometry, name,
                    text("Tiles: ", what, " \"", name, "\" from (", a.x, ", ", a.y, ") to (", b.x, ", ", b.y,
                         ") m has no area; give two opposite corners"));
    return {std::move(name), {std::min(a.x, b.x), std::min(a.y, b.y)}, {std::max(a.x, b.x), std::max(a.y, b.y)}};
}

} // namespace detail

TEPOR_INLINE Tiles& Tiles::add(std::string region, Point corner, Point opposite) {
    if (region.empty())
        throw Error(ErrorCode::bad_name, "", "Tiles: a rectangle has no region name; add(\"name\", corner, opposite)");
    plan_.painted.push_back(detail::tile_rectangle(std::move(region), corner, opposite, "rectangle"));
    return *this;
}

TEPOR_INLINE Tiles& Tiles::cut(Point corner, Point opposite, std::string face) {
    plan_.cuts.push_back(detail::tile_rectangle(std::move(face), corner, opposite, "cut"));
    return *this;
}

TEPOR_INLINE Tiles& Tiles::face(std::string name, Point from, Point to) {
    if (name.empty()) throw Error(ErrorCode::bad_name, "", "Tiles: a face has no name; face(\"name\", from, to)");
    for (const double v : {from.x, from.y, to.x, to.y})
        if (!std::isfinite(v))
            throw Error(ErrorCode::bad_value, name, detail::text("Tiles: face \"", name, "\": an end is not finite"));
    if ((from.x == to.x) == (from.y == to.y))
        throw Error(ErrorCode::bad_geometry, name,
                    detail::text("Tiles: face \"", name, "\" from (", from.x, ", ", from.y, ") to (", to.x, ", ", to.y,
                                 ") m, expected a piece along x or along y"));
    plan_.faces.push_back({std::move(name), from, to});
    return *this;
}

TEPOR_INLINE Tiles& Tiles::split_x(const TileSplit& split) {
    plan_.x.splits.push_back(split);
    return *this;
}
TEPOR_INLINE Tiles& Tiles::split_y(const TileSplit& split) {
    plan_.y.splits.push_back(split);
    return *this;
}
TEPOR_INLINE Tiles& Tiles::finer_x(const FinerLine& line) {
    plan_.x.finer.push_back(line);
    return *this;
}
TEPOR_INLINE Tiles& Tiles::finer_y(const FinerLine& line) {
    plan_.y.finer.push_back(line);
    return *this;
}
TEPOR_INLINE Tiles& Tiles::line_x(double at) {
    plan_.x.lines.push_back(at);
    return *this;
}
TEPOR_INLINE Tiles& Tiles::line_y(double at) {
    plan_.y.lines.push_back(at);
    return *this;
}

namespace detail {

/// The edges of a tile, and what a number in `TileMap::region` below 0 means.
enum TileEdge : int { bottom_edge, right_edge, top_edge, left_edge, no_edge };
inline constexpr Id never_painted = -1;
inline constexpr Id first_cut = -2; // cut k is first_cut - k

/// Which region, if any, each tile has.
struct TileMap {
    TileBorders x;
    TileBorders y;
    std::vector<Id> region;

    [[nodiscard]] Id at(Index i, Index j) const noexcept {
        if (i < 0 || j < 0 || i >= x.cells() || j >= y.cells()) return never_painted;
        return region[as_size(j * x.cells() + i)];
    }
    /// Call what(region of the tile) for the tiles of a rectangle.
    template <class What>
    void each(const TileRectangle& r, What what) {
        const Index i_end = x.nearest(r.high.x);
        const Index j_end = y.nearest(r.high.y);
        for (Index j = y.nearest(r.low.y); j < j_end; ++j)
            for (Index i = x.nearest(r.low.x); i < i_end; ++i) what(region[as_size(j * x.cells() + i)]);
    }
};

/// One cell of a tile: its nodes on the tile's lattice and the edge of the tile that each side lies on.
struct TileCell {
    std::vector<std::array<Index, 2>> nodes;
    std::vector<int> edges;
};

/// The cells of one tile. `steps` is the number of lattice steps along a tile's edge.
TEPOR_INLINE std::vector<TileCell> tile_cells(CellShape shape, Diagonals diagonals, Index steps,
                                              const std::vector<Point>& reference_nodes) {
    // Vertices of the cells in half edges of the tile; the diagonal lies opposite vertex 0, where bisection begins.
    using Vertices = std::vector<Point>;
    std::vector<Vertices> cells;
    if (shape == CellShape::quadrilateral)
        cells = {{{0, 0}, {2, 0}, {2, 2}, {0, 2}}};
    else if (diagonals == Diagonals::crossed)
        cells = {
            {{1, 1}, {0, 0}, {2, 0}}, {{1, 1}, {2, 0}, {2, 2}}, {{1, 1}, {2, 2}, {0, 2}}, {{1, 1}, {0, 2}, {0, 0}}};
    else if (diagonals == Diagonals::rising)
        cells = {{{2, 0}, {2, 2}, {0, 0}}, {{0, 2}, {0, 0}, {2, 2}}};
    else
        cells = {{{0, 0}, {2, 0}, {0, 2}}, {{2, 2}, {0, 2}, {2, 0}}};

    std::vector<TileCell> out;
    for (const Vertices& v : cells) {
        TileCell cell;
        const Point across = v.back() - v[0];
        for (const Point xi : reference_nodes) {
            const Point p = 0.5 * as_double(steps) * (v[0] + xi.x * (v[1] - v[0]) + xi.y * across);
            const Point q{std::round(p.x), std::round(p.y)};
            if (!(distance(p, q) < 1e-9))
                throw Error(
                    ErrorCode::not_supported, "element",
                    "tiles: the element has a node off the equispaced lattice of its order; use mesh_from_arrays");
            cell.nodes.push_back({static_cast<Index>(q.x), static_cast<Index>(q.y)});
        }
        for (std::size_t s = 0; s < v.size(); ++s) {
            const Point a = v[s];
            const Point b = v[(s + 1) % v.size()];
            cell.edges.push_back(a.y + b.y == 0.0   ? bottom_edge
                                 : a.x + b.x == 4.0 ? right_edge
                                 : a.y + b.y == 4.0 ? top_edge
                                 : a.x + b.x == 0.0 ? left_edge
                                                    : no_edge);
        }
        out.push_back(std::move(cell));
    }
    return out;
}

/// A side of a cell on the edge of the body, and what lies across.
struct OuterSide {
    CellSide side;
    Index i = 0; ///< its tile
    Index j = 0;
    int edge = no_edge;
    Id across = never_painted;
};

/// Paint, cut, and see that everything named is still there.
TEPOR_INLINE TileMap map_tiles(MeshData& mesh, const TilePlan& plan, const TilesOptions& options) {
    if (plan.painted.empty())
        throw Error(ErrorCode::missing, "tiles", "tiles: nothing is painted; add(\"region\", corner, opposite) first");
    Point low = plan.painted.front().low;
    Point high = plan.painted.front().high;
    for (const TileRectangle& r : plan.painted) {
        low = {std::min(low.x, r.low.x), std::min(low.y, r.low.y)};
        high = {std::max(high.x, r.high.x), std::max(high.y, r.high.y)};
    }
    TileAxis x = plan.x;
    TileAxis y = plan.y;
    const auto add_lines = [&](Point a, Point b) {
        // What reaches over the box ends at it.
        x.lines.insert(x.lines.end(), {std::clamp(a.x, low.x, high.x), std::clamp(b.x, low.x, high.x)});
        y.lines.insert(y.lines.end(), {std::clamp(a.y, low.y, high.y), std::clamp(b.y, low.y, high.y)});
    };
    for (const TileRectangle& r : plan.painted) add_lines(r.low, r.high);
    for (const TileRectangle& r : plan.cuts) add_lines(r.low, r.high);
    for (const TileFace& f : plan.faces) add_lines(f.from, f.to);

    TileMap map{tile_borders(x, low.x, high.x, options.size, options.growth, "x"),
                tile_borders(y, low.y, high.y, options.size, options.growth, "y"),
                {}};
    if (as_double(map.x.cells()) * as_double(map.y.cells()) > 1e9)
        throw Error(ErrorCode::too_large, "tiles",
                    text("tiles: ", map.x.cells(), " x ", map.y.cells(), " tiles; take larger ones"));
    map.region.assign(as_size(map.x.cells() * map.y.cells()), never_painted);
    for (const TileRectangle& r : plan.painted) {
        Index region = mesh.find_region(r.name);
        if (region < 0) {
            region = static_cast<Index>(mesh.region_names.size());
            mesh.region_names.push_back(r.name);
        }
        map.each(r, [&](Id& tile) { tile = as_id(region); });
    }
    for (std::size_t k = 0; k < plan.cuts.size(); ++k) {
        const TileRectangle& r = plan.cuts[k];
        Index removed = 0;
        map.each(r, [&](Id& tile) {
            removed += tile >= 0 ? 1 : 0;
            if (tile != never_painted) tile = as_id(first_cut - static_cast<Index>(k));
        });
        if (removed == 0)
            throw Error(ErrorCode::bad_geometry, r.name,
                        text("tiles: the cut from (", r.low.x, ", ", r.low.y, ") to (", r.high.x, ", ", r.high.y,
                             ") m removes nothing; it lies outside the body or inside another cut"));
    }
    std::vector<Index> count(mesh.region_names.size(), 0);
    for (const Id tile : map.region)
        if (tile >= 0) ++count[as_size(tile)];
    if (std::all_of(count.begin(), count.end(), [](Index n) { return n == 0; }))
        throw Error(ErrorCode::bad_geometry, "tiles", "tiles: the cuts leave nothing of the body");
    for (std::size_t r = 0; r < count.size(); ++r)
        if (count[r] == 0)
            throw Error(ErrorCode::unused, mesh.region_names[r],
                        text("tiles: nothing is left of region \"", mesh.region_names[r],
                             "\": later rectangles or cuts cover it; change the order or leave it out"));
    return map;
}

/// The faces of the drawing and of the box around it.
TEPOR_INLINE void name_tile_faces(MeshData& mesh, const TilePlan& plan, const TileMap& map,
                                  const std::vector<OuterSide>& outer) {
    const bool has_axis = mesh.frame.kind() == Frame::Kind::cylindrical && map.x.at.front() == 0.0;
    const auto on_axis = [&](const OuterSide& o) { return has_axis && o.edge == left_edge && o.i == 0; };
    // The face of that name, made if there is none; sides already in it are left alone.
    const auto collect = [&](const std::string& name, auto belongs) {
        std::vector<CellSide> sides;
        for (const OuterSide& o : outer)
            if (!on_axis(o) && belongs(o)) sides.push_back(o.side);
        if (sides.empty()) return false;
        const Index known = mesh.find_face(name);
        MeshFace& face = known >= 0 ? mesh.faces[as_size(known)] : mesh.faces.emplace_back(MeshFace{name, {}});
        for (const CellSide side : sides)
            if (known < 0 || std::find(face.sides.begin(), face.sides.end(), side) == face.sides.end())
                face.sides.push_back(side);
        return true;
    };

    const std::array<const char*, 4> box{"bottom", "right", "top", "left"};
    for (int edge : {left_edge, right_edge, bottom_edge, top_edge}) {
        const std::string name = box[as_size(edge)];
        const auto bears_it = [&](const auto& named) { return named.name == name; };
        if (std::any_of(plan.faces.begin(), plan.faces.end(), bears_it) ||
            std::any_of(plan.cuts.begin(), plan.cuts.end(), bears_it))
            continue;
        collect(name, [&](const OuterSide& o) {
            if (o.edge != edge) return false;
            return edge == left_edge     ? o.i == 0
                   : edge == right_edge  ? o.i == map.x.cells() - 1
                   : edge == bottom_edge ? o.j == 0
                                         : o.j == map.y.cells() - 1;
        });
    }
    for (std::size_t k = 0; k < plan.cuts.size(); ++k) {
        const std::string& name = plan.cuts[k].name;
        if (name.empty()) continue;
        if (!collect(name, [&](const OuterSide& o) { return o.across == as_id(first_cut - static_cast<Index>(k)); }))
            throw Error(
                ErrorCode::bad_geometry, name,
                text("tiles: the cut \"", name, "\" leaves no edge of the body to be a face; leave out its name"));
    }
    for (const TileFace& f : plan.faces) {
        const bool upright = f.from.x == f.to.x;
        const TileBorders& along = upright ? map.y : map.x;
        const TileBorders& across = upright ? map.x : map.y;
        const Index line = across.nearest(upright ? f.from.x : f.from.y);
        const bool on_line =
            std::abs(across.at[as_size(line)] - (upright ? f.from.x : f.from.y)) <= 2.0 * across.tolerance;
        Index begin = along.nearest(upright ? f.from.y : f.from.x);
        Index end = along.nearest(upright ? f.to.y : f.to.x);
        if (begin > end) std::swap(begin, end);
        const auto belongs = [&](const OuterSide& o) {
            if (upright != (o.edge == left_edge || o.edge == right_edge)) return false;
            const Index at = upright ? o.i + (o.edge == right_edge ? 1 : 0) : o.j + (o.edge == top_edge ? 1 : 0);
            const Index place = upright ? o.j : o.i;
            return on_line && at == line && place >= begin && place < end;
        };
        if (!collect(f.name, belongs))
            throw Error(ErrorCode::bad_geometry, f.name,
                        text("tiles: face \"", f.name, "\" from (", f.from.x, ", ", f.from.y, ") to (", f.to.x, ", ",
                             f.to.y, ") m meets no edge of the body",
                             has_axis && upright && line == 0 ? "; the axis r = 0 has no area and is no face" : ""));
    }
}

TEPOR_INLINE void build_tiles(MeshData& mesh, const TilePlan& plan, const TilesOptions& options, const Frame& frame,
                              const std::vector<Point>& reference_nodes) {
    check_frame(frame, 2, "tiles");
    mesh.frame = frame;
    const TileMap map = map_tiles(mesh, plan, options);
    if (frame.kind() == Frame::Kind::cylindrical && map.x.at.front() < 0.0)
        throw Error(ErrorCode::bad_geometry, "tiles",
                    text("tiles: the drawing starts at r = ", map.x.at.front(), " m, expected r >= 0 in Cylindrical"));

    const bool triangles = mesh.shape == CellShape::triangle;
    const bool crossed = triangles && options.diagonals == Diagonals::crossed;
    const Index steps = Index{mesh.order} * (crossed ? 2 : 1);
    const auto pattern = [&](Diagonals d) { return tile_cells(mesh.shape, d, steps, reference_nodes); };
    const bool alternating = options.diagonals == Diagonals::alternating;
    const std::array<std::vector<TileCell>, 2> patterns{pattern(alternating ? Diagonals::rising : options.diagonals),
                                                        pattern(alternating ? Diagonals::falling : options.diagonals)};

    // Every place a node may have, row by row; first marked, then numbered.
    const Index columns = map.x.cells() * steps + 1;
    const Index rows = map.y.cells() * steps + 1;
    if (as_double(columns) * as_double(rows) > as_double(max_id))
        throw Error(ErrorCode::too_large, "tiles", text("tiles: more than ", max_id, " nodes; take larger cells"));
    std::vector<Id> lattice(as_size(columns * rows), -1);
    std::size_t tiled = 0;
    for (Index j = 0; j < map.y.cells(); ++j)
        for (Index i = 0; i < map.x.cells(); ++i) tiled += static_cast<std::size_t>(map.at(i, j) >= 0);
    mesh.cells.reserve(tiled * patterns[0].size() * as_size(mesh.nodes_per_cell));
    mesh.region.reserve(tiled * patterns[0].size());
    std::vector<OuterSide> outer;
    const std::array<std::array<Index, 2>, 4> step{{{0, -1}, {1, 0}, {0, 1}, {-1, 0}}};
    for (Index j = 0; j < map.y.cells(); ++j)
        for (Index i = 0; i < map.x.cells(); ++i) {
            const Id region = map.at(i, j);
            if (region < 0) continue;
            for (const TileCell& cell : patterns[as_size((i + j) % 2)]) {
                const Id id = as_id(mesh.region.size());
                for (const auto& [p, q] : cell.nodes) {
                    const Index place = (j * steps + q) * columns + i * steps + p;
                    lattice[as_size(place)] = 0;
                    mesh.cells.push_back(as_id(place)); // its number replaces it below
                }
                for (std::size_t s = 0; s < cell.edges.size(); ++s) {
                    const int edge = cell.edges[s];
                    if (edge == no_edge) continue;
                    const Id across = map.at(i + step[as_size(edge)][0], j + step[as_size(edge)][1]);
                    if (across < 0) outer.push_back({{id, as_id(s)}, i, j, edge, across});
                }
                mesh.region.push_back(region);
            }
        }
    const auto coordinate = [&](const TileBorders& borders, Index p) {
        const Index k = p / steps;
        const Index r = p % steps;
        const double from = borders.at[as_size(k)];
        return r == 0 ? from : from + (borders.at[as_size(k + 1)] - from) * as_double(r) / as_double(steps);
    };
    mesh.nodes.reserve(as_size(std::count(lattice.begin(), lattice.end(), 0)));
    for (Index q = 0; q < rows; ++q)
        for (Index p = 0; p < columns; ++p) {
            Id& number = lattice[as_size(q * columns + p)];
            if (number < 0) continue;
            number = as_id(mesh.nodes.size());
            mesh.nodes.push_back({coordinate(map.x, p), coordinate(map.y, q)});
        }
    for (Id& node : mesh.cells) node = lattice[as_size(node)];
    name_tile_faces(mesh, plan, map, outer);
}

} // namespace detail
} // namespace tepor
