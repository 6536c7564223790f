#pragma once
// Small symmetric matrices, row by row: eigenvalues by Jacobi's rotations, and what follows from them.

#include <cmath>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor::detail {

/// Eigenvalues of a symmetric n x n matrix into `value`, eigenvectors as columns of `vector` (n x n, row by row).
/// Cyclic Jacobi rotations (Jacobi 1846): small eigenvalues of graded matrices keep their digits.
inline void symmetric_eigen(std::vector<double> A, std::size_t n, std::vector<double>& value,
                            std::vector<double>& vector) {
    vector.assign(n * n, 0.0);
    for (std::size_t i = 0; i < n; ++i) vector[i * n + i] = 1.0;
    for (int sweep = 0; sweep < 60; ++sweep) {
        bool rotated = false;
        for (std::size_t p = 0; p + 1 < n; ++p)
            for (std::size_t q = p + 1; q < n; ++q) {
                const double apq = A[p * n + q];
                if (std::abs(apq) <= 1e-17 * std::sqrt(std::abs(A[p * n + p] * A[q * n + q])) || apq == 0.0) continue;
                rotated = true;
                const double theta = (A[q * n + q] - A[p * n + p]) / (2.0 * apq);
                const double t = (theta >= 0.0 ? 1.0 : -1.0) / (std::abs(theta) + std::sqrt(theta * theta + 1.0));
                const double c = 1.0 / std::sqrt(t * t + 1.0);
                const double s = t * c;
                for (std::size_t k = 0; k < n; ++k) {
                    const double x = A[k * n + p];
                    const double y = A[k * n + q];
                    A[k * n + p] = c * x - s * y;
                    A[k * n + q] = s * x + c * y;
                }
                for (std::size_t k = 0; k < n; ++k) {
                    const double x = A[p * n + k];
                    const double y = A[q * n + k];
                    A[p * n + k] = c * x - s * y;
                    A[q * n + k] = s * x + c * y;
                }
                A[p * n + q] = A[q * n + p] = 0.0;
                for (std::size_t k = 0; k < n; ++k) {
                    const double x = vector[k * n + p];
                    const double y = vector[k * n + q];
                    vector[k * n + p] = c * x - s * y;
                    vector[k * n + q] = s * x + c * y;
                }
            }
        if (!rotated) break;
    }
    value.resize(n);
    for (std::size_t i = 0; i < n; ++i) value[i] = A[i * n + i];
}

/// x := A^-1 x for a symmetric positive definite A (n x n) by Cholesky; false when it is not.
inline bool solve_definite(std::vector<double> A, std::vector<double>& x) {
    const std::size_t n = x.size();
    for (std::size_t j = 0; j < n; ++j) {
        for (std::size_t k = 0; k < j; ++k)
            for (std::size_t i = j; i < n; ++i) A[i * n + j] -= A[i * n + k] * A[j * n + k];
        if (!(A[j * n + j] > 0.0)) return false;
        const double d = std::sqrt(A[j * n + j]);
        for (std::size_t i = j; i < n; ++i) A[i * n + j] /= d;
    }
    for (std::size_t i = 0; i < n; ++i) {
        for (std::size_t k = 0; k < i; ++k) x[i] -= A[i * n + k] * x[k];
        x[i] /= A[i * n + i];
    }
    for (std::size_t i = n; i-- > 0;) {
        for (std::size_t k = i + 1; k < n; ++k) x[i] -= A[k * n + i] * x[k];
        x[i] /= A[i * n + i];
    }
    return true;
}

/// A^-1 of a symmetric positive definite matrix; false when it is not.
inline bool invert_definite(const std::vector<double>& A, std::size_t n, std::vector<double>& inverse) {
    inverse.assign(n * n, 0.0);
    for (std::size_t j = 0; j < n; ++j) {
        std::vector<double> column(n, 0.0);
        column[j] = 1.0;
        if (!solve_definite(A, column)) return false;
        for (std::size_t i = 0; i < n; ++i) inverse[i * n + j] = column[i];
    }
    return true;
}

} // namespace tepor::detail
