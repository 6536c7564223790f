#pragma once
// Kernels<ExactSegment>: the resistance cell, its solid centre and its fin.

#include <cmath>
#include <tepor/assembly/kernels.hpp>
#include <tepor/base/config.hpp>
#include <tepor/element/exact_segment.hpp>
#include <vector>

namespace tepor {

/// The cell law of ExactSegment.
///
/// With w = factor r^n (the frame's measure) and R = integral of dr / (k w), the test function psi = (1 / R) integral from a of
/// dr / (k w) makes the matrix (1 / R) [1 -1; -1 1] and the loads integral of psi w f exact at the nodes. Radial frames are
/// integrated in ln r, in which thin shells keep all digits and constant conductivities are resolved to rounding.
///
/// Solid centre (a = 0): R is infinite there. The cell takes 1 and a hat around the centre as its two functions, so that it
/// keeps a symmetric positive matrix, and splits the load such that the centre node gets T(b) + integral of F / (k w).
///
/// Conductivity of temperature: with the mean of k between the nodes' temperatures in place of k it solves for the integral of k.
///
/// All integrals use 24 Gauss points a cell (more with extra_degree); two points more, at the ends, have no weight. What they cannot
/// resolve is not passed over: `form` names the cell in CellBlock::unresolved when the last Legendre coefficients of 1 / k or of
/// the source are above 3e-7 of the largest value, which leaves about 1e-13 (their square) in the integrals, or when the values at
/// the ends are not those the points lead to, so that a jump close to an end is seen. The assembly then divides the cell.
/// Cost per cell O(points^2); nothing is allocated.
template <>
class Kernels<ExactSegment> final : public CellKernels {
  public:
    /// @param extra_degree  adds half as many points
    TEPOR_INLINE explicit Kernels(Frame frame = {}, int extra_degree = 0);

    [[nodiscard]] int side_node(int s, int j) const override { return ExactSegment::side_node(s, j); }
    [[nodiscard]] const double* shape_at(int /*q*/) const override { return nullptr; } // they depend on k
    [[nodiscard]] const double* side_shape_at(int /*q*/, bool /*lumped*/) const override {
        static constexpr double one = 1.0;
        return &one;
    }
    void shape(const double* xi, double* values, double* gradients) const override {
        values[0] = 1.0 - xi[0];
        values[1] = xi[0];
        gradients[0] = -1.0;
        gradients[1] = 1.0;
    }
    void reference_node(int i, double* xi) const override { xi[0] = i; }

    TEPOR_INLINE void open(CellBlock& block) const override;
    TEPOR_INLINE void form(CellBlock& block, Wanted wanted) const override;
    TEPOR_INLINE void form_capacity(CellBlock& block, const double* amount, bool lumped) const override;
    TEPOR_INLINE void profile(CellBlock& block, double* shape) const override;
    TEPOR_INLINE void open_side(SideBlock& block, bool lumped) const override;
    TEPOR_INLINE void form_side(SideBlock& block, Wanted wanted, bool lumped) const override;

  private:
    static constexpr int W = block_width;
    static constexpr int most_points = 96;

    /// One cell with its functions.
    struct Cell {
        bool centre = false;
        bool fin = false;
        double conductance = 0.0; ///< couples the two nodes [W/K]
        double loss = 0.0;        ///< fin: couples each node to the fluid [W/K]
        double decay = 0.0;       ///< fin: sqrt(c / k) times the length
        double sink_weight = 0.0; ///< fin: integral of either function [m3]
        double phi[2][most_points] = {};
        double jacobian[most_points] = {};
        double measure[most_points] = {};
        double k[most_points] = {};
    };

    [[nodiscard]] double measure(double r) const noexcept {
        return power_ == 0 ? factor_ : (power_ == 1 ? factor_ * r : factor_ * r * r);
    }
    [[nodiscard]] bool resolved(const double* values) const noexcept;
    void running(const double* density, double* integral) const noexcept;
    void shape_cell(CellBlock& block, int c, Cell& cell) const;
    void shape_fin(const CellBlock& block, int c, Cell& cell) const noexcept;
    void shape_centre(CellBlock& block, int c, Cell& cell) const;
    void centre_rise(const Cell& cell, const double* source, double* rise) const noexcept;
    void source_of(CellBlock& block, int c, const Cell& cell, double* source) const;
    void loads(const CellBlock& block, int c, const Cell& cell, const double* source, double* load) const noexcept;

    int power_;
    double factor_;
    std::vector<double> place_, weight_; ///< Gauss points on [0,1], then both ends with no weight
    std::vector<double> running_;        ///< (q, p): integral of the Lagrange function of point p from 0 to point q
    std::vector<double> moment_;  ///< (q, p): integral of t^n times it at t * point q over t in [0,1]; radial frames
    std::vector<double> tail_[2]; ///< the last two Legendre coefficients
    std::vector<double> end_[2];  ///< what the points say of the values at both ends
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/assembly/impl/exact_kernels.hpp>
#include <tepor/assembly/impl/exact_profile.hpp>
#endif
