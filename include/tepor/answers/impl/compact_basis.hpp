#pragma once
// The basis of a compact model: solves at real shifts, each placed where the certified error is largest.

#include <complex>
#include <tepor/answers/impl/compact_plant.hpp>
#include <tepor/answers/impl/small_dense.hpp>

namespace tepor::detail {

/// V with V^T K V = I and the Galerkin pair (I, Mr = V^T M V) on it.
///
/// With Y = K^-1 M V the residual of the basis model at the frequency w, as a Riesz vector, is -i w (Y - V Mr) x: B and C lie
/// in K V, so its part in the basis is zero. Its energy norm is w |R x| with R^T R the Gram matrix of Y - V Mr, formed from that
/// small difference itself. The error of the gain is at most the product of the norms of both sides.
class CompactBasis {
  public:
    explicit CompactBasis(CompactPlant& plant) : plant_(plant), K_(plant.factor(0.0)) {}

    std::vector<double> frequencies; ///< where the error is certified
    std::vector<double> errors;      ///< there
    double peak = 0.0;               ///< largest gain there, feedthrough included

    [[nodiscard]] std::size_t size() const noexcept { return V_.size(); }
    [[nodiscard]] double worst() const {
        double w = 0.0;
        for (const double e : errors) w = std::max(w, e);
        return w;
    }

    /// Grows the basis until the certified error is below `share` of the peak gain or `most` factorisations are used.
    void build(double highest, double share, Index most) {
        add_shift(K_.get());
        analyse();
        make_frequencies(highest);
        certify();
        std::vector<double> used;
        while (worst() > share * peak && plant_.factorisations < most) {
            const double shift = next_shift(used);
            used.push_back(shift);
            const std::unique_ptr<Engine> engine = plant_.factor(shift);
            const std::size_t before = size();
            add_shift(engine.get());
            if (size() == before) break;
            analyse();
            certify();
        }
    }

    // Diagonal form of the Galerkin pair: times[i] x_i' = -x_i + b_i u, y = sum c_i x_i + D u; times [s].
    std::vector<double> times;
    Dense b; ///< modes x inputs
    Dense c; ///< outputs x modes

  private:
    [[nodiscard]] double dot_K(const std::vector<double>& a, const std::vector<double>& Kb) const {
        double s = 0.0;
        for (std::size_t u = 0; u < a.size(); ++u) s += a[u] * Kb[u];
        return s;
    }

    /// (K + s M)^-1 of all inputs and outputs, made K-orthonormal against what is there, twice.
    void add_shift(Engine* engine) {
        for (const auto* side : {&plant_.B, &plant_.C})
            for (const std::vector<double>& load : *side) {
                std::vector<double> v = load;
                CompactPlant::solve(*engine, v);
                append(std::move(v));
            }
    }

    void append(std::vector<double> v) {
        const Index n = static_cast<Index>(v.size());
        std::vector<double> Kv(v.size());
        multiply(plant_.K, n, v.data(), Kv.data());
        const double start = std::sqrt(std::max(dot_K(v, Kv), 0.0));
        if (!(start > 0.0)) return;
        for (int pass = 0; pass < 2; ++pass)
            for (std::size_t k = 0; k < V_.size(); ++k) {
                const double f = dot_K(V_[k], Kv);
                for (std::size_t u = 0; u < v.size(); ++u) {
                    v[u] -= f * V_[k][u];
                    Kv[u] -= f * KV_[k][u];
                }
            }
        multiply(plant_.K, n, v.data(), Kv.data());
        const double left = std::sqrt(std::max(dot_K(v, Kv), 0.0));
        if (!(left > 1e-11 * start)) return;
        for (std::size_t u = 0; u < v.size(); ++u) {
            v[u] /= left;
            Kv[u] /= left;
        }
        std::vector<double> Mv(v.size());
        multiply(plant_.M, n, v.data(), Mv.data());
        std::vector<double> y = Mv;
        CompactPlant::solve(*K_, y);
        V_.push_back(std::move(v));
        KV_.push_back(std::move(Kv));
        MV_.push_back(std::move(Mv));
        Y_.push_back(std::move(y));
    }

    /// Mr, its modes, and the Gram matrix of the residual vectors.
    void analyse() {
        const std::size_t m = V_.size();
        const std::size_t n = plant_.size();
        const std::size_t old = mass_.rows;
        Dense mass(m, m);
        for (std::size_t i = 0; i < m; ++i)
            for (std::size_t j = 0; j <= i; ++j) {
                if (i < old) {
                    mass(i, j) = mass_(i, j);
                } else {
                    double s = 0.0;
                    for (std::size_t u = 0; u < n; ++u) s += V_[j][u] * MV_[i][u];
                    mass(i, j) = s;
                }
                mass(j, i) = mass(i, j);
            }
        mass_ = mass;
        // Y - V Mr, brought up to date: old columns lose their parts along the new vectors only
        for (std::size_t j = 0; j < m; ++j)
            for (std::size_t k = j < old ? old : 0; k < m; ++k) {
                const double f = mass_(k, j);
                if (f == 0.0) continue;
                for (std::size_t u = 0; u < n; ++u) Y_[j][u] -= f * V_[k][u];
            }
        // once more: what rounding left along the basis
        std::vector<std::vector<double>> KY(m);
        for (std::size_t j = 0; j < m; ++j) {
            for (std::size_t k = j < old ? old : 0; k < m; ++k) {
                const double f = dot_K(Y_[j], KV_[k]);
                for (std::size_t u = 0; u < n; ++u) Y_[j][u] -= f * V_[k][u];
            }
            KY[j].resize(n);
            multiply(plant_.K, static_cast<Index>(n), Y_[j].data(), KY[j].data());
        }
        Dense gram(m, m);
        for (std::size_t i = 0; i < m; ++i)
            for (std::size_t j = 0; j <= i; ++j) gram(i, j) = gram(j, i) = dot_K(Y_[i], KY[j]);
        std::vector<double> modes;
        symmetric_eigen(mass_.data, m, times, modes);
        Dense Q(m, m);
        Q.data = modes;
        gram_ = product(product(transposed(Q), gram), Q);
        b = Dense(m, plant_.B.size());
        c = Dense(plant_.C.size(), m);
        const auto project = [&](const std::vector<double>& load) {
            std::vector<double> along(m, 0.0);
            for (std::size_t k = 0; k < m; ++k)
                for (std::size_t u = 0; u < n; ++u) along[k] += V_[k][u] * load[u];
            std::vector<double> out(m, 0.0);
            for (std::size_t mode = 0; mode < m; ++mode)
                for (std::size_t k = 0; k < m; ++k) out[mode] += along[k] * Q(k, mode);
            return out;
        };
        for (std::size_t j = 0; j < plant_.B.size(); ++j) {
            const std::vector<double> v = project(plant_.B[j]);
            for (std::size_t i = 0; i < m; ++i) b(i, j) = v[i];
        }
        for (std::size_t j = 0; j < plant_.C.size(); ++j) {
            const std::vector<double> v = project(plant_.C[j]);
            for (std::size_t i = 0; i < m; ++i) c(j, i) = v[i];
        }
    }

    void make_frequencies(double highest) {
        double slowest = 0.0;
        for (const double t : times) slowest = std::max(slowest, t);
        const double low = 0.01 / slowest;
        const double high = 10.0 * std::max(highest, 2.0 / slowest);
        constexpr int count = 61;
        frequencies = {0.0};
        for (int k = 0; k < count; ++k) frequencies.push_back(low * std::pow(high / low, k / (count - 1.0)));
        highest_ = std::max(highest, 2.0 / slowest);
        lowest_ = 1.0 / slowest;
    }

    /// Spectral norm of a complex matrix (rows x cols, row by row) through the eigenvalues of its real Gram matrix.
    static double spectral(const std::vector<std::complex<double>>& a, std::size_t rows, std::size_t cols) {
        // A^H A is Hermitian: [[re, -im], [im, re]] has its eigenvalues twice
        std::vector<double> G(4 * cols * cols, 0.0);
        for (std::size_t i = 0; i < cols; ++i)
            for (std::size_t j = 0; j < cols; ++j) {
                std::complex<double> s = 0.0;
                for (std::size_t r = 0; r < rows; ++r) s += std::conj(a[r * cols + i]) * a[r * cols + j];
                G[i * 2 * cols + j] = G[(cols + i) * 2 * cols + cols + j] = s.real();
                G[i * 2 * cols + cols + j] = -s.imag();
                G[(cols + i) * 2 * cols + j] = s.imag();
            }
        std::vector<double> value;
        std::vector<double> vector;
        symmetric_eigen(G, 2 * cols, value, vector);
        double largest = 0.0;
        for (const double v : value) largest = std::max(largest, v);
        return std::sqrt(largest);
    }

    /// Norm of w R x for the loads `side` (modes x count), x = (1 + i w times)^-1 side.
    [[nodiscard]] double residual_norm(double w, const Dense& side, bool by_rows) const {
        const std::size_t m = times.size();
        const std::size_t count = by_rows ? side.rows : side.cols;
        std::vector<std::complex<double>> x(m * count);
        for (std::size_t i = 0; i < m; ++i)
            for (std::size_t j = 0; j < count; ++j)
                x[i * count + j] = (by_rows ? side(j, i) : side(i, j)) / std::complex<double>(1.0, w * times[i]);
        // X^H gram X
        std::vector<double> G(4 * count * count, 0.0);
        for (std::size_t a = 0; a < count; ++a) {
            std::vector<std::complex<double>> g(m);
            for (std::size_t i = 0; i < m; ++i)
                for (std::size_t k = 0; k < m; ++k) g[i] += gram_(i, k) * x[k * count + a];
            for (std::size_t e = 0; e < count; ++e) {
                std::complex<double> s = 0.0;
                for (std::size_t i = 0; i < m; ++i) s += std::conj(x[i * count + e]) * g[i];
                G[e * 2 * count + a] = G[(count + e) * 2 * count + count + a] = s.real();
                G[e * 2 * count + count + a] = -s.imag();
                G[(count + e) * 2 * count + a] = s.imag();
            }
        }
        std::vector<double> value;
        std::vector<double> vector;
        symmetric_eigen(G, 2 * count, value, vector);
        double largest = 0.0;
        for (const double v : value) largest = std::max(largest, v);
        return w * std::sqrt(largest);
    }

    void certify() {
        const std::size_t m = times.size();
        const std::size_t p = plant_.C.size();
        const std::size_t q = plant_.B.size();
        errors.assign(frequencies.size(), 0.0);
        peak = 0.0;
        for (std::size_t k = 0; k < frequencies.size(); ++k) {
            const double w = frequencies[k];
            std::vector<std::complex<double>> H(p * q);
            for (std::size_t i = 0; i < p; ++i)
                for (std::size_t j = 0; j < q; ++j) {
                    std::complex<double> s = plant_.D(i, j);
                    for (std::size_t e = 0; e < m; ++e)
                        s += c(i, e) * b(e, j) / std::complex<double>(1.0, w * times[e]);
                    H[i * q + j] = s;
                }
            peak = std::max(peak, spectral(H, p, q));
            errors[k] = residual_norm(w, b, false) * residual_norm(w, c, true);
        }
    }

    /// Where the certified error is largest, kept away from shifts that were used.
    [[nodiscard]] double next_shift(const std::vector<double>& used) const {
        double best = 0.0;
        double at = highest_;
        for (std::size_t k = 1; k < frequencies.size(); ++k) {
            const double w = frequencies[k];
            bool near = false;
            for (const double s : used) near = near || std::abs(std::log(w / s)) < 0.2;
            if (near || errors[k] <= best) continue;
            best = errors[k];
            at = w;
        }
        return at;
    }

    CompactPlant& plant_;
    std::unique_ptr<Engine> K_;
    std::vector<std::vector<double>> V_, KV_, MV_, Y_;
    Dense mass_;
    Dense gram_;
    double highest_ = 0.0;
    double lowest_ = 0.0;
};

} // namespace tepor::detail
