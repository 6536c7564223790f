#pragma once
// Newest-vertex bisection of straight-sided triangles of order 1 and 2, for meshes that brackets refine on their own.

#include <tepor/base/config.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor::detail {

/// A copy with straight sides in which the longest side of every triangle lies opposite its vertex 0: the refinement edge.
MeshData prepared_for_bisection(const MeshData& mesh);

/// Bisects the marked cells, and others until no node hangs. Vertex 0 of every child is the newest, so repeated bisection keeps
/// to a finite number of shapes (P. Binev, W. Dahmen and R. DeVore, Numer. Math. 97 (2004) 219). Regions and faces are kept.
/// The mesh must come from prepared_for_bisection or an earlier bisection. O(cells)
MeshData bisected(const MeshData& mesh, const std::vector<char>& marked);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/straight_bisection.hpp>
#endif
