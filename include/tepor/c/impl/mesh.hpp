#pragma once
// Meshes: stacks, arrays, and what can be read of any mesh.

#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

template <class E>
struct MeshOf final : tepor_mesh {
    explicit MeshOf(Mesh<E> made) : mesh(std::move(made)) {}
    [[nodiscard]] const MeshData& data() const override { return mesh; }
    [[nodiscard]] Body body(const BodyOptions& options) const override { return Body(mesh, options); }
    [[nodiscard]] Body body(const Body& like) const override { return like.on_mesh(mesh); }
    [[nodiscard]] tepor_mesh* finer() const override { return new MeshOf<E>(refined(mesh)); }
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

/// Below 0: mirrored about the middle.
inline Grading grading_of(double grading) {
    return grading < 0.0 ? finer_at_both_ends(-grading) : Grading(grading);
}

inline const char* name_at(const std::vector<std::string>& names, std::size_t i) {
    return i < names.size() ? names[i].c_str() : nullptr;
}

/// The arrays of a mesh in the library's own containers.
inline MeshArrays arrays_of(const tepor_arrays& a, const Frame& frame, std::size_t nodes_per_cell) {
    if (!a.places || !a.cells) misuse("arrays: places and cells have to be given");
    if (a.region_count > 0 && !a.region_names) misuse("arrays: region_names is NULL, though there are regions");
    if (a.face_count > 0 && !a.face_names) misuse("arrays: face_names is NULL, though there are faces");
    if (a.side_count > 0 && (!a.sides || !a.face_of_side))
        misuse("arrays: sides and face_of_side have to be given, one face for every side");
    MeshArrays out;
    out.frame = frame;
    for (std::size_t i = 0; i < a.node_count; ++i) out.nodes.push_back({a.places[2 * i], a.places[2 * i + 1]});
    out.cells.assign(a.cells, a.cells + a.cell_count * nodes_per_cell);
    if (a.region_of_cell) out.region.assign(a.region_of_cell, a.region_of_cell + a.cell_count);
    for (std::size_t i = 0; i < a.region_count; ++i) {
        if (!a.region_names[i]) misuse("arrays: a region name is NULL");
        out.region_names.emplace_back(a.region_names[i]);
    }
    for (std::size_t i = 0; i < a.face_count; ++i) {
        if (!a.face_names[i]) misuse("arrays: a face name is NULL");
        out.faces.push_back({a.face_names[i], {}});
    }
    for (std::size_t i = 0; i < a.side_count; ++i) {
        if (a.face_of_side[i] < 0 || static_cast<std::size_t>(a.face_of_side[i]) >= a.face_count)
            misuse(tepor::detail::text("arrays: side ", i, " belongs to face ", a.face_of_side[i], ", expected 0 to ",
                                       a.face_count, " less one"));
        out.faces[static_cast<std::size_t>(a.face_of_side[i])].sides.push_back({a.sides[2 * i], a.sides[2 * i + 1]});
    }
    return out;
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
            if (layers[i].grading != 0.0) layer.grading = tepor::c::grading_of(layers[i].grading);
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

tepor_status tepor_mesh_from_arrays(tepor_session* session, tepor_element element, const tepor_arrays* arrays,
                                    tepor_frame frame, tepor_mesh** out) {
    return tepor::c::run(session, arrays && out, [&] {
        tepor_arrays given{};
        tepor::c::take(arrays, given);
        const tepor::Frame in = tepor::c::frame_of(frame);
        const auto make = [&]<class E>() -> tepor_mesh* {
            return new tepor::c::MeshOf<E>(
                tepor::mesh_from_arrays<E>(tepor::c::arrays_of(given, in, static_cast<std::size_t>(E::nodes))));
        };
        *out = element < TEPOR_TRIANGLE_1 ? tepor::c::for_line(element, make) : tepor::c::for_plane(element, make);
    });
}
tepor_status tepor_mesh_refined(tepor_session* session, const tepor_mesh* mesh, tepor_mesh** out) {
    return tepor::c::run(session, mesh && out, [&] { *out = mesh->finer(); });
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

tepor_status tepor_mesh_regions(tepor_session* session, const tepor_mesh* mesh, int32_t* regions, size_t entries) {
    return tepor::c::run(session, mesh && regions, [&] {
        tepor::c::expect_entries(entries, mesh->data().region.size());
        std::copy(mesh->data().region.begin(), mesh->data().region.end(), regions);
    });
}
size_t tepor_mesh_region_count(const tepor_mesh* mesh) {
    return mesh ? mesh->data().region_names.size() : 0;
}
const char* tepor_mesh_region_name(const tepor_mesh* mesh, size_t region) {
    return mesh ? tepor::c::name_at(mesh->data().region_names, region) : nullptr;
}
size_t tepor_mesh_face_count(const tepor_mesh* mesh) {
    return mesh ? mesh->data().faces.size() : 0;
}
const char* tepor_mesh_face_name(const tepor_mesh* mesh, size_t face) {
    return mesh && face < mesh->data().faces.size() ? mesh->data().faces[face].name.c_str() : nullptr;
}
size_t tepor_mesh_remark_count(const tepor_mesh* mesh) {
    return mesh ? mesh->data().remarks.size() : 0;
}
const char* tepor_mesh_remark(const tepor_mesh* mesh, size_t remark) {
    return mesh ? tepor::c::name_at(mesh->data().remarks, remark) : nullptr;
}

} // extern "C"
