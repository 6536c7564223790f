#pragma once
// The heat a body stores: capacity matrices, sensible heat that depends on temperature, latent heat at the nodes.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/body/enthalpy.hpp>
#include <tepor/body/model.hpp>
#include <tepor/field/functional.hpp>
#include <vector>

namespace tepor {

/// How a body's heat capacity stands in the discrete equations.
///
/// Lumped, it acts at the nodes alone: the maximum principle holds for backward Euler steps of any size on meshes without
/// obtuse angles. Consistent, it is integrated like everything else, and a step below `h^2 / (6 theta a)` (1D, a the
/// diffusivity; March::sensible_step for any mesh) undershoots after a jump. Half of each is of order 4 at the nodes of uniform 1D meshes of order 1.
/// Latent heat always acts at the nodes.
enum class Capacity {
    automatic, ///< lumped for elements of order 1, consistent above
    lumped,
    consistent,
    blended ///< half lumped, half consistent
};

/// Latent heat of one region at one unknown.
struct LatentNode {
    Id unknown = 0;
    Id region = 0;
    double full = 0.0; ///< [J] between solidus and liquidus
    double solidus = 0.0;
    double liquidus = 0.0;
};

/// The storage term of one model at given values.
class Storage {
  public:
    /// @throws Error missing, not_supported (see Enthalpy; lumped capacity of elements that have nodes without mass)
    TEPOR_INLINE Storage(std::shared_ptr<const Model> model, const Values& values, Capacity kind, Workspace& work);

    /// No specific heat or density depends on temperature and nothing melts.
    [[nodiscard]] bool linear() const noexcept { return linear_; }
    /// Share of the capacity that acts at the nodes alone, 0 to 1.
    [[nodiscard]] double lumped_share() const noexcept { return lumped_share_; }
    /// The matrix is diagonal.
    [[nodiscard]] bool diagonal_only() const noexcept { return lower_.empty() && consistent_share_ == 0.0; }

    /// out := M v of the regions of constant capacity; all unknowns. Allocates nothing.
    TEPOR_INLINE void multiply(const double* v, double* out) const noexcept;
    /// matrix += M of the regions of constant capacity, on the model's pattern.
    TEPOR_INLINE void add_to(SparseMatrix& matrix) const noexcept;
    /// Diagonal of the lumped part of the constant regions.
    [[nodiscard]] const std::vector<double>& diagonal() const noexcept { return diagonal_; }
    /// Off-diagonal entries between prescribed and free unknowns applied to the prescribed rise: out_free -= M_FP v_P.
    TEPOR_INLINE void couple(const double* v, double* out) const noexcept;

    /// Sensible heat taken up at every unknown [J] between two temperatures, added to `out`; the slope at `to` added to
    /// `matrix` unless null; heat by region added to `by_region` unless null. Allocates nothing.
    [[nodiscard]] TEPOR_INLINE Fault rise(const Values& values, Workspace& work, const double* from, const double* to,
                                          double* out, SparseMatrix* matrix, double* by_region);

    /// Row sums of the capacity at a temperature [J/K]: what each unknown would hold alone.
    [[nodiscard]] TEPOR_INLINE Fault lumped_capacity(const Values& values, const double* T, double* out);

    /// Heat of a rise of every unknown in a linear body, added to `by_region`.
    TEPOR_INLINE void by_rise(const double* rise, double* by_region) const noexcept;

    /// Sensible heat of a rise of every unknown by `by` at temperature T, region by region: row sums times `by`. `by_region` is set.
    [[nodiscard]] TEPOR_INLINE Fault by_region(const Values& values, const double* T, const double* by,
                                               double* by_region);

    [[nodiscard]] const Enthalpy& enthalpy(std::size_t region) const noexcept { return parts_[region].enthalpy; }
    [[nodiscard]] const std::vector<LatentNode>& latent() const noexcept { return latent_; }

  private:
    struct Part {
        Enthalpy enthalpy;
        std::vector<Id> unknown;
        std::vector<double> volume;   ///< integral of each shape function over the region [m3]
        std::vector<double> capacity; ///< the same times density and specific heat, where constant [J/K]
        std::vector<double> x, y;
    };
    TEPOR_INLINE void measure(Part& part, std::size_t r, const Values& values, Workspace& work);
    TEPOR_INLINE void refuse_massless(const Part& part) const;
    [[nodiscard]] TEPOR_INLINE Fault rise_lumped(Part& part, const Values& values, const double* from, const double* to,
                                                 double* out, SparseMatrix* matrix, double* sum);
    [[nodiscard]] TEPOR_INLINE Fault rise_consistent(std::size_t r, const Values& values, Workspace& work,
                                                     const double* from, const double* to, double* out,
                                                     SparseMatrix* matrix, double* sum);

    std::shared_ptr<const Model> model_;
    bool linear_ = true;
    double lumped_share_ = 1.0;
    double consistent_share_ = 0.0;
    std::vector<Part> parts_; ///< one per region
    std::vector<double> diagonal_;
    std::vector<double> lower_; ///< on the model's pattern; empty when lumped
    std::vector<double> row_sum_;
    std::vector<LatentNode> latent_;
    std::vector<double> from_, to_, rise_, slope_, late_; ///< work arrays
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/capacity.hpp>
#endif
