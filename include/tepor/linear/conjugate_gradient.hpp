#pragma once
// Preconditioned conjugate gradients for symmetric positive definite systems, in double precision.

#include <cmath>
#include <tepor/base/numbers.hpp>
#include <tepor/linear/detail/buffer.hpp>
#include <tepor/linear/detail/crew.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <type_traits>

namespace tepor {

/// When an iteration stops.
struct IterationLimits {
    double tolerance = 1e-8; ///< of the residual's Euclidean norm, relative to that of the right-hand side
    Index most = 200;        ///< iterations
    Index patience = 40;     ///< iterations without a new least residual until no more progress is expected
    Index trial = 0; ///< after this many iterations the residual has to be below trial_residual, or the iteration
                     ///< ends: too slow for its purpose; 0: no such look
    double trial_residual = 1e-6;
};

/// What an iteration did.
struct IterationReport {
    bool converged = false;
    bool stagnated = false; ///< ended because the residual no longer fell, usually at the level of rounding
    bool slow = false;      ///< ended by IterationLimits::trial
    Index iterations = 0;
    double residual = 0.0; ///< |b - A x| / |b|, recomputed from x at the end (Euclidean norm); 0 when b is zero
};

/// Work vectors of conjugate_gradient(); kept between solves so that these allocate nothing. With more than one thread the
/// results keep the same bits: sums run over slices fixed by the size alone.
class ConjugateGradientWork {
  public:
    explicit ConjugateGradientWork(int threads = 1) : crew(detail::make_crew(threads)) {}

    void reset(Index n) {
        residual.reset(n);
        direction.reset(n);
        product.reset(n);
        preconditioned.reset(n);
    }
    detail::Buffer<double> residual, direction, product, preconditioned;
    detail::Buffer<double> spill; ///< what slices add to rows before them
    std::shared_ptr<detail::Crew> crew;
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

/// The product of conjugate gradients, slice by slice. A slice owns its rows of the result; what it adds to rows before them
/// goes to a place of its own first.
class SlicedProduct {
  public:
    SlicedProduct(const SparseMatrix& matrix, Index n, Buffer<double>& spill)
        : start_(matrix.start.data()), column_(matrix.column.data()), value_(matrix.lower.data()), slices_{n} {
        Index room = 0;
        for (Index k = 0; k < slices_.count(); ++k) {
            const Index begin = slices_.begin(k);
            lowest_[k] = begin;
            for (Index i = begin; i < slices_.end(k); ++i) { // columns ascend: the first entry reaches lowest
                lowest_[k] = column_[start_[i]] < lowest_[k] ? column_[start_[i]] : lowest_[k];
            }
            offset_[k] = room;
            room += begin - lowest_[k];
        }
        spill.reserve(room);
        spill_ = spill.data();
    }

    /// p := z + beta p, y := A p; returns p.y. Without a crew all in one pass, since a row needs no p beyond its own.
    double operator()(Crew* crew, const double* z, double beta, double* p, double* y) const noexcept {
        if (crew) {
            const auto advance = [&](Index k) {
                for (Index i = slices_.begin(k); i < slices_.end(k); ++i) p[i] = next(z, beta, p, i);
            };
            run_tasks(crew, slices_.count(), advance);
        }
        double sum[Slices::most];
        const auto multiply = [&](Index k) {
            sum[k] = crew ? slice<false>(k, z, beta, p, y) : slice<true>(k, z, beta, p, y);
        };
        run_tasks(crew, slices_.count(), multiply);
        double all = 0.0;
        for (Index k = 0; k < slices_.count(); ++k) {
            const double* from = spill_ + offset_[k];
            for (Index j = lowest_[k]; j < slices_.begin(k); ++j) y[j] += *from++;
            all += sum[k];
        }
        return all;
    }

  private:
    static double next(const double* z, double beta, const double* p, Index i) noexcept {
        return beta == 0.0 ? z[i] : z[i] + beta * p[i]; // the first p need not be numbers
    }

    template <bool Advance>
    double slice(Index k, const double* z, double beta, double* p, double* y) const noexcept {
        const Index begin = slices_.begin(k), end = slices_.end(k);
        double* early = spill_ + (offset_[k] - lowest_[k]);
        for (Index j = lowest_[k]; j < begin; ++j) early[j] = 0.0;
        double even = 0.0, odd = 0.0;
        for (Index i = begin; i < end; ++i) {
            const Index last = start_[i + 1] - 1;
            const double pi = Advance ? next(z, beta, p, i) : p[i];
            double gathered = 0.0;
            Index e = start_[i];
            for (; e < last && column_[e] < begin; ++e) {
                gathered += value_[e] * p[column_[e]];
                early[column_[e]] += value_[e] * pi;
            }
            for (; e < last; ++e) {
                gathered += value_[e] * p[column_[e]];
                y[column_[e]] += value_[e] * pi;
            }
            const double own = value_[last] * pi;
            if (Advance) p[i] = pi;
            y[i] = gathered + own;
            (i % 2 == 0 ? even : odd) += pi * (2.0 * gathered + own);
        }
        return even + odd;
    }

    const Id* start_;
    const Id* column_;
    const double* value_;
    Slices slices_;
    double* spill_ = nullptr;
    Index lowest_[Slices::most] = {};
    Index offset_[Slices::most] = {};
};

} // namespace detail

/// Solves A x = b for the leading n x n block, from the given x.
///
/// @param precondition  called as precondition(r, z): z := B r, B symmetric positive definite, such as Multigrid::cycle; may
///                      return r.z, which is then not computed again
/// @param stop          called as stop(residual, relative) after each iteration with the n residuals b - A x and their
///                      norm relative to b; true ends the iteration as converged (in place of limits.tolerance)
/// Not converged: the iterations ran out, or the matrix or B proved not to be positive definite. x is then the last iterate.
/// After a stop the residual is recomputed from x; when rounding has hidden that it is not met, the iteration goes on, until
/// three such looks in a row have found no residual under nine tenths of the least: what is asked then lies below rounding.
/// Equally when the residual has had no new least for limits.patience iterations.
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
    detail::Crew* const crew = work.crew.get();
    const detail::SlicedProduct product(matrix, n, work.spill);
    const detail::Slices slices{n};
    double before = 0.0; // r.z of the iteration before; 0 starts again along z
    double least = report.residual, least_true = report.residual;
    Index waited = 0;
    int vain_looks = 0;
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
        const double curvature = product(crew, z, beta, p, ap);
        if (!(curvature > 0.0)) break;
        const double alpha = rz / curvature;
        double squares[detail::Slices::most];
        const auto step = [&](Index k) {
            double even = 0.0, odd = 0.0;
            for (Index i = slices.begin(k); i < slices.end(k); ++i) {
                x[i] += alpha * p[i];
                const double ri = r[i] - alpha * ap[i];
                r[i] = ri;
                (i % 2 == 0 ? even : odd) += ri * ri;
            }
            squares[k] = even + odd;
        };
        detail::run_tasks(crew, slices.count(), step);
        double sum = 0.0;
        for (Index k = 0; k < slices.count(); ++k) sum += squares[k];
        ++report.iterations;
        report.residual = std::sqrt(sum) / scale;
        waited = report.residual < least ? 0 : waited + 1;
        least = report.residual < least ? report.residual : least;
        if (waited >= limits.patience) {
            report.stagnated = true;
            break;
        }
        if (report.iterations == limits.trial && report.residual > limits.trial_residual) {
            report.slow = true;
            break;
        }
        if (!stop(static_cast<const double*>(r), report.residual)) continue;
        const double seen = report.residual;
        report.residual = recompute();
        if (stop(static_cast<const double*>(r), report.residual)) {
            report.converged = true;
            return report;
        }
        vain_looks = report.residual < 0.9 * least_true ? 0 : vain_looks + 1;
        least_true = report.residual < least_true ? report.residual : least_true;
        if (vain_looks >= 3) {
            report.stagnated = true;
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
