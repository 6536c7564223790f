// Orders of the 2D elements, plane and of revolution, on regular and distorted meshes, with a conductivity of place.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/field_errors.hpp>
#include <tests/support/meshes.hpp>
#include <tests/support/study.hpp>

using namespace tepor;

namespace {

// Manufactured on the unit square: T = 20 + 30 cos(pi x) (1 - exp(-y)) + 10 y, k = 1 + 0.3 cos(pi x) + 0.3 y: no heat passes x = 0
// (the axis when of revolution) and x = 1; bottom held at 20, film on top.
double T_at(Point p) {
    return 20.0 - 30.0 * std::cos(pi * p.x) * std::expm1(-p.y) + 10.0 * p.y;
}
Point slope_at(Point p) {
    return {30.0 * pi * std::sin(pi * p.x) * std::expm1(-p.y), 10.0 + 30.0 * std::cos(pi * p.x) * std::exp(-p.y)};
}
double k_at(Point p) {
    return 1.0 + 0.3 * std::cos(pi * p.x) + 0.3 * p.y;
}
constexpr double film = 5.0;

/// The unit square with faces "bottom" and "top".
template <class E>
Mesh<E> square(int n, bool distorted, Frame frame) {
    Mesh<E> mesh = test::unit_mesh<E>(n, 11, distorted ? 0.25 : 0.0);
    mesh.frame = frame;
    mesh.faces.push_back({"top", {}});
    for (Index c = 0; c < mesh.cell_count(); ++c)
        for (int s = 0; s < E::sides; ++s) {
            const double a = mesh.nodes[detail::as_size(mesh.cell(c)[E::side_node(s, 0)])].y;
            const double b = mesh.nodes[detail::as_size(mesh.cell(c)[E::side_node(s, 1)])].y;
            if (a == 1.0 && b == 1.0) mesh.faces.back().sides.push_back({detail::as_id(c), s});
        }
    return mesh;
}

template <class E>
Field manufactured(int n, bool distorted, Frame frame) {
    Body body(square<E>(n, distorted, frame));
    const int power = frame.power();
    for (const char* half : {"left", "right"}) {
        body.in(half, Material{.conductivity =
                                   of_place([](const auto& p) { return 1.0 + 0.3 * cos(pi * p.x) + 0.3 * p.y; })});
        body.in(half, Generation{.per_volume = of_place([power](Point p) {
                                     // -(k_x T_x + k_y T_y + k (T_xx + T_yy) + n k T_x / x)
                                     const Point s = slope_at(p);
                                     const double k = k_at(p);
                                     const double waves = 30.0 * std::cos(pi * p.x);
                                     const double by_xx = pi * pi * waves * std::expm1(-p.y);
                                     const double around = p.x > 0.0 ? s.x / p.x : by_xx;
                                     return -(-0.3 * pi * std::sin(pi * p.x) * s.x + 0.3 * s.y +
                                              k * (by_xx - waves * std::exp(-p.y)) + power * k * around);
                                 })});
    }
    body.on("bottom", FixedTemperature{20.0});
    body.on("top", Film{.coefficient = film,
                        .fluid = of_place([](Point p) { return T_at(p) + k_at(p) * slope_at(p).y / film; })});
    return steady(body);
}

/// Heat leaving through the bottom: integral of k T_y = (1.0 + 0.3 c) (10 + 30 c), c = cos(pi x), times 1 or 2 pi x.
double exact_flow(Frame frame) {
    if (frame.power() == 0) return 10.0 + 9.0 * 0.5;
    // integral of x, x c, x c^2 over [0, 1]: 1/2, -2 / pi^2, 1/4
    return 2.0 * pi * (10.0 * 0.5 + (3.0 + 30.0) * (-2.0 / (pi * pi)) + 9.0 * 0.25);
}

} // namespace

TEST_CASE_TEMPLATE("2D elements of order P: L2 error falls as h^(P+1), energy as h^P, heat flow as h^(2P)", E,
                   Triangle<1>, Triangle<2>, Triangle<3>, Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>) {
    // Source: G. Strang, G. J. Fix, An Analysis of the Finite Element Method, 1973, section 3.2; heat flow: methods of
    // J. Douglas, T. Dupont, M. F. Wheeler, RAIRO Analyse numerique 8 (1974) 47-59. Levels measured.
    constexpr int P = E::order;
    constexpr bool triangle = E::shape_of_cell == CellShape::triangle;
    // [shape][P][frame]: errors on the finest regular mesh in L2, energy, heat flow
    static constexpr double level[2][3][2][3] = {
        {{{4.294e-03, 8.177e-01, 5.159e-05}, {6.903e-03, 1.267e+00, 5.985e-04}},
         {{1.562e-04, 2.857e-02, 6.106e-07}, {3.058e-04, 5.318e-02, 1.722e-06}},
         {{6.726e-06, 1.233e-03, 7.133e-10}, {1.031e-05, 1.814e-03, 1.736e-09}}},
        {{{2.437e-03, 5.756e-01, 2.768e-04}, {4.152e-03, 9.368e-01, 8.748e-04}},
         {{1.123e-04, 1.924e-02, 3.537e-07}, {1.989e-04, 3.333e-02, 9.997e-07}},
         {{4.289e-06, 7.176e-04, 4.510e-10}, {7.576e-06, 1.165e-03, 1.774e-09}}}};
    const std::vector<int> cells = P == 1   ? std::vector<int>{12, 24, 48}
                                   : P == 2 ? std::vector<int>{6, 12, 24}
                                            : std::vector<int>{4, 8, 16};
    for (const Frame& frame : {Frame(Planar{}), Frame(Cylindrical{})})
        for (const bool distorted : {false, true}) {
            CAPTURE(frame.power());
            CAPTURE(distorted);
            test::Study study[3];
            for (const int n : cells) {
                const Field field = manufactured<E>(n, distorted, frame);
                const auto off = test::field_errors<E>(field, T_at, slope_at, k_at);
                const double error[3] = {off.mean_square, off.energy,
                                         std::abs(field[heat_out_through("bottom")] - exact_flow(frame))};
                for (int i = 0; i < 3; ++i) {
                    study[i].h.push_back(1.0 / n);
                    study[i].error.push_back(error[i]);
                }
                const Balance balance = field.balance();
                CHECK(std::abs(balance.left_over) <= 1e-10 * balance.gross + balance.floor);
            }
            const double order[3] = {P + 1.0, P, 2.0 * P};
            for (int i = 0; i < 3; ++i) {
                CAPTURE(i);
                INFO(study[i].text());
                CHECK(std::abs(study[i].order() - order[i]) <= (distorted ? 0.35 : 0.05));
                const double relative = study[i].error.back() / level[triangle ? 0 : 1][P - 1][frame.power()][i];
                CHECK(relative <= (distorted ? 3.0 : 1.02));
                CHECK(relative >= (distorted ? 0.95 : 0.98));
            }
        }
}
