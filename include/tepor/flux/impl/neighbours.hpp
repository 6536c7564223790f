#pragma once
// From the sides of the mesh to what lies behind them for the heat.

#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/flux/neighbours.hpp>

namespace tepor::detail {

TEPOR_INLINE std::vector<Id> side_neighbours(const FluxProblem& problem) {
    const MeshData& mesh = *problem.mesh;
    const std::vector<FluxSide>& sides = problem.sides;
    const int per_cell = mesh.sides_per_cell;
    const std::shared_ptr<const SideMap> matched = matched_sides(problem);
    const SideMap& map = *matched;
    std::vector<Id> behind(as_size(mesh.cell_count() * per_cell), -1);
    for (std::size_t n = 0; n < map.first.size(); ++n) {
        const CellSide a = map.first[n], b = map.second[n];
        if (b.cell < 0) continue;
        behind[as_size(per_cell * a.cell + a.side)] = as_id(per_cell * b.cell + b.side);
        behind[as_size(per_cell * b.cell + b.side)] = as_id(per_cell * a.cell + a.side);
    }
    for (std::size_t i = 0; i < sides.size(); ++i) {
        const CellSide at = sides[i].side;
        Id& place = behind[as_size(per_cell * at.cell + at.side)];
        if (place <= -2)
            throw Error(ErrorCode::internal, "", text("flux: side ", at.side, " of cell ", at.cell, " is listed twice"),
                        at.cell);
        if (place >= 0 && sides[i].kind == SideKind::open)
            throw Error(ErrorCode::bad_mesh, "",
                        text("flux: side ", at.side, " of cell ", at.cell,
                             " carries a face condition but has cells on both sides"),
                        at.cell);
        place = as_id(-2) - as_id(i);
    }
    return behind;
}

} // namespace tepor::detail
