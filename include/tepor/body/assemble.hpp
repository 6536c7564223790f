#pragma once
// One pass over a model: residual, matrix and heat accounts at a temperature.

#include <tepor/assembly/block.hpp>
#include <tepor/base/config.hpp>
#include <tepor/body/model.hpp>
#include <vector>

namespace tepor {

/// Heat by statement [W], positive out of the body except where it says generated.
struct Accounts {
    std::vector<double> generated; ///< per region, Generation
    std::vector<double> side_loss; ///< per region, SideFilm
    std::vector<double> local;     ///< per LocalHeat
    std::vector<double> face;      ///< per face term, face after face: film, radiation, flux
    std::vector<double> contact;   ///< per contact, from its first region to its second
};

/// A part of the weak form, for heat flows through faces, interfaces and contacts: only what is listed takes part.
struct Restriction {
    std::vector<Id> regions; ///< their cells, with conduction and what acts per volume
    struct Sides {
        Id face = 0;    ///< whose terms act
        SideList sides; ///< some of its sides
    };
    std::vector<Sides> faces;
    std::vector<Id> contacts;
    std::vector<Id> locals;
};

/// What a pass is given, asked for, and found.
struct Pass {
    const double* T = nullptr; ///< all unknowns, required
    TimeSpan time{};
    const Restriction* only = nullptr; ///< null: the whole model
    bool cells = true;                 ///< off: only faces, contacts and local heats

    /// For functionals: with weights (all unknowns) the pass sums weights . r into `weighted` and adds J^T weights to `transposed`.
    const double* weights = nullptr;
    double weighted = 0.0;
    double* transposed = nullptr; ///< all unknowns, added to; may be null

    /// For load vectors of inputs (linear bodies, T = 0): of the loads (sources, fluxes, outside temperatures, local heat) only
    /// the listed ones count, and with `unit_loads` they count as 1 whatever their value. Null: all loads as they are.
    const std::vector<const Coefficient*>* loads = nullptr;
    bool unit_loads = false;

    /// Of the slopes of films, fluxes and sources by temperature only those that restore balance enter the matrix, and the
    /// conductivity counts as it is: the matrix is then symmetric and positive definite where the full derivative is not, because
    /// a source grows faster than what carries its heat away.
    bool restoring_only = false;

    double* residual = nullptr;     ///< all unknowns, set; null: not wanted. Heat into the body that T would need [W]
    SparseMatrix* matrix = nullptr; ///< lower (and upper when the model has a slope) set; null: not wanted
    double* diagonal = nullptr; ///< 1D, cells off: what faces and contacts give to the matrix's diagonal, all unknowns
    bool added = false;         ///< `residual` and `diagonal` are added to, not set
    Accounts* accounts = nullptr;    ///< null: not wanted
    double* content = nullptr;       ///< per region: integral of T over its volume [K m3], set; null: not wanted
    double* content_slope = nullptr; ///< all unknowns: derivative of the sum of `content` by T, added to; may be null

    double side_traffic = 0.0;   ///< sum of |flow| over the cell sides of faces, prescribed ones excepted
    double source_traffic = 0.0; ///< sum of |source| over cells
    Fault fault{};               ///< the first evaluation that cannot be used; results are then incomplete
};

/// Evaluates the weak form of the model: r_i = int k grad T . grad N_i - sources + what leaves through faces and contacts.
/// At a free unknown of a solution r is zero; at a prescribed one it is the heat that enters the body there.
/// Cost O(cells points nodes^2) with the matrix, O(cells points nodes) without; allocates nothing but the contents of
/// `accounts` (and laws with more than 16 parameters).
TEPOR_INLINE void assemble(const Model& model, const Values& values, Workspace& work, Pass& pass);

/// Evaluates the cells whose nodes (x, T) stand in work.cells as if they lay in `region`; `cells` names the one each of them is
/// part of, for messages. Results stay in work.cells.
TEPOR_INLINE Fault form_cells(const Model& model, const Values& values, Workspace& work, TimeSpan time, Id region,
                              const Id* cells, Wanted wanted);

/// Gives a matrix the model's pattern, values zero; `upper` only when the model has an unsymmetric derivative.
TEPOR_INLINE void prepare_matrix(const Model& model, SparseMatrix& matrix);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/assemble.hpp>
#endif
