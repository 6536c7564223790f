#pragma once
// CellKernels: the batch functions of one element type behind one virtual call per block of cells.

#include <memory>
#include <tepor/assembly/block.hpp>
#include <tepor/assembly/chain_block.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/base/numbers.hpp>

namespace tepor {

/// The element integrals of one element type, rule and frame with their types erased. A cell law of its own kind (such as
/// the exact segment) derives from it directly; `Kernels<E>` makes one of any Element.
class CellKernels {
  public:
    CellKernels() = default;
    CellKernels(const CellKernels&) = delete;
    CellKernels& operator=(const CellKernels&) = delete;
    virtual ~CellKernels() = default;

    int dim = 0;
    int order = 0;
    int nodes = 0;
    int points = 0; ///< quadrature points per cell, for sources and storage
    /// Points of a rule for conduction alone, behind the others in the arrays of a block; 0 where the others serve.
    int own_conduction_points = 0;
    int sides = 0;
    int side_nodes = 0;
    int side_points = 0;
    /// Steady nodal values are exact for any conductivity of place and any source (the exact segment).
    bool exact = false;
    /// Cells of two nodes with the matrix (1 / R) [1 -1; -1 1]: open_chain() and form_chain() serve them.
    bool chain = false;

    /// The points of conduction: how many, and the position of the first among all.
    [[nodiscard]] int conduction_points() const noexcept {
        return own_conduction_points > 0 ? own_conduction_points : points;
    }
    [[nodiscard]] int first_conduction_point() const noexcept { return own_conduction_points > 0 ? points : 0; }
    [[nodiscard]] int all_points() const noexcept { return points + own_conduction_points; }

    /// Local cell node that is node j of side s.
    [[nodiscard]] virtual int side_node(int s, int j) const = 0;

    /// Fills places, weights, temperatures at points and gradients from node data; see CellBlock::unread.
    virtual void open(CellBlock& block) const = 0;

    /// Element residual, matrix and slope from the coefficients; what is not wanted is left alone.
    virtual void form(CellBlock& block, Wanted wanted) const = 0;

    /// Integral of amount N_i N_j into block.matrix, with `amount` given at the quadrature points: the capacity matrix from
    /// density times specific heat. `lumped` moves each row onto its diagonal (sensible for order 1). Needs open(); exact
    /// cell laws need the conductivities too.
    virtual void form_capacity(CellBlock& block, const double* amount, bool lumped) const = 0;

    /// The temperature at all points as the cell itself has it, into block.point_T. With `shape` (points x
    /// nodes) the weight of each node's temperature in it. What open() has put there is that already for every Element; an
    /// exact cell law needs the coefficients, and with k_mean it gives the integral of k from the first node's temperature.
    virtual void profile(CellBlock& block, double* shape) const = 0;

    /// As open and form, for a run of two-node cells with conductivity and source of place alone; see `chain`.
    virtual void open_chain(ChainBlock& block) const { static_cast<void>(block); }
    virtual void form_chain(ChainBlock& block) const { static_cast<void>(block); }

    /// As open and form, for sides. `lumped` puts the quadrature points on the nodes.
    virtual void open_side(SideBlock& block, bool lumped) const = 0;
    virtual void form_side(SideBlock& block, Wanted wanted, bool lumped) const = 0;

    /// Shape functions at point q (of all) of a cell or a side, for functionals; null for cell laws without fixed ones.
    [[nodiscard]] virtual const double* shape_at(int q) const = 0;
    [[nodiscard]] virtual const double* side_shape_at(int q, bool lumped) const = 0;

    /// Shape functions (`nodes` entries) and reference gradients (`nodes x dim`, node by node) at reference coordinates.
    virtual void shape(const double* xi, double* values, double* gradients) const = 0;

    /// Reference coordinates of node i (`dim` entries).
    virtual void reference_node(int i, double* xi) const = 0;

    [[nodiscard]] Workspace workspace() const { return {nodes, all_points(), side_nodes, side_points}; }
};

} // namespace tepor
