// The re-entrant corner with the data of its own singular field: rates of error and bound under uniform and adaptive refinement.

#include "tests/support/flux_case.hpp"
#include <doctest/doctest.h>
#include <span>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/bisect.hpp>
#include <tepor/mesh/refine.hpp>

using namespace tepor;
using test::FluxCase;
using test::grid_triangles;
using test::lines;

namespace {

/// r^(2/3) sin(2 a/3) on [-1,1]^2 without its lower right quarter: harmonic, zero on the two sides that meet at the corner
/// (P. Grisvard, Elliptic Problems in Nonsmooth Domains (1985), chapter 4).
double singular(Point p) {
    double a = std::atan2(p.y, p.x);
    if (a < -1e-9) a += 2.0 * pi;
    return std::pow(dot(p, p), 1.0 / 3.0) * std::sin(2.0 / 3.0 * a);
}

Point slope_of(Point p) {
    double a = std::atan2(p.y, p.x);
    if (a < -1e-9) a += 2.0 * pi;
    const double f = 2.0 / 3.0 * std::pow(dot(p, p), -1.0 / 6.0);
    return {-f * std::sin(a / 3.0), f * std::cos(a / 3.0)};
}

/// Squared distance of the slopes over the part of cell c with barycentric corners q, halved towards the corner of the L.
double distance_squared(const FluxCase& body, Index c, const std::vector<double>& t, const std::array<Point, 3>& q,
                        int depth) {
    const auto place = [&](Point l) {
        return (1.0 - l.x - l.y) * body.corner(c, 0) + l.x * body.corner(c, 1) + l.y * body.corner(c, 2);
    };
    bool near = false;
    for (const Point l : q) near = near || dot(place(l), place(l)) < 1e-30;
    if (near && depth < 24) {
        const Point a = 0.5 * (q[0] + q[1]), b = 0.5 * (q[1] + q[2]), d = 0.5 * (q[2] + q[0]);
        double sum = 0.0;
        for (const auto& part :
             {std::array{q[0], a, d}, std::array{a, q[1], b}, std::array{d, b, q[2]}, std::array{a, b, d}})
            sum += distance_squared(body, c, t, part, depth + 1);
        return sum;
    }
    const double share = std::abs(cross(q[1] - q[0], q[2] - q[0]));
    double sum = 0.0;
    FluxCase::points([&](double w, double l1, double l2) {
        const Point l = (1.0 - l1 - l2) * q[0] + l1 * q[1] + l2 * q[2];
        double n[6];
        Point g[6];
        body.shapes(c, l.x, l.y, n, g);
        Point slope{};
        for (int i = 0; i < body.mesh.nodes_per_cell; ++i) {
            const auto at = detail::as_size(c * body.mesh.nodes_per_cell + i);
            slope = slope + t[detail::as_size(body.problem.dof[at])] * g[i];
        }
        const Point off = slope - slope_of(place(l));
        sum += w * share * body.area(c) * dot(off, off);
    });
    return sum;
}

struct Step {
    double unknowns, error, bound;
    std::vector<double> squared;
};

Step solve_on(const MeshData& mesh) {
    FluxCase body(mesh, [](int) { return 1.0; });
    body.on_boundary([](Point, FluxSide& side) {
        side.kind = SideKind::fixed;
        return true;
    });
    body.prescribe(singular); // its interpolant
    const auto t = body.solve();
    const Equilibrated flux = equilibrate(body.problem, t.data());
    double sum = 0.0;
    for (Index c = 0; c < body.mesh.cell_count(); ++c)
        sum += distance_squared(body, c, t, {Point{0, 0}, Point{1, 0}, Point{0, 1}}, 0);
    return {static_cast<double>(body.dofs), std::sqrt(sum), flux.bound(), flux.squared};
}

double slope_in_unknowns(const Step& a, const Step& b, double Step::*what) {
    return std::log(b.*what / a.*what) / std::log(b.unknowns / a.unknowns);
}

MeshData first_mesh(int order, const detail::CellKind& kind) {
    MeshData mesh = grid_triangles(order, lines(-1, 1, 4), lines(-1, 1, 4),
                                   [](double x, double y) { return x > 0 && y < 0 ? -1 : 0; });
    mesh.region_names = {"L"};
    detail::longest_side_first(mesh, kind);
    return mesh;
}

MeshData empty_like(const MeshData& mesh) {
    MeshData out;
    out.dim = mesh.dim, out.order = mesh.order, out.nodes_per_cell = mesh.nodes_per_cell;
    out.sides_per_cell = mesh.sides_per_cell, out.shape = mesh.shape, out.frame = mesh.frame;
    return out;
}

} // namespace

TEST_CASE_TEMPLATE("L with singular data, evenly refined: error and bound fall as h^(2/3) whatever the order", E,
                   Triangle<1>, Triangle<2>) {
    const detail::CellKind& kind = detail::cell_kind<E>();
    MeshData mesh = first_mesh(E::order, kind);
    std::vector<Step> steps;
    for (int level = 0; level < (E::order == 1 ? 5 : 4); ++level) {
        steps.push_back(solve_on(mesh));
        CHECK(steps.back().bound >= steps.back().error);
        CHECK(steps.back().bound <= 1.6 * steps.back().error);
        MeshData fine = empty_like(mesh);
        detail::refine_uniformly(mesh, kind, fine);
        mesh = fine;
    }
    const Step &a = steps[steps.size() - 2], &b = steps.back();
    // in h: twice the slope in unknowns
    MESSAGE("uniform, order ", E::order, ": error ", slope_in_unknowns(a, b, &Step::error), ", bound ",
            slope_in_unknowns(a, b, &Step::bound), ", index ", b.bound / b.error);
    CHECK(std::abs(2.0 * slope_in_unknowns(a, b, &Step::error) + 2.0 / 3.0) <= 0.05);
    CHECK(std::abs(2.0 * slope_in_unknowns(a, b, &Step::bound) + 2.0 / 3.0) <= 0.05);
}

TEST_CASE_TEMPLATE("L with singular data under adaptivity: the rates of a smooth field", E, Triangle<1>, Triangle<2>) {
    const detail::CellKind& kind = detail::cell_kind<E>();
    MeshData mesh = first_mesh(E::order, kind);
    std::vector<Step> steps;
    for (;;) {
        steps.push_back(solve_on(mesh));
        const Step& step = steps.back();
        CHECK(step.bound >= step.error);
        if (step.unknowns >= 2000.0) break;
        std::vector<Index> order(step.squared.size());
        std::iota(order.begin(), order.end(), Index{0});
        std::sort(order.begin(), order.end(), [&](Index a, Index b) {
            return step.squared[detail::as_size(a)] > step.squared[detail::as_size(b)];
        });
        const double all = std::accumulate(step.squared.begin(), step.squared.end(), 0.0);
        std::size_t marked = 0;
        for (double sum = 0.0; sum < 0.5 * all; ++marked) sum += step.squared[detail::as_size(order[marked])];
        MeshData fine = empty_like(mesh);
        detail::Lineage lineage;
        Index skipped = 0;
        detail::bisect(mesh, kind, std::span<const Index>(order.data(), marked), fine, lineage, skipped);
        mesh = fine;
    }
    const Step &a = steps[steps.size() / 2], &b = steps.back();
    MESSAGE("adaptive, order ", E::order, ": error ", slope_in_unknowns(a, b, &Step::error), ", bound ",
            slope_in_unknowns(a, b, &Step::bound), ", index ", b.bound / b.error);
    CHECK(slope_in_unknowns(a, b, &Step::error) <= (E::order == 1 ? -0.48 : -0.96));
    CHECK(slope_in_unknowns(a, b, &Step::bound) <= (E::order == 1 ? -0.48 : -0.96));
    CHECK(b.bound <= 1.15 * b.error);
}
