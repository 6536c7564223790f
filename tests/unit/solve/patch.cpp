// Patch tests through bodies: polynomials of the element's order on distorted cells, a user's element, a user's rule.

#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/field_errors.hpp>
#include <tests/support/meshes.hpp>
#include <tests/support/serendipity.hpp>
#include <tests/support/study.hpp>
#include <utility>
#include <vector>

using namespace tepor;

namespace {

/// The unit square, its whole edge the face "edge".
template <class E>
Mesh<E> square_with_edge(int n, double distortion) {
    Mesh<E> mesh = test::unit_mesh<E>(n, 5, distortion);
    mesh.faces = {{"edge", {}}};
    for (Index c = 0; c < mesh.cell_count(); ++c)
        for (int s = 0; s < E::sides; ++s) {
            const Point a = mesh.nodes[detail::as_size(mesh.cell(c)[E::side_node(s, 0)])];
            const Point b = mesh.nodes[detail::as_size(mesh.cell(c)[E::side_node(s, 1)])];
            const bool on = (a.x == b.x && (a.x == 0.0 || a.x == 1.0)) || (a.y == b.y && (a.y == 0.0 || a.y == 1.0));
            if (on) mesh.faces[0].sides.push_back({detail::as_id(c), s});
        }
    return mesh;
}

/// All polynomials up to a degree, and k times their negative Laplacian as a source.
double polynomial(int degree, Point p) {
    double sum = 3.0;
    if (degree >= 1) sum += 2.0 * p.x - 5.0 * p.y;
    if (degree >= 2) sum += 4.0 * p.x * p.x - 3.0 * p.x * p.y + 1.5 * p.y * p.y;
    if (degree >= 3) sum += p.x * p.x * p.x - 2.0 * p.x * p.y * p.y + 0.5 * p.y * p.y * p.y;
    return sum;
}
double laplacian(int degree, Point p) {
    double sum = 0.0;
    if (degree >= 2) sum += 8.0 + 3.0;
    if (degree >= 3) sum += 6.0 * p.x - 4.0 * p.x + 3.0 * p.y;
    return sum;
}

template <class Made>
Field patch(Made&& body, int degree) {
    for (const char* half : {"left", "right"}) {
        body.in(half, Material{.conductivity = 2.5});
        body.in(half, Generation{.per_volume = of_place([degree](Point p) { return -2.5 * laplacian(degree, p); })});
    }
    body.on("edge", FixedTemperature{of_place([degree](Point p) { return polynomial(degree, p); })});
    return steady(body);
}

double worst(const Field& field, int degree) {
    double off = 0.0;
    const std::vector<double> T = field.node_temperatures();
    for (std::size_t i = 0; i < T.size(); ++i)
        off = std::max(off, std::abs(T[i] - polynomial(degree, field.mesh().nodes[i])));
    for (const Point p : {Point{0.31, 0.47}, Point{0.62, 0.77}, Point{0.05, 0.93}})
        off = std::max(off, std::abs(field.at(p) - polynomial(degree, p)));
    return off;
}

/// A rule of a user's own: Gauss-Lobatto with 4 points in each direction, exact to degree 5.
/// Source: M. Abramowitz, I. A. Stegun, Handbook of Mathematical Functions, table 25.6
struct LobattoSquare {
    static constexpr int dim = 2;
    int degree = 5;
    static constexpr double place[4] = {0.0, 0.27639320225002106, 0.72360679774997894, 1.0};
    static constexpr double share[4] = {1.0 / 12.0, 5.0 / 12.0, 5.0 / 12.0, 1.0 / 12.0};
    [[nodiscard]] Index size() const { return 16; }
    [[nodiscard]] Eigen::Vector2d point(Index q) const { return {place[q % 4], place[q / 4]}; }
    [[nodiscard]] double weight(Index q) const { return share[q % 4] * share[q / 4]; }
};
static_assert(QuadratureRule<LobattoSquare>);

/// A body with cell integrals by any rule.
template <class E, class R>
Body body_with_rule(Mesh<E> mesh, const R& rule) {
    const Frame frame = mesh.frame;
    return Body(std::make_shared<const MeshData>(std::move(mesh)), std::make_shared<const Kernels<E>>(rule, frame),
                detail::cell_kind<E>());
}

} // namespace

TEST_CASE_TEMPLATE("an element of order P reproduces every polynomial of degree P on distorted cells", E, Triangle<1>,
                   Triangle<2>, Triangle<3>, Quadrilateral<1>, Quadrilateral<2>, Quadrilateral<3>) {
    // Source: the patch test of B. M. Irons, in G. P. Bazeley et al., Proc. Conf. Matrix Methods in Structural Mechanics, 1966
    const Field field = patch(Body(square_with_edge<E>(5, 0.25)), E::order);
    CHECK(worst(field, E::order) <= 1e-12 * 10.0);
    const Balance balance = field.balance();
    CHECK(std::abs(balance.left_over) <= 1e-10 * balance.gross + balance.floor);
    // and none of the next degree
    if constexpr (E::order < 3)
        CHECK(worst(patch(Body(square_with_edge<E>(5, 0.25)), E::order + 1), E::order + 1) > 1e-5);
}

TEST_CASE("an element defined outside the library solves through Body: linear patch, order 2, k(T)") {
    // the eight-node quadrilateral has the term x^2 y^2 on straight cells only when these are parallelograms
    CHECK(worst(patch(Body(square_with_edge<test::Serendipity8>(5, 0.25)), 1), 1) <= 1e-11);
    CHECK(worst(patch(Body(square_with_edge<test::Serendipity8>(5, 0.0)), 2), 2) <= 1e-11);
    const auto T = [](Point p) { return std::sin(2.0 * p.x) * std::cosh(2.0 * p.y); };
    const auto slope = [](Point p) {
        return Point{2.0 * std::cos(2.0 * p.x) * std::cosh(2.0 * p.y),
                     2.0 * std::sin(2.0 * p.x) * std::sinh(2.0 * p.y)};
    };
    test::Study mean_square;
    test::Study energy;
    for (const int n : {4, 8, 16}) {
        Body body(square_with_edge<test::Serendipity8>(n, 0.0));
        body.in("left", Material{.conductivity = 1.0});
        body.in("right", Material{.conductivity = 1.0});
        body.on("edge", FixedTemperature{of_place([T](Point p) { return T(p); })});
        const auto off = test::field_errors<test::Serendipity8>(steady(body), T, slope, [](Point) { return 1.0; });
        for (auto [study, error] : {std::pair{&mean_square, off.mean_square}, std::pair{&energy, off.energy}}) {
            study->h.push_back(1.0 / n);
            study->error.push_back(error);
        }
    }
    INFO(mean_square.text());
    INFO(energy.text());
    CHECK(std::abs(mean_square.order() - 3.0) <= 0.05);
    CHECK(std::abs(energy.order() - 2.0) <= 0.05);

    // k = exp(T / 20): theta = 20 exp(T / 20) is harmonic
    Body hot(square_with_edge<test::Serendipity8>(8, 0.2));
    for (const char* half : {"left", "right"})
        hot.in(half, Material{.conductivity = law([](const auto& s) { return exp(s.temperature / 20.0); })});
    hot.on("edge", FixedTemperature{of_place([](Point p) { return 20.0 * std::log(2.0 + p.x + 0.5 * p.y); })});
    const Field field = steady(hot);
    for (const Point p : {Point{0.3, 0.4}, Point{0.8, 0.15}})
        CHECK(std::abs(field.at(p) - 20.0 * std::log(2.0 + p.x + 0.5 * p.y)) <= 2e-3);
}

TEST_CASE("a rule of one's own takes the place of the library's: the same answer when exact, another when too coarse") {
    const auto mesh = [] { return square_with_edge<Quadrilateral<2>>(4, 0.25); };
    const Field own = patch(body_with_rule(mesh(), LobattoSquare{}), 2);
    CHECK(worst(own, 2) <= 1e-11);
    CHECK(own.model().kernels->points == 16);
    // one point a cell misses what a source does inside it
    const auto sine = [](const auto& rule) {
        Body body = body_with_rule(square_with_edge<Triangle<1>>(4, 0.0), rule);
        for (const char* half : {"left", "right"}) {
            body.in(half, Material{.conductivity = 1.0});
            body.in(half, Generation{.per_volume = of_place([](const auto& p) { return 100.0 * sin(6.0 * p.x); })});
        }
        body.on("edge", FixedTemperature{0.0});
        return steady(body)[generated_in("left")] + 100.0 / 6.0 * (std::cos(3.0) - 1.0);
    };
    CHECK(std::abs(sine(triangle_rule(10))) <= 1e-9);
    CHECK(std::abs(sine(triangle_rule(1))) > 1e-3);
}
