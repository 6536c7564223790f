// Drawings made to be difficult: touching, crossing, coinciding, sharp, thin; the areas they show and sound meshes.

#include <cmath>
#include <doctest/doctest.h>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/mesh/verify.hpp>
#include <tests/support/angles.hpp>
#include <tests/support/meshes.hpp>

using namespace tepor;

namespace {
void check_says(const std::string& message, const std::string& words) {
    INFO(message);
    CHECK(message.find(words) != std::string::npos);
}
} // namespace

TEST_CASE("difficult drawings give the areas they show") {
    struct Case {
        const char* name;
        void (*draw)(Section&);
        double area;      ///< of everything
        double tolerance; ///< order 2 on arcs of 20 degrees
        const char* remark;
    };
    const double disc = pi;
    const Case cases[] = {
        {"two circles touching outside",
         [](Section& s) {
             s.add("a", circle({0, 0}, 1));
             s.add("b", circle({2, 0}, 1));
         },
         2 * disc, 1e-4, ""},
        {"a circle touching one around it",
         [](Section& s) {
             s.add("a", circle({0, 0}, 1));
             s.add("b", circle({0.5, 0}, 0.5));
         },
         disc, 1e-4, ""},
        {"a hole touching its outer circle inside",
         [](Section& s) {
             s.add("a", circle({0, 0}, 1));
             s.cut(circle({0.5, 0}, 0.5), "h");
         },
         0.75 * disc, 1e-3, ""},
        {"the same circle twice",
         [](Section& s) {
             s.add("a", circle({0, 0}, 1));
             s.add("b", circle({0, 0}, 1));
         },
         disc, 1e-4, "region \"a\" is painted over"},
        {"a circle and a tangent line",
         [](Section& s) {
             s.add("a", rectangle({-2, -1}, {2, 3}));
             s.add("b", circle({0, 0}, 1));
         },
         16, 1e-4, ""},
        {"a circle resting on a plate",
         [](Section& s) {
             s.add("a", rectangle({-2, -2}, {2, -1}));
             s.add("b", circle({0, 0}, 1));
         },
         4 + disc, 1e-4, ""},
        {"plates sharing an edge in part",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {1, 1}));
             s.add("b", rectangle({1, 0.3}, {2, 1.7}));
         },
         2.4, 1e-12, ""},
        {"plates meeting at a corner",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {1, 1}));
             s.add("b", rectangle({1, 1}, {2, 2}));
         },
         2, 1e-12, ""},
        {"a gap below the tolerance",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {1, 1}));
             s.add("b", rectangle({1 + 1e-10, 0}, {2, 1}));
         },
         2, 1e-8, "merged"},
        {"an overlap below the tolerance",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {1, 1}));
             s.add("b", rectangle({1 - 1e-10, 0}, {2, 1}));
         },
         2, 1e-8, "merged"},
        {"an edge turned by less than the tolerance",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {1, 1}));
             s.add("b", polygon({{1, 0}, {2, 0}, {2, 1}, {1 + 1e-9, 1}}));
         },
         2, 1e-8, ""},
        {"holes that cross",
         [](Section& s) {
             s.add("a", rectangle({-2, -2}, {3, 2}));
             s.cut(circle({0, 0}, 1), "h");
             s.cut(circle({1, 0}, 1), "k");
         },
         20 - (2 * disc - (2 * pi / 3 - std::sqrt(3.0) / 2)), 1e-3, ""},
        {"a hole over the edge",
         [](Section& s) {
             s.add("a", rectangle({-2, 0}, {2, 2}));
             s.cut(circle({0, 0}, 1), "h");
         },
         8 - disc / 2, 1e-4, ""},
        {"a hole beside the body",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {1, 1}));
             s.cut(circle({5, 5}, 1), "h");
         },
         1, 1e-12, "touches nothing"},
        {"a spike of half a degree",
         [](Section& s) {
             s.add("a", polygon({{0, 0}, {1, 0}, {1, 0.0087}}));
         },
         0.00435, 1e-12, ""},
        {"a spike of another region",
         [](Section& s) {
             s.add("a", rectangle({-1, -1}, {2, 1}));
             s.add("b", polygon({{0, 0}, {1, 0}, {1, 0.01}}));
         },
         6, 1e-12, ""},
        {"eight sharp corners at one point",
         [](Section& s) {
             for (int i = 0; i < 16; i += 2)
                 s.add(i % 4 == 0 ? "a" : "b", polygon({{0, 0},
                                                        {std::cos(i * pi / 8), std::sin(i * pi / 8)},
                                                        {std::cos((i + 1) * pi / 8), std::sin((i + 1) * pi / 8)}}));
         },
         4 * std::sin(pi / 8), 1e-12, ""},
        {"a crossed polygon",
         [](Section& s) {
             s.add("a", polygon({{0, 0}, {1, 1}, {1, 0}, {0, 1}}));
         },
         0.5, 1e-12, ""},
        {"a thin ring",
         [](Section& s) {
             s.add("a", ring({0, 0}, 0.999, 1.0));
         },
         disc * (1 - 0.999 * 0.999), 1e-8, ""},
        {"a thin moon",
         [](Section& s) {
             s.add("a", circle({0, 0}, 1));
             s.cut(circle({0.01, 0}, 1), "h");
         },
         disc - (2 * std::acos(0.005) - 0.005 * std::sqrt(4 - 0.0001)), 1e-4, ""},
        {"a half-moon sharper than its arcs",
         [](Section& s) {
             s.add("a", circle({0, 0}, 1));
             s.cut(circle({0, 0.5}, 0.5), "h");
         },
         0.75 * disc, 1e-3, ""},
        {"a rounded slot",
         [](Section& s) {
             s.add("a", rounded_rectangle({0, 0}, {3, 1}, 0.5));
         },
         2 + disc / 4, 1e-4, ""},
        {"three circles touching each other",
         [](Section& s) {
             for (int i = 0; i < 3; ++i)
                 s.add(&"abc"[i], circle({std::cos(2 * i * pi / 3) * 2 / std::sqrt(3.0),
                                          std::sin(2 * i * pi / 3) * 2 / std::sqrt(3.0)},
                                         1));
         },
         3 * disc, 1e-3, ""},
        {"a circle through a corner",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {1, 1}));
             s.add("b", circle({0, 0}, std::sqrt(2.0)));
         },
         2 * disc, 1e-3, ""},
        {"a slot whose end touches a wall",
         [](Section& s) {
             s.add("a", rectangle({0, 0}, {3, 1}));
             s.cut(rounded_rectangle({1, 0.4}, {3, 0.6}, 0.1), "h");
         },
         3 - (1.8 * 0.2 + pi * 0.01), 1e-4, ""},
    };
    for (const Case& c : cases) {
        CAPTURE(std::string(c.name));
        Section section;
        c.draw(section);
        try {
            const auto mesh = triangulate<Triangle<2>>(section, {.size = 0.3});
            CHECK(verify(mesh).problem == "");
            CHECK(std::abs(test::area_of(mesh) - c.area) <= c.tolerance);
            std::string all;
            for (const auto& r : mesh.remarks) all += r + "\n";
            if (*c.remark != '\0') check_says(all, c.remark);
            const auto angles = test::check_angles(mesh, detail::look_at(section).graph);
            CAPTURE(angles.where.x);
            CAPTURE(angles.where.y);
            CHECK(angles.least_elsewhere >= 25.0 - 1e-6);
        } catch (const Error& error) {
            FAIL_CHECK(std::string(error.what()));
        }
    }
}
