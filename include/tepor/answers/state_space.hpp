#pragma once
// StateSpace: a small linear model in discrete time, to run in a controller.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor {

/// A model of few states that answers like a body around its operating point. All matrices row by row.
///
/// One step: x := A x + B (u - u0), y = y0 + C x + D (u - u0): u is held over the step, y is the answer at its end.
/// For inputs that are constant over each step this is exact in time; what the model leaves out is in `error_bound`.
class StateSpace {
  public:
    Index order = 0;
    Index inputs = 0;
    Index outputs = 0;
    double sample_time = 0.0; ///< [s]
    std::vector<double> A, B, C, D;
    std::vector<double> x0; ///< zero: the operating point
    std::vector<double> u0; ///< inputs at the operating point
    std::vector<double> y0; ///< outputs there
    std::vector<std::string> input_names, output_names, output_units;

    /// The same in continuous time: x' = Ac x + Bc (u - u0).
    std::vector<double> Ac, Bc;

    /// Largest gain over frequency from scaled inputs to scaled outputs, and the bound of the error in the same measure:
    /// the L2 norm of the scaled output error is at most error_bound times that of the scaled input. The part of it that
    /// belongs to the basis is certified at `frequencies` and an estimate between them.
    double peak_gain = 0.0;
    double error_bound = 0.0;
    double basis_error = 0.0;                      ///< largest certified error of the basis at the sampled frequencies
    std::vector<double> frequencies;               ///< [rad/s]
    std::vector<double> input_scale, output_scale; ///< what counts as one
    std::vector<double> dropped;                   ///< Hankel singular values left out
    Index basis_size = 0;
    Index factorisations = 0;
    bool linearised = false; ///< the body is not linear: this is its slope at the operating point, good near it

    /// One step with the inputs held at u (`inputs` values); y receives `outputs` values. Allocates nothing.
    TEPOR_INLINE void advance(const double* u, double* y) noexcept;
    /// The same, the outputs kept in y().
    const std::vector<double>& advance(const std::vector<double>& u) noexcept {
        advance(u.data(), y_.data());
        return y_;
    }
    /// Back to the operating point.
    TEPOR_INLINE void reset();
    [[nodiscard]] const std::vector<double>& state() const noexcept { return x_; }
    [[nodiscard]] const std::vector<double>& y() const noexcept { return y_; }

    /// Steady gain of output i by input j.
    [[nodiscard]] TEPOR_INLINE double steady_gain(Index i, Index j) const;
    /// Real and imaginary part of the gain of output i by input j at the angular frequency w [rad/s], continuous time.
    struct Gain {
        double re = 0.0;
        double im = 0.0;
    };
    [[nodiscard]] TEPOR_INLINE Gain gain(Index i, Index j, double w) const;

    /// C99 source of the model: a struct `NAME_state`, `NAME_reset` and `NAME_advance`. No dependency, constants in hexadecimal
    /// floats, sums in the order of advance(): the same bits where neither is compiled with fused multiply-add.
    /// @throws Error bad_name  the name is no C identifier
    [[nodiscard]] TEPOR_INLINE std::string c_source(const std::string& name) const;
    /// All numbers as CSV: one matrix after the other under its name.
    [[nodiscard]] TEPOR_INLINE std::string csv() const;

  private:
    std::vector<double> x_, next_, y_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/state_space.hpp>
#endif
