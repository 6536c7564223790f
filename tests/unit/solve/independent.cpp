// One body with two materials, contact, film, radiation and k(T), beside a solve that shares no code with the library:
// triangles by their side vectors, edges by five Gauss points, a Jacobian by differences, and dense elimination.
#include <array>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/solve/steady.hpp>
#include <vector>

using namespace tepor;

namespace {

constexpr int columns = 8; // cells along x, the joint at half of it
constexpr int rows = 4;
constexpr double width = 0.4;
constexpr double height = 0.2;

double k_left(double T) {
    return 1.2 + 0.002 * T;
}
constexpr double k_right = 0.4;
constexpr double joint = 60.0;      // W/(m2 K)
constexpr double film = 30.0;       // left side, to 800 degC
constexpr double outer_film = 8.0;  // right side, to 25 degC
constexpr double emissivity = 0.85; // right side, to 25 degC
constexpr double source = 3000.0;   // W/m3 in the right half

/// Nodes of the left half (0 .. columns / 2) and of the right half, each with its own copy of the joint's nodes.
int node(int half, int i, int j) {
    return half * (columns / 2 + 1) * (rows + 1) + j * (columns / 2 + 1) + i;
}
/// Slanted, so that no triangle is like another: the joint and the far side lean, the left side stands upright.
Point place(int half, int i, int j) {
    const double x = width * (half * columns / 2 + i) / columns;
    return {x * (1.0 + 0.2 * j / rows), height * j / rows};
}
constexpr int nodes = 2 * (columns / 2 + 1) * (rows + 1);

constexpr std::array<double, 5> gauss_at{0.046910077030668, 0.230765344947158, 0.5, 0.769234655052842,
                                         0.953089922969332};
constexpr std::array<double, 5> gauss_weight{0.118463442528095, 0.239314335249683, 0.284444444444444, 0.239314335249683,
                                             0.118463442528095};

std::vector<std::array<int, 3>> cells_of(int half) {
    std::vector<std::array<int, 3>> cells;
    for (int j = 0; j < rows; ++j)
        for (int i = 0; i < columns / 2; ++i) {
            cells.push_back({node(half, i, j), node(half, i + 1, j), node(half, i + 1, j + 1)});
            cells.push_back({node(half, i, j), node(half, i + 1, j + 1), node(half, i, j + 1)});
        }
    return cells;
}

std::vector<Point> places() {
    std::vector<Point> p(nodes);
    for (int half = 0; half < 2; ++half)
        for (int j = 0; j <= rows; ++j)
            for (int i = 0; i <= columns / 2; ++i) p[detail::as_size(node(half, i, j))] = place(half, i, j);
    return p;
}

/// Heat each node is short of.
std::vector<double> residual(const std::vector<Point>& p, const std::vector<double>& T) {
    std::vector<double> r(nodes, 0.0);
    const auto at = [](int n) { return detail::as_size(n); };
    for (int half = 0; half < 2; ++half)
        for (const auto& c : cells_of(half)) {
            const Point side[3] = {p[at(c[2])] - p[at(c[1])], p[at(c[0])] - p[at(c[2])], p[at(c[1])] - p[at(c[0])]};
            const double area = 0.5 * cross(side[2], p[at(c[2])] - p[at(c[0])]);
            // k is linear in T, T linear in the triangle: its mean is its value at the mean
            const double k = half == 0 ? k_left((T[at(c[0])] + T[at(c[1])] + T[at(c[2])]) / 3.0) : k_right;
            for (int a = 0; a < 3; ++a) {
                for (int b = 0; b < 3; ++b)
                    r[at(c[detail::as_size(a)])] +=
                        k * dot(side[a], side[b]) / (4.0 * area) * T[at(c[detail::as_size(b)])];
                if (half == 1) r[at(c[detail::as_size(a)])] -= source * area / 3.0;
            }
        }
    const auto edge = [&](int a, int b, auto flux) {
        const double length = distance(p[at(a)], p[at(b)]);
        for (std::size_t q = 0; q < 5; ++q) {
            const double s = gauss_at[q];
            const double out = length * gauss_weight[q] * flux(s);
            r[at(a)] += out * (1.0 - s);
            r[at(b)] += out * s;
        }
    };
    for (int j = 0; j < rows; ++j) {
        const int a = node(0, 0, j);
        const int b = node(0, 0, j + 1);
        edge(a, b, [&](double s) { return film * ((1.0 - s) * T[at(a)] + s * T[at(b)] - 800.0); });
        const int c = node(1, columns / 2, j);
        const int d = node(1, columns / 2, j + 1);
        edge(c, d, [&](double s) {
            const double t = (1.0 - s) * T[at(c)] + s * T[at(d)];
            return outer_film * (t - 25.0) +
                   emissivity * 5.670374419e-8 * (std::pow(t + 273.15, 4) - std::pow(25.0 + 273.15, 4));
        });
        const int e = node(0, columns / 2, j);
        const int f = node(0, columns / 2, j + 1);
        const int g = node(1, 0, j);
        const int h = node(1, 0, j + 1);
        const auto jump = [&](double s) {
            return joint * ((1.0 - s) * (T[at(e)] - T[at(g)]) + s * (T[at(f)] - T[at(h)]));
        };
        edge(e, f, jump);
        edge(g, h, [&](double s) { return -jump(s); });
    }
    return r;
}

/// Newton with a Jacobian by differences and dense elimination with pivots.
std::vector<double> solve_by_hand() {
    const std::vector<Point> p = places();
    std::vector<double> T(nodes, 400.0);
    for (int pass = 0; pass < 12; ++pass) {
        std::vector<double> r = residual(p, T);
        std::vector<std::vector<double>> J(nodes, std::vector<double>(nodes));
        for (std::size_t m = 0; m < nodes; ++m) {
            const double h = 1e-3;
            std::vector<double> up = T;
            std::vector<double> down = T;
            up[m] += h;
            down[m] -= h;
            const std::vector<double> above = residual(p, up);
            const std::vector<double> below = residual(p, down);
            for (std::size_t n = 0; n < nodes; ++n) J[n][m] = (above[n] - below[n]) / (2.0 * h);
        }
        for (std::size_t k = 0; k < nodes; ++k) {
            std::size_t pivot = k;
            for (std::size_t n = k; n < nodes; ++n)
                if (std::abs(J[n][k]) > std::abs(J[pivot][k])) pivot = n;
            std::swap(J[k], J[pivot]);
            std::swap(r[k], r[pivot]);
            for (std::size_t n = k + 1; n < nodes; ++n) {
                const double f = J[n][k] / J[k][k];
                for (std::size_t m = k; m < nodes; ++m) J[n][m] -= f * J[k][m];
                r[n] -= f * r[k];
            }
        }
        for (std::size_t k = nodes; k-- > 0;) {
            for (std::size_t m = k + 1; m < nodes; ++m) r[k] -= J[k][m] * r[m];
            r[k] /= J[k][k];
            T[k] -= r[k];
        }
    }
    return T;
}

/// The same body for the library: one mesh with the joint's nodes shared; the contact splits them.
Body body_for_the_library() {
    MeshArrays mesh;
    std::vector<Id> id(nodes, -1);
    const std::vector<Point> p = places();
    for (int n = 0; n < nodes; ++n) {
        Id known = -1;
        for (std::size_t m = 0; m < mesh.nodes.size(); ++m)
            if (distance(mesh.nodes[m], p[detail::as_size(n)]) < 1e-9) known = detail::as_id(m);
        if (known < 0) {
            known = detail::as_id(mesh.nodes.size());
            mesh.nodes.push_back(p[detail::as_size(n)]);
        }
        id[detail::as_size(n)] = known;
    }
    mesh.region_names = {"hot", "cold"};
    MeshFace left{"left", {}};
    MeshFace right{"right", {}};
    for (int half = 0; half < 2; ++half)
        for (const auto& c : cells_of(half)) {
            const Id cell = detail::as_id(mesh.region.size());
            mesh.region.push_back(half);
            for (const int n : c) mesh.cells.push_back(id[detail::as_size(n)]);
            for (Id s = 0; s < 3; ++s) {
                const Point a = p[detail::as_size(c[detail::as_size(s)])];
                const Point b = p[detail::as_size(c[detail::as_size((s + 1) % 3)])];
                if (half == 0 && a.x < 1e-12 && b.x < 1e-12) left.sides.push_back({cell, s});
            }
            // the far side of the right half: both nodes in its last column
            for (Id s = 0; s < 3; ++s) {
                const auto last = [&](int n) {
                    return half == 1 && (n - node(1, 0, 0)) % (columns / 2 + 1) == columns / 2;
                };
                if (last(c[detail::as_size(s)]) && last(c[detail::as_size((s + 1) % 3)]))
                    right.sides.push_back({cell, s});
            }
        }
    mesh.faces = {left, right};
    // T^4 along an edge is beyond the usual rule; with the degree raised both integrate it exactly
    Body body{mesh_from_arrays<Triangle<1>>(std::move(mesh)), BodyOptions{.extra_degree = 4}};
    body.in("hot", Material{.conductivity = law([](const auto& s) { return 1.2 + 0.002 * s.temperature; })});
    body.in("cold", Material{.conductivity = k_right}).in("cold", Generation{.per_volume = source});
    body.between("hot", "cold", Contact{.conductance = joint});
    body.on("left", Film{.coefficient = film, .fluid = 800.0});
    body.on("right", Film{.coefficient = outer_film, .fluid = 25.0});
    body.on("right", Radiation{.emissivity = emissivity, .surroundings = 25.0});
    return body;
}

} // namespace

TEST_CASE("two materials, contact, film, radiation and k(T) agree with a solve that shares no code, and balance") {
    const std::vector<double> by_hand = solve_by_hand();
    const Body body = body_for_the_library();
    const Field field = steady(body);
    const std::vector<Point> p = places();
    double worst = 0.0;
    for (int half = 0; half < 2; ++half)
        for (int j = 0; j <= rows; ++j)
            for (int i = 0; i <= columns / 2; ++i) {
                const auto n = detail::as_size(node(half, i, j));
                const double T = field.at(p[n], half == 0 ? "hot" : "cold");
                worst = std::max(worst, std::abs(T - by_hand[n]));
            }
    CHECK(worst <= 1e-6);
    CHECK(field[coldest_in("hot")] < field[hottest_in("hot")] - 50.0); // it is no trifle
    CHECK(field.balance().balanced());
    // heat through the joint, by the temperatures of the other solve
    double through = 0.0;
    for (int j = 0; j < rows; ++j) {
        const auto jump = [&](int row) {
            return by_hand[detail::as_size(node(0, columns / 2, row))] - by_hand[detail::as_size(node(1, 0, row))];
        };
        through += joint * 0.5 * (jump(j) + jump(j + 1)) *
                   distance(p[detail::as_size(node(1, 0, j))], p[detail::as_size(node(1, 0, j + 1))]);
    }
    CHECK(std::abs(field[heat_from("hot", "cold")] - through) <= 1e-6 * through);
    CHECK(std::abs(field[heat_in_through("left")] - through) <= 1e-6 * through);
    CHECK(std::abs(field[heat_out_through("right")] - through - field[generated_in("cold")]) <= 1e-6 * through);
}
