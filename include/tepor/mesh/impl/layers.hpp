#pragma once
// Building the mesh of a 1D stack.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/layers.hpp>

namespace tepor::detail {

TEPOR_INLINE void check_frame(const Frame& frame, int dim, const char* maker) {
    if (dim == 2 && frame.kind() == Frame::Kind::spherical)
        throw Error(ErrorCode::wrong_dimension, maker,
                    text(maker, ": Spherical is a frame of 1D bodies; use Planar or Cylindrical (r-z)"));
    const double size = frame.size(dim);
    const bool counts = frame.kind() == Frame::Kind::planar || (frame.kind() == Frame::Kind::cylindrical && dim == 1);
    if (counts && !(size > 0.0 && std::isfinite(size))) {
        const char* name = frame.kind() == Frame::Kind::cylindrical ? "Cylindrical: length"
                           : dim == 1                               ? "Planar: area"
                                                                    : "Planar: depth";
        throw Error(ErrorCode::bad_value, maker,
                    text(maker, ": ", name, " = ", size, ", expected a finite number > 0"));
    }
}

/// Throws unless the layer can be meshed.
TEPOR_INLINE void check_layer(const Layer& layer, std::size_t number) {
    if (layer.region.empty())
        throw Error(ErrorCode::bad_name, "",
                    text("layers: layer ", number, " has no region name; give it one with .region"));
    const auto complain = [&](const std::string& what) {
        throw Error(ErrorCode::bad_value, layer.region,
                    text("layers: layer ", number, " \"", layer.region, "\": ", what));
    };
    const double thickness = layer.thickness.number();
    if (!(thickness > 0.0 && std::isfinite(thickness))) complain(text("thickness = ", thickness, " m, expected > 0"));
    if (layer.cells < 1) complain(text("cells = ", layer.cells, ", expected at least 1"));
    if (!usable(layer.grading))
        complain(text("grading with ratio ", layer.grading.ratio(), ", expected between 1e-6 and 1e6"));
}

TEPOR_INLINE void build_layers(MeshData& mesh, const std::vector<Layer>& stack, const Frame& frame,
                               const LayersOptions& options, const std::vector<double>& reference_nodes) {
    if (stack.empty()) throw Error(ErrorCode::missing, "layers", "layers: no layer given; a stack needs at least one");
    check_frame(frame, 1, "layers");
    const double start = options.start.number();
    const bool radial = frame.kind() != Frame::Kind::planar;
    if (!std::isfinite(start) || (radial && !(start >= 0.0)))
        throw Error(ErrorCode::bad_value, "layers",
                    text("layers: start = ", start, " m, expected ", radial ? "a radius >= 0" : "a finite number"));
    Index cells = 0;
    for (std::size_t l = 0; l < stack.size(); ++l) {
        check_layer(stack[l], l + 1);
        const auto per_cell = static_cast<Index>(reference_nodes.size());
        if (stack[l].cells > max_id || (cells + stack[l].cells) > (max_id - 1) / per_cell)
            throw Error(ErrorCode::too_large, stack[l].region,
                        text("layers: more than ", max_id, " nodes; take fewer cells"));
        cells += stack[l].cells;
    }

    // Inner nodes of a cell from left to right: positions in reference_nodes.
    std::vector<std::size_t> inner;
    for (std::size_t i = 2; i < reference_nodes.size(); ++i) inner.push_back(i);
    std::sort(inner.begin(), inner.end(),
              [&](std::size_t a, std::size_t b) { return reference_nodes[a] < reference_nodes[b]; });
    const Index per_cell = static_cast<Index>(inner.size()) + 1; // nodes a cell adds

    mesh.frame = frame;
    mesh.nodes.resize(as_size(cells * per_cell + 1));
    mesh.cells.resize(as_size(cells) * reference_nodes.size());
    mesh.region.reserve(as_size(cells));
    LayerStack& kept = mesh.stack;
    kept.start = options.start;
    kept.place.reserve(mesh.nodes.size());
    kept.layer_of_cell.reserve(as_size(cells));

    std::vector<double> thickness;
    Index cell = 0;
    kept.place.push_back({0, 0.0});
    for (std::size_t l = 0; l < stack.size(); ++l) {
        const Layer& layer = stack[l];
        kept.thickness.push_back(layer.thickness);
        thickness.push_back(layer.thickness.number());
        Index region = mesh.find_region(layer.region);
        if (region < 0) {
            region = static_cast<Index>(mesh.region_names.size());
            mesh.region_names.push_back(layer.region);
        }
        const auto border = graded_fractions(layer.cells, layer.grading);
        for (Index k = 0; k < layer.cells; ++k, ++cell) {
            const double from = border[as_size(k)];
            const double to = border[as_size(k + 1)];
            const Index first = cell * per_cell;
            Id* ids = mesh.cells.data() + as_size(cell) * reference_nodes.size();
            ids[0] = as_id(first);
            ids[1] = as_id(first + per_cell);
            for (std::size_t i = 0; i < inner.size(); ++i) {
                const double xi = reference_nodes[inner[i]];
                kept.place.push_back({as_id(l), (1.0 - xi) * from + xi * to});
                ids[inner[i]] = as_id(first + 1 + static_cast<Index>(i));
            }
            kept.place.push_back({as_id(l), to});
            mesh.region.push_back(as_id(region));
            kept.layer_of_cell.push_back(as_id(l));
        }
    }
    place_nodes(kept, start, thickness.data(), mesh.nodes.data());
    for (std::size_t n = 1; n < mesh.nodes.size(); ++n)
        if (!(mesh.nodes[n].x > mesh.nodes[n - 1].x) || !std::isfinite(mesh.nodes[n].x)) {
            const std::string& region = stack[as_size(kept.place[n].layer)].region;
            throw Error(ErrorCode::bad_value, region,
                        text("layers: the cells of \"", region, "\" are too thin to tell apart at x = ",
                             mesh.nodes[n].x, " m; take fewer cells or a smaller start"));
        }

    if (!radial || start > 0.0) mesh.faces.push_back({"inner", {CellSide{0, 0}}});
    mesh.faces.push_back({"outer", {CellSide{as_id(cells - 1), 1}}});
}

} // namespace tepor::detail
