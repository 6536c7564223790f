// Orders of the 1D elements in every frame with a conductivity of place, and where their end nodes are exact.

#include <cmath>
#include <doctest/doctest.h>
#include <random>
#include <tepor/element/segment.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/field_errors.hpp>
#include <tests/support/study.hpp>

using namespace tepor;

namespace {

// Manufactured: T = 30 + 50 sin(2 x) on [0.5, 1.5] with k = 1 + x^2 / 2
double T_at(double x) {
    return 30.0 + 50.0 * std::sin(2.0 * x);
}
double slope_at(double x) {
    return 100.0 * std::cos(2.0 * x);
}
double k_at(double x) {
    return 1.0 + 0.5 * x * x;
}

Frame frame_of(int n) {
    return n == 0 ? Frame(Planar{}) : n == 1 ? Frame(Cylindrical{}) : Frame(Spherical{});
}

/// Unequal cells: every border moved at random by up to 0.3 of the cells' length, inner nodes kept equispaced.
template <class E>
void jitter(Mesh<E>& mesh, int cells) {
    std::mt19937 random(7);
    std::uniform_real_distribution<double> shift(-0.3 / cells, 0.3 / cells);
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        Point* nodes = mesh.nodes.data();
        const Id* ids = mesh.cell(c);
        if (c + 1 < mesh.cell_count()) nodes[ids[1]].x += shift(random);
        for (int i = 2; i < E::nodes; ++i)
            nodes[ids[i]].x = nodes[ids[0]].x + E::reference_node(i)[0] * (nodes[ids[1]].x - nodes[ids[0]].x);
    }
    mesh.stack = {};
}

template <class E>
Field manufactured(int n, int cells, bool unequal) {
    Mesh<E> mesh = layers<E>({{.region = "bar", .thickness = 1.0, .cells = cells}}, frame_of(n), {.start = 0.5});
    if (unequal) jitter(mesh, cells);
    Body body(std::move(mesh));
    body.in("bar", Material{.conductivity = of_place([](const auto& p) { return 1.0 + 0.5 * p.x * p.x; })});
    // f = -(1 / r^n) (r^n k T')'
    body.in("bar", Generation{.per_volume = of_place([n](const auto& p) {
                                  const auto k = 1.0 + 0.5 * p.x * p.x;
                                  return -(p.x + n * k / p.x) * 100.0 * cos(2.0 * p.x) + k * 200.0 * sin(2.0 * p.x);
                              })});
    body.on("inner", Film{.coefficient = 4.0, .fluid = T_at(0.5) - k_at(0.5) * slope_at(0.5) / 4.0});
    body.on("outer", FixedTemperature{T_at(1.5)});
    return steady(body);
}

double exact_flow(int n) {
    return -k_at(1.5) * slope_at(1.5) * frame_of(n).factor(1) * std::pow(1.5, n);
}

/// Largest error over the ends of cells.
template <class E>
double end_error(const Field& field, double (*exact)(double)) {
    double worst = 0.0;
    const std::vector<double> values = field.cell_temperatures();
    for (Index c = 0; c < field.mesh().cell_count(); ++c)
        for (int i = 0; i < 2; ++i)
            worst = std::max(worst, std::abs(values[detail::as_size(c * E::nodes + i)] -
                                             exact(field.mesh().nodes[detail::as_size(field.mesh().cell(c)[i])].x)));
    return worst;
}

} // namespace

TEST_CASE_TEMPLATE("Segment<P>: L2 error falls as h^(P+1), energy as h^P, heat flow and end nodes as h^(2P)", E,
                   Segment<1>, Segment<2>, Segment<3>) {
    // Source: J. Douglas, T. Dupont, Numerische Mathematik 22 (1974) 99-109 (end nodes); G. Strang, G. J. Fix, An Analysis of the
    // Finite Element Method, 1973, section 3.2 (norms). Levels measured with equal cells, in the order of the columns.
    constexpr int P = E::order;
    // [P][frame]: errors on the finest mesh of equal cells in L2, energy, heat flow, end nodes
    static constexpr double level[3][3][4] = {{{8.353e-04, 4.308e-01, 5.238e-04, 1.338e-04},
                                               {1.660e-03, 1.028e+00, 6.874e-03, 5.470e-04},
                                               {1.830e-03, 1.427e+00, 1.459e-02, 1.164e-03}},
                                              {{5.201e-06, 2.888e-03, 7.079e-09, 3.472e-09},
                                               {1.449e-05, 8.153e-03, 1.102e-07, 3.470e-08},
                                               {2.320e-05, 1.317e-02, 2.689e-07, 8.873e-08}},
                                              {{6.448e-07, 1.741e-04, 4.266e-11, 8.541e-12},
                                               {1.510e-06, 4.153e-04, 2.520e-09, 2.067e-10},
                                               {2.060e-06, 5.767e-04, 1.285e-08, 1.022e-09}}};
    const std::vector<int> cells = P == 1   ? std::vector<int>{16, 32, 64, 128}
                                   : P == 2 ? std::vector<int>{8, 16, 32, 64}
                                            : std::vector<int>{3, 6, 12, 24};
    for (const int n : {0, 1, 2})
        for (const bool unequal : {false, true}) {
            CAPTURE(n);
            CAPTURE(unequal);
            test::Study study[4];
            for (const int count : cells) {
                const Field field = manufactured<E>(n, count, unequal);
                const auto off = test::field_errors<E>(
                    field, [](Point p) { return T_at(p.x); },
                    [](Point p) {
                        return Point{slope_at(p.x), 0.0};
                    },
                    [](Point p) { return k_at(p.x); });
                const double error[4] = {off.mean_square, off.energy,
                                         std::abs(field[heat_out_through("outer")] - exact_flow(n)),
                                         end_error<E>(field, T_at)};
                for (int i = 0; i < 4; ++i) {
                    study[i].h.push_back(1.0 / count);
                    study[i].error.push_back(error[i]);
                }
                const Balance balance = field.balance();
                CHECK(std::abs(balance.left_over) <= 1e-10 * balance.gross + balance.floor);
            }
            const double order[4] = {P + 1.0, P, 2.0 * P, 2.0 * P};
            for (int i = 0; i < 4; ++i) {
                CAPTURE(i);
                INFO(study[i].text());
                const bool tiny = P == 3 && i >= 2; // close to rounding
                CHECK(std::abs(study[i].order() - order[i]) <= (unequal ? 0.35 : tiny ? 0.25 : 0.05));
                const double relative = study[i].error.back() / level[P - 1][n][i];
                CHECK(relative <= (unequal ? 3.0 : tiny ? 1.2 : 1.02));
                CHECK(relative >= (unequal ? 1.0 : tiny ? 0.8 : 0.98));
            }
        }
}
