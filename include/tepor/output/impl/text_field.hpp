#pragma once
// Fields as text.

#include <algorithm>
#include <cmath>
#include <tepor/output/table.hpp>
#include <tepor/output/text.hpp>

namespace tepor {

namespace detail {

/// A place to a ten-thousandth of the body: beyond that the maximum of a flat field is noise.
inline std::string place_words(const MeshData& mesh, Point p) {
    double extent = 0.0;
    for (const Point& node : mesh.nodes)
        extent = std::max({extent, std::abs(node.x - mesh.nodes[0].x), std::abs(node.y - mesh.nodes[0].y)});
    const double grain = 1e-4 * extent;
    if (grain > 0.0) p = {grain * std::round(p.x / grain), grain * std::round(p.y / grain)};
    if (mesh.dim == 1)
        return fmt::format("{} = {}", mesh.frame.kind() == Frame::Kind::planar ? "x" : "r", significant(p.x, 4));
    return fmt::format("({}, {})", significant(p.x, 4), significant(p.y, 4));
}

inline const char* degree_words(const Model& model) {
    return model.scale == TemperatureScale::kelvin ? "K" : "degC";
}

} // namespace detail

TEPOR_INLINE std::string to_text(const Field& field) {
    const Model& model = field.model();
    const std::string degree = detail::degree_words(model);
    std::string out = fmt::format("Temperatures [{}], places [m]\n", degree);
    detail::TextTable regions({"region", "mean", "coldest", "at", "hottest", "at"});
    for (const RegionModel& region : model.regions) {
        if (region.first_cell == region.last_cell) continue;
        const Spotted cold = field.coldest(region.name);
        const Spotted hot = field.hottest(region.name);
        regions.row({'"' + region.name + '"', field[mean_in(region.name)], cold.temperature,
                     detail::place_words(field.mesh(), cold.place), hot.temperature,
                     detail::place_words(field.mesh(), hot.place)});
    }
    out += regions.text();
    detail::TextTable faces({"face", "mean", "coldest", "hottest"});
    for (const FaceModel& face : model.faces) {
        if (face.sides.side.empty()) continue;
        faces.row({'"' + face.name + '"', field[mean_on(face.name)], field[coldest_on(face.name)],
                   field[hottest_on(face.name)]});
    }
    if (!faces.empty()) out += faces.text();
    if (field.time() != 0.0) out += fmt::format("  at the time {} s\n", detail::significant(field.time()));
    if (!field.passes().empty()) {
        const SolvePass& last = field.passes().back();
        out += fmt::format("Solved in {} {}: the equations are met to {:.2e} W, allowed {:.2e} W\n",
                           field.passes().size() - 1, field.passes().size() == 2 ? "pass" : "passes", last.residual,
                           last.limit);
    }
    return out + to_text(field.balance());
}

} // namespace tepor
