#pragma once
// One pass of a bracket of a quantity that is linear in the temperature, and of one with radiating faces.

#include <algorithm>
#include <cmath>
#include <tepor/answers/impl/bracket_level.hpp>
#include <tepor/answers/linear_quantity.hpp>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/flux/radiating.hpp>
#include <tepor/flux/weak_form.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::detail {

/// The functional of the level's body, with its prescribed temperatures at hand.
inline LinearQuantity read_quantity(BracketLevel& level, const Quantity& quantity, std::vector<double>& held) {
    const Model& model = level.model();
    std::vector<double> all(as_size(model.unknowns), 0.0);
    model.prescribe(level.values(), {}, all.data());
    held.assign(all.begin() + model.free, all.end());
    return linear_quantity(model, level.values(), level.primal(), quantity, all.data());
}

/// An interval around `value` in the units of the quantity.
inline void set_interval(LevelAnswer& out, double scale, double value, double below, double above) {
    const double a = scale * (value - below), b = scale * (value + above);
    out.lower = std::min(a, b);
    out.upper = std::max(a, b);
    out.value = scale * value;
}

/// What a field and its influence give together: `l_z(T) + l(z) - a(T, z)`.
inline Summed dual_value(const FluxProblem& primal, const std::vector<double>& t, const std::vector<double>& weights,
                         const std::vector<double>& z) {
    Summed sum = weak_form(primal, t.data(), z.data());
    for (std::size_t u = 0; u < t.size(); ++u) sum.add(weights[u] * t[u]);
    return sum;
}

inline LevelAnswer answer_linear(BracketLevel& level, const Quantity& quantity) {
    const FluxProblem& primal = level.primal().problem;
    std::vector<double> held;
    const LinearQuantity q = read_quantity(level, quantity, held);
    LevelAnswer out;
    double half_width = 0.0, value = q.constant, absolute = q.absolute;
    if (!q.exact) {
        level.factor();
        const std::vector<double> t = level.solve(primal, held), z = level.solve(q.adjoint, q.held);
        const Equilibrated flux_t = equilibrate(primal, t.data()), flux_z = equilibrate(q.adjoint, z.data());
        const PairBound pair = pair_bound(primal, t.data(), flux_t, q.adjoint, z.data(), flux_z);
        const Summed sum = dual_value(primal, t, flux_load(q.adjoint, level.model().unknowns), z);
        value += sum.value + pair.correction;
        absolute += sum.absolute + std::abs(pair.correction);
        half_width = pair.half_width;
        out.share = shares(flux_t);
        const std::vector<double> other = shares(flux_z);
        for (std::size_t c = 0; c < other.size(); ++c) out.share[c] += other[c];
    }
    half_width += rounding_unit * absolute;
    set_interval(out, q.scale, value, half_width, half_width);
    return out;
}

/// With radiating faces, `q.n = g(T)`, b = g'(Th) and the influence z of the body linearised at Th:
/// `Q(T) = Q(Th) + l(zh) - a(Th, zh) - <g(Th), zh> + a_b(T - Th, z - zh) + <rho, chi - zh>`,
/// where chi is 1 on the radiating faces whose heat is asked for, and rho = g(T) - g(Th) - b (T - Th) >= 0. The last but one term
/// is at most the product of the two bounds, both taken in the norm with the least slope of g; for the last see
/// radiation_remainder(). (Derived from the law rising and being convex; no constant is left unknown.)
inline LevelAnswer answer_radiating(BracketLevel& level, const Quantity& quantity) {
    const Model& model = level.model();
    FluxProblem& primal = level.primal().problem;
    const Radiating& radiating = level.primal().radiating;
    std::vector<double> held;
    LinearQuantity q = read_quantity(level, quantity, held);
    const Field field = steady(level.body(), {.tolerance = 1e-12});
    const std::vector<double> t(field.temperature().begin(), field.temperature().end());
    const int points = model.kernels->side_points; // those of the solve: the balances of the patches close
    std::vector<char> weighed(radiating.sides.size(), 0);
    for (std::size_t i = 0; i < weighed.size(); ++i)
        weighed[i] = q.through.empty() ? 0 : q.through[as_size(radiating.sides[i].side)];

    set_radiation(primal, radiating, t.data(), points);
    const Equilibrated flux_t = equilibrate(primal, t.data());
    level.factor(t);
    set_radiation_adjoint(q.adjoint, radiating, primal, t.data(), nullptr, weighed, points);
    const std::vector<double> z = level.solve(q.adjoint, q.held);
    const std::vector<double> weights = flux_load(q.adjoint, model.unknowns);
    set_radiation_adjoint(q.adjoint, radiating, primal, t.data(), z.data(), weighed, points);
    const Equilibrated flux_z = equilibrate(q.adjoint, z.data());
    const Remainder remainder = radiation_remainder(primal, radiating, t.data(), z.data(), weighed);

    double absolute = q.absolute;
    const double offset = radiated_offset(primal, radiating, t.data(), weighed, points, absolute);
    set_radiation(primal, radiating, t.data(), exact_radiation_points);
    const Summed sum = dual_value(primal, t, weights, z);
    absolute += sum.absolute;
    const double bound_t = flux_t.bound(), product = bound_t * flux_z.bound();
    const double rest = rounding_unit * absolute;
    LevelAnswer out;
    set_interval(out, q.scale, q.constant + offset + sum.value, product - bound_t * bound_t * remainder.least + rest,
                 product + bound_t * bound_t * remainder.most + rest);
    out.share = shares(flux_t);
    const std::vector<double> other = shares(flux_z);
    const double own = 1.0 + bound_t * bound_t * (remainder.most - remainder.least) / product;
    for (std::size_t c = 0; c < other.size(); ++c) out.share[c] = own * out.share[c] + other[c];
    return out;
}

} // namespace tepor::detail
