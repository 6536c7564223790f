#pragma once
// Step: what an advance did, as plain data a control loop can act on.

#include <tepor/base/config.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/numbers.hpp>

namespace tepor {

namespace detail {
class Marcher;
struct MarchTape;
} // namespace detail

/// How an advance ended.
enum class Verdict : int {
    ok = 0,
    input_kept = 1, ///< completed, but a value given to `set` was NaN or out of range and the last good one was kept
    not_converged = 10,  ///< Newton's method or an iterative solve; the state is that before the step
    bad_law = 11,        ///< an own law returned a value that cannot be used; the state is that before the step
    outside_table = 12,  ///< a table was read outside its range; the state is that before the step
    singular = 13,       ///< the matrix has lost a pivot; the state is that before the step
    step_too_small = 14, ///< Adaptive would have to go below its smallest step; the state is that before the step
    out_of_memory = 15
};

/// Short text of a verdict; never null.
constexpr const char* text_of(Verdict verdict) noexcept {
    switch (verdict) {
    case Verdict::ok: return "completed";
    case Verdict::input_kept: return "completed with the last good input: a value given to set cannot be used";
    case Verdict::not_converged: return "not converged";
    case Verdict::bad_law: return "an own law returned a value that cannot be used";
    case Verdict::outside_table: return "a table was read outside its range";
    case Verdict::singular: return "the matrix is singular";
    case Verdict::step_too_small: return "the step became too small";
    case Verdict::out_of_memory: return "out of memory";
    }
    return "unknown verdict";
}

/// What an advance did. Asks the march it came from: valid until that march advances again or ends.
class [[nodiscard]] Step {
  public:
    Step(detail::Marcher* marcher, Verdict verdict) noexcept : marcher_(marcher), verdict_(verdict) {}

    /// The step was completed and all inputs were used.
    [[nodiscard]] bool ok() const noexcept { return verdict_ == Verdict::ok; }
    /// The state has moved on.
    [[nodiscard]] bool completed() const noexcept { return verdict_ == Verdict::ok || verdict_ == Verdict::input_kept; }
    [[nodiscard]] Verdict verdict() const noexcept { return verdict_; }
    /// Sum of |r| over the free unknowns, of the step mean [W]; computed when asked.
    [[nodiscard]] TEPOR_INLINE double residual() const;
    /// What the step's balance leaves over [W]; computed when asked.
    [[nodiscard]] TEPOR_INLINE double left_over() const;
    /// The step, or a piece of it between events, was shorter than March::sensible_step(): with consistent capacity temperatures
    /// may have swung beyond their neighbours after a jump.
    [[nodiscard]] TEPOR_INLINE bool below_minimum() const noexcept;
    /// Newton passes of the step (0 for linear bodies).
    [[nodiscard]] TEPOR_INLINE Index passes() const noexcept;
    /// Throws the Error a step that was not completed stands for, with name, cell, place and time; else does nothing.
    TEPOR_INLINE void require() const;

  private:
    detail::Marcher* marcher_;
    Verdict verdict_;
};

} // namespace tepor
