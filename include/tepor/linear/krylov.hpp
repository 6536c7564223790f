#pragma once
// Preconditioned BiCGSTAB for unsymmetric systems, such as the Newton slope of a conductivity that varies with temperature.
// Source: van der Vorst, "Bi-CGSTAB" (1992), with right preconditioning.

#include <cmath>
#include <tepor/linear/conjugate_gradient.hpp>

namespace tepor {

/// Work vectors of bicgstab(); kept between solves so that these allocate nothing.
class KrylovWork {
  public:
    void reset(Index n) {
        for (detail::Buffer<double>& v : vector) v.reset(n);
    }
    detail::Buffer<double> vector[7];
};

/// Solves A x = b from the given x, A and its preconditioner given as callables on n values each.
///
/// @param apply         apply(x, y): y := A x
/// @param precondition  precondition(r, z): z := B r with B close to A^-1; any regular linear map
/// @param stop          as in conjugate_gradient(); the residual is the true one, since preconditioning is from the right
/// An iteration costs two products and two preconditionings. A breakdown starts again from the present residual; not
/// converged after limits.most iterations, or when a fresh start breaks down at once. Allocates nothing when `work` has
/// been used for this size before.
template <class Apply, class Precondition, class Stop>
IterationReport bicgstab(Apply&& apply, Index n, const double* b, double* x, Precondition&& precondition,
                         const IterationLimits& limits, KrylovWork& work, Stop&& stop) {
    IterationReport report;
    work.reset(n);
    double* r = work.vector[0].data();
    double* shadow = work.vector[1].data();
    double* p = work.vector[2].data();
    double* v = work.vector[3].data();
    double* s_hat = work.vector[4].data();
    double* t = work.vector[5].data();
    double* p_hat = work.vector[6].data();
    const auto dot = [n](const double* a, const double* c) { return detail::dot_product(a, c, n); };
    const double scale = std::sqrt(dot(b, b));
    if (!(scale > 0.0)) { // b is zero (or not a number, which no x can meet)
        for (Index i = 0; i < n; ++i) x[i] = 0.0;
        report.converged = scale == 0.0;
        return report;
    }
    const auto recompute = [&] {
        apply(static_cast<const double*>(x), t);
        for (Index i = 0; i < n; ++i) r[i] = b[i] - t[i];
        report.residual = std::sqrt(dot(r, r)) / scale;
        return stop(static_cast<const double*>(r), report.residual);
    };
    report.converged = recompute();
    double rho = 0.0, alpha = 0.0, omega = 0.0; // rho = 0: a fresh start
    Index since_start = 0;
    while (!report.converged && report.iterations < limits.most) {
        if (rho == 0.0) {
            for (Index i = 0; i < n; ++i) shadow[i] = p[i] = r[i];
            rho = dot(r, r);
            since_start = 0;
        } else {
            const double next = dot(shadow, r);
            const double beta = (next / rho) * (alpha / omega);
            if (!std::isfinite(beta) || next == 0.0) {
                if (since_start == 0) break;
                rho = 0.0;
                continue;
            }
            rho = next;
            for (Index i = 0; i < n; ++i) p[i] = r[i] + beta * (p[i] - omega * v[i]);
        }
        precondition(static_cast<const double*>(p), p_hat);
        apply(static_cast<const double*>(p_hat), v);
        alpha = rho / dot(shadow, v);
        if (!std::isfinite(alpha)) {
            if (since_start == 0) break;
            rho = 0.0;
            continue;
        }
        for (Index i = 0; i < n; ++i) r[i] -= alpha * v[i];
        precondition(static_cast<const double*>(r), s_hat);
        apply(static_cast<const double*>(s_hat), t);
        const double tt = dot(t, t);
        omega = tt > 0.0 ? dot(t, r) / tt : 0.0;
        if (!std::isfinite(omega)) break;
        for (Index i = 0; i < n; ++i) {
            x[i] += alpha * p_hat[i] + omega * s_hat[i];
            r[i] -= omega * t[i];
        }
        ++report.iterations;
        ++since_start;
        report.residual = std::sqrt(dot(r, r)) / scale;
        if (stop(static_cast<const double*>(r), report.residual)) {
            const double seen = report.residual;
            report.converged = recompute();
            if (report.residual > 2.0 * seen) rho = 0.0; // the recurrence has drifted
        } else if (omega == 0.0) {
            rho = 0.0;
        }
    }
    if (!report.converged) report.converged = recompute();
    return report;
}

/// The same for the leading block of a matrix, with limits.tolerance as the stop.
template <class Precondition>
IterationReport bicgstab(const SparseMatrix& matrix, Index n, const double* b, double* x, Precondition&& precondition,
                         const IterationLimits& limits, KrylovWork& work) {
    return bicgstab([&](const double* from, double* to) { multiply(matrix, n, from, to); }, n, b, x, precondition,
                    limits, work, [&limits](const double*, double relative) { return relative <= limits.tolerance; });
}

/// Solves A^T x = b; the preconditioner must be close to A^-T (the factor of the symmetric part is its own transpose).
template <class Precondition>
IterationReport bicgstab_transposed(const SparseMatrix& matrix, Index n, const double* b, double* x,
                                    Precondition&& precondition, const IterationLimits& limits, KrylovWork& work) {
    return bicgstab([&](const double* from, double* to) { multiply_transposed(matrix, n, from, to); }, n, b, x,
                    precondition, limits, work,
                    [&limits](const double*, double relative) { return relative <= limits.tolerance; });
}

/// (A + A^T) / 2 of an unsymmetric matrix, on the same pattern.
inline SparseMatrix symmetric_part(const SparseMatrix& matrix) {
    SparseMatrix out = matrix;
    out.upper.clear();
    if (matrix.symmetric()) return out;
    for (Index i = 0; i < matrix.rows; ++i) {
        const Index last = matrix.start[detail::as_size(i) + 1] - 1;
        for (Index p = matrix.start[detail::as_size(i)]; p < last; ++p) {
            out.lower[detail::as_size(p)] = 0.5 * (matrix.lower[detail::as_size(p)] + matrix.upper[detail::as_size(p)]);
        }
    }
    return out;
}

} // namespace tepor
