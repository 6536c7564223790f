#pragma once
// Enthalpy: the heat a region's material takes up per volume, sensible and latent.

#include <tepor/base/config.hpp>
#include <tepor/body/gather.hpp>
#include <tepor/body/model.hpp>
#include <vector>

namespace tepor {

/// Heat content per volume of one region's material: sensible heat, the integral of density times specific heat over
/// temperature, and latent heat, taken up between solidus and liquidus (which may be equal).
///
/// Tables are integrated exactly, laws by five Gauss points between the two temperatures. A density that depends on
/// temperature counts in the latent heat with its value at the solidus.
class Enthalpy {
  public:
    /// @throws Error missing (no density or specific heat), not_supported (one of them is a schedule, or the latent heat
    ///         depends on temperature)
    TEPOR_INLINE Enthalpy(const RegionModel& region, const Values& values);

    /// Density times specific heat does not depend on temperature.
    [[nodiscard]] bool constant() const noexcept { return constant_; }
    [[nodiscard]] bool latent() const noexcept { return latent_heat_ > 0.0; }
    /// [J/kg]
    [[nodiscard]] double latent_heat() const noexcept { return latent_heat_; }
    [[nodiscard]] double solidus() const noexcept { return solidus_; }
    [[nodiscard]] double liquidus() const noexcept { return liquidus_; }
    [[nodiscard]] const RegionModel& region() const noexcept { return *region_; }

    /// Sensible heat taken up from `at.temperature` to `to`, per volume [J/m3], and, when `slope` is not null, density times
    /// specific heat at `to` [J/(m3 K)]. Allocates nothing.
    [[nodiscard]] TEPOR_INLINE Fault sensible(const double* slots, const Points& at, const double* to, double* rise,
                                              double* slope) const;

    /// Density that the latent heat counts with [kg/m3]. Allocates nothing.
    [[nodiscard]] TEPOR_INLINE Fault latent_density(const double* slots, const Points& at, double* value) const;

    /// Molten share at a temperature, 0 at or below the solidus; where the two are equal, 0 at that temperature itself.
    [[nodiscard]] double molten(double T) const noexcept {
        if (!(T > solidus_)) return 0.0;
        return T >= liquidus_ ? 1.0 : (T - solidus_) / (liquidus_ - solidus_);
    }

    /// The tables' range that may not be left: lowest and highest temperature.
    [[nodiscard]] double lowest() const noexcept { return lowest_; }
    [[nodiscard]] double highest() const noexcept { return highest_; }

  private:
    struct Knot {
        double at = 0.0;
        double value = 0.0;
    };
    [[nodiscard]] static double read(const std::vector<Knot>& knots, double T) noexcept;
    [[nodiscard]] double product(double T) const noexcept { return read(density_, T) * read(specific_heat_, T); }
    [[nodiscard]] double table_integral(double from, double to) const noexcept;
    [[nodiscard]] TEPOR_INLINE Fault law_integral(const double* slots, const Points& at, const double* to, double* rise,
                                                  double* slope) const;

    const RegionModel* region_;
    bool constant_ = true;
    bool tabled_ = false; ///< tables and numbers alone
    double latent_heat_ = 0.0;
    double solidus_ = 0.0;
    double liquidus_ = 0.0;
    double lowest_;
    double highest_;
    std::vector<Knot> density_;
    std::vector<Knot> specific_heat_;
    std::vector<double> kinks_;
};

namespace detail {

/// Runs `density(points, cells, count, value, slope)` on the blocks of a region's cells and hands each block to `take(block, first
/// cell)`: its residual then holds the integrals of value N_i, its matrix those of slope N_i N_j, as Wanted asks. `density` returns a Fault.
template <class Density, class Take>
Fault integrate_density(const Model& model, const Values& values, Workspace& work, std::size_t r, const double* T,
                        Wanted wanted, const Density& density, const Take& take) {
    const RegionModel& region = model.regions[r];
    const CellKernels& kernel = *model.kernels;
    CellBlock& block = work.cells;
    double* const nodal_T = work.nodal_T;
    const Point* place = model.places_of(values);
    Id cells[block_width];
    for (Id c = region.first_cell; c < region.last_cell; c += block_width) {
        block.T = T ? nodal_T : nullptr;
        block.count = gather_cells(model, place, T, nodal_T, c, region.last_cell, block, cells);
        kernel.open(block);
        const Points at{static_cast<Index>(kernel.points) * block_width, T ? block.point_T : nullptr, nullptr,
                        block.point_x, block.point_y};
        Fault fault = density(at, cells, block.count, work.coefficient[6], work.coefficient[7]);
        if (fault) {
            const Index b = fault.point % block_width;
            fault.cell = model.user_cell[as_size(cells[b < block.count ? b : block.count - 1])];
            return fault;
        }
        block.conductivities = 0;
        block.k_mean = nullptr;
        block.sink = 0.0;
        if (kernel.exact) {
            // the functions of an exact cell come from its conductivity; where that depends on temperature they are taken straight
            const bool known = !region.k[0].depends_on_temperature();
            block.conductivities = 1;
            block.k_uniform = !known || region.k[0].uniform();
            block.k[0] = work.coefficient[0];
            work.coefficient[0][0] = 1.0;
            if (known) {
                fault = region.k[0].evaluate(values.slots.data(), {}, at, work.coefficient[0], nullptr);
                if (fault) return fault;
            }
            block.T = nodal_T;
            for (int i = 0; i < kernel.nodes * block_width; ++i) nodal_T[i] = 0.0;
        }
        block.source = work.coefficient[6];
        block.source_slope = nullptr;
        if (wanted.residual) {
            Wanted row;
            row.residual = true;
            kernel.form(block, row);
        }
        if (wanted.matrix) kernel.form_capacity(block, work.coefficient[7], false);
        take(block, c);
    }
    return {};
}

} // namespace detail
} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/enthalpy.hpp>
#endif
