#pragma once
// Theta: marching with a fixed step.

#include <tepor/solve/capacity.hpp>

namespace tepor {

/// One-step method with a fixed step: theta = 1/2 is of order 2 in time, theta = 1 (backward Euler) of order 1 and the most
/// robust. A step's right-hand side is taken at theta T_new + (1 - theta) T_old, its data as means over the step.
///
/// With `damped_start` the first two steps, and the first two after a declared event (a jump of a schedule), are each replaced by
/// two backward Euler half steps (Rannacher 1984), which share the matrix of theta = 1/2: without them theta = 1/2 rings after a
/// jump. Setting an input never starts them. Nothing is damped at theta = 1.
///
/// Steps can be too short as well as too long: see March::sensible_step and Step::below_minimum.
struct Theta {
    double theta = 0.5; ///< 1/2 to 1
    double step = 0.0;  ///< [s], > 0
    Capacity capacity = Capacity::automatic;
    bool damped_start = true;
    /// Nonlinear bodies: Newton passes per step, always this many (bounded time); 0: until converged.
    int newton_passes = 0;
    double tolerance = 1e-10; ///< of Newton's method: sum of |r| as a share of the gross heat traffic
    /// How many steps the march will take, if known; 0: many. For a few steps of a large linear body in 2D an iterative solver
    /// is made ready sooner than a factor (see choose_solver()); a march that goes on all the same then gets its factor.
    Index expected_steps = 0;
};

} // namespace tepor
