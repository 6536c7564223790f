#pragma once
// Meshes: stacks, rectangles, drawings, and their arrays.

#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

template <class E>
struct MeshOf final : tepor_mesh {
    explicit MeshOf(Mesh<E> made) : mesh(std::move(made)) {}
    [[nodiscard]] const MeshData& data() const override { return mesh; }
    [[nodiscard]] Body body(TemperatureScale scale) const override { return Body(mesh, scale); }
    Mesh<E> mesh;
};

/// Calls `make` with the element type; the enumeration decides.
template <class Make>
tepor_mesh* for_line(tepor_element element, Make make) {
    switch (element) {
    case TEPOR_SEGMENT_1: return make.template operator()<Segment<1>>();
    case TEPOR_SEGMENT_2: return make.template operator()<Segment<2>>();
    case TEPOR_SEGMENT_3: return make.template operator()<Segment<3>>();
    case TEPOR_EXACT_SEGMENT: return make.template operator()<ExactSegment>();
    default: misuse("layers are made of TEPOR_SEGMENT_1, TEPOR_SEGMENT_2, TEPOR_SEGMENT_3 or TEPOR_EXACT_SEGMENT");
    }
}
template <class Make>
tepor_mesh* for_triangle(tepor_element element, Make make) {
    switch (element) {
    case TEPOR_TRIANGLE_1: return make.template operator()<Triangle<1>>();
    case TEPOR_TRIANGLE_2: return make.template operator()<Triangle<2>>();
    case TEPOR_TRIANGLE_3: return make.template operator()<Triangle<3>>();
    default: misuse("a section is made of TEPOR_TRIANGLE_1, TEPOR_TRIANGLE_2 or TEPOR_TRIANGLE_3");
    }
}
template <class Make>
tepor_mesh* for_plane(tepor_element element, Make make) {
    switch (element) {
    case TEPOR_QUADRILATERAL_1: return make.template operator()<Quadrilateral<1>>();
    case TEPOR_QUADRILATERAL_2: return make.template operator()<Quadrilateral<2>>();
    case TEPOR_QUADRILATERAL_3: return make.template operator()<Quadrilateral<3>>();
    default: return for_triangle(element, make);
    }
}

inline std::vector<Point> points_of(const double* corners, std::size_t count) {
    std::vector<Point> points;
    for (std::size_t i = 0; i < count; ++i) points.push_back({corners[2 * i], corners[2 * i + 1]});
    return points;
}

inline void expect_entries(std::size_t entries, std::size_t needed) {
    if (entries != needed) misuse(tepor::detail::text("the array has ", entries, " entries, expected ", needed));
}

} // namespace tepor::c

extern "C" {

tepor_frame tepor_planar(double size) {
    return {TEPOR_PLANAR, 0, size};
}
tepor_frame tepor_cylindrical(double length) {
    return {TEPOR_CYLINDRICAL, 0, length};
}
tepor_frame tepor_spherical(void) {
    return {TEPOR_SPHERICAL, 0, 1.0};
}

tepor_status tepor_layers_create(tepor_session* session, tepor_element element, const tepor_layer* layers, size_t count,
                                 tepor_frame frame, tepor_value start, tepor_mesh** out) {
    return tepor::c::run(session, layers && out, [&] {
        std::vector<tepor::Layer> stack;
        for (size_t i = 0; i < count; ++i) {
            if (!layers[i].region) tepor::c::misuse(tepor::detail::text("layer ", i + 1, " has no region name"));
            tepor::Layer layer{layers[i].region, tepor::c::number_of(layers[i].thickness),
                               static_cast<tepor::Index>(layers[i].cells)};
            if (layers[i].grading != 0.0) layer.grading = layers[i].grading;
            stack.push_back(std::move(layer));
        }
        const tepor::Frame in = tepor::c::frame_of(frame);
        tepor::LayersOptions options;
        if (start.kind != 0) options.start = tepor::c::number_of(start);
        *out = tepor::c::for_line(element, [&]<class E>() -> tepor_mesh* {
            return new tepor::c::MeshOf<E>(tepor::layers<E>(stack, in, options));
        });
    });
}

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
tepor_status tepor_tiles_mesh(tepor_session* session, const tepor_tiles* tiles, tepor_element element, double size,
                              tepor_frame frame, tepor_mesh** out) {
    return tepor::c::run(session, tiles && out, [&] {
        const tepor::Frame in = tepor::c::frame_of(frame);
        *out = tepor::c::for_plane(element, [&]<class E>() -> tepor_mesh* {
            return new tepor::c::MeshOf<E>(tepor::tiles<E>(tiles->tiles, {.size = size}, in));
        });
    });
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
        (void)section->section.add(region, tepor::rectangle({x0, y0}, {x1, y1}));
    });
}
tepor_status tepor_section_add_circle(tepor_session* session, tepor_section* section, const char* region, double x,
                                      double y, double radius) {
    return tepor::c::run(session, section && region, [&] {
        (void)section->section.add(region, tepor::circle({x, y}, radius));
    });
}
tepor_status tepor_section_add_polygon(tepor_session* session, tepor_section* section, const char* region,
                                       const double* corners, size_t count) {
    return tepor::c::run(session, section && region && corners, [&] {
        (void)section->section.add(region, tepor::polygon(tepor::c::points_of(corners, count)));
    });
}
tepor_status tepor_section_add_ring(tepor_session* session, tepor_section* section, const char* region, double x,
                                    double y, double inner, double outer) {
    return tepor::c::run(session, section && region, [&] {
        (void)section->section.add(region, tepor::ring({x, y}, inner, outer));
    });
}
tepor_status tepor_section_cut_rectangle(tepor_session* session, tepor_section* section, const char* face, double x0,
                                         double y0, double x1, double y1) {
    return tepor::c::run(session, section && face, [&] {
        (void)section->section.cut(tepor::rectangle({x0, y0}, {x1, y1}), face);
    });
}
tepor_status tepor_section_cut_circle(tepor_session* session, tepor_section* section, const char* face, double x,
                                      double y, double radius) {
    return tepor::c::run(session, section && face, [&] {
        (void)section->section.cut(tepor::circle({x, y}, radius), face);
    });
}
tepor_status tepor_section_cut_polygon(tepor_session* session, tepor_section* section, const char* face,
                                       const double* corners, size_t count) {
    return tepor::c::run(session, section && face && corners, [&] {
        (void)section->section.cut(tepor::polygon(tepor::c::points_of(corners, count)), face);
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
tepor_status tepor_section_mesh(tepor_session* session, const tepor_section* section, tepor_element element,
                                double size, tepor_frame frame, tepor_mesh** out) {
    return tepor::c::run(session, section && out, [&] {
        const tepor::Frame in = tepor::c::frame_of(frame);
        *out = tepor::c::for_triangle(element, [&]<class E>() -> tepor_mesh* {
            return new tepor::c::MeshOf<E>(tepor::triangulate<E>(section->section, {.size = size}, in));
        });
    });
}

void tepor_mesh_free(tepor_mesh* mesh) {
    delete mesh;
}
size_t tepor_mesh_node_count(const tepor_mesh* mesh) {
    return mesh ? mesh->data().nodes.size() : 0;
}
size_t tepor_mesh_cell_count(const tepor_mesh* mesh) {
    return mesh ? mesh->data().region.size() : 0;
}
size_t tepor_mesh_nodes_per_cell(const tepor_mesh* mesh) {
    return mesh ? static_cast<size_t>(mesh->data().nodes_per_cell) : 0;
}
tepor_status tepor_mesh_places(tepor_session* session, const tepor_mesh* mesh, double* places, size_t entries) {
    return tepor::c::run(session, mesh && places, [&] {
        tepor::c::expect_entries(entries, 2 * mesh->data().nodes.size());
        for (const tepor::Point p : mesh->data().nodes) {
            *places++ = p.x;
            *places++ = p.y;
        }
    });
}
tepor_status tepor_mesh_cells(tepor_session* session, const tepor_mesh* mesh, int32_t* cells, size_t entries) {
    return tepor::c::run(session, mesh && cells, [&] {
        tepor::c::expect_entries(entries, mesh->data().cells.size());
        for (const tepor::Id id : mesh->data().cells) *cells++ = id;
    });
}

} // extern "C"
