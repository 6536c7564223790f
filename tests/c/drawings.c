/* Meshes of every kind through the C interface: arrays, grid lines, outlines, faces by test, sizes, refinement; and what they
 * refuse. */
#include "expect.h"
#include <stdlib.h>

static double heat_of(tepor_session* session, const tepor_body* body, const char* face) {
    tepor_field* field = NULL;
    tepor_quantity* heat = NULL;
    double value = NAN;
    DONE(tepor_steady(session, body, &field));
    DONE(tepor_quantity_heat_out_through(session, face, &heat));
    if (field) DONE(tepor_field_value(session, field, heat, &value));
    tepor_quantity_free(heat);
    tepor_field_free(field);
    return value;
}

/* Two squares of one metre, written out as arrays: 100 K across two conductivities in series. */
static void arrays(tepor_session* session) {
    const double places[12] = {0, 0, 1, 0, 2, 0, 0, 1, 1, 1, 2, 1};
    const int32_t cells[8] = {0, 1, 4, 3, 1, 2, 5, 4};
    int32_t regions[2] = {0, 1};
    const char* names[2] = {"west", "east"};
    const char* faces[2] = {"cold", "warm"};
    const int32_t of_side[2] = {0, 1};
    const int32_t sides[4] = {0, 3, 1, 1};
    tepor_arrays given = {sizeof given, places, 6, cells, 2, regions, names, 2, faces, of_side, sides, 2, 2};
    tepor_mesh* mesh = NULL;
    tepor_mesh* fine = NULL;
    tepor_body* body = NULL;
    int32_t read[8];
    double where[12];
    DONE(tepor_mesh_from_arrays(session, TEPOR_QUADRILATERAL_1, &given, tepor_planar(0.5), &mesh));
    EXPECT(tepor_mesh_node_count(mesh) == 6 && tepor_mesh_cell_count(mesh) == 2 &&
           tepor_mesh_nodes_per_cell(mesh) == 4);
    EXPECT(tepor_mesh_region_count(mesh) == 2 && strcmp(tepor_mesh_region_name(mesh, 1), "east") == 0);
    EXPECT(tepor_mesh_face_count(mesh) == 2 && strcmp(tepor_mesh_face_name(mesh, 0), "cold") == 0);
    EXPECT(tepor_mesh_region_name(mesh, 2) == NULL && tepor_mesh_face_name(NULL, 0) == NULL);
    DONE(tepor_mesh_cells(session, mesh, read, 8));
    EXPECT(memcmp(read, cells, sizeof cells) == 0);
    DONE(tepor_mesh_regions(session, mesh, read, 2));
    EXPECT(read[0] == 0 && read[1] == 1);
    DONE(tepor_mesh_places(session, mesh, where, 12));
    EXPECT(where[4] == 2.0 && where[11] == 1.0);
    EXPECT(tepor_mesh_places(session, mesh, where, 11) == TEPOR_INVALID_ARGUMENT);
    DONE(tepor_body_create(session, mesh, 0, &body));
    DONE(tepor_body_in_material(session, body, "west", tepor_number(2.0), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_in_material(session, body, "east", tepor_number(6.0), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_on_fixed_temperature(session, body, "cold", tepor_number(0.0)));
    DONE(tepor_body_on_fixed_temperature(session, body, "warm", tepor_number(100.0)));
    NEAR(heat_of(session, body, "cold"), 0.5 * 100.0 / (1.0 / 2.0 + 1.0 / 6.0), 1e-9);
    DONE(tepor_mesh_refined(session, mesh, &fine));
    EXPECT(tepor_mesh_cell_count(fine) == 8);
    tepor_body* finer = NULL;
    DONE(tepor_body_on_mesh(session, body, fine, &finer));
    NEAR(heat_of(session, finer, "cold"), 75.0, 1e-9);
    tepor_body_free(finer);
    tepor_mesh_free(fine);
    tepor_body_free(body);
    tepor_mesh_free(mesh);

    /* what is wrong is named */
    const int32_t clockwise[8] = {0, 3, 4, 1, 1, 2, 5, 4};
    mesh = NULL;
    given.cells = clockwise;
    EXPECT(tepor_mesh_from_arrays(session, TEPOR_QUADRILATERAL_1, &given, tepor_planar(1.0), &mesh) == TEPOR_BAD_MESH);
    SAYS("counter-clockwise");
    given.cells = cells;
    regions[1] = 7;
    EXPECT(tepor_mesh_from_arrays(session, TEPOR_QUADRILATERAL_1, &given, tepor_planar(1.0), &mesh) == TEPOR_BAD_MESH);
    given.size = 0;
    EXPECT(tepor_mesh_from_arrays(session, TEPOR_QUADRILATERAL_1, &given, tepor_planar(1.0), &mesh) ==
           TEPOR_INVALID_ARGUMENT);
    EXPECT(mesh == NULL);
}

/* A wall on grid lines with everything tiles can be told; layers in parallel. */
static void grid_lines(tepor_session* session) {
    tepor_tiles* tiles = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    DONE(tepor_tiles_create(session, &tiles));
    DONE(tepor_tiles_add(session, tiles, "stone", 0.0, 0.0, 0.4, 1.0));
    DONE(tepor_tiles_add(session, tiles, "steel", 0.4, 0.0, 0.5, 1.0));
    DONE(tepor_tiles_split_x(session, tiles, 0.0, 0.4, 4, 2.0));
    DONE(tepor_tiles_split_y(session, tiles, 0.0, 0.5, 2, 0.0 + 1.0));
    DONE(tepor_tiles_finer_x(session, tiles, 0.5, 0.05));
    DONE(tepor_tiles_finer_y(session, tiles, 1.0, 0.1));
    DONE(tepor_tiles_line_x(session, tiles, 0.45));
    DONE(tepor_tiles_line_y(session, tiles, 0.75));
    DONE(tepor_tiles_face(session, tiles, "heated", 0.0, 1.0, 0.5, 1.0));
    DONE(tepor_tiles_mesh(session, tiles, TEPOR_QUADRILATERAL_2, 0.2, tepor_planar(2.0), &mesh));
    DONE(tepor_body_create(session, mesh, 0, &body));
    DONE(tepor_body_in_tensor(session, body, "stone", tepor_number(2.0), tepor_number(0.0), tepor_number(1.5),
                              tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_in_orthotropic(session, body, "steel", tepor_number(9.0), tepor_number(40.0), tepor_nothing(),
                                   tepor_nothing()));
    DONE(tepor_body_on_fixed_temperature(session, body, "heated", tepor_number(50.0)));
    DONE(tepor_body_on_fixed_temperature(session, body, "bottom", tepor_number(10.0)));
    NEAR(heat_of(session, body, "bottom"), 2.0 * 40.0 * (0.4 * 1.5 + 0.1 * 40.0), 1e-8);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    mesh = NULL;
    DONE(tepor_tiles_split_y(session, tiles, 0.5, 1.0, 0, 1.0)); /* found out when meshing */
    EXPECT(tepor_tiles_mesh(session, tiles, TEPOR_QUADRILATERAL_2, 0.2, tepor_planar(2.0), &mesh) != TEPOR_OK);
    EXPECT(mesh == NULL && strlen(tepor_session_message(session)) > 10);
    tepor_tiles_free(tiles);
}

static int32_t lower_half(double x, double y, void* user_data) {
    (void)x;
    ++*(int*)user_data;
    return y < 0.0 + 1e-9;
}

/* How many nodes of the body's field lie at a radius about the origin. */
static size_t nodes_at_radius(tepor_session* session, const tepor_body* body, size_t nodes, double radius) {
    tepor_field* field = NULL;
    size_t found = 0;
    DONE(tepor_steady(session, body, &field));
    double* places = malloc(2 * nodes * sizeof *places);
    DONE(tepor_field_places(session, field, places, 2 * nodes));
    for (size_t i = 0; i < nodes; ++i)
        found += fabs(sqrt(places[2 * i] * places[2 * i] + places[2 * i + 1] * places[2 * i + 1]) - radius) < 1e-9;
    free(places);
    tepor_field_free(field);
    return found;
}

/* A half disc of lines and an arc with a hole of the same centre: half a pipe, ln(b/a) known. */
static void outlines(tepor_session* session) {
    tepor_section* section = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    int asked = 0;
    const tepor_stroke half[2] = {{-0.4, 0.0, 0.0, 0.4, 1, 0}, {0.4, 0.0, 0.0, 0.0, 0, 0}};
    DONE(tepor_section_create(session, &section));
    DONE(tepor_section_add_outline(session, section, "half", 0.4, 0.0, half, 2));
    DONE(tepor_section_face_of_last(session, section, "whole edge"));
    DONE(tepor_section_face_through(session, section, "outside", 0.4, 0.0, 0.0, 0.4, -0.4, 0.0));
    DONE(tepor_section_face_where(session, section, "cut", lower_half, &asked));
    DONE(tepor_section_cut_circle(session, section, "bore", 0.0, 0.0, 0.1));
    DONE(tepor_section_size_on(session, section, "bore", 0.02));
    DONE(tepor_section_size_in(session, section, "half", 0.05));
    const tepor_stroke foil = {-0.25, 0.0, 0.0, 0.25, 1, 0};
    DONE(tepor_section_line_outline(session, section, 0.25, 0.0, &foil, 1));
    EXPECT(tepor_section_line_outline(session, section, 0.25, 0.0, NULL, 1) == TEPOR_INVALID_ARGUMENT);
    DONE(tepor_section_tolerance(session, section, 1e-8));
    DONE(tepor_section_mesh(session, section, TEPOR_TRIANGLE_2, 0.1, tepor_planar(1.0), &mesh));
    EXPECT(asked > 0);
    EXPECT(tepor_mesh_face_count(mesh) == 4);
    DONE(tepor_body_create(session, mesh, 0, &body));
    DONE(tepor_body_in_material(session, body, "half", tepor_number(3.0), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_on_fixed_temperature(session, body, "bore", tepor_number(100.0)));
    DONE(tepor_body_on_fixed_temperature(session, body, "outside", tepor_number(0.0)));
    const double expected = 3.14159265358979323846 * 3.0 * 100.0 / log(4.0);
    NEAR(heat_of(session, body, "outside"), expected, 1e-3 * expected);
    EXPECT(nodes_at_radius(session, body, tepor_mesh_node_count(mesh), 0.25) >=
           2 * 15 + 1); /* sides of 0.05 m along the foil of 0.785 m, halved */
    EXPECT(tepor_section_add_rounded_rectangle(session, section, "x", 0.0, 0.0, 1.0, 1.0, 0.7) == TEPOR_BAD_GEOMETRY);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_section_free(section);

    section = NULL;
    mesh = NULL;
    DONE(tepor_section_create(session, &section));
    DONE(tepor_section_add_rounded_rectangle(session, section, "plate", 0.0, 0.0, 1.0, 1.0, 0.2));
    DONE(tepor_section_cut_outline(session, section, "slot", 0.4, 0.4, half, 2));
    DONE(tepor_section_rest(session, section, "rest"));
    DONE(tepor_section_mesh(session, section, TEPOR_TRIANGLE_1, 0.1, tepor_planar(1.0), &mesh));
    EXPECT(tepor_section_size_in(session, section, "nowhere", 0.1) == TEPOR_OK); /* found out when meshing */
    EXPECT(tepor_section_mesh(session, section, TEPOR_TRIANGLE_1, 0.1, tepor_planar(1.0), &mesh) == TEPOR_BAD_NAME);
    tepor_mesh_free(mesh);
    tepor_section_free(section);
}

static double fine_in_the_corner(double x, double y, void* user_data) {
    ++*(int*)user_data;
    return 0.01 + 0.2 * (x + y);
}

static size_t cells_of(tepor_session* session, const tepor_tiles* tiles, int32_t diagonals) {
    tepor_mesh* mesh = NULL;
    tepor_meshing how = tepor_meshing_default();
    how.cell_size = 0.5;
    how.diagonals = diagonals;
    DONE(tepor_tiles_mesh_with(session, tiles, TEPOR_TRIANGLE_1, &how, tepor_planar(1.0), &mesh));
    const size_t cells = tepor_mesh_cell_count(mesh);
    tepor_mesh_free(mesh);
    return cells;
}

/* How finely: diagonals of tiles, sizes by place, arcs by their turn, a limit of triangles. */
static void fineness(tepor_session* session) {
    tepor_tiles* tiles = NULL;
    tepor_section* section = NULL;
    tepor_mesh* mesh = NULL;
    int asked = 0;
    DONE(tepor_tiles_create(session, &tiles));
    DONE(tepor_tiles_add(session, tiles, "square", 0.0, 0.0, 1.0, 1.0));
    EXPECT(cells_of(session, tiles, TEPOR_DIAGONALS_ALTERNATING) == 8);
    EXPECT(cells_of(session, tiles, TEPOR_DIAGONALS_CROSSED) == 16);
    EXPECT(cells_of(session, tiles, TEPOR_DIAGONALS_FALLING) == 8);
    tepor_tiles_free(tiles);

    DONE(tepor_section_create(session, &section));
    DONE(tepor_section_add_circle(session, section, "disc", 0.0, 0.0, 1.0));
    tepor_meshing how = tepor_meshing_default();
    how.cell_size = 0.5;
    how.turn = 30.0;
    DONE(tepor_section_mesh_with(session, section, TEPOR_TRIANGLE_1, &how, tepor_planar(1.0), &mesh));
    const size_t coarse = tepor_mesh_cell_count(mesh);
    tepor_mesh_free(mesh);
    how.turn = 5.0;
    DONE(tepor_section_mesh_with(session, section, TEPOR_TRIANGLE_1, &how, tepor_planar(1.0), &mesh));
    EXPECT(tepor_mesh_cell_count(mesh) > 2 * coarse);
    tepor_mesh_free(mesh);
    tepor_section_free(section);

    section = NULL;
    DONE(tepor_section_create(session, &section));
    DONE(tepor_section_add_rectangle(session, section, "plate", 0.0, 0.0, 1.0, 1.0));
    DONE(tepor_section_size_by(session, section, fine_in_the_corner, &asked));
    how = tepor_meshing_default();
    how.cell_size = 0.5;
    DONE(tepor_section_mesh_with(session, section, TEPOR_TRIANGLE_1, &how, tepor_planar(1.0), &mesh));
    EXPECT(asked > 0 && tepor_mesh_cell_count(mesh) > 100);
    tepor_mesh_free(mesh);
    mesh = NULL;
    how.most_triangles = 20;
    EXPECT(tepor_section_mesh_with(session, section, TEPOR_TRIANGLE_1, &how, tepor_planar(1.0), &mesh) ==
           TEPOR_TOO_LARGE);
    EXPECT(mesh == NULL);
    tepor_section_free(section);
}

/* A quantity in a disc, options of a body, the exact cell. */
static void odds(tepor_session* session) {
    const tepor_layer stack[1] = {{"slab", tepor_number(0.2), 6, -3.0}};
    tepor_mesh* mesh = NULL;
    tepor_mesh* finer = NULL;
    tepor_body* body = NULL;
    double places[14];
    DONE(tepor_layers_create(session, TEPOR_EXACT_SEGMENT, stack, 1, tepor_spherical(), tepor_number(0.1), &mesh));
    DONE(tepor_mesh_places(session, mesh, places, 14));
    NEAR((places[6] - places[4]) / (places[2] - places[0]), 3.0, 1e-9); /* middle over first, and mirrored */
    NEAR(places[12] - places[10], places[2] - places[0], 1e-12);
    DONE(tepor_mesh_refined(session, mesh, &finer));
    EXPECT(tepor_mesh_cell_count(finer) == 12);
    tepor_mesh_free(finer);
    tepor_body_options options = tepor_body_options_default();
    options.kelvin = 1;
    DONE(tepor_body_create_with(session, mesh, &options, &body));
    DONE(tepor_body_in_material(session, body, "slab", tepor_number(5.0), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_on_radiation(session, body, "outer", tepor_number(0.5), tepor_kelvin(20.0)));
    DONE(tepor_body_on_fixed_temperature(session, body, "inner", tepor_number(500.0)));
    EXPECT(heat_of(session, body, "outer") > 0.0);
    DONE(tepor_body_on_film(session, body, "outer", tepor_number(-1.0), tepor_number(300.0)));
    tepor_field* field = NULL;
    EXPECT(tepor_steady(session, body, &field) == TEPOR_BAD_VALUE && field == NULL);
    SAYS("-1");
    tepor_body_free(body);
    tepor_mesh_free(mesh);
}

int main(void) {
    tepor_session* session = tepor_session_create();
    arrays(session);
    grid_lines(session);
    outlines(session);
    fineness(session);
    odds(session);
    tepor_session_free(session);
    if (failures == 0) puts("drawings: all as expected");
    return failures != 0;
}
