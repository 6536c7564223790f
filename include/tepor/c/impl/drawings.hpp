#pragma once
// Drawings: rectangles on grid lines, and sections of any shapes.

#include <tepor/c/impl/handles.hpp>
#include <tepor/c/impl/mesh.hpp>

namespace tepor::c {

inline std::vector<Point> points_of(const double* corners, std::size_t count) {
    std::vector<Point> points;
    for (std::size_t i = 0; i < count; ++i) points.push_back({corners[2 * i], corners[2 * i + 1]});
    return points;
}

inline Outline outline_of(Point start, const tepor_stroke* strokes, std::size_t count) {
    Outline outline(start);
    for (std::size_t i = 0; i < count; ++i) {
        const tepor_stroke& s = strokes[i];
        if (s.arc != 0)
            outline.arc_to({s.through_x, s.through_y}, {s.x, s.y});
        else
            outline.line_to({s.x, s.y});
    }
    return outline;
}

inline TilesOptions tiles_options_of(const tepor_meshing* given) {
    tepor_meshing m = tepor_meshing_default();
    take(given, m);
    TilesOptions how;
    how.size = m.cell_size;
    if (m.growth != 0.0) how.growth = m.growth;
    switch (m.diagonals) {
    case TEPOR_DIAGONALS_ALTERNATING: how.diagonals = Diagonals::alternating; break;
    case TEPOR_DIAGONALS_CROSSED: how.diagonals = Diagonals::crossed; break;
    case TEPOR_DIAGONALS_RISING: how.diagonals = Diagonals::rising; break;
    case TEPOR_DIAGONALS_FALLING: how.diagonals = Diagonals::falling; break;
    default: misuse("the diagonals are no tepor_diagonals");
    }
    return how;
}

inline Meshing meshing_of(const tepor_meshing* given, const tepor_section& section) {
    tepor_meshing m = tepor_meshing_default();
    take(given, m);
    Meshing how;
    how.size = m.cell_size;
    how.in = section.size_in;
    how.on = section.size_on;
    how.law = section.size_by;
    if (m.growth != 0.0) how.growth = m.growth;
    how.turn = m.turn;
    how.deviation = m.deviation;
    how.most_triangles = static_cast<Index>(m.most_triangles);
    return how;
}

} // namespace tepor::c

extern "C" {

tepor_status tepor_tiles_create(tepor_session* session, tepor_tiles** out) {
    return tepor::c::run(session, out, [&] { *out = new tepor_tiles; });
}
void tepor_tiles_free(tepor_tiles* tiles) {
    delete tiles;
}
tepor_status tepor_tiles_add(tepor_session* session, tepor_tiles* tiles, const char* region, double x0, double y0,
                             double x1, double y1) {
    return tepor::c::run(session, tiles && region, [&] { tiles->tiles.add(region, {x0, y0}, {x1, y1}); });
}
tepor_status tepor_tiles_cut(tepor_session* session, tepor_tiles* tiles, double x0, double y0, double x1, double y1,
                             const char* face) {
    return tepor::c::run(session, tiles && face, [&] { tiles->tiles.cut({x0, y0}, {x1, y1}, face); });
}
tepor_status tepor_tiles_face(tepor_session* session, tepor_tiles* tiles, const char* face, double x0, double y0,
                              double x1, double y1) {
    return tepor::c::run(session, tiles && face, [&] { tiles->tiles.face(face, {x0, y0}, {x1, y1}); });
}
tepor_meshing tepor_meshing_default(void) {
    const tepor::Meshing usual;
    tepor_meshing m{};
    m.size = sizeof m;
    m.turn = usual.turn;
    m.most_triangles = usual.most_triangles;
    return m;
}
tepor_status tepor_tiles_mesh_with(tepor_session* session, const tepor_tiles* tiles, tepor_element element,
                                   const tepor_meshing* meshing, tepor_frame frame, tepor_mesh** out) {
    return tepor::c::run(session, tiles && meshing && out, [&] {
        const tepor::Frame in = tepor::c::frame_of(frame);
        const tepor::TilesOptions how = tepor::c::tiles_options_of(meshing);
        *out = tepor::c::for_plane(element, [&]<class E>() -> tepor_mesh* {
            return new tepor::c::MeshOf<E>(tepor::tiles<E>(tiles->tiles, how, in));
        });
    });
}
tepor_status tepor_tiles_mesh(tepor_session* session, const tepor_tiles* tiles, tepor_element element, double size,
                              tepor_frame frame, tepor_mesh** out) {
    tepor_meshing meshing = tepor_meshing_default();
    meshing.cell_size = size;
    return tepor_tiles_mesh_with(session, tiles, element, &meshing, frame, out);
}

tepor_status tepor_tiles_split_x(tepor_session* session, tepor_tiles* tiles, double from, double to, int64_t cells,
                                 double grading) {
    return tepor::c::run(session, tiles, [&] {
        tiles->tiles.split_x({.from = from,
                              .to = to,
                              .cells = static_cast<tepor::Index>(cells),
                              .grading = tepor::c::grading_of(grading)});
    });
}
tepor_status tepor_tiles_split_y(tepor_session* session, tepor_tiles* tiles, double from, double to, int64_t cells,
                                 double grading) {
    return tepor::c::run(session, tiles, [&] {
        tiles->tiles.split_y({.from = from,
                              .to = to,
                              .cells = static_cast<tepor::Index>(cells),
                              .grading = tepor::c::grading_of(grading)});
    });
}
tepor_status tepor_tiles_finer_x(tepor_session* session, tepor_tiles* tiles, double at, double size) {
    return tepor::c::run(session, tiles, [&] { tiles->tiles.finer_x({.at = at, .size = size}); });
}
tepor_status tepor_tiles_finer_y(tepor_session* session, tepor_tiles* tiles, double at, double size) {
    return tepor::c::run(session, tiles, [&] { tiles->tiles.finer_y({.at = at, .size = size}); });
}
tepor_status tepor_tiles_line_x(tepor_session* session, tepor_tiles* tiles, double at) {
    return tepor::c::run(session, tiles, [&] { tiles->tiles.line_x(at); });
}
tepor_status tepor_tiles_line_y(tepor_session* session, tepor_tiles* tiles, double at) {
    return tepor::c::run(session, tiles, [&] { tiles->tiles.line_y(at); });
}

tepor_status tepor_section_create(tepor_session* session, tepor_section** out) {
    return tepor::c::run(session, out, [&] { *out = new tepor_section; });
}
void tepor_section_free(tepor_section* section) {
    delete section;
}
tepor_status tepor_section_add_rectangle(tepor_session* session, tepor_section* section, const char* region, double x0,
                                         double y0, double x1, double y1) {
    return tepor::c::run(session, section && region, [&] {
        section->last = section->section.add(region, tepor::rectangle({x0, y0}, {x1, y1}));
    });
}
tepor_status tepor_section_add_circle(tepor_session* session, tepor_section* section, const char* region, double x,
                                      double y, double radius) {
    return tepor::c::run(session, section && region, [&] {
        section->last = section->section.add(region, tepor::circle({x, y}, radius));
    });
}
tepor_status tepor_section_add_polygon(tepor_session* session, tepor_section* section, const char* region,
                                       const double* corners, size_t count) {
    return tepor::c::run(session, section && region && corners, [&] {
        section->last = section->section.add(region, tepor::polygon(tepor::c::points_of(corners, count)));
    });
}
tepor_status tepor_section_add_ring(tepor_session* session, tepor_section* section, const char* region, double x,
                                    double y, double inner, double outer) {
    return tepor::c::run(session, section && region, [&] {
        section->last = section->section.add(region, tepor::ring({x, y}, inner, outer));
    });
}
tepor_status tepor_section_cut_rectangle(tepor_session* session, tepor_section* section, const char* face, double x0,
                                         double y0, double x1, double y1) {
    return tepor::c::run(session, section && face, [&] {
        section->last = section->section.cut(tepor::rectangle({x0, y0}, {x1, y1}), face);
    });
}
tepor_status tepor_section_cut_circle(tepor_session* session, tepor_section* section, const char* face, double x,
                                      double y, double radius) {
    return tepor::c::run(session, section && face, [&] {
        section->last = section->section.cut(tepor::circle({x, y}, radius), face);
    });
}
tepor_status tepor_section_cut_polygon(tepor_session* session, tepor_section* section, const char* face,
                                       const double* corners, size_t count) {
    return tepor::c::run(session, section && face && corners, [&] {
        section->last = section->section.cut(tepor::polygon(tepor::c::points_of(corners, count)), face);
    });
}
tepor_status tepor_section_face(tepor_session* session, tepor_section* section, const char* face, double x0, double y0,
                                double x1, double y1) {
    return tepor::c::run(session, section && face, [&] {
        section->section.face(face, tepor::Point{x0, y0}, tepor::Point{x1, y1});
    });
}
tepor_status tepor_section_rest(tepor_session* session, tepor_section* section, const char* face) {
    return tepor::c::run(session, section && face, [&] { section->section.rest(face); });
}
tepor_status tepor_section_line(tepor_session* session, tepor_section* section, double x0, double y0, double x1,
                                double y1) {
    return tepor::c::run(session, section, [&] { section->section.line(tepor::Point{x0, y0}, tepor::Point{x1, y1}); });
}
tepor_status tepor_section_hold(tepor_session* session, tepor_section* section, double x, double y) {
    return tepor::c::run(session, section, [&] { section->section.hold({x, y}); });
}
tepor_status tepor_section_add_rounded_rectangle(tepor_session* session, tepor_section* section, const char* region,
                                                 double x0, double y0, double x1, double y1, double radius) {
    return tepor::c::run(session, section && region, [&] {
        section->last = section->section.add(region, tepor::rounded_rectangle({x0, y0}, {x1, y1}, radius));
    });
}
tepor_status tepor_section_add_outline(tepor_session* session, tepor_section* section, const char* region, double x,
                                       double y, const tepor_stroke* strokes, size_t count) {
    return tepor::c::run(session, section && region && strokes, [&] {
        section->last = section->section.add(region, tepor::enclosed(tepor::c::outline_of({x, y}, strokes, count)));
    });
}
tepor_status tepor_section_line_outline(tepor_session* session, tepor_section* section, double x, double y,
                                        const tepor_stroke* strokes, size_t count) {
    return tepor::c::run(session, section && strokes, [&] {
        section->section.line(tepor::c::outline_of({x, y}, strokes, count));
    });
}
tepor_status tepor_section_cut_outline(tepor_session* session, tepor_section* section, const char* face, double x,
                                       double y, const tepor_stroke* strokes, size_t count) {
    return tepor::c::run(session, section && face && strokes, [&] {
        section->last = section->section.cut(tepor::enclosed(tepor::c::outline_of({x, y}, strokes, count)), face);
    });
}
tepor_status tepor_section_face_through(tepor_session* session, tepor_section* section, const char* face, double x0,
                                        double y0, double through_x, double through_y, double x1, double y1) {
    return tepor::c::run(session, section && face, [&] {
        section->section.face(face, tepor::Point{x0, y0}, tepor::Point{through_x, through_y}, tepor::Point{x1, y1});
    });
}
tepor_status tepor_section_face_of_last(tepor_session* session, tepor_section* section, const char* face) {
    return tepor::c::run(session, section && face, [&] { section->section.face(face, section->last); });
}
tepor_status tepor_section_face_where(tepor_session* session, tepor_section* section, const char* face,
                                      tepor_place_test test, void* user_data) {
    return tepor::c::run(session, section && face && test, [&] {
        section->section.face(
            face, tepor::PlaceTest([test, user_data](tepor::Point p) { return test(p.x, p.y, user_data) != 0; }));
    });
}
tepor_status tepor_section_tolerance(tepor_session* session, tepor_section* section, double distance) {
    return tepor::c::run(session, section, [&] { section->section.tolerance(distance); });
}
tepor_status tepor_section_size_in(tepor_session* session, tepor_section* section, const char* region, double size) {
    return tepor::c::run(session, section && region, [&] { section->size_in.push_back({region, size}); });
}
tepor_status tepor_section_size_on(tepor_session* session, tepor_section* section, const char* face, double size) {
    return tepor::c::run(session, section && face, [&] { section->size_on.push_back({face, size}); });
}
tepor_status tepor_section_size_by(tepor_session* session, tepor_section* section, tepor_size_law law,
                                   void* user_data) {
    return tepor::c::run(session, section && law, [&] {
        section->size_by = tepor::SizeLaw([law, user_data](tepor::Point p) { return law(p.x, p.y, user_data); });
    });
}
tepor_status tepor_section_mesh_with(tepor_session* session, const tepor_section* section, tepor_element element,
                                     const tepor_meshing* meshing, tepor_frame frame, tepor_mesh** out) {
    return tepor::c::run(session, section && meshing && out, [&] {
        const tepor::Frame in = tepor::c::frame_of(frame);
        const tepor::Meshing how = tepor::c::meshing_of(meshing, *section);
        *out = tepor::c::for_triangle(element, [&]<class E>() -> tepor_mesh* {
            return new tepor::c::MeshOf<E>(tepor::triangulate<E>(section->section, how, in));
        });
    });
}
tepor_status tepor_section_mesh(tepor_session* session, const tepor_section* section, tepor_element element,
                                double size, tepor_frame frame, tepor_mesh** out) {
    tepor_meshing meshing = tepor_meshing_default();
    meshing.cell_size = size;
    return tepor_section_mesh_with(session, section, element, &meshing, frame, out);
}

} // extern "C"
