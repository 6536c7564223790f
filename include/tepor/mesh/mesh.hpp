#pragma once
// The mesh: nodes, cells, regions and faces as plain arrays, and the element type they are for.

#include <string>
#include <string_view>
#include <tepor/base/config.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/mesh/stack.hpp>
#include <vector>

namespace tepor {

/// One side of one cell.
struct CellSide {
    Id cell = 0;
    Id side = 0; ///< local side number

    friend bool operator==(CellSide, CellSide) = default;
};

/// A named set of cell sides; an edge may belong to several faces.
struct MeshFace {
    std::string name;
    std::vector<CellSide> sides;
};

/// A circular arc that sides of the mesh lie on, so that refinement can put new nodes on it.
struct MeshArc {
    Point centre;
    double radius = 0.0; ///< [m]
};

/// A side that lies on an arc.
struct CurvedSide {
    CellSide side;
    Id arc = 0; ///< position in MeshData::arcs
};

/// The arrays of a mesh, without its element type.
struct MeshData {
    TEPOR_INLINE MeshData();
    TEPOR_INLINE MeshData(const MeshData& other);
    TEPOR_INLINE MeshData(MeshData&& other) noexcept;
    TEPOR_INLINE MeshData& operator=(const MeshData& other);
    TEPOR_INLINE MeshData& operator=(MeshData&& other) noexcept;
    TEPOR_INLINE ~MeshData();

    int dim = 0;
    int order = 0;
    int nodes_per_cell = 0;
    int sides_per_cell = 0;
    CellShape shape = CellShape::segment;
    Frame frame;

    std::vector<Point> nodes;              ///< coordinates [m]
    std::vector<Id> cells;                 ///< nodes_per_cell ids per cell, one cell after the other
    std::vector<Id> region;                ///< region of each cell
    std::vector<std::string> region_names; ///< name of each region
    std::vector<MeshFace> faces;
    std::vector<MeshArc> arcs;
    std::vector<CurvedSide> curved; ///< sides on arcs; sides not listed are straight
    LayerStack stack;               ///< 1D stacks only: what moves the nodes when a Parameter is a thickness

    /// Things the maker wants said, such as slivers merged by the drawing's tolerance.
    std::vector<std::string> remarks;

    [[nodiscard]] Index node_count() const noexcept { return static_cast<Index>(nodes.size()); }
    [[nodiscard]] Index cell_count() const noexcept { return static_cast<Index>(region.size()); }

    /// The nodes of a cell, `nodes_per_cell` of them.
    [[nodiscard]] const Id* cell(Index c) const noexcept {
        return cells.data() + static_cast<std::size_t>(c) * static_cast<std::size_t>(nodes_per_cell);
    }

    /// Position of a region or face by name, -1 when there is none. Linear in their number.
    [[nodiscard]] Index find_region(std::string_view name) const noexcept {
        for (std::size_t r = 0; r < region_names.size(); ++r)
            if (region_names[r] == name) return static_cast<Index>(r);
        return -1;
    }
    [[nodiscard]] Index find_face(std::string_view name) const noexcept {
        for (std::size_t f = 0; f < faces.size(); ++f)
            if (faces[f].name == name) return static_cast<Index>(f);
        return -1;
    }
};

/// A mesh of cells of one element type.
template <class E>
struct Mesh : MeshData {
    using Cell = E;

    Mesh() {
        dim = E::dim;
        order = E::order;
        nodes_per_cell = E::nodes;
        sides_per_cell = E::sides;
        shape = E::shape_of_cell;
    }
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/mesh.hpp>
#endif
