#pragma once
// The resistance cell: its functions, loads and matrix.

#include <algorithm>
#include <cmath>
#include <tepor/assembly/exact_kernels.hpp>
#include <tepor/quadrature/gauss.hpp>

namespace tepor {

namespace detail {

/// Legendre polynomials 0 .. n on [0,1] at x. DLMF 18.9.1.
inline void legendre_values(int n, double x, double* p) noexcept {
    const double t = 2.0 * x - 1.0;
    p[0] = 1.0;
    if (n > 0) p[1] = t;
    for (int i = 1; i < n; ++i) p[i + 1] = ((2.0 * i + 1.0) * t * p[i] - i * p[i - 1]) / (i + 1.0);
}

/// sinh(a s) / sinh(a) for s in [0,1], for any a > 0.
inline double sinh_ratio(double a, double s) noexcept {
    return std::exp(-a * (1.0 - s)) * (std::expm1(-2.0 * a * s) / std::expm1(-2.0 * a));
}

} // namespace detail

TEPOR_INLINE Kernels<ExactSegment>::Kernels(Frame frame, int extra_degree)
    : power_(frame.power()), factor_(frame.factor(1)) {
    dim = order = 1;
    nodes = sides = 2;
    side_nodes = side_points = 1;
    exact = true;
    const int degree = std::min(24 + std::max(extra_degree, 0) / 2, most_points - 2);
    points = degree + 2;
    const Rule<1> rule = gauss_legendre(degree);
    const auto g = detail::as_size(degree);
    const auto m = detail::as_size(points);
    for (Index q = 0; q < rule.size(); ++q) {
        place_.push_back(rule.point(q)[0]);
        weight_.push_back(rule.weight(q));
    }
    for (const double end :
         {1e-12, 1.0 - 1e-12}) { // just inside, for what jumps right at an end belongs to the next cell
        place_.push_back(end);
        weight_.push_back(0.0);
    }
    // Lagrange functions of the points as Legendre sums: l_p = sum_n (2 n + 1) w_p P_n(x_p) P_n
    std::vector<double> at_points(m * (g + 1));
    for (std::size_t p = 0; p < m; ++p) detail::legendre_values(degree, place_[p], &at_points[p * (g + 1)]);
    running_.resize(m * m);
    for (std::size_t q = 0; q < m; ++q) {
        const double* here = &at_points[q * (g + 1)];
        for (std::size_t p = 0; p < m; ++p) {
            const double* there = &at_points[p * (g + 1)];
            double sum = place_[q];
            for (std::size_t n = 1; n < g; ++n) sum += 0.5 * (here[n + 1] - here[n - 1]) * there[n]; // DLMF 18.17.1
            running_[q * m + p] = weight_[p] * sum;
        }
    }
    for (std::size_t t = 0; t < 2; ++t)
        for (std::size_t p = 0; p < g; ++p) {
            const std::size_t n = g - 1 - t;
            tail_[t].push_back((2.0 * detail::as_double(n) + 1.0) * weight_[p] * at_points[p * (g + 1) + n]);
            double lagrange = 0.0;
            for (std::size_t i = 0; i < g; ++i)
                lagrange +=
                    (2.0 * detail::as_double(i) + 1.0) * at_points[p * (g + 1) + i] * at_points[(g + t) * (g + 1) + i];
            end_[t].push_back(weight_[p] * lagrange);
        }
    if (power_ == 0) return;
    moment_.assign(m * m, 0.0);
    std::vector<double> legendre(g + 1);
    for (std::size_t q = 0; q < m; ++q)
        for (std::size_t j = 0; j < m; ++j) {
            const double t = place_[j];
            detail::legendre_values(degree, place_[q] * t, legendre.data());
            const double w = weight_[j] * (power_ == 1 ? t : t * t);
            for (std::size_t p = 0; p < m; ++p) {
                double lagrange = 0.0;
                for (std::size_t n = 0; n < g; ++n)
                    lagrange += (2.0 * detail::as_double(n) + 1.0) * at_points[p * (g + 1) + n] * legendre[n];
                moment_[q * m + p] += w * weight_[p] * lagrange;
            }
        }
}

/// Integrals from the left end to every point.
TEPOR_INLINE void Kernels<ExactSegment>::running(const double* density, double* integral) const noexcept {
    for (int q = 0; q < points; ++q) {
        const double* row = running_.data() + static_cast<Index>(q) * points;
        double sum = 0.0;
        for (int p = 0; p < points; ++p) sum += row[p] * density[p];
        integral[q] = sum;
    }
}

TEPOR_INLINE bool Kernels<ExactSegment>::resolved(const double* values) const noexcept {
    double largest = 0.0;
    double tail[2] = {0.0, 0.0};
    double end[2] = {0.0, 0.0};
    const int inner = points - 2;
    for (int p = 0; p < inner; ++p) {
        largest = std::max(largest, std::abs(values[p]));
        for (int t = 0; t < 2; ++t) {
            tail[t] += tail_[t][detail::as_size(p)] * values[p];
            end[t] += end_[t][detail::as_size(p)] * values[p];
        }
    }
    for (int t = 0; t < 2; ++t) {
        const double there = values[inner + t];
        if (!(std::abs(end[t] - there) <= 1e-5 * std::max(largest, std::abs(there)))) return false;
    }
    return std::max(std::abs(tail[0]), std::abs(tail[1])) <= 3e-7 * largest;
}

TEPOR_INLINE void Kernels<ExactSegment>::open(CellBlock& block) const {
    for (int c = 0; c < W; ++c) {
        const double a = block.x[c];
        const double b = block.x[W + c];
        const double rise = block.T ? block.T[W + c] - block.T[c] : 0.0;
        const bool radial = power_ > 0 && a > 0.0;
        const double h = radial ? std::log1p((b - a) / a) : b - a;
        for (int q = 0; q < points; ++q) {
            const int at = q * W + c;
            const double xi = place_[detail::as_size(q)];
            const double r = radial ? a * std::exp(h * xi) : a + h * xi;
            const double jacobian = radial ? h * r : h;
            // share of the second node for k = 1, and its slope in xi
            double share = xi;
            double slope = 1.0;
            if (radial && power_ == 2) {
                share = std::expm1(-h * xi) / std::expm1(-h);
                slope = -h * std::exp(-h * xi) / std::expm1(-h);
            } else if (power_ > 0 && !radial) {
                share = xi * xi;
                slope = 2.0 * xi;
            }
            block.point_x[at] = r;
            block.point_y[at] = 0.0;
            block.weight[at] = weight_[detail::as_size(q)] * jacobian * measure(r);
            block.gradient_x[2 * q * W + c] = -slope / jacobian;
            block.gradient_x[(2 * q + 1) * W + c] = slope / jacobian;
            if (block.T) block.point_T[at] = block.T[c] + share * rise;
        }
    }
}

/// The fin with a constant loss c T: functions sinh(m (b - x)) / sinh(m L) and sinh(m (x - a)) / sinh(m L), m^2 = c / k.
TEPOR_INLINE void Kernels<ExactSegment>::shape_fin(const CellBlock& block, int c, Cell& cell) const noexcept {
    const double length = block.x[W + c] - block.x[c];
    const double k = cell.k[0];
    const double m = std::sqrt(block.sink / k);
    const double a = m * length;
    cell.fin = true;
    cell.decay = a;
    cell.conductance = factor_ * k * m / std::sinh(a);
    cell.loss = factor_ * k * m * std::tanh(0.5 * a);
    cell.sink_weight = factor_ * std::tanh(0.5 * a) / m;
    for (int q = 0; q < points; ++q) {
        cell.phi[0][q] = detail::sinh_ratio(a, 1.0 - place_[detail::as_size(q)]);
        cell.phi[1][q] = detail::sinh_ratio(a, place_[detail::as_size(q)]);
    }
}

/// The cell around a solid centre. Its hat is the course of T for k given and a source of 1, P(r) / P(0) with
/// P(r) = integral from r to b of s / ((n + 1) k), and its energy is the conductance; any hat would give the same nodal values.
TEPOR_INLINE void Kernels<ExactSegment>::shape_centre(CellBlock& block, int c, Cell& cell) const {
    const double b = block.x[W + c];
    const double n = power_;
    cell.centre = true;
    double density[most_points] = {};
    double to_here[most_points];
    double total = 0.0;
    double energy = 0.0;
    for (int q = 0; q < points; ++q) {
        const double r = block.point_x[q * W + c];
        density[q] = b * r / ((n + 1.0) * cell.k[q]);
        total += weight_[detail::as_size(q)] * density[q];
        energy += block.weight[q * W + c] * r * r / ((n + 1.0) * (n + 1.0) * cell.k[q]);
    }
    running(density, to_here);
    for (int q = 0; q < points; ++q) {
        cell.phi[0][q] = (total - to_here[q]) / total;
        cell.phi[1][q] = to_here[q] / total;
    }
    cell.conductance = energy / (total * total);
    for (int q = 0; q < points; ++q) density[q] = 1.0 / cell.k[q];
    if (!resolved(density)) block.unresolved = c;
}

TEPOR_INLINE void Kernels<ExactSegment>::shape_cell(CellBlock& block, int c, Cell& cell) const {
    const double a = block.x[c];
    const double b = block.x[W + c];
    const bool uniform = block.k_uniform || block.k_mean;
    for (int q = 0; q < points; ++q) {
        const int at = q * W + c;
        cell.measure[q] = measure(block.point_x[at]);
        cell.jacobian[q] = power_ > 0 && a > 0.0 ? std::log1p((b - a) / a) * block.point_x[at] : b - a;
        cell.k[q] = block.k_mean ? 1.0 : (block.k_uniform ? block.k[0][0] : block.k[0][at]);
    }
    if (block.sink > 0.0) return shape_fin(block, c, cell);
    if (power_ > 0 && !(a > 0.0)) return shape_centre(block, c, cell);
    if (uniform) {
        const double k = cell.k[0];
        const double h = power_ > 0 ? std::log1p((b - a) / a) : 0.0;
        cell.conductance = factor_ * k * (power_ == 0 ? 1.0 / (b - a) : (power_ == 1 ? 1.0 / h : a * (b / (b - a))));
        for (int q = 0; q < points; ++q) {
            const double xi = place_[detail::as_size(q)];
            cell.phi[1][q] = power_ == 2 ? std::expm1(-h * xi) / std::expm1(-h) : xi;
            cell.phi[0][q] = 1.0 - cell.phi[1][q];
        }
        return;
    }
    double density[most_points] = {};
    double to_here[most_points];
    double total = 0.0;
    for (int q = 0; q < points; ++q) {
        density[q] = cell.jacobian[q] / (cell.k[q] * cell.measure[q]);
        total += weight_[detail::as_size(q)] * density[q];
    }
    if (!resolved(density)) block.unresolved = c;
    running(density, to_here);
    cell.conductance = 1.0 / total;
    for (int q = 0; q < points; ++q) {
        cell.phi[0][q] = (total - to_here[q]) / total;
        cell.phi[1][q] = to_here[q] / total;
    }
}

/// The source at the points, and whether they follow it; one that depends on temperature is integrated as it comes.
TEPOR_INLINE void Kernels<ExactSegment>::source_of(CellBlock& block, int c, const Cell& cell, double* source) const {
    double density[most_points] = {};
    for (int q = 0; q < points; ++q) {
        source[q] = block.source[q * W + c];
        density[q] = source[q] * cell.jacobian[q] * cell.measure[q];
    }
    if (!block.source_slope && block.unresolved < 0 && !resolved(density)) {
        block.unresolved = c;
        block.unresolved_source = true;
    }
}

/// T(b) - T at the points and, last, at the centre, that the source makes: integral from r to b of F / (k w) with F / w = r times
/// the moment of the source, which loses no digits at small r.
TEPOR_INLINE void Kernels<ExactSegment>::centre_rise(const Cell& cell, const double* source,
                                                     double* rise) const noexcept {
    double density[most_points] = {};
    double total = 0.0;
    for (int q = 0; q < points; ++q) {
        const double* row = moment_.data() + static_cast<Index>(q) * points;
        double sum = 0.0;
        for (int p = 0; p < points; ++p) sum += row[p] * source[p];
        const double r = cell.jacobian[q] * place_[detail::as_size(q)]; // the jacobian is b
        density[q] = cell.jacobian[q] * r * sum / cell.k[q];
        total += weight_[detail::as_size(q)] * density[q];
    }
    running(density, rise);
    for (int q = 0; q < points; ++q) rise[q] = total - rise[q];
    rise[points] = total;
}

TEPOR_INLINE void Kernels<ExactSegment>::loads(const CellBlock& block, int c, const Cell& cell, const double* source,
                                               double* load) const noexcept {
    load[0] = load[1] = 0.0;
    if (cell.centre && !block.source_slope) {
        double rise[most_points + 1];
        centre_rise(cell, source, rise);
        double total = 0.0;
        for (int q = 0; q < points; ++q) total += block.weight[q * W + c] * source[q];
        load[0] = cell.conductance * rise[points];
        load[1] = total - load[0];
        return;
    }
    // a steep fin does not see its points: what is constant in the source is integrated in closed form
    const double constant = cell.fin ? source[0] : 0.0;
    for (int q = 0; q < points; ++q)
        for (int i = 0; i < 2; ++i) load[i] += block.weight[q * W + c] * (source[q] - constant) * cell.phi[i][q];
    for (int i = 0; i < 2; ++i) load[i] += constant * cell.sink_weight;
}

TEPOR_INLINE void Kernels<ExactSegment>::form(CellBlock& block, Wanted wanted) const {
    block.unresolved = -1;
    block.unresolved_source = false;
    for (int c = 0; c < block.count; ++c) {
        Cell cell;
        shape_cell(block, c, cell);
        double source[most_points];
        double load[2] = {0.0, 0.0};
        if (block.source) {
            source_of(block, c, cell, source);
            if (cell.fin && cell.decay > 20.0 && block.unresolved < 0)
                for (int q = 1; q < points; ++q)
                    if (source[q] != source[0] && !resolved(cell.phi[1])) {
                        block.unresolved = c;
                        block.unresolved_source = true;
                        break;
                    }
            if (wanted.residual) loads(block, c, cell, source, load);
        }
        const double g = cell.conductance * (block.k_mean ? block.k_mean[c] : 1.0);
        if (wanted.residual) {
            const double flow = g * (block.T[c] - block.T[W + c]);
            block.residual[c] = flow + cell.loss * block.T[c] + load[0];
            block.residual[W + c] = -flow + cell.loss * block.T[W + c] + load[1];
        }
        if (wanted.matrix) {
            double m[3] = {g + cell.loss, -g, g + cell.loss};
            if (block.source && block.source_slope)
                for (int q = 0; q < points; ++q) {
                    const double s = block.weight[q * W + c] * block.source_slope[q * W + c];
                    m[0] += s * cell.phi[0][q] * cell.phi[0][q];
                    m[1] += s * cell.phi[1][q] * cell.phi[0][q];
                    m[2] += s * cell.phi[1][q] * cell.phi[1][q];
                }
            for (int pair = 0; pair < 3; ++pair) block.matrix[pair * W + c] = m[pair];
        }
        if (wanted.slope)
            for (int j = 0; j < 2; ++j) {
                // d(k_mean (T0 - T1)) / dT_j is +- k at T_j; the symmetric part has k_mean there
                const double by = block.k_mean ? cell.conductance * (block.k_end[j][c] - block.k_mean[c]) : 0.0;
                block.slope[j * W + c] = j == 0 ? by : -by;
                block.slope[(2 + j) * W + c] = j == 0 ? -by : by;
            }
    }
}

} // namespace tepor
