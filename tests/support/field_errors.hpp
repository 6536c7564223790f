#pragma once
// Distances of a field from a known temperature, cell by cell with a rule finer than the solver's own.

#include <array>
#include <cmath>
#include <tepor/element/map.hpp>
#include <tepor/field/field.hpp>
#include <tepor/quadrature/rules.hpp>
#include <vector>

namespace tepor::test {

struct FieldErrors {
    double mean_square = 0.0; ///< root of the integral of (T - T_h)^2
    double energy = 0.0;      ///< root of the integral of k |grad (T - T_h)|^2
};

/// `exact` gives T, `slope` its gradient and `k` the conductivity at a place.
template <class E, class T, class Slope, class K>
FieldErrors field_errors(const Field& field, const T& exact, const Slope& slope, const K& k) {
    const MeshData& mesh = field.mesh();
    const auto rule = rule_for<E>(2 * E::order + 5);
    const std::vector<double> values = field.cell_temperatures();
    FieldErrors sum;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        std::array<Point, detail::as_size(E::nodes)> x;
        for (std::size_t i = 0; i < x.size(); ++i) x[i] = mesh.nodes[detail::as_size(mesh.cell(c)[i])];
        for (Index q = 0; q < rule.size(); ++q) {
            const typename E::point xi = rule.point(q);
            const auto n = E::shape(xi);
            const auto g = E::gradient(xi);
            const auto j = jacobian<E>(x, xi);
            const double det = determinant<E::dim>(j);
            const Point p = place<E>(x, xi);
            double t = 0.0;
            Point s;
            for (int i = 0; i < E::nodes; ++i) {
                const double v = values[detail::as_size(c * E::nodes + i)];
                t += n[i] * v;
                if constexpr (E::dim == 1)
                    s.x += v * g(i, 0) / det;
                else
                    s = s +
                        (v / det) * Point{j(1, 1) * g(i, 0) - j(1, 0) * g(i, 1), j(0, 0) * g(i, 1) - j(0, 1) * g(i, 0)};
            }
            double weight = rule.weight(q) * det * mesh.frame.factor(E::dim);
            for (int power = 0; power < mesh.frame.power(); ++power) weight *= p.x;
            const Point off = slope(p) - s;
            sum.mean_square += weight * (exact(p) - t) * (exact(p) - t);
            sum.energy += weight * k(p) * dot(off, off);
        }
    }
    sum.mean_square = std::sqrt(sum.mean_square);
    sum.energy = std::sqrt(sum.energy);
    return sum;
}

} // namespace tepor::test
