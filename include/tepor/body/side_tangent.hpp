#pragma once
// Derivatives of a side's shape functions along it, from those of its cell: kernels keep only the shape functions.

#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/mesh/cell_kind.hpp>

namespace tepor::detail {

/// `along`: the side's shape functions at a point of it. `slope` receives their derivatives by the side's own coordinate.
inline void side_tangent(const CellKernels& kernel, int side, const double* along, double* slope) {
    const int m = kernel.side_nodes;
    double ends[2][2];
    kernel.reference_node(kernel.side_node(side, 0), ends[0]);
    kernel.reference_node(kernel.side_node(side, 1), ends[1]);
    double xi[2] = {0.0, 0.0};
    for (int j = 0; j < m; ++j) {
        double node[2];
        kernel.reference_node(kernel.side_node(side, j), node);
        for (int d = 0; d < 2; ++d) xi[d] += along[j] * node[d];
    }
    double shape[max_cell_nodes];
    double gradient[2 * max_cell_nodes];
    kernel.shape(xi, shape, gradient);
    for (int j = 0; j < m; ++j) {
        const int local = kernel.side_node(side, j);
        slope[j] =
            gradient[2 * local] * (ends[1][0] - ends[0][0]) + gradient[2 * local + 1] * (ends[1][1] - ends[0][1]);
    }
}

} // namespace tepor::detail
