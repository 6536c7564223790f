#pragma once
// Functional: a Quantity compiled for one model.

#include <optional>
#include <tepor/base/config.hpp>
#include <tepor/body/assemble.hpp>
#include <tepor/body/enthalpy.hpp>
#include <tepor/body/model.hpp>
#include <tepor/describe/quantity.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// A sparse row over the unknowns.
struct SparseRow {
    std::vector<Id> unknown;
    std::vector<double> weight;

    void add(Id u, double w) {
        unknown.push_back(u);
        weight.push_back(w);
    }
    [[nodiscard]] double dot(const double* v) const noexcept {
        double sum = 0.0;
        for (std::size_t i = 0; i < unknown.size(); ++i) sum += weight[i] * v[unknown[i]];
        return sum;
    }
};

/// A place in a mesh seen by the model: the cell in its numbering and reference coordinates.
struct ModelPlace {
    Id cell = -1;
    double xi[2] = {0.0, 0.0};
    explicit operator bool() const noexcept { return cell >= 0; }
};

/// A compiled Quantity, J(T) = constant + weights . T + reactions . r + heat terms. Reading is a few dot products; the
/// same parts are the load of an adjoint.
struct Functional {
    Quantity::Kind kind = Quantity::Kind::at;
    double constant = 0.0;
    SparseRow temperature; ///< on T
    SparseRow reaction;    ///< on the residual r (heat into the body at prescribed unknowns)

    /// weights . r of a part of the weak form.
    struct Heat {
        Restriction part;
        SparseRow weights;
    };
    std::vector<Heat> heats;

    /// factor times the integral over a side of -k grad T . n N_j, for corners where prescribed faces meet.
    struct EdgeFlux {
        CellSide side;
        int node = 0; ///< of the side
        double factor = 0.0;
    };
    std::vector<EdgeFlux> edges;

    /// Exact cells only: temperatures between nodes, and the mean of a region, which are no fixed weights on T.
    struct Inner {
        ModelPlace place;
        double factor = 0.0;
    };
    std::vector<Inner> inner;
    struct Content {
        Id region = 0;
        double factor = 0.0; ///< 1 / volume
    };
    std::vector<Content> contents;

    /// Where the flow has no finite value: two prescribed temperatures differ at this corner.
    std::optional<Point> unbounded;

    /// For the extremes: the cells they are sought in (range of a region, or the cells of a face's sides).
    bool extreme = false;
    double direction = 1.0; ///< +1 hottest, -1 coldest
    Id region = -1;
    Id face = -1;

    /// Heat content of a region whose capacity depends on temperature or that melts; else it is a row on T like a mean.
    Id stored = -1;

    /// Nothing but weights on T and a constant.
    [[nodiscard]] bool plain() const noexcept {
        return reaction.unknown.empty() && heats.empty() && edges.empty() && inner.empty() && contents.empty() &&
               !extreme && stored < 0;
    }
};

/// Compiles a quantity.
/// @throws Error bad_name, outside (point outside the body, inside a local heat's radius, or with two temperatures),
///         wrong_dimension, not_supported
[[nodiscard]] TEPOR_INLINE Functional compile(const Model& model, const Values& values, const Quantity& quantity);

/// Value at a temperature. `reaction` is the residual at all unknowns (read when the functional has reactions).
/// @throws Error no_answer (unbounded flow), bad_law
[[nodiscard]] TEPOR_INLINE double evaluate(const Functional& functional, const Model& model, const Values& values,
                                           Workspace& work, const double* T, const double* reaction, TimeSpan time);

/// dJ/dT at T into `row` (all unknowns, added to), reactions and prescribed values left aside: for the adjoint.
TEPOR_INLINE void temperature_slope(const Functional& functional, const Model& model, const Values& values,
                                    Workspace& work, const double* T, TimeSpan time, double* row);

/// Sensible heat of a region from 0 of the body's scale to T [J]; with `row` its derivative by the unknowns is added there. Elements
/// of order 1 hold heat at their nodes, as lumped marching does; higher ones by quadrature.
[[nodiscard]] TEPOR_INLINE double sensible_heat(const Model& model, const Values& values, Workspace& work,
                                                const Enthalpy& enthalpy, std::size_t region, const double* T,
                                                double* row);

/// Latent heat of a region by the temperatures of its nodes [J]; at a melting temperature without width it counts as solid.
[[nodiscard]] TEPOR_INLINE double latent_heat(const Model& model, const Values& values, Workspace& work,
                                              const Enthalpy& enthalpy, std::size_t region, const double* T);

/// An extreme of the finite element function and where it is.
struct Extreme {
    double value = 0.0;
    Point place;
    ModelPlace at;
};
/// The hottest (direction +1) or coldest (-1) place in a region, inside cells too; region -1 means the whole body.
[[nodiscard]] TEPOR_INLINE Extreme extreme_in(const Model& model, const Values& values, const double* T, Id region,
                                              double direction);
/// The same on the sides of a face.
[[nodiscard]] TEPOR_INLINE Extreme extreme_on(const Model& model, const Values& values, const double* T, Id face,
                                              double direction);

/// The cell at a place, in a region when it is not -1. @throws Error outside, as compile()
[[nodiscard]] TEPOR_INLINE ModelPlace locate(const Model& model, const Values& values, Point place, Id region);
/// Shape function values at a place, `kernels->nodes` of them, and the place's coordinates.
TEPOR_INLINE Point shapes_at(const Model& model, const Values& values, const ModelPlace& at, double* shape,
                             double* gradient_x, double* gradient_y);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/field/impl/extremes.hpp>
#include <tepor/field/impl/functional.hpp>
#include <tepor/field/impl/places.hpp>
#endif
