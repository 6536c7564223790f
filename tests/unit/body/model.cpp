// The compiled body: numbering, splits along contacts, slots and their roles.

#include <cmath>
#include <doctest/doctest.h>
#include <set>
#include <tepor/body/body.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>

#include <tepor/element/triangle.hpp>
#include <tepor/linear/banded.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>

using namespace tepor;

namespace {

Body two_blocks(bool touching) {
    Tiles drawing;
    drawing.add("left", {0, 0}, {1, 1});
    drawing.add("right", {1, 0}, {2, 1});
    if (!touching) drawing.add("top", {0, 1}, {2, 2});
    Body body{tiles<Triangle<2>>(drawing, {.size = 0.25}, Planar{})};
    body.in("left", Material{.conductivity = 1.0}).in("right", Material{.conductivity = 2.0});
    if (!touching) body.in("top", Material{.conductivity = 1.0});
    body.on("left", FixedTemperature{1.0});
    return body;
}

} // namespace

TEST_CASE("free unknowns come first, prescribed ones last, and every node has its place") {
    const Body body = two_blocks(true);
    const Model& m = *body.model();
    CHECK(m.unknowns == body.mesh().node_count());
    CHECK(m.free == m.unknowns - 9); // 4 quadratic sides on x = 0
    for (Index u = 0; u < m.unknowns; ++u) {
        const auto at = detail::as_size(u);
        CHECK((m.places[at].x == 0.0) == (u >= m.free));
        CHECK(m.places[at] == body.mesh().nodes[detail::as_size(m.node_of[at])]);
    }
}

TEST_CASE("cells of a region are contiguous and keep their nodes") {
    const Body body = two_blocks(true);
    const Model& m = *body.model();
    Index covered = 0;
    for (std::size_t r = 0; r < m.regions.size(); ++r) {
        covered += m.regions[r].last_cell - m.regions[r].first_cell;
        for (Id c = m.regions[r].first_cell; c < m.regions[r].last_cell; ++c) {
            const Id user = m.user_cell[detail::as_size(c)];
            CHECK(body.mesh().region[detail::as_size(user)] == static_cast<Id>(r));
            CHECK(m.model_cell(user) == c);
            for (int i = 0; i < 6; ++i) CHECK(m.node_of[detail::as_size(m.cell(c)[i])] == body.mesh().cell(user)[i]);
        }
    }
    CHECK(covered == body.mesh().cell_count());
}

TEST_CASE("a contact doubles every node of its interface") {
    Body body = two_blocks(true);
    const Index before = body.model()->unknowns;
    body.between("left", "right", Contact{.conductance = 10.0});
    const Model& m = *body.model();
    CHECK(m.split);
    CHECK(m.unknowns == before + 9);
    const ContactModel& contact = m.contacts[0];
    CHECK(contact.first.count() == 4);
    for (std::size_t i = 0; i < contact.first.unknowns.size(); ++i) {
        const auto a = detail::as_size(contact.first.unknowns[i]);
        const auto b = detail::as_size(contact.second.unknowns[i]);
        CHECK(a != b);
        CHECK(m.places[a] == m.places[b]); // matched node by node, also where the second side runs the other way
    }
}

TEST_CASE("where a third region joins both sides the jump closes at that point") {
    Body body = two_blocks(false);
    const Index before = body.model()->unknowns;
    body.between("left", "right", Contact{.conductance = 10.0});
    CHECK(body.model()->unknowns == before + 8); // of the 9 nodes the one under "top" stays single
}

TEST_CASE("in 1D a contact keeps the band narrow") {
    Body wall{layers<Segment<3>>(
        {{.region = "a", .thickness = 0.1, .cells = 3}, {.region = "b", .thickness = 0.1, .cells = 2}})};
    wall.in("a", Material{.conductivity = 1.0}).in("b", Material{.conductivity = 1.0});
    wall.between("a", "b", Contact{.conductance = 5.0}).on("inner", FixedTemperature{0.0});
    const Model& m = *wall.model();
    CHECK(m.unknowns == 17);
    CHECK(half_bandwidth(m.pattern, m.free) == 3);
}

TEST_CASE("the scatter map agrees with the pattern") {
    Body body = two_blocks(true);
    body.between("left", "right", Contact{.conductance = 10.0});
    const Model& m = *body.model();
    for (Id c = 0; c < static_cast<Id>(m.user_cell.size()); ++c) {
        int p = 0;
        for (int i = 0; i < 6; ++i)
            for (int j = 0; j <= i; ++j, ++p) {
                const Id at = m.scatter[detail::as_size(c * 21 + p)];
                const Id row = std::max(m.cell(c)[i], m.cell(c)[j]);
                CHECK(m.pattern.column[detail::as_size(at)] == std::min(m.cell(c)[i], m.cell(c)[j]));
                CHECK(at >= m.pattern.start[detail::as_size(row)]);
                CHECK(at < m.pattern.start[detail::as_size(row) + 1]);
            }
    }
}

TEST_CASE("slots know what they enter") {
    Parameter k{"k", 1.0};
    Parameter h{"h", 5.0};
    Parameter air{"air", 20.0};
    Parameter power{"power", 100.0};
    Parameter rho{"rho", 1000.0};
    Parameter hold{"hold", 50.0};
    Parameter thick{"thick", 0.1};
    Body wall{layers<Segment<1>>({{.region = "a", .thickness = thick, .cells = 3}})};
    wall.in("a", Material{.conductivity = k, .density = rho, .specific_heat = 900.0})
        .in("a", Generation{.total = power});
    wall.on("outer", Film{.coefficient = h, .fluid = air}).on("inner", FixedTemperature{hold});
    const Model& m = *wall.model();
    const auto role = [&](const Parameter& p) { return m.roles[detail::as_size(m.slot_of(p))]; };
    CHECK(role(k).matrix);
    CHECK(role(h).matrix);
    CHECK_FALSE(role(h).load);
    CHECK(role(air).load);
    CHECK(role(power).load);
    CHECK(role(rho).capacity);
    CHECK(role(hold).prescribed);
    CHECK(role(thick).place);
    CHECK(m.moving);
    CHECK_FALSE(m.nonlinear);
}

TEST_CASE("a thickness parameter moves the nodes and the volume") {
    Parameter thick{"thick", 0.1};
    Body wall{layers<Segment<2>>(
        {{.region = "a", .thickness = thick, .cells = 3}, {.region = "b", .thickness = 0.2, .cells = 1}})};
    wall.in("a", Material{.conductivity = 1.0})
        .in("b", Material{.conductivity = 1.0})
        .on("inner", FixedTemperature{0.0});
    wall.set(thick, 0.4);
    const Values& values = wall.values();
    double far = 0.0;
    for (const Point& p : values.places) far = std::max(far, p.x);
    CHECK(std::abs(far - 0.6) <= 1e-15);
    CHECK(std::abs(values.region_volume[0] - 0.4) <= 1e-15);
    CHECK(std::abs(values.region_volume[1] - 0.2) <= 1e-15);
}

TEST_CASE("copies of a body are independent") {
    Parameter k{"k", 1.0};
    Body a{layers<Segment<1>>({{.region = "a", .thickness = 0.1, .cells = 3}})};
    a.in("a", Material{.conductivity = k}).on("inner", FixedTemperature{0.0});
    Body b = a;
    b.set(k, 2.0);
    b.on("outer", Flux{.into = 10.0});
    CHECK(a.value(k) == 1.0);
    CHECK(b.value(k) == 2.0);
    CHECK(a.model()->faces[1].terms.empty());
    CHECK(b.model()->faces[1].terms.size() == 1);
}
