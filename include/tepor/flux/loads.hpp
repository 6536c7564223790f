#pragma once
// What enters the patches from outside: integrals of the sources over the cells and of the given heat flow along the sides.

#include <array>
#include <tepor/flux/problem.hpp>
#include <vector>

namespace tepor::detail {

/// The values of a nodal field at the start, middle and end of a side, from the degrees of freedom of its cell.
inline std::array<double, 3> values_along(const FluxProblem& problem, const double* values, CellSide side) noexcept {
    const int order = problem.mesh->order;
    const Id* dof = problem.dof.data() + as_size(side.cell) * as_size(problem.mesh->nodes_per_cell);
    const double start = values[dof[side.side]];
    const double end = values[dof[side.side == 2 ? 0 : side.side + 1]];
    return {start, order == 2 ? values[dof[3 + side.side]] : 0.5 * (start + end), end};
}

/// Length of a straight side; start and end receive the radii of its ends (1 in a planar frame).
inline double side_length(const MeshData& mesh, CellSide side, double& start, double& end) noexcept {
    const Id* cell = mesh.cell(side.cell);
    const Point a = mesh.nodes[as_size(cell[side.side])];
    const Point b = mesh.nodes[as_size(cell[side.side == 2 ? 0 : side.side + 1])];
    const bool round = mesh.frame.power() > 0;
    start = round ? a.x : 1.0;
    end = round ? b.x : 1.0;
    return distance(a, b);
}

inline double triangle_area(const MeshData& mesh, Index c) noexcept {
    const Id* cell = mesh.cell(c);
    const Point a = mesh.nodes[as_size(cell[0])];
    return 0.5 * cross(mesh.nodes[as_size(cell[1])] - a, mesh.nodes[as_size(cell[2])] - a);
}

/// Integrals of the heat g leaving through a listed side against 1, t, t^2, t^3, times its length; t runs counter-clockwise along
/// the side of the cell. In r-z the radius is included.
using SideMoments = std::array<double, 4>;

/// The moments of every entry of FluxProblem::sides at the temperature (zero for prescribed temperatures). O(sides).
std::vector<SideMoments> side_moments(const FluxProblem& problem, const double* temperature);

/// Source and sink terms of the cells at a given temperature, `f_eff = f - c (T - T_c) + spread`.
struct SourceLoads {
    int per_cell = 0; ///< 0: constant sources only; else 3 (order 1) or 6 (order 2) moments per cell
    std::vector<double>
        load; ///< order 1: integral of f_eff lambda_a; order 2: of f_eff lambda_a lambda_b, as in SpreadSource
    std::vector<double>
        lost; ///< L2 norm of f_eff minus its projection on degree p - 1, per cell; empty when all are zero
};

/// Planar triangles of order 1 and 2. O(cells), nothing is stored when all sources are constant.
SourceLoads source_loads(const FluxProblem& problem, const double* temperature);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/loads.hpp>
#endif
