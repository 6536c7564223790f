#pragma once
// Algebraic multigrid by smoothed aggregation: a preconditioner for symmetric positive definite systems.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/linear/detail/crew.hpp>
#include <tepor/linear/detail/multigrid_level.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor {

namespace detail {
struct MultigridSetup; // in impl/multigrid.hpp
}

/// How Multigrid coarsens.
struct MultigridOptions {
    double strength = 0.08;     ///< a_ij is strong when |a_ij| >= strength sqrt(a_ii a_jj)
    double low_strength = 0.01; ///< the same on levels under 1,000 rows and where coarsening would stall
    Index coarsest = 150;       ///< levels up to this many rows are solved by dense Cholesky
    int threads = 1;            ///< of set-up and cycle, the caller's included; the results keep the same bits
};

/// One V cycle of smoothed aggregation as a symmetric positive definite preconditioner for conjugate_gradient().
///
/// The cycle runs on matrices scaled to a unit diagonal, in single precision on the two largest levels: one forward Gauss-Seidel sweep going down,
/// one backward sweep coming up, so that it is symmetric. Results are the same bit for bit on every run.
/// Source: Vanek, Mandel & Brezina (1996). Memory about 80 bytes per unknown of a mesh of linear triangles.
class Multigrid {
  public:
    Multigrid() = default;
    explicit Multigrid(const MultigridOptions& options)
        : options_(options), crew_(detail::make_crew(options.threads)) {}

    /// Builds the levels for the leading n x n block of a symmetric matrix; only its lower triangle is read, and it need not
    /// outlive the call.
    /// @return false when a diagonal entry is not positive or the coarsest level is singular; see singular_row()
    /// Cost about 20 products of the matrix with a vector.
    [[nodiscard]] TEPOR_INLINE bool setup(const SparseMatrix& matrix, Index n);

    /// z := B r with B close to A^-1, symmetric and positive definite. n values each; z may be r. Allocates nothing.
    /// @return r.z
    /// Uses work space of this object: one thread at a time.
    TEPOR_INLINE double cycle(const double* r, double* z) noexcept;

    [[nodiscard]] Index size() const noexcept { return size_; }
    [[nodiscard]] Index levels() const noexcept {
        return static_cast<Index>(large_.size() + small_.size()) + (coarse_size_ > 0 ? 1 : 0);
    }
    /// Stored entries of all levels over those of the first.
    [[nodiscard]] double complexity() const noexcept { return complexity_; }
    /// An unknown of the singular part found by setup(), or -1.
    [[nodiscard]] Index singular_row() const noexcept { return singular_row_; }

    /// Set-up and cycles from now on use this many threads, the caller's included; levels already built stay.
    void use_threads(int threads) {
        if (threads == options_.threads) return;
        crew_ = detail::make_crew(threads);
        options_.threads = threads;
    }

    /// The helping threads, to be shared with conjugate_gradient(); null with one thread.
    [[nodiscard]] const std::shared_ptr<detail::Crew>& crew() const noexcept { return crew_; }

  private:
    template <class Level>
    Index add_level(std::vector<Level>& levels, const SparseMatrix& a, Index rows, detail::MultigridSetup& work,
                    SparseMatrix& next);
    template <class Level, class Coarse>
    void pass(Level& level, std::size_t depth, Coarse* coarse) noexcept;
    TEPOR_INLINE Index factor_coarsest(const SparseMatrix& matrix, Index n, const detail::Buffer<double>& scale);
    TEPOR_INLINE void solve_coarsest() noexcept;
    TEPOR_INLINE void descend(std::size_t depth) noexcept;
    TEPOR_INLINE void descend_twice(std::size_t depth) noexcept;

    MultigridOptions options_;
    std::shared_ptr<detail::Crew> crew_;
    Index size_ = 0;
    Index coarse_size_ = 0;
    Index singular_row_ = -1;
    double complexity_ = 0.0;
    detail::Buffer<float> scale_;                      // one over the root of the diagonal
    std::vector<detail::MultigridLevel<float>> large_; // the first two levels
    std::vector<detail::MultigridLevel<double>> small_;
    std::vector<double> coarse_;   // dense Cholesky factor by rows, the diagonal inverted
    std::vector<double> coarse_x_; // right-hand side, then solution
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/multigrid.hpp>
#endif
