#pragma once
// The QuadratureRule concept, and Rule, the run-time sized rule all makers of this room return.

#include <Eigen/Core>
#include <concepts>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor {

/// Points and weights on a reference cell: [0,1], the triangle (0,0) (1,0) (0,1), or the unit square.
///
/// | member | meaning |
/// |---|---|
/// | `R::dim` | dimension of the reference cell |
/// | `r.size()` | number of points |
/// | `r.point(q)` | reference coordinates of point q, an Eigen column vector of `dim` entries |
/// | `r.weight(q)` | its weight; the weights sum to the measure of the reference cell (1, 1/2, 1) |
/// | `r.degree` | polynomials up to this degree are integrated exactly (on the square: in each coordinate) |
template <class R>
concept QuadratureRule = requires(const R& rule, Index q) {
    { R::dim } -> std::convertible_to<int>;
    { rule.size() } -> std::convertible_to<Index>;
    { rule.point(q) } -> std::convertible_to<Eigen::Matrix<double, R::dim, 1>>;
    { rule.weight(q) } -> std::convertible_to<double>;
    { rule.degree } -> std::convertible_to<int>;
};

/// A rule of any number of points in contiguous arrays.
template <int Dim>
class Rule {
  public:
    static constexpr int dim = Dim;
    using point_type = Eigen::Matrix<double, Dim, 1>;

    /// Polynomials up to this degree are exact; -1 while the rule has no points.
    int degree = -1;

    Rule() = default;
    explicit Rule(int exact_degree, Index expected_size = 0) : degree(exact_degree) {
        coordinates_.reserve(detail::as_size(expected_size * Dim));
        weights_.reserve(detail::as_size(expected_size));
    }

    /// One more point with its weight.
    void add(const point_type& xi, double weight) {
        for (int d = 0; d < Dim; ++d) coordinates_.push_back(xi[d]);
        weights_.push_back(weight);
    }

    [[nodiscard]] Index size() const noexcept { return static_cast<Index>(weights_.size()); }
    [[nodiscard]] double weight(Index q) const noexcept { return weights_[detail::as_size(q)]; }
    [[nodiscard]] point_type point(Index q) const noexcept {
        point_type xi;
        for (int d = 0; d < Dim; ++d) xi[d] = coordinates_[detail::as_size(q * Dim + d)];
        return xi;
    }

    /// All coordinates, point after point, `dim` numbers each.
    [[nodiscard]] const std::vector<double>& coordinates() const noexcept { return coordinates_; }
    [[nodiscard]] const std::vector<double>& weights() const noexcept { return weights_; }

  private:
    std::vector<double> coordinates_;
    std::vector<double> weights_;
};

} // namespace tepor
