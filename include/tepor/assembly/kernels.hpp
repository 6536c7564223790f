#pragma once
// Kernels<E>: the element integrals of an Element, written as loops over a block of cells.

#include <cmath>
#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/quadrature/rules.hpp>
#include <vector>

namespace tepor {

/// Element integrals of E with any quadrature rule and frame.
///
/// The weak form on paper: r_i = int k grad T . grad N_i + s N_i, its derivative by T_j, and on sides int q N_i. The
/// default rules are exact for the capacity matrix of straight cells in every frame of the element's dimension.
///
/// Triangles of order 1, whose gradients are constant, take their conductivity at conduction_degree() points: by default one, the
/// centroid. That is the integral of a k that is linear in place (planar) or constant (r-z); for any other smooth k temperature and
/// heat flow keep their order h^2, for which a rule of degree 2 P - 1 suffices (Ciarlet, The Finite Element Method for Elliptic
/// Problems, 1978, section 4.1).
/// Cost per block: O(points nodes^2) for the matrix, O(points nodes) for the residual; nothing is allocated.
template <Element E>
class Kernels final : public CellKernels {
  public:
    using Side = typename E::Side;

    /// @param extra_degree raises the degree of the cell and side rules, for sources or conductivities that vary a lot
    explicit Kernels(Frame frame = {}, int extra_degree = 0)
        : Kernels(rule_for<E>(2 * E::order + frame.power() + extra_degree), frame, extra_degree) {
        if constexpr (flat_triangle) {
            const auto rule = rule_for<E>(conduction_degree(extra_degree));
            own_conduction_points = static_cast<int>(rule.size());
            add_points(rule);
        }
    }

    /// With a rule of one's own on the cells.
    template <QuadratureRule R>
    Kernels(const R& rule, Frame frame, int extra_degree = 0) : power_(frame.power()), factor_(frame.factor(E::dim)) {
        dim = E::dim;
        order = E::order;
        nodes = E::nodes;
        sides = E::sides;
        side_nodes = Side::nodes;
        chain = E::dim == 1 && constant_gradient;
        points = static_cast<int>(rule.size());
        add_points(rule);
        if constexpr (E::dim == 2 && !flat_triangle) multiply_gradients();
        if constexpr (E::dim == 2) {
            const Rule<1> along = line_rule(2 * E::order + power_ + extra_degree);
            side_points = static_cast<int>(along.size());
            for (Index q = 0; q < along.size(); ++q) add_side_point(side_, along.point(q)[0], along.weight(q));
            const Rule<1> nodal = nodal_rule();
            for (Index q = 0; q < nodal.size(); ++q) add_side_point(lumped_side_, nodal.point(q)[0], nodal.weight(q));
            if (static_cast<int>(nodal.size()) > side_points) side_points = static_cast<int>(nodal.size());
        } else {
            side_points = 1;
        }
    }

    /// Degree of the rule for conduction of triangles of order 1.
    [[nodiscard]] static constexpr int conduction_degree(int extra_degree) noexcept { return 1 + extra_degree; }

    [[nodiscard]] int side_node(int s, int j) const override { return E::side_node(s, j); }
    [[nodiscard]] const double* shape_at(int q) const override {
        return shape_.data() + static_cast<Index>(q) * E::nodes;
    }
    [[nodiscard]] const double* side_shape_at(int q, bool lumped) const override {
        if constexpr (E::dim == 1) {
            static constexpr double one = 1.0;
            return &one;
        } else {
            return (lumped ? lumped_side_ : side_).shape.data() + static_cast<Index>(q) * Side::nodes;
        }
    }
    void shape(const double* xi, double* values, double* gradients) const override {
        typename E::point at;
        for (int d = 0; d < E::dim; ++d) at[d] = xi[d];
        const auto n = E::shape(at);
        const auto g = E::gradient(at);
        for (int i = 0; i < E::nodes; ++i) {
            values[i] = n[i];
            for (int d = 0; d < E::dim; ++d) gradients[i * E::dim + d] = g(i, d);
        }
    }
    void reference_node(int i, double* xi) const override {
        const auto at = E::reference_node(i);
        for (int d = 0; d < E::dim; ++d) xi[d] = at[d];
    }

    void open(CellBlock& block) const override;
    void form(CellBlock& block, Wanted wanted) const override;
    void form_capacity(CellBlock& block, const double* amount, bool lumped) const override;
    void profile(CellBlock& block, double* shape) const override;
    void open_chain(ChainBlock& block) const override;
    void form_chain(ChainBlock& block) const override;
    void open_side(SideBlock& block, bool lumped) const override;
    void form_side(SideBlock& block, Wanted wanted, bool lumped) const override;

  private:
    static constexpr int W = block_width;
    static constexpr int N = E::nodes;
    /// Straight simplices of order 1: the gradients are the same at every point.
    static constexpr bool flat_triangle = E::shape_of_cell == CellShape::triangle && E::order == 1 && N == 3;
    static constexpr bool constant_gradient =
        flat_triangle || (E::shape_of_cell == CellShape::segment && E::order == 1 && N == 2);

    struct SideTable {
        std::vector<double> weight, shape, gradient;
    };

    void add_side_point(SideTable& table, double t, double weight) {
        if constexpr (E::dim == 2) {
            typename Side::point xi;
            xi[0] = t;
            const auto n = Side::shape(xi);
            const auto g = Side::gradient(xi);
            table.weight.push_back(weight);
            for (int i = 0; i < Side::nodes; ++i) {
                table.shape.push_back(n[i]);
                table.gradient.push_back(g(i, 0));
            }
        }
    }

    /// The rule with its points on the side's nodes: trapezoid, Simpson, three-eighths.
    static Rule<1> nodal_rule() {
        Rule<1> rule(1);
        const auto add = [&rule](double t, double weight) {
            typename Rule<1>::point_type xi;
            xi[0] = t;
            rule.add(xi, weight);
        };
        if constexpr (Side::nodes == 2) {
            add(0.0, 0.5);
            add(1.0, 0.5);
        } else if constexpr (Side::nodes == 3) {
            add(0.0, 1.0 / 6.0);
            add(1.0, 1.0 / 6.0);
            add(0.5, 4.0 / 6.0);
        } else {
            add(0.0, 1.0 / 8.0);
            add(1.0, 1.0 / 8.0);
            add(1.0 / 3.0, 3.0 / 8.0);
            add(2.0 / 3.0, 3.0 / 8.0);
        }
        return rule;
    }

    /// factor * r^n, the measure of the frame.
    [[nodiscard]] double measure(double r) const noexcept {
        return power_ == 0 ? factor_ : (power_ == 1 ? factor_ * r : factor_ * r * r);
    }

    /// Jacobian of a triangle over (x1 - x0) (y2 - y0) - (x2 - x0) (y1 - y0): 1 where the reference nodes go counter-clockwise too.
    [[nodiscard]] double reference_turn() const noexcept {
        const double* g = reference_gradient_.data();
        return g[2] * g[5] - g[4] * g[3];
    }

    template <class R>
    void add_points(const R& rule) {
        for (Index q = 0; q < rule.size(); ++q) {
            const typename E::point xi = rule.point(q);
            rule_weight_.push_back(rule.weight(q));
            const auto n = E::shape(xi);
            const auto g = E::gradient(xi);
            for (int i = 0; i < E::nodes; ++i) {
                shape_.push_back(n[i]);
                for (int d = 0; d < E::dim; ++d) reference_gradient_.push_back(g(i, d));
            }
        }
    }

    void multiply_gradients();
    void map_segment_point(int q, int count, const double* left, const double* right, double* place,
                           double* weight) const;
    void map_segments(CellBlock& block) const;
    void add_conduction(CellBlock& block, Wanted wanted) const;
    void sum_conductivity(int count, const double* weight, int stride, const double* k, double k_value,
                          double* total) const;
    void form_segment_conduction(CellBlock& block, Wanted wanted) const;
    void add_source(CellBlock& block, Wanted wanted) const;

    // all other plane cells: kernels_plane.hpp
    void map_plane(CellBlock& block) const;
    void reference_conductivity(const CellBlock& block, const double* const* k, bool uniform, double* metric) const;
    void form_plane_conduction(CellBlock& block, Wanted wanted) const;
    void reference_flow(const CellBlock& block, int q, double* one, double* two) const;
    void add_plane_residual(CellBlock& block) const;
    void form_plane_slope(CellBlock& block) const;

    // triangles of order 1: kernels_triangles.hpp
    void map_triangles(CellBlock& block) const;
    void triangle_points(CellBlock& block, int from, int to, const double* twice) const;
    void integrate_on_triangle(const CellBlock& block, const double* k, double* total) const;
    void form_triangle_conduction(CellBlock& block, Wanted wanted) const;
    void form_triangle_slope(CellBlock& block) const;

    int power_;
    double factor_;
    std::vector<double> rule_weight_, shape_, reference_gradient_;
    std::vector<double> gradient_products_; // see kernels_plane.hpp
    SideTable side_, lumped_side_;
};

} // namespace tepor

#include <tepor/assembly/exact_kernels.hpp>
#include <tepor/assembly/kernels_cells.hpp>
#include <tepor/assembly/kernels_chain.hpp>
#include <tepor/assembly/kernels_maps.hpp>
#include <tepor/assembly/kernels_plane.hpp>
#include <tepor/assembly/kernels_sides.hpp>
#include <tepor/assembly/kernels_triangles.hpp>
