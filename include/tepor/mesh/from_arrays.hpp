#pragma once
// mesh_from_arrays: a mesh from the user's own arrays, checked at the door.

#include <string>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/verify.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// The user's arrays. Only nodes and cells are needed; without regions everything is the region "body".
struct MeshArrays {
    std::vector<Point> nodes; ///< coordinates [m]; y unused in 1D
    std::vector<Id> cells;    ///< E::nodes ids per cell, counted from 0, in the node order of E
    std::vector<Id> region;   ///< region of each cell, a position in region_names
    std::vector<std::string> region_names;
    std::vector<MeshFace> faces; ///< outer edges by name; sides not listed are adiabatic
    std::vector<MeshArc> arcs;   ///< circles that curved sides lie on
    std::vector<CurvedSide> curved;
    Frame frame;
};

/// A mesh from arrays.
///
/// @throws Error bad_mesh   an invariant of verify() is broken: the message names cell, node and what to do
///               too_large  more nodes or cell entries than 32-bit ids hold
/// Cost    O(cells)
template <Element E>
Mesh<E> mesh_from_arrays(MeshArrays arrays) {
    Mesh<E> mesh;
    if (static_cast<Index>(arrays.cells.size()) > max_id || static_cast<Index>(arrays.nodes.size()) > max_id)
        throw Error(ErrorCode::too_large, "mesh", "mesh: more than 2147483647 nodes or cell entries; split the model");
    if (arrays.cells.size() % detail::as_size(E::nodes) != 0)
        throw Error(ErrorCode::bad_mesh, "cells",
                    detail::text("cells: ", arrays.cells.size(), " entries, expected a multiple of ", E::nodes,
                                 ", the nodes of one cell"));
    if (arrays.region.empty() && arrays.region_names.size() <= 1)
        arrays.region.assign(arrays.cells.size() / detail::as_size(E::nodes), 0);
    if (arrays.region_names.empty()) arrays.region_names.emplace_back("body");
    mesh.frame = arrays.frame;
    mesh.nodes = std::move(arrays.nodes);
    mesh.cells = std::move(arrays.cells);
    mesh.region = std::move(arrays.region);
    mesh.region_names = std::move(arrays.region_names);
    mesh.faces = std::move(arrays.faces);
    mesh.arcs = std::move(arrays.arcs);
    mesh.curved = std::move(arrays.curved);
    verify(mesh).or_throw();
    return mesh;
}

} // namespace tepor
