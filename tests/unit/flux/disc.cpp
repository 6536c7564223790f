// Weights on a disc, and point temperatures bracketed through them.

#include "tests/support/flux_case.hpp"
#include <Eigen/QR>
#include <doctest/doctest.h>
#include <tepor/flux/disc.hpp>

using namespace tepor;
using test::FluxCase;
using test::grid_triangles;
using test::lines;

namespace {

/// Moments of the whole weight against 1, x, x^2 + y^2 from those of the cells.
std::array<double, 3> totals(const MeshData& mesh, const std::vector<SpreadSource>& sources, Point centre) {
    std::array<double, 3> sum{};
    for (const SpreadSource& s : sources) {
        const Id* node = mesh.cell(s.cell);
        Point p[3];
        for (int i = 0; i < 3; ++i) p[i] = mesh.nodes[detail::as_size(node[i])] - centre;
        for (int i = 0; i < 3; ++i) {
            const int j = (i + 1) % 3;
            sum[0] += s.moment[i] + 2.0 * s.moment[3 + i];
            sum[1] += s.moment[i] * p[i].x + s.moment[3 + i] * (p[i].x + p[j].x);
            sum[2] += s.moment[i] * dot(p[i], p[i]) + 2.0 * s.moment[3 + i] * dot(p[i], p[j]);
        }
    }
    return sum;
}

} // namespace

TEST_CASE("the moments of a disc add up to those of the weight, whatever cells it cuts") {
    for (int m = 0; m <= 2; ++m)
        for (const double radius : {0.02, 0.11, 0.3, 0.39}) {
            CAPTURE(m);
            CAPTURE(radius);
            const MeshData mesh = grid_triangles(1, lines(0, 1, 5), lines(0, 1, 4), [](double, double) { return 0; });
            const Disc disc{{0.41, 0.53}, radius, m, 1.0};
            const auto sum = totals(mesh, disc_moments(mesh, disc), disc.centre);
            CHECK(std::abs(sum[0] - 1.0) <= 1e-13);
            CHECK(std::abs(sum[1]) <= 1e-13);
            CHECK(std::abs(sum[2] - radius * radius / (m + 2)) <= 1e-13); // mean of r^2 under (1 - r^2)^m
        }
}

TEST_CASE("half a disc on a straight edge with twice the weight has the same total") {
    const MeshData mesh = grid_triangles(2, lines(0, 1, 5), lines(0, 1, 4), [](double, double) { return 0; });
    const Disc disc{{0.41, 0.0}, 0.3, 2, 2.0};
    const auto sum = totals(mesh, disc_moments(mesh, disc), disc.centre);
    CHECK(std::abs(sum[0] - 1.0) <= 1e-13);
    CHECK(std::abs(sum[2] - 0.09 / 4) <= 1e-13);
}

TEST_CASE("what a projection loses of the weight is its own integral in a cell inside") {
    for (int order = 1; order <= 2; ++order) {
        const MeshData mesh = grid_triangles(order, lines(0, 1, 10), lines(0, 1, 10), [](double, double) { return 0; });
        const Disc disc{{0.5, 0.5}, 0.4, 1, 1.0};
        FluxCase body(mesh, [](int) { return 1.0; });
        int seen = 0;
        for (const SpreadSource& s : disc_moments(mesh, disc)) {
            const Point centre = body.centre(s.cell);
            if (distance(centre, disc.centre) > 0.25) continue;
            ++seen;
            // w = a (1 - r^2/rho^2): its projection on degree 1 by least squares over quadrature points, degree 4 rule
            double lost = 0.0;
            Eigen::Matrix<double, 6, 3> rows;
            Eigen::Matrix<double, 6, 1> right;
            int q = 0;
            FluxCase::points([&](double w, double l1, double l2) {
                const Point p = body.corner(s.cell, 0) + l1 * (body.corner(s.cell, 1) - body.corner(s.cell, 0)) +
                                l2 * (body.corner(s.cell, 2) - body.corner(s.cell, 0)) - disc.centre;
                const double root = std::sqrt(w * body.area(s.cell));
                rows.row(q) << root, order == 1 ? 0.0 : root * l1, order == 1 ? 0.0 : root * l2;
                right[q++] = root * 2.0 / (pi * 0.16) * (1.0 - dot(p, p) / 0.16);
            });
            const Eigen::Matrix<double, 6, 1> rest = right - rows * rows.completeOrthogonalDecomposition().solve(right);
            lost = rest.squaredNorm();
            CHECK(std::abs(s.lost_squared - lost) <= 1e-10 * lost + 1e-13 * right.squaredNorm());
        }
        CHECK(seen > 20);
    }
}

TEST_CASE("the temperature at a point of the square with a source lies in the interval") {
    // T(0.4, 0.45) = 0.0705543307 for f = k = 1 by the sine series: H. S. Carslaw and J. C. Jaeger, Conduction of Heat in Solids,
    // 2nd ed., section 5.4
    for (int order = 1; order <= 2; ++order) {
        double last = 1e300;
        for (const int n : {5, 10, 20}) {
            CAPTURE(order);
            CAPTURE(n);
            FluxCase primal(grid_triangles(order, lines(0, 1, n), lines(0, 1, n), [](double, double) { return 0; }),
                            [](int) { return 1.0; });
            primal.on_boundary([](Point, FluxSide& side) {
                side.kind = SideKind::fixed;
                return true;
            });
            FluxCase adjoint = primal;
            primal.problem.source.assign(primal.problem.source.size(), 1.0);
            const Disc disc{{0.4, 0.45}, 0.4, 2, 1.0};
            adjoint.problem.spread = disc_moments(adjoint.mesh, disc);
            adjoint.assemble();
            const auto t = primal.solve();
            const auto z = adjoint.solve();
            const Equilibrated flux_t = equilibrate(primal.problem, t.data()),
                               flux_z = equilibrate(adjoint.problem, z.data());
            const PairBound pair = pair_bound(primal.problem, t.data(), flux_t, adjoint.problem, z.data(), flux_z);
            const double value = FluxCase::vector(t).dot(adjoint.load) + disc.radius * disc.radius / 16.0 +
                                 pair.correction + primal.work(z) - primal.energy(t, z);
            CHECK(std::abs(value - 0.0705543307) <= pair.half_width + 5e-11);
            CHECK(pair.half_width <= (order == 1 ? 0.30 : 0.07) * last);
            last = pair.half_width;
        }
        CHECK(last <= (order == 1 ? 3.5e-4 : 3e-6));
    }
}
