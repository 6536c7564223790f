// Matrices of one element: their properties, and agreement with the batch functions for every element, rule and frame.

#include <array>
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/assembly/element_matrices.hpp>
#include <tepor/assembly/kernels.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tests/support/refused.hpp>
#include <tests/support/serendipity.hpp>
#include <vector>

using namespace tepor;

namespace {

/// Nodes of a bent cell near (1.3, 0.6), different for every `seed`.
template <class E>
std::array<Point, detail::as_size(E::nodes)> bent_cell(int seed) {
    std::array<Point, detail::as_size(E::nodes)> x;
    for (int i = 0; i < E::nodes; ++i) {
        const auto xi = E::reference_node(i);
        if constexpr (E::dim == 1) {
            const double s = xi[0];
            x[detail::as_size(i)] = {0.4 + 0.1 * seed + (0.3 + 0.02 * seed) * (s + 0.1 * s * (1.0 - s)), 0.0};
        } else {
            const double s = xi[0];
            const double t = xi[1];
            x[detail::as_size(i)] = {1.3 + 0.05 * seed + 0.2 * s - 0.06 * t + 0.03 * s * t + 0.01 * seed * s * s,
                                     0.6 + 0.04 * s + 0.25 * t - 0.02 * seed * s * t + 0.02 * t * t};
        }
    }
    return x;
}

double k_at(Point p) {
    return 2.0 + std::sin(3.0 * p.x + p.y);
}
double c_at(Point p) {
    return 5.0 + p.x * p.x - p.y;
}
double f_at(Point p) {
    return std::exp(p.x) - 2.0 * p.y;
}
Eigen::Matrix2d tensor_at(Point p) {
    Eigen::Matrix2d k;
    k << 2.0 + p.x, 0.4 * p.y, 0.4 * p.y, 1.0 + p.y * p.y;
    return k;
}

template <class E>
std::vector<Frame> frames() {
    if constexpr (E::dim == 1)
        return {Planar{.area = 0.7}, Cylindrical{.length = 1.5}, Spherical{}};
    else
        return {Planar{.depth = 0.3}, Cylindrical{}};
}

/// A block of `cells` bent cells with temperatures.
template <class E>
void fill(CellBlock& block, double* nodal_T, int cells) {
    block.count = cells;
    block.T = nodal_T;
    for (int c = 0; c < block_width; ++c) {
        const auto x = bent_cell<E>(c < cells ? c : cells - 1);
        for (int i = 0; i < E::nodes; ++i) {
            block.x[i * block_width + c] = x[detail::as_size(i)].x;
            block.y[i * block_width + c] = x[detail::as_size(i)].y;
            block.T[i * block_width + c] = std::cos(1.7 * i + c);
        }
    }
}

template <class M>
double packed_difference(const M& full, const double* packed, int c) {
    double worst = 0.0;
    int pair = 0;
    for (int i = 0; i < full.rows(); ++i)
        for (int j = 0; j <= i; ++j, ++pair)
            worst = std::max(worst, std::abs(full(i, j) - packed[pair * block_width + c]));
    return worst;
}

} // namespace

TEST_CASE_TEMPLATE_DEFINE("batch functions agree with the matrices of one element to rounding", E, agreement) {
    constexpr int W = block_width;
    constexpr int cells = 5;
    for (const Frame& frame : frames<E>())
        for (const int degree : {2 * E::order + 1, 9}) {
            CAPTURE(frame.power());
            CAPTURE(degree);
            const auto rule = rule_for<E>(degree);
            const Kernels<E> kernels(rule, frame);
            Workspace work = kernels.workspace();
            CellBlock& block = work.cells;
            fill<E>(block, work.nodal_T, cells);
            kernels.open(block);
            const auto put = [&](double* to, double (*f)(Point)) {
                for (int at = 0; at < kernels.points * W; ++at)
                    to[at] = f({block.point_x[at], E::dim == 2 ? block.point_y[at] : 0.0});
            };
            put(work.coefficient[0], k_at);
            put(work.coefficient[1], c_at);
            put(work.coefficient[2], f_at);
            const Wanted both{.residual = true, .matrix = true};

            block.conductivities = 1;
            block.k[0] = work.coefficient[0];
            block.source = work.coefficient[2];
            block.source_slope = work.coefficient[1];
            kernels.form(block, both);
            for (int c = 0; c < cells; ++c) {
                const auto x = bent_cell<E>(c);
                ElementVector<E> T;
                for (int i = 0; i < E::nodes; ++i) T[i] = block.T[i * W + c];
                const ElementMatrix<E> K = conduction_matrix<E>(x, k_at, rule, frame);
                const ElementMatrix<E> M = capacity_matrix<E>(x, c_at, rule, frame);
                const ElementVector<E> r = K * T + load_vector<E>(x, f_at, rule, frame);
                const double scale = K.cwiseAbs().maxCoeff() + M.cwiseAbs().maxCoeff();
                CHECK(packed_difference((K + M).eval(), block.matrix, c) <= 1e-14 * scale);
                for (int i = 0; i < E::nodes; ++i)
                    CHECK(std::abs(r[i] - block.residual[i * W + c]) <=
                          1e-14 * E::nodes * (scale + r.cwiseAbs().maxCoeff()));
            }

            // k' N_j grad T . grad N_i
            block.source = block.source_slope = nullptr;
            block.k_slope[0] = work.coefficient[1];
            kernels.form(block, Wanted{.residual = false, .matrix = true, .slope = true});
            for (int c = 0; c < cells; ++c) {
                const auto x = bent_cell<E>(c);
                ElementVector<E> T;
                for (int i = 0; i < E::nodes; ++i) T[i] = block.T[i * W + c];
                ElementMatrix<E> S = ElementMatrix<E>::Zero();
                detail::at_points<E>(x, rule, frame, [&](const auto& n, const auto& g, double weight, Point p) {
                    S += (weight * c_at(p)) * (g * (g.transpose() * T)) * n.transpose();
                });
                for (int i = 0; i < E::nodes; ++i)
                    for (int j = 0; j < E::nodes; ++j)
                        CHECK(std::abs(S(i, j) - block.slope[(i * E::nodes + j) * W + c]) <=
                              1e-14 * E::nodes * S.cwiseAbs().maxCoeff());
                const ElementMatrix<E> K = conduction_matrix<E>(x, k_at, rule, frame);
                CHECK(packed_difference(K, block.matrix, c) <= 1e-14 * K.cwiseAbs().maxCoeff());
            }
            block.k_slope[0] = nullptr;

            // one value in the whole block, and the capacity matrix alone
            const double k_one = 3.5;
            block.k[0] = &k_one;
            block.k_uniform = true;
            kernels.form(block, both);
            for (int c = 0; c < cells; ++c) {
                const ElementMatrix<E> K = conduction_matrix<E>(bent_cell<E>(c), k_one, rule, frame);
                CHECK(packed_difference(K, block.matrix, c) <= 1e-14 * K.cwiseAbs().maxCoeff());
            }
            for (const bool lumped : {false, true}) {
                kernels.form_capacity(block, work.coefficient[1], lumped);
                for (int c = 0; c < cells; ++c) {
                    ElementMatrix<E> M = capacity_matrix<E>(bent_cell<E>(c), c_at, rule, frame);
                    const double scale = M.cwiseAbs().maxCoeff();
                    if (lumped) M = ElementVector<E>(M.rowwise().sum()).asDiagonal();
                    CHECK(packed_difference(M, block.matrix, c) <= 1e-14 * E::nodes * scale);
                }
            }
            if constexpr (E::dim == 2) {
                block.k_uniform = false;
                block.conductivities = 3;
                for (int at = 0; at < kernels.points * W; ++at) {
                    const Eigen::Matrix2d k = tensor_at({block.point_x[at], block.point_y[at]});
                    work.coefficient[0][at] = k(0, 0);
                    work.coefficient[1][at] = k(1, 1);
                    work.coefficient[2][at] = k(0, 1);
                }
                for (int m = 0; m < 3; ++m) block.k[m] = work.coefficient[m];
                kernels.form(block, both);
                for (int c = 0; c < cells; ++c) {
                    const ElementMatrix<E> K = conduction_matrix<E>(bent_cell<E>(c), tensor_at, rule, frame);
                    CHECK(packed_difference(K, block.matrix, c) <= 1e-14 * K.cwiseAbs().maxCoeff());
                    ElementVector<E> T;
                    for (int i = 0; i < E::nodes; ++i) T[i] = block.T[i * W + c];
                    for (int i = 0; i < E::nodes; ++i)
                        CHECK(std::abs((K * T)[i] - block.residual[i * W + c]) <=
                              1e-14 * E::nodes * K.cwiseAbs().maxCoeff());
                }
            }
        }
}
TEST_CASE_TEMPLATE_INVOKE(agreement, Segment<1>, Segment<2>, Segment<3>, Triangle<1>, Triangle<2>, Triangle<3>,
                          Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>, test::Serendipity8);

TEST_CASE_TEMPLATE_DEFINE("a block of which only the element arrays are read gives the same to the last bit", E,
                          unread) {
    constexpr int W = block_width;
    for (const Frame& frame : frames<E>()) {
        CAPTURE(frame.power());
        const Kernels<E> kernels(frame);
        const Index from = static_cast<Index>(kernels.first_conduction_point()) * W;
        // temperatures are read where conductivity depends on them, places where a source or a conductivity does
        for (const bool source : {false, true})
            for (const bool uniform : {false, true})
                for (const bool nonlinear : {false, true}) {
                    if (uniform && nonlinear) continue;
                    CAPTURE(source);
                    CAPTURE(uniform);
                    CAPTURE(nonlinear);
                    std::vector<double> seen[2];
                    for (const bool lean : {false, true}) {
                        Workspace work = kernels.workspace();
                        CellBlock& block = work.cells;
                        fill<E>(block, work.nodal_T, 7);
                        if (lean)
                            block.unread = {.sources = !source,
                                            .conduction = uniform,
                                            .temperatures = !nonlinear,
                                            .gradients = true};
                        kernels.open(block);
                        double* k = work.coefficient[0];
                        double* slope = work.coefficient[1];
                        for (int i = 0; i < kernels.conduction_points() * W; ++i) {
                            const Point p{block.point_x[from + i], E::dim == 2 ? block.point_y[from + i] : 0.0};
                            k[i] = uniform ? 2.5 : k_at(p) * (nonlinear ? 1.0 + 0.01 * block.point_T[from + i] : 1.0);
                            slope[i] = 0.01;
                        }
                        if (source)
                            for (int i = 0; i < kernels.points * W; ++i)
                                work.coefficient[2][i] = f_at({block.point_x[i], E::dim == 2 ? block.point_y[i] : 0.0});
                        block.conductivities = 1;
                        block.k_uniform = uniform;
                        block.k[0] = k;
                        block.k_slope[0] = nonlinear ? slope : nullptr;
                        block.source = source ? work.coefficient[2] : nullptr;
                        kernels.form(block, Wanted{.residual = true, .matrix = true, .slope = nonlinear});
                        std::vector<double>& all = seen[lean ? 1 : 0];
                        all.insert(all.end(), block.matrix, block.matrix + E::nodes * (E::nodes + 1) / 2 * W);
                        all.insert(all.end(), block.residual, block.residual + E::nodes * W);
                        if (nonlinear) all.insert(all.end(), block.slope, block.slope + E::nodes * E::nodes * W);
                    }
                    CHECK(seen[0] == seen[1]);
                }
    }
}
TEST_CASE_TEMPLATE_INVOKE(unread, Segment<1>, Segment<2>, Triangle<1>, Triangle<2>, Quadrilateral<1>, Quadrilateral<2>,
                          test::Serendipity8);

TEST_CASE("triangles of order 1 conduct by the conductivity at their centroid, and by more points when asked") {
    // The mean of a linear function over a triangle is its value at the centroid, its integral against r by the rule of degree 2.
    constexpr int W = block_width;
    const auto linear = [](Point p) { return 1.0 + 0.4 * p.x + 0.7 * p.y; };
    for (const Frame& frame : frames<Triangle<1>>())
        for (const int extra : {0, 1, 4}) {
            CAPTURE(frame.power());
            CAPTURE(extra);
            const Kernels<Triangle<1>> kernels(frame, extra);
            const auto rule = triangle_rule(1 + extra);
            CHECK(kernels.conduction_points() == rule.size());
            CHECK(kernels.points == triangle_rule(2 + frame.power() + extra).size());
            Workspace work = kernels.workspace();
            CellBlock& block = work.cells;
            fill<Triangle<1>>(block, work.nodal_T, 5);
            kernels.open(block);
            const Index from = static_cast<Index>(kernels.first_conduction_point()) * W;
            const auto form = [&](const auto& k) {
                for (int i = 0; i < kernels.conduction_points() * W; ++i)
                    work.coefficient[0][i] = k(Point{block.point_x[from + i], block.point_y[from + i]});
                block.conductivities = 1;
                block.k[0] = work.coefficient[0];
                kernels.form(block, Wanted{.residual = true, .matrix = true});
            };
            form(k_at);
            for (int c = 0; c < 5; ++c) {
                const auto K = conduction_matrix<Triangle<1>>(bent_cell<Triangle<1>>(c), k_at, rule, frame);
                CHECK(packed_difference(K, block.matrix, c) <= 1e-14 * K.cwiseAbs().maxCoeff());
            }
            if (frame.power() > extra) continue;
            form(linear);
            for (int c = 0; c < 5; ++c) {
                const auto K =
                    conduction_matrix<Triangle<1>>(bent_cell<Triangle<1>>(c), linear, triangle_rule(8), frame);
                CHECK(packed_difference(K, block.matrix, c) <= 1e-13 * K.cwiseAbs().maxCoeff());
            }
        }
}

TEST_CASE_TEMPLATE_DEFINE("side functions agree with the matrices of one side to rounding", E, side_agreement) {
    constexpr int W = block_width;
    using Side = typename E::Side;
    for (const Frame& frame : frames<E>()) {
        CAPTURE(frame.power());
        const Kernels<E> kernels(frame);
        const auto rule = line_rule(2 * E::order + frame.power());
        Workspace work = kernels.workspace();
        SideBlock& block = work.sides;
        block.T = work.side_nodal_T;
        block.count = E::sides;
        const auto x = bent_cell<E>(2);
        for (int c = 0; c < W; ++c)
            for (int i = 0; i < Side::nodes; ++i) {
                const Point p = x[detail::as_size(E::side_node(c < E::sides ? c : 0, i))];
                block.x[i * W + c] = p.x;
                block.y[i * W + c] = p.y;
                block.T[i * W + c] = 0.0;
            }
        kernels.open_side(block, false);
        for (int at = 0; at < kernels.side_points * W; ++at) {
            const Point p{block.point_x[at], E::dim == 2 ? block.point_y[at] : 0.0};
            work.side_coefficient[0][at] = f_at(p);
            work.side_coefficient[1][at] = k_at(p);
        }
        block.flux = work.side_coefficient[0];
        block.flux_slope = work.side_coefficient[1];
        kernels.form_side(block, Wanted{.residual = true, .matrix = true}, false);
        for (int s = 0; s < E::sides; ++s) {
            CAPTURE(s);
            const ElementMatrix<Side> H = film_matrix<E>(x, s, k_at, rule, frame);
            const ElementVector<Side> F = side_load_vector<E>(x, s, f_at, rule, frame);
            CHECK(packed_difference(H, block.matrix, s) <= 1e-14 * H.cwiseAbs().maxCoeff());
            for (int i = 0; i < Side::nodes; ++i)
                CHECK(std::abs(F[i] - block.residual[i * W + s]) <= 2e-14 * F.cwiseAbs().maxCoeff());
        }
    }
}
TEST_CASE_TEMPLATE_INVOKE(side_agreement, Segment<1>, Segment<2>, Segment<3>, Triangle<1>, Triangle<2>, Triangle<3>,
                          Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>, test::Serendipity8);

TEST_CASE_TEMPLATE_DEFINE("conduction sends no heat through a uniform field and integrates a linear one exactly", E,
                          conduction_properties) {
    const auto x = bent_cell<E>(1);
    const auto rule = rule_for<E>(2 * E::order);
    const ElementMatrix<E> K = conduction_matrix<E>(x, k_at, rule);
    const double scale = K.cwiseAbs().maxCoeff();
    CHECK((K - K.transpose()).cwiseAbs().maxCoeff() <= 1e-15 * scale);
    CHECK(K.rowwise().sum().cwiseAbs().maxCoeff() <= 2e-14 * E::nodes * scale);
    // energy of T = x with k = 1 is the size of the cell, and so is the load of f = 1
    ElementVector<E> T;
    for (int i = 0; i < E::nodes; ++i) T[i] = x[detail::as_size(i)].x;
    const ElementMatrix<E> one = conduction_matrix<E>(x, 1.0, rule);
    const double size = load_vector<E>(x, 1.0, rule).sum();
    CHECK(std::abs(T.dot(one * T) - size) <= 1e-13 * size);
}
TEST_CASE_TEMPLATE_INVOKE(conduction_properties, Segment<1>, Segment<2>, Segment<3>, Triangle<1>, Triangle<2>,
                          Triangle<3>, Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>, test::Serendipity8);

TEST_CASE("element matrices have their closed forms on the right triangle") {
    // Source: constant-gradient triangle, O. C. Zienkiewicz, R. L. Taylor, The Finite Element Method, 5th ed., vol. 1, section 7.2
    const std::array<Point, 3> x{{{0.0, 0.0}, {2.0, 0.0}, {0.0, 1.0}}};
    const auto K = conduction_matrix<Triangle<1>>(x, 4.0, triangle_rule(2), Planar{.depth = 3.0});
    ElementMatrix<Triangle<1>> want;
    want << 15.0, -3.0, -12.0, -3.0, 3.0, 0.0, -12.0, 0.0, 12.0;
    CHECK((K - want).cwiseAbs().maxCoeff() <= 1e-14);
    const auto M = capacity_matrix<Triangle<1>>(x, 12.0, triangle_rule(2));
    for (int i = 0; i < 3; ++i)
        for (int j = 0; j < 3; ++j) CHECK(std::abs(M(i, j) - (i == j ? 2.0 : 1.0)) <= 1e-14);
    const auto H = film_matrix<Triangle<1>>(x, 0, 6.0, line_rule(2));
    CHECK(std::abs(H(0, 0) - 4.0) + std::abs(H(0, 1) - 2.0) <= 1e-14);
}

TEST_CASE("element matrices refuse clockwise cells and values that make no sense") {
    const std::array<Point, 3> clockwise{{{0.0, 0.0}, {0.0, 1.0}, {1.0, 0.0}}};
    const std::array<Point, 3> fine{{{0.0, 0.0}, {1.0, 0.0}, {0.0, 1.0}}};
    const auto rule = triangle_rule(2);
    const double nan = std::numeric_limits<double>::quiet_NaN();
    test::check_refused([&] { (void)conduction_matrix<Triangle<1>>(clockwise, 1.0, rule); }, ErrorCode::bad_geometry,
                        "element", "counter-clockwise");
    test::check_refused([&] { (void)conduction_matrix<Triangle<1>>(fine, -1.0, rule); }, ErrorCode::bad_value, "k",
                        "expected a finite number > 0");
    test::check_refused([&] { (void)conduction_matrix<Triangle<1>>(fine, nan, rule); }, ErrorCode::bad_value, "k",
                        "finite");
    test::check_refused(
        [&] {
            (void)load_vector<Triangle<1>>(
                fine, [=](Point) { return nan; }, rule);
        },
        ErrorCode::bad_value, "f", "finite");
    test::check_refused([&] { (void)film_matrix<Triangle<1>>(fine, 0, -2.0, line_rule(2)); }, ErrorCode::bad_value, "h",
                        ">= 0");
}
