#pragma once
// The pieces of a temperature map: where it stands, its small triangles, isotherms, outlines, arrows and face names.

#include <tepor/body/split.hpp>
#include <tepor/field/field.hpp>
#include <tepor/output/picture_style.hpp>

namespace tepor::detail {

/// Where the body stands in the picture.
struct MapFrame {
    MapFrame(const MeshData& mesh, const PictureOptions& options) : width(options.width) {
        low = high = mesh.nodes.front();
        for (const Point p : mesh.nodes) {
            low = {std::min(low.x, p.x), std::min(low.y, p.y)};
            high = {std::max(high.x, p.x), std::max(high.y, p.y)};
        }
        const double span_x = high.x - low.x;
        const double span_y = high.y - low.y;
        top = (options.title.empty() ? 16.0 : 44.0) + 26.0; // and a line for the names of upper faces
        const double side = 110.0;                          // names of left and right faces
        scale = (width - 2.0 * side) / span_x;
        const double most = 1.4 * width;
        if (scale * span_y > most) scale = most / span_y;
        left = 0.5 * (width - scale * span_x);
        bottom = top + scale * span_y;
        thin = bottom - top < 170.0;
        height = bottom + (thin ? 68.0 : 26.0) + 78.0; // a thin body has the words on its extremes below it
    }
    [[nodiscard]] double x(double at) const { return left + scale * (at - low.x); }
    [[nodiscard]] double y(double at) const { return bottom - scale * (at - low.y); }

    /// A bar of round length below the body, at the left.
    [[nodiscard]] std::string length_bar() const {
        const double wanted = 0.22 * (high.x - low.x);
        const double power = std::pow(10.0, std::floor(std::log10(wanted)));
        const double length = wanted >= 5.0 * power ? 5.0 * power : (wanted >= 2.0 * power ? 2.0 * power : power);
        const double y0 = height - 30.0;
        const std::string words =
            length < 1.0 ? fmt::format("{:.4g} mm", 1000.0 * length) : fmt::format("{:.4g} m", length);
        const double x0 = 16.0;
        return fmt::format("<path d=\"M{0:.1f} {1:.1f} v-6 M{0:.1f} {1:.1f} H{2:.1f} v-6\" fill=\"none\" "
                           "stroke=\"#222\" stroke-width=\"1.5\"/>\n"
                           "<text x=\"{3:.1f}\" y=\"{4:.1f}\" font-size=\"13\">{5}</text>\n",
                           x0, y0, x0 + std::min(scale * length, 0.22 * width), x0, y0 + 17.0, words);
    }

    double width = 0.0, height = 0.0, top = 0.0, bottom = 0.0, left = 0.0, scale = 1.0;
    Point low, high;
    bool thin = false;
};

/// A small triangle in picture coordinates with its corner temperatures.
struct MapTriangle {
    double x[3], y[3], T[3];
};

/// Cells cut into small triangles: fine enough that cells of higher order and curved ones look it.
inline std::vector<MapTriangle> map_triangles(const Field& field, const MapFrame& frame) {
    const Model& model = field.model();
    const MeshData& mesh = field.mesh();
    const bool triangle = mesh.shape == CellShape::triangle;
    const auto cells = static_cast<Id>(model.user_cell.size());
    // no small triangle need be less than a few points of the picture
    const double area = frame.scale * frame.scale * (frame.high.x - frame.low.x) * (frame.high.y - frame.low.y);
    int cuts = std::clamp(static_cast<int>(std::lround(std::sqrt(area / cells) / 8.0)), 1, 4);
    if (mesh.order == 1 && triangle) cuts = 1;
    std::vector<MapTriangle> out;
    double shape[max_cell_nodes];
    for (Id c = 0; c < cells; ++c) {
        const auto corner = [&](int a, int b, double& x, double& y, double& T) {
            ModelPlace at;
            at.cell = c;
            at.xi[0] = static_cast<double>(a) / cuts;
            at.xi[1] = static_cast<double>(b) / cuts;
            const Point p = shapes_at(model, field.values(), at, shape, nullptr, nullptr);
            x = frame.x(p.x);
            y = frame.y(p.y);
            T = 0.0;
            for (int i = 0; i < model.kernels->nodes; ++i)
                T += shape[i] * field.temperature()[as_size(model.cell(c)[i])];
        };
        const auto add = [&](const int(&ab)[3][2]) {
            MapTriangle t{};
            for (int k = 0; k < 3; ++k) corner(ab[k][0], ab[k][1], t.x[k], t.y[k], t.T[k]);
            out.push_back(t);
        };
        for (int b = 0; b < cuts; ++b)
            for (int a = 0; a < (triangle ? cuts - b : cuts); ++a) {
                add({{a, b}, {a + 1, b}, {a, b + 1}});
                if (!triangle || a + b + 1 < cuts) add({{a + 1, b}, {a + 1, b + 1}, {a, b + 1}});
            }
    }
    return out;
}

/// The part of a triangle with from <= T <= to, as a closed path.
inline void append_clipped(const MapTriangle& t, double from, double to, std::string& path) {
    struct Corner {
        double x, y, T;
    };
    std::vector<Corner> in = {{t.x[0], t.y[0], t.T[0]}, {t.x[1], t.y[1], t.T[1]}, {t.x[2], t.y[2], t.T[2]}};
    std::vector<Corner> out;
    const auto clip = [&](double level, bool above) {
        out.clear();
        for (std::size_t i = 0; i < in.size(); ++i) {
            const Corner& a = in[i];
            const Corner& b = in[(i + 1) % in.size()];
            const bool a_in = above ? a.T >= level : a.T <= level;
            const bool b_in = above ? b.T >= level : b.T <= level;
            if (a_in) out.push_back(a);
            if (a_in != b_in) {
                const double s = (level - a.T) / (b.T - a.T);
                out.push_back({a.x + s * (b.x - a.x), a.y + s * (b.y - a.y), level});
            }
        }
        in.swap(out);
    };
    if (from > -HUGE_VAL) clip(from, true);
    if (to < HUGE_VAL && in.size() > 2) clip(to, false);
    if (in.size() < 3) return;
    for (std::size_t i = 0; i < in.size(); ++i)
        path += fmt::format("{}{:.2f} {:.2f}", i == 0 ? 'M' : 'L', in[i].x, in[i].y);
    path += 'Z';
}

inline void append_isotherm(const MapTriangle& t, double level, std::string& path) {
    double x[2];
    double y[2];
    int found = 0;
    for (int i = 0; i < 3 && found < 2; ++i) {
        const int j = (i + 1) % 3;
        if ((t.T[i] < level) == (t.T[j] < level)) continue;
        const double s = (level - t.T[i]) / (t.T[j] - t.T[i]);
        x[found] = t.x[i] + s * (t.x[j] - t.x[i]);
        y[found] = t.y[i] + s * (t.y[j] - t.y[i]);
        ++found;
    }
    if (found == 2) path += fmt::format("M{:.2f} {:.2f}L{:.2f} {:.2f}", x[0], y[0], x[1], y[1]);
}

/// A side as a path, curved when its cell is.
inline void append_side(const Field& field, const MapFrame& frame, CellSide side, std::string& path) {
    const Model& model = field.model();
    double ends[2][2] = {{0.0, 0.0}, {0.0, 0.0}};
    for (int e = 0; e < 2; ++e) model.kernels->reference_node(model.kernels->side_node(side.side, e), ends[e]);
    const int pieces = model.kernels->order == 1 ? 1 : 4;
    double shape[max_cell_nodes];
    for (int i = 0; i <= pieces; ++i) {
        ModelPlace at;
        at.cell = side.cell;
        for (int d = 0; d < 2; ++d) at.xi[d] = ends[0][d] + (ends[1][d] - ends[0][d]) * i / pieces;
        const Point p = shapes_at(model, field.values(), at, shape, nullptr, nullptr);
        path += fmt::format("{}{:.2f} {:.2f}", i == 0 ? 'M' : 'L', frame.x(p.x), frame.y(p.y));
    }
}

/// The body's edge, and the edges between regions.
inline void append_outlines(const Field& field, const MapFrame& frame, std::string& outer, std::string& inner) {
    const Model& model = field.model();
    const MeshData& mesh = field.mesh();
    std::vector<KeyedSide> sides;
    for (Index c = 0; c < mesh.cell_count(); ++c)
        for (int s = 0; s < mesh.sides_per_cell; ++s)
            sides.push_back({side_key(mesh, *model.kernels, as_id(c), s), {as_id(c), s}});
    sort_by_key(sides);
    const auto in_model = [&](CellSide s) { return CellSide{model.model_cell(s.cell), s.side}; };
    for (std::size_t i = 0; i < sides.size(); ++i) {
        if (i + 1 < sides.size() && sides[i].key == sides[i + 1].key) {
            if (mesh.region[as_size(sides[i].side.cell)] != mesh.region[as_size(sides[i + 1].side.cell)])
                append_side(field, frame, in_model(sides[i].side), inner);
            ++i;
        } else {
            append_side(field, frame, in_model(sides[i].side), outer);
        }
    }
}

/// Arrows along the heat flux on a coarse grid; their length grows with the root of it. None crosses the edge of the body.
inline std::string map_arrows(const Field& field, const MapFrame& frame) {
    const Model& model = field.model();
    const double spacing = 34.0 / frame.scale;
    struct Arrow {
        Point at, flux;
    };
    std::vector<Arrow> arrows;
    double most = 0.0;
    // a grid with its middle in the middle of the body, so that symmetric bodies look it
    const auto first = [spacing](double low, double high) {
        return 0.5 * (low + high) - 0.5 * spacing * (std::max(1.0, std::floor((high - low) / spacing)) - 1.0);
    };
    const auto steps_to = [spacing](double from, double high) {
        return static_cast<int>(std::ceil((high - from) / spacing));
    };
    const Point corner{first(frame.low.x, frame.high.x), first(frame.low.y, frame.high.y)};
    const int rows = steps_to(corner.y, frame.high.y), columns = steps_to(corner.x, frame.high.x);
    for (int row = 0; row < rows; ++row)
        for (int column = 0; column < columns; ++column) {
            const double x = corner.x + column * spacing, y = corner.y + row * spacing;
            const Location cell = model.locator().find({x, y});
            if (!cell) continue;
            const Point q = field.cell_heat_flux(cell.cell);
            arrows.push_back({{x, y}, q});
            most = std::max(most, std::hypot(q.x, q.y));
        }
    std::string out;
    if (!(most > 0.0)) return out;
    for (const Arrow& a : arrows) {
        const double size = std::hypot(a.flux.x, a.flux.y);
        const double length = 26.0 * std::sqrt(size / most);
        if (length < 4.0) continue;
        const double ux = a.flux.x / size;
        const double uy = -a.flux.y / size;
        const double x = frame.x(a.at.x) - 0.5 * length * ux;
        const double y = frame.y(a.at.y) - 0.5 * length * uy;
        // an arrow that leaves the body would point at nothing
        const Point half{0.5 * length / frame.scale * ux, -0.5 * length / frame.scale * uy};
        if (!model.locator().find(a.at + half) || !model.locator().find(a.at - half)) continue;
        const double head = std::min(6.0, 0.4 * length);
        const double ex = x + length * ux;
        const double ey = y + length * uy;
        const std::string d = fmt::format("M{:.1f} {:.1f}L{:.1f} {:.1f}M{:.1f} {:.1f}L{:.1f} {:.1f}L{:.1f} {:.1f}", x,
                                          y, ex, ey, ex - head * (ux - 0.5 * uy), ey - head * (uy + 0.5 * ux), ex, ey,
                                          ex - head * (ux + 0.5 * uy), ey - head * (uy - 0.5 * ux));
        out +=
            fmt::format("<path d=\"{0}\" fill=\"none\" stroke=\"white\" stroke-width=\"2.6\" stroke-opacity=\"0.75\"/>"
                        "<path d=\"{0}\" fill=\"none\" stroke=\"#111\" stroke-width=\"1.1\"/>\n",
                        d);
    }
    return out;
}

/// The face's name beside the middle of its sides, outside the body where there is room.
inline void label_face(const Field& field, const MapFrame& frame, std::size_t f, Svg& svg) {
    const Model& model = field.model();
    const SideList& sides = model.faces[f].sides;
    if (sides.side.empty()) return;
    const auto ends = [&](Index s, Point& a, Point& b) {
        const Id* ids = sides.unknowns.data() + s * model.kernels->side_nodes;
        const Point* place = model.places_of(field.values());
        a = place[ids[0]];
        b = place[ids[1]];
    };
    Point centre;
    for (Index s = 0; s < sides.count(); ++s) {
        Point a;
        Point b;
        ends(s, a, b);
        centre = centre + (0.5 / static_cast<double>(sides.count())) * (a + b);
    }
    Index best = 0;
    double nearest = HUGE_VAL;
    for (Index s = 0; s < sides.count(); ++s) {
        Point a;
        Point b;
        ends(s, a, b);
        const double d = distance(0.5 * (a + b), centre);
        if (d < nearest) {
            nearest = d;
            best = s;
        }
    }
    Point a;
    Point b;
    ends(best, a, b);
    const double length = distance(a, b);
    const double nx = (b.y - a.y) / length;
    const double ny = -(b.x - a.x) / length; // outward, y upward
    const double x = frame.x(0.5 * (a.x + b.x)) + 9.0 * nx;
    const double y = frame.y(0.5 * (a.y + b.y)) - 9.0 * ny;
    const char* anchor = nx > 0.5 ? "start" : (nx < -0.5 ? "end" : "middle");
    svg.label(x, y + (ny < -0.5 ? 12.0 : (ny > 0.5 ? -2.0 : 4.0)), model.faces[f].name, anchor, 13);
}

} // namespace tepor::detail
