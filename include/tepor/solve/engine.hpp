#pragma once
// Engine: a factor (or multigrid hierarchy) and the work vectors of a solve, and the pool a body keeps of them.

#include <memory>
#include <mutex>
#include <tepor/base/config.hpp>
#include <tepor/body/assemble.hpp>
#include <tepor/body/body.hpp>
#include <tepor/body/model.hpp>
#include <tepor/linear/banded.hpp>
#include <tepor/linear/concept.hpp>
#include <tepor/linear/plane_solver.hpp>
#include <tepor/linear/tridiagonal.hpp>
#include <tepor/solve/line_sweep.hpp>
#include <vector>

namespace tepor {

/// How many right-hand sides a factor will meet: what tells a direct from an iterative solve; see choose_solver().
enum class Purpose { one_solve, many_solves };

/// The linear algebra of one model: matrix over all unknowns, factor of its free block, work vectors. One thread at a time.
class Engine {
  public:
    TEPOR_INLINE explicit Engine(std::shared_ptr<const Model> model);

    /// Decomposes the free block of `matrix` as it stands.
    /// @return false when it is singular; see singular_unknown()
    [[nodiscard]] bool factor(Purpose purpose) {
        return factor(purpose == Purpose::one_solve ? Index{1} : Index{1000});
    }
    /// The same when the number of solves to come is known. An iterative solver that meets more of them than it was made for
    /// gives way to a factor where that pays.
    [[nodiscard]] TEPOR_INLINE bool factor(Index solves);

    /// Symmetric matrices go to this solver from now on (null: to the library's own). It must outlive its use.
    void use(AnySolver* outside) noexcept {
        outside_ = outside;
        outside_knows_ = false;
    }

    /// Iterative solves and their set-up use this many threads, the caller's included; the results keep the same bits.
    void use_threads(int threads) {
        threads_ = threads;
        if (plane_) plane_->use_threads(threads);
    }

    /// b := A^-1 b for the free unknowns, in place; with a direct factor it allocates nothing.
    /// `limit` is the residual sum of |r| an iterative solve has to reach [W]; direct ones ignore it.
    /// @return false when an iteration stalled
    [[nodiscard]] TEPOR_INLINE bool solve(double* b, double limit);
    /// The same with the transposed matrix.
    [[nodiscard]] TEPOR_INLINE bool solve_transposed(double* b, double limit);

    [[nodiscard]] Id singular_unknown() const noexcept { return singular_; }
    [[nodiscard]] const Model& model() const noexcept { return *model_; }
    [[nodiscard]] const std::shared_ptr<const Model>& shared_model() const noexcept { return model_; }
    /// The factor in use is exact up to rounding.
    [[nodiscard]] bool direct() const noexcept {
        return method_ == Method::plane ? plane_->direct() : method_ != Method::outside;
    }
    /// Iterations of the last solve; 0 for direct ones. An iteration that proves slow gives way to a factor, for this solve and
    /// those after it.
    [[nodiscard]] Index iterations() const noexcept { return method_ == Method::plane ? plane_->iterations() : 0; }

    SparseMatrix matrix;
    /// A solver may drop entries of `matrix` that are zero up to rounding, instead of working on a copy without them. For those
    /// who form it by assemble(), which gives it back the model's pattern.
    bool may_drop_zeros = false;
    std::vector<double> residual; ///< all unknowns
    std::vector<double> step;     ///< all unknowns, zero where prescribed
    std::vector<double> product;  ///< all unknowns, scratch
    Workspace work;

    /// Values that entered the matrix when it was factored, for reuse; empty when it may not be reused.
    std::vector<double> key;

    /// Whether the factor can serve other matrices by update().
    [[nodiscard]] bool updatable() const noexcept {
        return method_ == Method::plane && plane_->direct() && matrix.symmetric();
    }
    /// Before another matrix is put in the place of the factored one: notes its values.
    TEPOR_INLINE void keep_base();
    /// Makes the factor serve `matrix` as it stands; see PlaneSolver::update.
    [[nodiscard]] Index update(Index most) { return plane_->update(most); }
    /// Back to the matrix that was factored and its key.
    TEPOR_INLINE void restore_base();

  private:
    enum class Method { none, outside, tridiagonal, banded, banded_lu, plane };

    [[nodiscard]] TEPOR_INLINE bool factor_line();

    std::shared_ptr<const Model> model_;
    Method method_ = Method::none;
    AnySolver* outside_ = nullptr;
    bool outside_knows_ = false; // the pattern
    Id singular_ = -1;
    Tridiagonal tridiagonal_;
    BandedCholesky banded_;
    BandedLu banded_lu_;
    std::unique_ptr<PlaneSolver> plane_;
    int threads_ = 1;
    std::vector<double> base_key_; // of the factored matrix, where updates are made
};

/// The values that enter the matrix, in slot order: the key an engine is reused by.
[[nodiscard]] TEPOR_INLINE std::vector<double> matrix_key(const Model& model, const Values& values);

/// A few engines a body keeps between steady solves, guarded: a const Body is safe from many threads, and setting a value
/// back finds its factor again.
class EnginePool final : public Body::Store {
  public:
    /// An engine factored for this key if there is one, else any idle or a new one.
    [[nodiscard]] TEPOR_INLINE std::unique_ptr<Engine> borrow(const std::shared_ptr<const Model>& model,
                                                              const std::vector<double>& key);
    /// An engine whose factor may serve this key by a low-rank update, since few values differ; null where there is none, or
    /// where a factor for the key itself is at hand.
    [[nodiscard]] TEPOR_INLINE std::unique_ptr<Engine> borrow_near(const std::vector<double>& key);
    /// Rows an update may have now. Each refusal raises it: a sweep that goes on is worth the solves of a wider update.
    [[nodiscard]] TEPOR_INLINE Index update_rows(Index unknowns);
    /// An update to this key would have had too many rows: `rows`.
    TEPOR_INLINE void refused(const std::vector<double>& from, const std::vector<double>& key, Index rows,
                              Index unknowns);
    /// Gives it back for reuse.
    TEPOR_INLINE void give_back(std::unique_ptr<Engine> engine);

    /// A sweep for a model that is a line; null for others.
    [[nodiscard]] TEPOR_INLINE std::unique_ptr<LineSweep> borrow_sweep(const std::shared_ptr<const Model>& model);
    TEPOR_INLINE void give_back(std::unique_ptr<LineSweep> sweep);

  private:
    static constexpr std::size_t most = 4;
    std::mutex guard_;
    std::vector<std::unique_ptr<Engine>> idle_; // most recent last
    std::vector<std::unique_ptr<LineSweep>> idle_sweeps_;
    std::shared_ptr<const LinePlan> plan_;
    bool planned_ = false;
    Index refusals_ = 0;
    Index mixed_refusals_ = 0;      // of keys with several differences at once
    std::vector<std::size_t> wide_; // places in the key whose values touch more rows than an update can have
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/engine.hpp>
#include <tepor/solve/impl/engine_update.hpp>
#endif
