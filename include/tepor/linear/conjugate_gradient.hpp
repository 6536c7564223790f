#pragma once
// Preconditioned conjugate gradients for symmetric positive definite systems, in double precision.

#include <cmath>
#include <tepor/base/numbers.hpp>
#include <tepor/linear/detail/buffer.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <type_traits>

namespace tepor {

/// When an iteration stops.
struct IterationLimits {
    double tolerance = 1e-8; ///< of the residual's Euclidean norm, relative to that of the right-hand side
    Index most = 200;        ///< iterations
};

/// What an iteration did.
struct IterationReport {
    bool converged = false;
    Index iterations = 0;
    double residual = 0.0; ///< |b - A x| / |b|, recomputed from x at the end (Euclidean norm); 0 when b is zero
};

/// Work vectors of conjugate_gradient(); kept between solves so that these allocate nothing.
class ConjugateGradientWork {
  public:
    void reset(Index n) {
        residual.reset(n);
        direction.reset(n);
        product.reset(n);
        preconditioned.reset(n);
    }
    detail::Buffer<double> residual, direction, product, preconditioned;
};

namespace detail {

/// Sum of a_i b_i in slices of fixed length with four partial sums: the same bits whoever adds it up.
inline double dot_product(const double* a, const double* b, Index n) noexcept {
    double s0 = 0.0, s1 = 0.0, s2 = 0.0, s3 = 0.0;
    Index i = 0;
    for (; i + 4 <= n; i += 4) {
        s0 += a[i] * b[i];
        s1 += a[i + 1] * b[i + 1];
        s2 += a[i + 2] * b[i + 2];
        s3 += a[i + 3] * b[i + 3];
    }
    for (; i < n; ++i) s0 += a[i] * b[i];
    return (s0 + s2) + (s1 + s3);
}

/// p := z + beta p, y := A p for a symmetric A; returns p.y. One pass: row i needs no p beyond its own.
inline double direction_product(const SparseMatrix& matrix, Index n, const double* z, double beta, double* p,
                                double* y) noexcept {
    const Id* start = matrix.start.data();
    const Id* column = matrix.column.data();
    const double* value = matrix.lower.data();
    double even = 0.0, odd = 0.0;
    for (Index i = 0; i < n; ++i) {
        const Index last = start[i + 1] - 1;
        const double pi = beta == 0.0 ? z[i] : z[i] + beta * p[i];
        double sum = 0.0;
        for (Index e = start[i]; e < last; ++e) {
            const Index j = column[e];
            sum += value[e] * p[j];
            y[j] += value[e] * pi;
        }
        const double own = value[last] * pi;
        p[i] = pi;
        y[i] = sum + own;
        (i % 2 == 0 ? even : odd) += pi * (2.0 * sum + own);
    }
    return even + odd;
}

} // namespace detail

/// Solves A x = b for the leading n x n block, from the given x.
///
/// @param precondition  called as precondition(r, z): z := B r, B symmetric positive definite, such as Multigrid::cycle; may
///                      return r.z, which is then not computed again
/// @param stop          called as stop(residual, relative) after each iteration with the n residuals b - A x and their
///                      norm relative to b; true ends the iteration as converged (in place of limits.tolerance)
/// Not converged: the iterations ran out, or the matrix or B proved not to be positive definite. x is then the last iterate.
/// After a stop the residual is recomputed from x; when rounding has hidden that it is not met, the iteration goes on.
/// Allocates nothing when `work` has been used for this size before.
template <class Precondition, class Stop>
IterationReport conjugate_gradient(const SparseMatrix& matrix, Index n, const double* b, double* x,
                                   Precondition&& precondition, const IterationLimits& limits,
                                   ConjugateGradientWork& work, Stop&& stop) {
    IterationReport report;
    work.reset(n);
    double* r = work.residual.data();
    double* p = work.direction.data();
    double* ap = work.product.data();
    double* z = work.preconditioned.data();
    const double scale = std::sqrt(detail::dot_product(b, b, n));
    if (!(scale > 0.0)) { // b is zero (or not a number, which no x can meet)
        for (Index i = 0; i < n; ++i) x[i] = 0.0;
        report.converged = scale == 0.0;
        return report;
    }
    const auto recompute = [&] {
        multiply(matrix, n, x, ap);
        double sum = 0.0;
        for (Index i = 0; i < n; ++i) {
            r[i] = b[i] - ap[i];
            sum += r[i] * r[i];
        }
        return std::sqrt(sum) / scale;
    };
    report.residual = recompute();
    if (stop(static_cast<const double*>(r), report.residual)) {
        report.converged = true;
        return report;
    }
    double before = 0.0; // r.z of the iteration before; 0 starts again along z
    while (report.iterations < limits.most) {
        double rz = 0.0;
        if constexpr (std::is_convertible_v<decltype(precondition(static_cast<const double*>(r), z)), double>) {
            rz = precondition(static_cast<const double*>(r), z);
        } else {
            precondition(static_cast<const double*>(r), z);
            rz = detail::dot_product(r, z, n);
        }
        if (!(rz > 0.0)) break;
        const double beta = before > 0.0 ? rz / before : 0.0;
        before = rz;
        const double curvature = detail::direction_product(matrix, n, z, beta, p, ap);
        if (!(curvature > 0.0)) break;
        const double alpha = rz / curvature;
        double s0 = 0.0, s1 = 0.0;
        for (Index i = 0; i < n; ++i) {
            x[i] += alpha * p[i];
            const double ri = r[i] - alpha * ap[i];
            r[i] = ri;
            (i % 2 == 0 ? s0 : s1) += ri * ri;
        }
        const double sum = s0 + s1;
        ++report.iterations;
        report.residual = std::sqrt(sum) / scale;
        if (!stop(static_cast<const double*>(r), report.residual)) continue;
        const double seen = report.residual;
        report.residual = recompute();
        if (stop(static_cast<const double*>(r), report.residual)) {
            report.converged = true;
            return report;
        }
        if (report.residual > 2.0 * seen)
            before = 0.0; // the recurrence has drifted: begin again from the true residual
    }
    report.residual = recompute();
    report.converged = stop(static_cast<const double*>(r), report.residual);
    return report;
}

/// The same with limits.tolerance as the only stop.
template <class Precondition>
IterationReport conjugate_gradient(const SparseMatrix& matrix, Index n, const double* b, double* x,
                                   Precondition&& precondition, const IterationLimits& limits,
                                   ConjugateGradientWork& work) {
    return conjugate_gradient(matrix, n, b, x, precondition, limits, work,
                              [&limits](const double*, double relative) { return relative <= limits.tolerance; });
}

} // namespace tepor
