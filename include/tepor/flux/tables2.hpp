#pragma once
// Reference tables of the order-2 flux: vector fields of degree 2 on the unit triangle and their integrals.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>

namespace tepor::detail {

/// Vector fields of degree 2 on the triangle (0,0) (1,0) (0,1), written in an L2-orthonormal basis of polynomials.
///
/// The 12 degrees of freedom of a field s are, in this order:
/// - `3 side + l`: the integral of `s.n L_l` along side `side` (vertex side to side + 1), L_l the Legendre polynomial on [0,1];
/// - `9`, `10`: the integrals of `s.grad x` and `s.grad y`;
/// - `11`: the integral of `s.(1 - 3 y, 3 x - 1)`, which is the same from all three vertices; its own field is the curl of x y (1 - x - y).
///
/// On a cell with map B = [x1 - x0, x2 - x0], J = det B, the field is `B s / J`: side moments keep their value.
struct FluxTables2 {
    static constexpr int fields = 9; ///< of a patch: see `patch`

    double dual[12][2][6]; ///< coefficients (component, basis function) of the field whose only dof is 1

    /// Fields of one cell of a patch around its vertex 0, so that side 0 leaves the vertex and side 2 comes back to it. With M_l
    /// the moments of the flux entering across side 0 and N_l of that leaving across side 2, both along the side away from
    /// vertex 0: fields 0..2 belong to M_0..M_2, 3..5 to N_0..N_2, 6 to the bubble, 7 and 8 to dofs 9 and 10.
    double patch[fields][2][6];
    double xx[fields][fields]; ///< integral of s_x t_x
    double xy[fields][fields]; ///< integral of s_x t_y + s_y t_x
    double yy[fields][fields]; ///< integral of s_y t_y
    /// Integral of component c of the field against the P2 shape function of vertex 0, of the middle of side 0 and of side 2.
    double load[fields][2][3];
    double
        linear[3]
              [6]; ///< basis coefficients of the barycentric coordinate of each vertex (only the first 3 are not zero)
    double at_node[6][6]; ///< value of basis function k at P2 node n (vertices, then middles of sides)
    double shape[6][6];   ///< basis coefficients of the P2 shape functions
    double size[12];      ///< norm of the coefficients of each dual field
};

/// Built once at first use (safe from several threads).
const FluxTables2& flux_tables2();

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/tables2.hpp>
#endif
