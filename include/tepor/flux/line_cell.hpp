#pragma once
// A cell of a 1D mesh as the bounds see it: temperature, source and quadrature along it.

#include <algorithm>
#include <array>
#include <tepor/flux/problem.hpp>
#include <tepor/quadrature/gauss.hpp>

namespace tepor::detail {

inline double radius_power(int n, double r) noexcept {
    return n == 0 ? 1.0 : n == 1 ? r : r * r;
}

/// One cell of the line with the temperature as a polynomial in Lagrange form.
class LineCell {
  public:
    LineCell(const FluxProblem& problem, const double* temperature, Index c)
        : power_(problem.mesh->frame.power()), nodes_(problem.mesh->nodes_per_cell) {
        const Id* node = problem.mesh->cell(c);
        const Id* dof = problem.dof.data() + as_size(c) * as_size(nodes_);
        for (int i = 0; i < nodes_; ++i) {
            x_[as_size(i)] = problem.mesh->nodes[as_size(node[i])].x;
            t_[as_size(i)] = temperature[dof[i]];
        }
        k = problem.conductivity[as_size(c)];
        sink = problem.sink.empty() ? 0.0 : problem.sink[as_size(c)];
        source_ = problem.source[as_size(c)] + (sink != 0.0 ? sink * problem.sink_temperature[as_size(c)] : 0.0);
        forward = x_[1] > x_[0]; // side 0 is the left end
    }

    [[nodiscard]] double left() const noexcept { return std::min(x_[0], x_[1]); }
    [[nodiscard]] double right() const noexcept { return std::max(x_[0], x_[1]); }

    /// Value and slope of the temperature.
    void temperature(double x, double& value, double& slope) const noexcept {
        value = slope = 0.0;
        for (std::size_t i = 0; i < as_size(nodes_); ++i) {
            double n = 1.0, d = 0.0;
            for (std::size_t j = 0; j < as_size(nodes_); ++j) {
                if (j == i) continue;
                d = (d * (x - x_[j]) + n) / (x_[i] - x_[j]);
                n *= (x - x_[j]) / (x_[i] - x_[j]);
            }
            value += n * t_[i];
            slope += d * (t_[i] - t_[0]); // the level does not count, and costs no digits
        }
    }

    /// Shape function i.
    [[nodiscard]] double shape(int i, double x) const noexcept {
        double n = 1.0;
        for (std::size_t j = 0; j < as_size(nodes_); ++j)
            if (j != as_size(i)) n *= (x - x_[j]) / (x_[as_size(i)] - x_[j]);
        return n;
    }

    /// Source with the constant part of the sink [W/m3].
    [[nodiscard]] double source() const noexcept { return source_; }

    /// Integral of r^n (source - sink T) from the left end to x: four points, exact to degree 7.
    [[nodiscard]] double generated(double x) const {
        static const Rule<1> rule = gauss_legendre(4);
        const double a = left();
        double sum = 0.0, value = 0.0, slope = 0.0;
        for (Index q = 0; q < rule.size(); ++q) {
            const double r = a + (x - a) * rule.point(q)[0];
            if (sink != 0.0) temperature(r, value, slope);
            sum += rule.weight(q) * radius_power(power_, r) * (source_ - sink * value);
        }
        return (x - a) * sum;
    }

    /// Calls f(weight, x, r^n) at points that integrate 1/r^n times polynomials to rounding: twelve per piece whose ends
    /// differ by less than half.
    template <class F>
    void points(F f) const {
        static const Rule<1> rule = gauss_legendre(12);
        double a = left();
        const double end = right();
        while (a < end) {
            const double b = power_ == 0 || a <= 0.0 ? end : std::min(end, 1.5 * a);
            for (Index q = 0; q < rule.size(); ++q) {
                const double x = a + (b - a) * rule.point(q)[0];
                f((b - a) * rule.weight(q), x, radius_power(power_, x));
            }
            a = b;
        }
    }

    double k, sink;
    bool forward;

  private:
    int power_, nodes_;
    double source_;
    std::array<double, 8> x_{}, t_{};
};

} // namespace tepor::detail
