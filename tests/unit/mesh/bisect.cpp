// Newest-vertex bisection: soundness, what is kept, transfer, and where it stops.

#include <doctest/doctest.h>
#include <random>
#include <tepor/base/error.hpp>
#include <tepor/mesh/bisect.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/angles.hpp>
#include <tests/support/meshes.hpp>
#include <tests/support/scale.hpp>

using namespace tepor;

namespace {
std::vector<Index> some_cells(const MeshData& mesh, std::mt19937& random, double share) {
    std::vector<Index> cells;
    std::uniform_real_distribution<double> unit(0.0, 1.0);
    for (Index c = 0; c < mesh.cell_count(); ++c)
        if (unit(random) < share) cells.push_back(c);
    if (cells.empty()) cells.push_back(0);
    return cells;
}

double least_angle(const MeshData& mesh) {
    return test::check_angles(mesh, {}).least;
}

Section drum() {
    Section section;
    section.add("drum", circle({0.1, 0.2}, 1.0));
    section.add("core", circle({0.2, 0.3}, 0.3));
    section.cut(circle({-0.4, 0.1}, 0.2), "bore");
    section.rest("rim");
    return section;
}
} // namespace

TEST_CASE_TEMPLATE("bisected meshes stay sound and keep regions, faces and curves", E, Triangle<1>, Triangle<2>,
                   Triangle<3>) {
    std::mt19937 random(5);
    Mesh<E> mesh = triangulate<E>(drum(), {.size = 0.3});
    const double first_angle = least_angle(mesh);
    for (int round = 0; round < static_cast<int>(test::scaled(8, 4)); ++round) {
        CAPTURE(round);
        const auto cells = some_cells(mesh, random, 0.2);
        const Bisected<E> fine = bisected(mesh, std::span<const Index>(cells));
        REQUIRE(verify(fine.mesh).problem == "");
        CHECK(fine.skipped == 0);
        CHECK(fine.mesh.region_names == mesh.region_names);
        // Every marked cell is split, children lie in their parent's region, nodes keep their place and number.
        std::vector<int> children(mesh.region.size(), 0);
        for (Index c = 0; c < fine.mesh.cell_count(); ++c) {
            ++children[detail::as_size(fine.parent(c))];
            CHECK(fine.mesh.region[detail::as_size(c)] == mesh.region[detail::as_size(fine.parent(c))]);
        }
        for (Index c : cells) CHECK(children[detail::as_size(c)] >= 2);
        for (std::size_t n = 0; n < mesh.nodes.size() && E::order < 3; ++n) CHECK(fine.mesh.nodes[n] == mesh.nodes[n]);
        mesh = fine.mesh;
    }
    // Both circles in full: rim and bore lengths, and areas, within the error of polynomial arcs of at most 20 degrees.
    const double exact = pi * (1.0 - 0.04);
    const double core = pi * 0.09;
    CHECK(std::abs(test::area_of(mesh) - exact) <= (E::order == 1 ? 2e-2 : 1e-4));
    CHECK(std::abs(test::area_of(mesh, mesh.find_region("core")) - core) <= (E::order == 1 ? 5e-3 : 1e-5));
    for (const MeshFace& face : mesh.faces) {
        const Point centre = face.name == "bore" ? Point{-0.4, 0.1} : Point{0.1, 0.2};
        const double r = face.name == "bore" ? 0.2 : 1.0;
        double turn = 0.0;
        for (CellSide s : face.sides) {
            const Point a = mesh.nodes[detail::as_size(mesh.cell(s.cell)[s.side])];
            const Point b = mesh.nodes[detail::as_size(mesh.cell(s.cell)[(s.side + 1) % 3])];
            CHECK(std::abs(distance(a, centre) - r) <= 1e-12);
            turn += 2.0 * std::asin(0.5 * distance(a, b) / r);
        }
        CHECK(std::abs(turn - 2.0 * pi) <= 1e-9);
    }
    // Four classes of similar triangles: no angle below half the first least one, a little less where vertices moved to arcs.
    CHECK(least_angle(mesh) >= 0.45 * first_angle);
}

TEST_CASE_TEMPLATE("a polynomial of the order of the element is carried over exactly", E, Triangle<1>, Triangle<2>,
                   Triangle<3>) {
    const auto f = [](Point p) {
        const double x = p.x;
        const double y = p.y;
        if (E::order == 1) return 1.0 + 2.0 * x - 3.0 * y;
        if (E::order == 2) return 1.0 - x + x * y - 2.0 * y * y + 0.5 * x * x;
        return x * x * x - 2.0 * x * y * y + y - 0.3 * x * x * y;
    };
    std::mt19937 random(6);
    Mesh<E> mesh = test::unit_mesh<E>(3);
    aim_bisection(mesh);
    REQUIRE(verify(mesh).problem == "");
    std::vector<double> values;
    for (Point p : mesh.nodes) values.push_back(f(p));
    for (int round = 0; round < 6; ++round) {
        const auto cells = some_cells(mesh, random, 0.3);
        const auto fine = bisected(mesh, std::span<const Index>(cells));
        values = transferred(mesh, fine, values);
        mesh = fine.mesh;
        REQUIRE(values.size() == mesh.nodes.size());
        for (std::size_t n = 0; n < values.size(); ++n) CHECK(std::abs(values[n] - f(mesh.nodes[n])) <= 1e-13);
    }
    const auto fine = refined(mesh);
    const auto more = transferred(mesh, fine, values);
    for (std::size_t n = 0; n < more.size(); ++n) CHECK(std::abs(more[n] - f(fine.nodes[n])) <= 1e-13);
    values.pop_back();
    CHECK_THROWS_AS((void)transferred(mesh, fine, values), Error);
}

TEST_CASE("closing reaches no further than whole sides need") {
    // One square as two triangles with the diagonal as the side split first: marking one splits both in two, no more.
    auto mesh = test::unit_mesh<Triangle<1>>(1);
    aim_bisection(mesh);
    const std::vector<Index> cells{0};
    const auto fine = bisected(mesh, std::span<const Index>(cells));
    CHECK(fine.mesh.cell_count() == 4);
    CHECK(fine.mesh.node_count() == 5);
    CHECK(fine.mesh.nodes[4] == Point{0.5, 0.5});
    for (Index c = 0; c < 4; ++c) CHECK(fine.mesh.cell(c)[0] == 4); // the newest vertex comes first
    const std::vector<Index> none;
    CHECK(bisected(mesh, std::span<const Index>(none)).mesh.cells == mesh.cells);
    const std::vector<Index> wrong{2};
    CHECK_THROWS_AS((void)bisected(mesh, std::span<const Index>(wrong)), Error);
}

TEST_CASE("bisection towards a corner stops at 1e-12 of the body's size") {
    auto mesh = test::unit_mesh<Triangle<1>>(1);
    aim_bisection(mesh);
    int rounds = 0;
    for (; rounds < 200; ++rounds) {
        std::vector<Index> at_corner;
        for (Index c = 0; c < mesh.cell_count(); ++c)
            for (int k = 0; k < 3; ++k)
                if (mesh.nodes[detail::as_size(mesh.cell(c)[k])] == Point{0, 0}) at_corner.push_back(c);
        const auto fine = bisected(mesh, std::span<const Index>(at_corner));
        if (fine.skipped == static_cast<Index>(at_corner.size())) break;
        mesh = fine.mesh;
    }
    CHECK(rounds >= 75); // each round divides by sqrt(2): 2 log2(1e12) = 80
    CHECK(rounds <= 90);
    CHECK(verify(mesh).problem == "");
    CHECK(mesh.cell_count() <= 600);
    CHECK(least_angle(mesh) >= 45.0 - 1e-3);
}
