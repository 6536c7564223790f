#pragma once
// Heat content of a region above 0 of the body's scale.

#include <algorithm>
#include <tepor/body/enthalpy.hpp>
#include <tepor/body/model.hpp>
#include <tepor/field/functional.hpp>
#include <vector>

namespace tepor {

namespace detail {

/// Integral of a density times each shape function over a region, into `row` (all unknowns, added to).
/// `density(points, value)` returns a Fault.
template <class Density>
void integrate_row(const Model& model, const Values& values, Workspace& work, std::size_t r, const double* T,
                   const Density& density, double* row) {
    const int n = model.kernels->nodes;
    Wanted wanted;
    wanted.residual = true;
    const auto fill = [&](const Points& at, const Id*, int, double* value, double* slope) -> Fault {
        std::fill(slope, slope + at.count, 0.0);
        return density(at, value);
    };
    const auto take = [&](const CellBlock& block, Id first) {
        for (int b = 0; b < block.count; ++b)
            for (int i = 0; i < n; ++i) row[model.cell(first + b)[i]] += block.residual[i * block_width + b];
    };
    if (const Fault fault = integrate_density(model, values, work, r, T, wanted, fill, take)) raise(fault);
}

} // namespace detail

TEPOR_INLINE double sensible_heat(const Model& model, const Values& values, Workspace& work, const Enthalpy& enthalpy,
                                  std::size_t r, const double* T, double* row) {
    using detail::as_size;
    using detail::integrate_row;
    const double* slots = values.slots.data();
    const auto n = as_size(model.unknowns);
    std::vector<double> heat(n, 0.0);
    double sum = 0.0;
    if (enthalpy.constant() || model.kernels->order > 1) {
        std::vector<double> zero;
        std::vector<double> slope;
        const auto density = [&](const Points& at, double* value) -> Fault {
            zero.assign(as_size(at.count), 0.0);
            slope.assign(as_size(at.count), 0.0);
            Points from = at;
            from.temperature = zero.data();
            Fault fault = enthalpy.sensible(slots, from, at.temperature, value, slope.data());
            if (row) std::copy(slope.begin(), slope.end(), value);
            return fault;
        };
        integrate_row(model, values, work, r, T, density, heat.data());
        for (std::size_t u = 0; u < n; ++u) {
            sum += heat[u];
            if (row) row[u] += heat[u];
        }
        return sum;
    }
    integrate_row(
        model, values, work, r, nullptr,
        [](const Points& at, double* value) -> Fault {
            std::fill(value, value + at.count, 1.0);
            return {};
        },
        heat.data());
    const Point* place = model.places_of(values);
    for (std::size_t u = 0; u < n; ++u) {
        if (heat[u] == 0.0) continue;
        const double zero = 0.0;
        double rise = 0.0;
        double slope = 0.0;
        if (const Fault fault =
                enthalpy.sensible(slots, {1, &zero, nullptr, &place[u].x, &place[u].y}, T + u, &rise, &slope))
            raise(fault);
        sum += heat[u] * rise;
        if (row) row[u] += heat[u] * slope;
    }
    return sum;
}

TEPOR_INLINE double latent_heat(const Model& model, const Values& values, Workspace& work, const Enthalpy& enthalpy,
                                std::size_t r, const double* T) {
    using detail::as_size;
    using detail::integrate_row;
    if (!enthalpy.latent()) return 0.0;
    std::vector<double> mass(as_size(model.unknowns), 0.0);
    integrate_row(
        model, values, work, r, nullptr,
        [&](const Points& at, double* value) -> Fault {
            return enthalpy.latent_density(values.slots.data(), at, value);
        },
        mass.data());
    double sum = 0.0;
    for (std::size_t u = 0; u < mass.size(); ++u) sum += mass[u] * enthalpy.latent_heat() * enthalpy.molten(T[u]);
    return sum;
}

} // namespace tepor
