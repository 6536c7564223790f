#pragma once
// Work arrays of a block of cells or sides: entry (i, c) of every array is at [i * block_width + c].

#include <tepor/base/memory.hpp>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor {

/// Cells handled together, so that every inner loop runs over cells and vectorises. Unused places repeat the last cell.
inline constexpr int block_width = 32;

/// What a pass over cells asks for.
struct Wanted {
    bool residual = false; ///< r_e
    bool matrix = false;   ///< symmetric part of dr_e/dT
    bool slope = false;    ///< what k'(T) adds to it, unsymmetric
};

/// A block of cells: node data in, places and weights of the quadrature points out, then coefficients in, element
/// arrays out. All arrays belong to the Workspace that lends them.
struct CellBlock {
    int count = 0; ///< cells that are meant, the rest is padding
    /// What the caller will not read, so that CellKernels::open() need not fill it.
    struct Unread {
        bool sources = false;      ///< everything at points that are not points of conduction
        bool conduction = false;   ///< places of the points of conduction: its data are the same everywhere
        bool temperatures = false; ///< point_T
        bool gradients = false;    ///< gradients, where form() does without
    };
    Unread unread;

    // at nodes, set by the caller
    double* x = nullptr;
    double* y = nullptr;
    double* T = nullptr; ///< null when no temperature is at hand

    // at quadrature points, set by CellKernels::open
    double* point_x = nullptr;
    double* point_y = nullptr;
    double* weight = nullptr;     ///< quadrature weight times measure of the frame
    double* point_T = nullptr;    ///< when T is given
    double* gradient_x = nullptr; ///< (points x nodes): physical gradients of the shape functions
    double* gradient_y = nullptr;
    double* map_slope = nullptr; ///< for form(): derivatives of the map at points, dx/dxi, dx/deta, dy/dxi, dy/deta
    double* metric = nullptr;    ///< form()'s own: conductivity at points in reference coordinates

    // coefficients at points, set by the caller before CellKernels::form; conductivities at the points of conduction
    int conductivities = 0;                                 ///< 0 none, 1 isotropic, 2 along x and y, 3 also xy
    const double* k[3] = {nullptr, nullptr, nullptr};       ///< xx, yy, xy [W/(m K)]
    const double* k_slope[3] = {nullptr, nullptr, nullptr}; ///< by temperature; null when constant
    bool k_uniform = false;                                 ///< one value in the whole block: k[..][0]
    const double* source = nullptr;                         ///< heat taken up per volume, s(T) [W/m3]; null for none
    const double* source_slope = nullptr;                   ///< ds/dT; null when zero

    // for exact cell laws: what they can take up in their functions
    double sink = 0.0; ///< c >= 0 of a loss c T that is part of s but not of `source` [W/(m3 K)]
    const double* k_mean =
        nullptr; ///< per cell: mean of k over temperature between its nodes; null unless k depends on it
    const double* k_end[2] = {nullptr, nullptr}; ///< per cell: k at the temperatures of its two nodes

    // results of CellKernels::form
    int unresolved = -1; ///< exact cell laws: a cell whose coefficients the points cannot follow, -1 for none
    bool unresolved_source = false; ///< it is the source, not the conductivity
    bool divided = false;       ///< set by who divides such cells: the coefficients at the points are those of a piece
    double* residual = nullptr; ///< nodes: integral of k grad T . grad N_i + s N_i
    double* matrix = nullptr;   ///< packed lower triangle, entry (i, j <= i) at i (i + 1) / 2 + j
    double* slope = nullptr;    ///< nodes x nodes, row i: integral of k' N_j grad T . grad N_i
};

/// A block of sides; the same layout.
struct SideBlock {
    int count = 0;
    double* x = nullptr;
    double* y = nullptr;
    double* T = nullptr;

    double* point_x = nullptr;
    double* point_y = nullptr;
    double* weight = nullptr;
    double* point_T = nullptr;
    double* normal_x = nullptr; ///< outward unit normal at the points
    double* normal_y = nullptr;

    const double* flux = nullptr;       ///< heat leaving per area, s(T) [W/m2]
    const double* flux_slope = nullptr; ///< ds/dT; null when zero

    double* residual = nullptr; ///< side nodes: integral of s N_i
    double* matrix = nullptr;   ///< packed lower triangle
};

/// Owns the arrays of one cell block, one side block and coefficients; made once per thread and reused.
class Workspace {
  public:
    Workspace() = default;
    Workspace(int nodes, int points, int side_nodes, int side_points) {
        const int w = block_width;
        const int pairs = nodes * (nodes + 1) / 2;
        const int side_pairs = side_nodes * (side_nodes + 1) / 2;
        const int total =
            w * (3 * nodes + 11 * points + 2 * points * nodes + nodes + pairs + nodes * nodes + 12 * points +
                 3 * side_nodes + 6 * side_points + side_nodes + side_pairs + 8 * side_points);
        store_.resize(detail::as_size(total), 0.0);
        double* next = store_.data();
        const auto take = [&next](int entries) {
            double* here = next;
            next += static_cast<Index>(entries) * block_width;
            return here;
        };
        cells.x = take(nodes);
        cells.y = take(nodes);
        cells.T = nodal_T = take(nodes);
        cells.point_x = take(points);
        cells.point_y = take(points);
        cells.weight = take(points);
        cells.point_T = take(points);
        cells.gradient_x = take(points * nodes);
        cells.gradient_y = take(points * nodes);
        cells.map_slope = take(4 * points);
        cells.metric = take(3 * points);
        cells.residual = take(nodes);
        cells.matrix = take(pairs);
        cells.slope = take(nodes * nodes);
        for (double*& buffer : coefficient) buffer = take(points);
        sides.x = take(side_nodes);
        sides.y = take(side_nodes);
        sides.T = side_nodal_T = take(side_nodes);
        sides.point_x = take(side_points);
        sides.point_y = take(side_points);
        sides.weight = take(side_points);
        sides.point_T = take(side_points);
        sides.normal_x = take(side_points);
        sides.normal_y = take(side_points);
        sides.residual = take(side_nodes);
        sides.matrix = take(side_pairs);
        for (double*& buffer : side_coefficient) buffer = take(side_points);
    }
    Workspace(const Workspace&) = delete;
    Workspace& operator=(const Workspace&) = delete;
    Workspace(Workspace&&) = default;
    Workspace& operator=(Workspace&&) = default;
    ~Workspace() = default;

    CellBlock cells;
    SideBlock sides;
    double* nodal_T = nullptr;        ///< what cells.T points to when a temperature is given
    double* side_nodal_T = nullptr;   ///< likewise for sides.T
    double* coefficient[12] = {};     ///< buffers of points x block_width entries
    double* side_coefficient[8] = {}; ///< buffers of side points x block_width entries

  private:
    std::vector<double> store_;
};

} // namespace tepor
