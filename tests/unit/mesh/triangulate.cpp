// Random drawings against the painting rule on scan lines: areas, soundness, angles.

#include <doctest/doctest.h>
#include <tepor/base/error.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/angles.hpp>
#include <tests/support/drawings.hpp>
#include <tests/support/meshes.hpp>
#include <tests/support/scale.hpp>

using namespace tepor;

namespace {
/// Some drawings show nothing (a cut over everything); those must say so.
template <class Check>
long each_drawing(test::PlainDrawing (*make)(unsigned), long count, Check&& check) {
    long meshed = 0;
    for (long i = 0; i < count; ++i) {
        const test::PlainDrawing drawing = make(static_cast<unsigned>(i));
        const auto areas = drawing.areas(400);
        double total = 0.0;
        for (double a : areas) total += a;
        CAPTURE(i);
        if (total == 0.0) {
            CHECK_THROWS_AS((void)triangulate<Triangle<1>>(drawing.section), Error);
            continue;
        }
        check(drawing, areas);
        ++meshed;
    }
    return meshed;
}

template <class E>
void check_drawing(const test::PlainDrawing& drawing, const std::vector<double>& areas, const Meshing& meshing,
                   double tolerance) {
    const auto mesh = triangulate<E>(drawing.section, meshing);
    CHECK(verify(mesh).problem == "");
    for (std::size_t r = 0; r < areas.size(); ++r) {
        const Index region = mesh.find_region(drawing.names[r]);
        const double area = region < 0 ? 0.0 : test::area_of(mesh, region);
        CAPTURE(drawing.names[r]);
        CHECK(std::abs(area - areas[r]) <= tolerance);
    }
    const auto angles = test::check_angles(mesh, detail::look_at(drawing.section).graph);
    CAPTURE(angles.where.x);
    CAPTURE(angles.where.y);
    CHECK(angles.least_elsewhere >= 25.0 - 1e-6);
    CHECK(angles.least > 0.0);
}
} // namespace

TEST_CASE("random polygon drawings give sound meshes whose regions have the areas of the painting rule") {
    const long meshed =
        each_drawing(&test::random_polygons, test::scaled(100, 10), [](const auto& drawing, const auto& areas) {
            double whole = 0.0;
            for (const double area : areas) whole += area;
            check_drawing<Triangle<1>>(drawing, areas, {.size = 0.08}, 1e-9 * whole);
        });
    CHECK(meshed >= test::scaled(90, 9));
}

TEST_CASE("random drawings with circles give regions within the chord error of the painting rule") {
    const long meshed =
        each_drawing(&test::random_circles, test::scaled(100, 10), [](const auto& drawing, const auto& areas) {
            // A chord of an arc with turn a and radius r cuts off r^2 (a - sin a) / 2 per a r of arc: at most r a^2 / 12 per length.
            double chords = 0.0;
            for (const auto& s : drawing.shapes) {
                const double a = 20.0 * pi / 180.0;
                chords += s.perimeter_of_arcs() * s.radius * a * a / 12.0;
            }
            check_drawing<Triangle<1>>(drawing, areas, {.size = 0.08}, chords + 1e-6);
            // Order 2 follows the arcs: its area error is far smaller, so this compares curved cells with the scan lines.
            check_drawing<Triangle<2>>(drawing, areas, {.size = 0.08}, 0.01 * chords + 2e-5);
        });
    CHECK(meshed >= test::scaled(90, 9));
}
