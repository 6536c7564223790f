#pragma once
// The law of the fourth power along straight sides.

#include <algorithm>
#include <array>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/flux/line_cell.hpp>
#include <tepor/flux/loads.hpp>
#include <tepor/flux/radiating.hpp>
#include <tepor/quadrature/gauss.hpp>

namespace tepor::detail {

/// A nodal field along a side, `a + b t + c t^2`; at the end of a line a number.
struct AlongSide {
    double a = 0.0, b = 0.0, c = 0.0;

    AlongSide() = default;
    AlongSide(const FluxProblem& problem, const double* values, CellSide side) {
        const MeshData& mesh = *problem.mesh;
        if (mesh.dim == 1) {
            a = values[problem.dof[as_size(side.cell) * as_size(mesh.nodes_per_cell) + as_size(side.side)]];
            return;
        }
        const auto v = values_along(problem, values, side);
        a = v[0];
        b = -3.0 * v[0] + 4.0 * v[1] - v[2];
        c = 2.0 * v[0] - 4.0 * v[1] + 2.0 * v[2];
    }

    [[nodiscard]] double operator()(double t) const noexcept { return a + t * (b + t * c); }
    /// Bounds by the control values of the curve (a polynomial lies between them).
    [[nodiscard]] double least() const noexcept { return std::min({a, a + 0.5 * b, a + b + c}); }
    [[nodiscard]] double most() const noexcept { return std::max({a, a + 0.5 * b, a + b + c}); }
};

/// Length of a side per unit depth, radian or steradian: the area of an end in 1D.
inline double radiating_length(const FluxProblem& problem, CellSide side) noexcept {
    const MeshData& mesh = *problem.mesh;
    if (mesh.dim == 1) return radius_power(mesh.frame.power(), mesh.nodes[as_size(mesh.cell(side.cell)[side.side])].x);
    double r0 = 1.0, r1 = 1.0;
    return side_length(mesh, side, r0, r1);
}

/// The trace of a function g along a side, exact where `points` suffice.
template <class G>
SideTrace trace_along(const MeshData& mesh, G g, int points) {
    SideTrace trace;
    if (mesh.dim == 1) {
        trace.moment[0] = g(0.0);
        return trace;
    }
    const Rule<1> rule = gauss_legendre(points), fine = gauss_legendre(exact_radiation_points);
    for (Index q = 0; q < rule.size(); ++q) {
        const double t = rule.point(q)[0];
        double part = rule.weight(q) * g(t);
        for (double& moment : trace.moment) moment += part, part *= t;
    }
    // the polynomial of the order of the mesh with these moments, in Legendre polynomials on [0,1]
    const double* m = trace.moment;
    const double p0 = m[0], p1 = 3.0 * (2.0 * m[1] - m[0]),
                 p2 = mesh.order == 1 ? 0.0 : 5.0 * (6.0 * m[2] - 6.0 * m[1] + m[0]);
    for (Index q = 0; q < fine.size(); ++q) {
        const double t = fine.point(q)[0];
        const double off = g(t) - p0 - p1 * (2.0 * t - 1.0) - p2 * (6.0 * t * t - 6.0 * t + 1.0);
        trace.lost_squared += fine.weight(q) * off * off;
    }
    return trace;
}

TEPOR_INLINE void set_radiation(FluxProblem& problem, const Radiating& radiating, const double* temperature,
                                int points) {
    problem.traces.clear();
    for (const RadiatingSide& r : radiating.sides) {
        FluxSide& side = problem.sides[as_size(r.side)];
        const AlongSide field(problem, temperature, side.side);
        const double lowest = std::min(radiating.coldest, field.least() + radiating.offset);
        if (!(lowest >= 0.0) || !(r.strength * lowest + side.film > 0.0))
            throw Error(
                ErrorCode::not_certifiable, "radiation",
                text("radiation: no guaranteed bound exists, because the temperature of a face may come down to ",
                     lowest, " K, where the law of radiation does not rise; use estimate"),
                side.side.cell);
        SideTrace trace = trace_along(
            *problem.mesh,
            [&](double t) {
                const double k = field(t) + radiating.offset;
                return r.strength * k * k * k * k - r.given;
            },
            points);
        trace.least_slope = 4.0 * r.strength * lowest * lowest * lowest;
        const double highest = field.most() + radiating.offset;
        trace.size = r.strength * highest * highest * highest * highest + std::abs(r.given);
        side.trace = as_id(problem.traces.size());
        problem.traces.push_back(trace);
    }
}

/// dq/dT of a radiating side.
inline double radiation_slope(const RadiatingSide& r, double absolute) noexcept {
    return 4.0 * r.strength * absolute * absolute * absolute;
}

TEPOR_INLINE void set_radiation_adjoint(FluxProblem& adjoint, const Radiating& radiating, const FluxProblem& primal,
                                        const double* temperature, const double* z, const std::vector<char>& weighed,
                                        int points) {
    adjoint.traces.clear();
    for (std::size_t i = 0; i < radiating.sides.size(); ++i) {
        const RadiatingSide& r = radiating.sides[i];
        const FluxSide& given = primal.sides[as_size(r.side)];
        const AlongSide field(primal, temperature, given.side);
        const AlongSide influence = z != nullptr ? AlongSide(primal, z, given.side) : AlongSide();
        const double chi = weighed[i] ? 1.0 : 0.0;
        SideTrace trace = trace_along(
            *primal.mesh,
            [&](double t) { return radiation_slope(r, field(t) + radiating.offset) * (influence(t) - chi); }, points);
        trace.least_slope = primal.traces[as_size(given.trace)].least_slope;
        trace.size = radiation_slope(r, field.most() + radiating.offset) *
                     (chi + std::max(std::abs(influence.least()), std::abs(influence.most())));
        adjoint.sides[as_size(r.side)].trace = as_id(adjoint.traces.size());
        adjoint.traces.push_back(trace);
    }
}

TEPOR_INLINE double radiated_offset(const FluxProblem& primal, const Radiating& radiating, const double* temperature,
                                    const std::vector<char>& weighed, int points, double& absolute) {
    const bool line = primal.mesh->dim == 1;
    const Rule<1> rule = gauss_legendre(line ? 1 : points), fine = gauss_legendre(line ? 1 : exact_radiation_points);
    double sum = 0.0;
    const auto add = [&](double part) {
        sum += part;
        absolute += std::abs(part);
    };
    for (std::size_t i = 0; i < radiating.sides.size(); ++i) {
        if (!weighed[i]) continue;
        const RadiatingSide& r = radiating.sides[i];
        const CellSide side = primal.sides[as_size(r.side)].side;
        const AlongSide field(primal, temperature, side);
        const double length = radiating_length(primal, side);
        for (Index q = 0; q < fine.size(); ++q) {
            const double k = field(fine.point(q)[0]) + radiating.offset;
            add(length * fine.weight(q) * r.strength * k * k * k * k);
        }
        add(-length * r.given);
        for (Index q = 0; q < rule.size(); ++q) {
            const double t = field(rule.point(q)[0]);
            add(-length * rule.weight(q) * radiation_slope(r, t + radiating.offset) * t);
        }
    }
    return sum;
}

TEPOR_INLINE Remainder radiation_remainder(const FluxProblem& primal, const Radiating& radiating,
                                           const double* temperature, const double* z,
                                           const std::vector<char>& weighed) {
    Remainder out;
    for (std::size_t i = 0; i < radiating.sides.size(); ++i) {
        const RadiatingSide& r = radiating.sides[i];
        const FluxSide& side = primal.sides[as_size(r.side)];
        const AlongSide field(primal, temperature, side.side), influence(primal, z, side.side);
        const double hottest = std::max(radiating.hottest, field.most() + radiating.offset);
        const double rise = side.film + primal.traces[as_size(side.trace)].least_slope;
        const double factor = 6.0 * r.strength * hottest * hottest / rise;
        const double chi = weighed[i] ? 1.0 : 0.0;
        out.least = std::min(out.least, factor * (chi - influence.most()));
        out.most = std::max(out.most, factor * (chi - influence.least()));
    }
    return out;
}

} // namespace tepor::detail
