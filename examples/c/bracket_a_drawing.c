/* From a drawing to a guaranteed interval: the heat a floor heating pipe gives to the room, whatever the mesh.
 * The twin of bracket_a_drawing.cpp: the same numbers to the last bit. */
#include "example.h"

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_section* floor = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    tepor_quantity *heat = NULL, *surface = NULL;
    /* One pipe of a floor heating and half the distance to the next on both sides; metres. */
    MUST(tepor_section_create(session, &floor));
    MUST(tepor_section_add_rectangle(session, floor, "screed", 0.0, 0.03, 0.15, 0.095));
    MUST(tepor_section_add_rectangle(session, floor, "insulation", 0.0, 0.0, 0.15, 0.03));
    MUST(tepor_section_cut_circle(session, floor, "water", 0.075, 0.045, 0.008));
    MUST(tepor_section_face(session, floor, "room", 0.0, 0.095, 0.15, 0.095));
    MUST(tepor_section_face(session, floor, "below", 0.0, 0.0, 0.15, 0.0));
    MUST(tepor_section_mesh(session, floor, TEPOR_TRIANGLE_2, 0.02, tepor_planar(1.0), &mesh));
    MUST(tepor_body_create(session, mesh, 0, &body));
    MUST(tepor_body_in_material(session, body, "screed", tepor_number(1.2), tepor_nothing(), tepor_nothing()));
    MUST(tepor_body_in_material(session, body, "insulation", tepor_number(0.035), tepor_nothing(), tepor_nothing()));
    MUST(tepor_body_on_film(session, body, "water", tepor_number(900.0), tepor_number(38.0))); /* W/(m2 K), degC */
    MUST(tepor_body_on_film(session, body, "room", tepor_number(10.8), tepor_number(20.0)));
    MUST(tepor_body_on_film(session, body, "below", tepor_number(5.9), tepor_number(15.0)));

    tepor_bracket_result found;
    found.size = sizeof found;
    tepor_bracket_options narrow = tepor_bracket_options_default();
    narrow.relative_width = 0.001;
    MUST(tepor_quantity_heat_out_through(session, "room", &heat));
    MUST(tepor_bracket(session, body, heat, &narrow, &found));
    printf("to the room: between %.4f and %.4f W per metre of pipe\n", found.lower, found.upper);
    printf("found on %d cells in %d passes; the interval is %s\n", (int)found.cells, (int)found.passes,
           tepor_session_message(session));
    number("heat, lower", found.lower);
    number("heat, upper", found.upper);
    number("cells", (double)found.cells);

    narrow.relative_width = 0.0;
    narrow.absolute_width = 0.01;
    MUST(tepor_quantity_at(session, 0.075, 0.095 - 0.001, "", &surface));
    MUST(tepor_bracket(session, body, surface, &narrow, &found));
    printf("1 mm under the surface above the pipe: between %.3f and %.3f degC\n", found.lower, found.upper);
    number("surface, lower", found.lower);
    number("surface, upper", found.upper);

    tepor_quantity_free(surface);
    tepor_quantity_free(heat);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_section_free(floor);
    tepor_session_free(session);
    return found.reached == 1 ? 0 : 1;
}
