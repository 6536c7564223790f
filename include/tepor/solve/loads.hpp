#pragma once
// The right-hand side of a linear body as unit vectors times present values, so that setting an input costs one axpy.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/body/assemble.hpp>
#include <tepor/body/model.hpp>
#include <tepor/field/functional.hpp>
#include <vector>

namespace tepor {

/// The load F of K T = F: a constant part, one unit vector per input Parameter and per schedule or function of time, and what
/// is left (laws of place and time, laws with parameters), which is integrated again when it may have changed.
class Loads {
  public:
    TEPOR_INLINE Loads(std::shared_ptr<const Model> model, const Values& values, Workspace& work);

    /// Integrates all unit vectors, after a value in the matrix has changed (film coefficients stand in front of fluid temperatures).
    TEPOR_INLINE void rebuild(const Values& values, Workspace& work);

    /// Brings F in line with the values and the span. Allocates nothing; constant cost unless laws have to be sampled.
    [[nodiscard]] TEPOR_INLINE Fault update(const Values& values, Workspace& work, TimeSpan span);

    /// A slot has a new value.
    void changed() noexcept { changed_ = true; }

    /// F [W], heat that enters at each unknown.
    [[nodiscard]] const double* vector() const noexcept { return sum_.data(); }

    /// The slot enters through unit vectors alone.
    [[nodiscard]] TEPOR_INLINE bool plain(Id slot) const noexcept;

    /// Functions of time are among the loads, whose step means are not known beforehand.
    [[nodiscard]] bool sampled_in_time() const noexcept { return sampled_in_time_; }

  private:
    struct Unit {
        const Coefficient* coefficient = nullptr;
        Id slot = -1; ///< -1: a schedule or function of time
        SparseRow row;
        double value = 0.0;          ///< what the sum holds
        std::vector<double> dense{}; ///< the row where it fills most of the body
    };
    TEPOR_INLINE void classify();
    TEPOR_INLINE void integrate(const Values& values, Workspace& work, const std::vector<const Coefficient*>& loads,
                                bool unit, const Restriction* only, TimeSpan span, double* out);
    [[nodiscard]] TEPOR_INLINE Restriction where(const std::vector<const Coefficient*>& loads) const;

    std::shared_ptr<const Model> model_;
    std::vector<const Coefficient*> constants_;
    std::vector<Unit> units_;
    std::vector<const Coefficient*> sampled_;
    Restriction sampled_where_;
    bool sampled_in_time_ = false;
    bool changed_ = true;
    bool fresh_ = true;
    std::vector<double> constant_, from_samples_, sum_, cold_;
    Fault fault_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/loads.hpp>
#endif
