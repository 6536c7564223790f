#pragma once
// From cells given by their vertices to cells of any order: side nodes, shared between neighbours, then inner nodes.

#include <tepor/base/config.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor::detail {

/// Fill mesh.cells and append nodes, so that every cell has all nodes of its kind.
///
/// @param mesh     nodes (vertices only), region, arcs, curved are set; cells is overwritten
/// @param corners  vertex ids, kind.vertices() per cell
/// Cost   O(cells)
void add_inner_nodes(MeshData& mesh, const CellKind& kind, std::vector<Id> corners);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/inner_nodes.hpp>
#endif
