#pragma once
// From the basis to the answer: balanced truncation or the diagonal form, and exact steps in time.

#include <tepor/answers/impl/compact_basis.hpp>

namespace tepor {

namespace detail {

/// x' = A x + B u, y = C x + D u.
struct Continuous {
    Dense A, B, C, D;
};

/// The diagonal form of a basis, symmetric, with the modes too fast to matter replaced by their steady answer.
inline Continuous diagonal_form(const CompactBasis& basis, Dense D) {
    double slowest = 0.0;
    for (const double t : basis.times) slowest = std::max(slowest, t);
    std::vector<std::size_t> kept;
    for (std::size_t i = 0; i < basis.times.size(); ++i) {
        if (basis.times[i] > 1e-13 * slowest) {
            kept.push_back(i);
            continue;
        }
        for (std::size_t p = 0; p < D.rows; ++p)
            for (std::size_t q = 0; q < D.cols; ++q) D(p, q) += basis.c(p, i) * basis.b(i, q);
    }
    Continuous out;
    out.A = Dense(kept.size(), kept.size());
    out.B = Dense(kept.size(), D.cols);
    out.C = Dense(D.rows, kept.size());
    for (std::size_t k = 0; k < kept.size(); ++k) {
        const double t = basis.times[kept[k]];
        out.A(k, k) = -1.0 / t;
        for (std::size_t q = 0; q < D.cols; ++q) out.B(k, q) = basis.b(kept[k], q) / std::sqrt(t);
        for (std::size_t p = 0; p < D.rows; ++p) out.C(p, k) = basis.c(p, kept[k]) / std::sqrt(t);
    }
    out.D = std::move(D);
    return out;
}

/// L with L L^T = the Gramian of a diagonal stable A and the rows of `load` (states x count): entries b_i.b_j / (a_i + a_j).
inline Dense gramian_factor(const Dense& A, const Dense& load) {
    const std::size_t n = A.rows;
    std::vector<double> P(n * n);
    for (std::size_t i = 0; i < n; ++i)
        for (std::size_t j = 0; j < n; ++j) {
            double s = 0.0;
            for (std::size_t k = 0; k < load.cols; ++k) s += load(i, k) * load(j, k);
            P[i * n + j] = s / -(A(i, i) + A(j, j));
        }
    std::vector<double> value;
    std::vector<double> vector;
    symmetric_eigen(P, n, value, vector);
    Dense L(n, n);
    for (std::size_t j = 0; j < n; ++j) {
        const double s = std::sqrt(std::max(value[j], 0.0));
        for (std::size_t i = 0; i < n; ++i) L(i, j) = vector[i * n + j] * s;
    }
    return L;
}

/// Balanced form to `order` states, or as many as keep 2 x the rest below `allowed`; dropped states at their steady answer.
inline Continuous balance(const Continuous& full, Index order, double allowed, std::vector<double>& dropped) {
    const std::size_t n = full.A.rows;
    const Dense Lp = gramian_factor(full.A, full.B);
    const Dense Lq = gramian_factor(full.A, transposed(full.C));
    const Singular svd = singular_values(product(transposed(Lq), Lp));
    std::size_t usable = 0;
    while (usable < n && svd.s[usable] > 1e-13 * svd.s[0]) ++usable;
    std::size_t r = 0;
    if (order > 0) {
        r = std::min(as_size(order), usable);
    } else {
        double rest = 0.0;
        r = n;
        while (r > 0 && 2.0 * (rest + svd.s[r - 1]) <= allowed) rest += svd.s[--r];
        r = std::min(r, usable);
    }
    dropped.assign(svd.s.begin() + static_cast<Index>(r), svd.s.end());
    // W_l^T W_r = I on the usable states
    Dense left(n, usable);
    Dense right(n, usable);
    const Dense from_left = product(Lq, svd.U);
    const Dense from_right = product(Lp, svd.V);
    for (std::size_t j = 0; j < usable; ++j) {
        const double s = 1.0 / std::sqrt(svd.s[j]);
        for (std::size_t i = 0; i < n; ++i) {
            left(i, j) = from_left(i, j) * s;
            right(i, j) = from_right(i, j) * s;
        }
    }
    const Dense A = product(transposed(left), product(full.A, right));
    const Dense B = product(transposed(left), full.B);
    const Dense C = product(full.C, right);
    Continuous out;
    const std::size_t rest = usable - r;
    out.A = A.block(0, 0, r, r);
    out.B = B.block(0, 0, r, B.cols);
    out.C = C.block(0, 0, C.rows, r);
    out.D = full.D;
    if (rest > 0) {
        const Dense A22 = A.block(r, r, rest, rest);
        const Dense C2 = C.block(0, r, C.rows, rest);
        const Dense A12 = A.block(0, r, r, rest);
        const Dense X21 = solve(A22, A.block(r, 0, rest, r));
        const Dense X2 = solve(A22, B.block(r, 0, rest, B.cols));
        out.A = sum(out.A, -1.0, product(A12, X21));
        out.B = sum(out.B, -1.0, product(A12, X2));
        out.C = sum(out.C, -1.0, product(C2, X21));
        out.D = sum(out.D, -1.0, product(C2, X2));
    }
    return out;
}

/// Steady gain D - C A^-1 B.
inline Dense steady_gain(const Continuous& m) {
    return m.A.rows == 0 ? m.D : sum(m.D, -1.0, product(m.C, solve(m.A, m.B)));
}

/// Exact steps for inputs held over dt.
inline void discretise(const Continuous& m, double dt, Dense& A, Dense& B) {
    const std::size_t n = m.A.rows;
    bool diagonal = true;
    for (std::size_t i = 0; i < n; ++i)
        for (std::size_t j = 0; j < n; ++j) diagonal = diagonal && (i == j || m.A(i, j) == 0.0);
    A = Dense(n, n);
    B = Dense(n, m.B.cols);
    if (diagonal) {
        for (std::size_t i = 0; i < n; ++i) {
            A(i, i) = std::exp(m.A(i, i) * dt);
            for (std::size_t j = 0; j < m.B.cols; ++j) B(i, j) = std::expm1(m.A(i, i) * dt) / m.A(i, i) * m.B(i, j);
        }
        return;
    }
    Dense joined(n + m.B.cols, n + m.B.cols);
    for (std::size_t i = 0; i < n; ++i) {
        for (std::size_t j = 0; j < n; ++j) joined(i, j) = m.A(i, j) * dt;
        for (std::size_t j = 0; j < m.B.cols; ++j) joined(i, n + j) = m.B(i, j) * dt;
    }
    const Dense e = exponential(std::move(joined));
    A = e.block(0, 0, n, n);
    B = e.block(0, n, n, m.B.cols);
}

} // namespace detail

TEPOR_INLINE StateSpace compact(const Body& body, const CompactOptions& options) {
    using namespace detail;
    CompactPlant plant(body, options);
    CompactBasis basis(plant);
    const double highest = options.highest_frequency > 0.0 ? options.highest_frequency : pi / options.sample_time;
    // most of the tolerance is left to truncation, which is what makes the model small
    basis.build(highest, 0.1 * options.tolerance, 13);
    const double basis_error = basis.worst();
    Continuous full = diagonal_form(basis, plant.D);
    const Dense exact = steady_gain(full);
    Continuous model;
    StateSpace out;
    if (options.passive) {
        model = full;
    } else {
        const double allowed = options.tolerance * basis.peak - basis_error;
        if (options.order == 0 && !(allowed > 0.0))
            throw Error(ErrorCode::not_converged, "tolerance",
                        text("compact: the basis is certified to ", basis_error / basis.peak,
                             " of the peak gain only, asked were ", options.tolerance,
                             "; raise the tolerance or lower highest_frequency"));
        model = balance(full, options.order, allowed, out.dropped);
        model.D = sum(model.D, 1.0, sum(exact, -1.0, steady_gain(model)));
    }
    double truncated = 0.0;
    for (const double s : out.dropped) truncated += 2.0 * s;
    out.error_bound = basis_error + truncated;
    if (options.order == 0 && out.error_bound > options.tolerance * basis.peak * (1.0 + 1e-9))
        throw Error(ErrorCode::not_converged, "tolerance",
                    text("compact: an error of ", out.error_bound / basis.peak,
                         " of the peak gain is what can be certified; asked were ", options.tolerance));
    out.basis_error = basis_error;
    out.peak_gain = basis.peak;
    out.frequencies = basis.frequencies;
    out.basis_size = static_cast<Index>(basis.size());
    out.factorisations = plant.factorisations;
    out.linearised = plant.model()->nonlinear;
    out.order = static_cast<Index>(model.A.rows);
    out.inputs = static_cast<Index>(options.inputs.size());
    out.outputs = static_cast<Index>(options.outputs.size());
    out.sample_time = options.sample_time;
    Dense A;
    Dense B;
    discretise(model, options.sample_time, A, B);
    // back to the user's units
    for (std::size_t i = 0; i < model.A.rows; ++i)
        for (std::size_t j = 0; j < model.B.cols; ++j) {
            B(i, j) /= plant.input_scale[j];
            model.B(i, j) /= plant.input_scale[j];
        }
    for (std::size_t i = 0; i < model.C.rows; ++i) {
        for (std::size_t j = 0; j < model.C.cols; ++j) model.C(i, j) *= plant.output_scale[i];
        for (std::size_t j = 0; j < model.D.cols; ++j) model.D(i, j) *= plant.output_scale[i] / plant.input_scale[j];
    }
    out.A = A.data;
    out.B = B.data;
    out.C = model.C.data;
    out.D = model.D.data;
    out.Ac = model.A.data;
    out.Bc = model.B.data;
    out.x0.assign(model.A.rows, 0.0);
    out.u0 = plant.u0;
    out.y0 = plant.y0;
    out.input_scale = plant.input_scale;
    out.output_scale = plant.output_scale;
    for (const Parameter& p : options.inputs) out.input_names.push_back(p.name());
    for (const Quantity& q : options.outputs) {
        out.output_names.push_back(q.label());
        const bool kelvin = q.is_temperature() && body.options().scale == TemperatureScale::kelvin;
        out.output_units.push_back(kelvin ? "K" : q.unit());
    }
    out.reset();
    return out;
}

} // namespace tepor
