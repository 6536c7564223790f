/* The steady side of the C interface against closed forms: resistances in series, a law by callback, refusals. */
#include "expect.h"

static double read_value(tepor_session* session, const tepor_field* field, tepor_quantity* quantity) {
    double value = NAN;
    DONE(tepor_field_value(session, field, quantity, &value));
    tepor_quantity_free(quantity);
    return value;
}

static void wall(tepor_session* session) {
    tepor_parameter* thickness = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    tepor_field* field = NULL;
    tepor_quantity* loss = NULL;
    tepor_quantity* other = NULL;
    tepor_balance balance;
    tepor_sized sized;
    tepor_slopes* slopes = NULL;
    double slope = 0.0;
    double temperatures[64];
    DONE(tepor_parameter_create(session, "backing thickness", 0.1, &thickness));
    const tepor_layer stack[2] = {{"brick", tepor_number(0.2), 2, 0.0}, {"backing", tepor_of(thickness), 2, 0.0}};
    DONE(tepor_layers_create(session, TEPOR_SEGMENT_2, stack, 2, tepor_planar(2.0), tepor_nothing(), &mesh));
    EXPECT(tepor_mesh_node_count(mesh) == 9);
    DONE(tepor_body_create(session, mesh, 0, &body));
    tepor_mesh_free(mesh);
    DONE(tepor_body_in_material(session, body, "brick", tepor_number(1.2), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_in_material(session, body, "backing", tepor_number(0.15), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_between_resistance(session, body, "brick", "backing", tepor_number(0.004)));
    DONE(tepor_body_on_film(session, body, "inner", tepor_number(50.0), tepor_number(900.0)));
    DONE(tepor_body_on_film(session, body, "outer", tepor_number(12.0), tepor_number(25.0)));
    DONE(tepor_steady(session, body, &field));

    const double resistance = 1.0 / 50.0 + 0.2 / 1.2 + 0.004 + 0.1 / 0.15 + 1.0 / 12.0; /* m2 K/W, in series */
    const double expected = 2.0 * 875.0 / resistance;
    DONE(tepor_quantity_heat_out_through(session, "outer", &loss));
    double value = 0.0;
    DONE(tepor_field_value(session, field, loss, &value));
    EXPECT(fabs(value - expected) <= 1e-9 * expected);
    DONE(tepor_quantity_at(session, 0.2, 0.0, "backing", &other));
    EXPECT(fabs(read_value(session, field, other) - (25.0 + 0.5 * expected * (1.0 / 12.0 + 0.1 / 0.15))) <= 1e-9);
    DONE(tepor_quantity_at(session, 0.2, 0.0, "", &other));
    EXPECT(tepor_field_value(session, field, other, &value) == TEPOR_OUTSIDE);
    EXPECT(strstr(tepor_session_message(session), "two temperatures") != NULL);
    tepor_quantity_free(other);

    balance.size = sizeof balance;
    DONE(tepor_field_balance(session, field, &balance));
    EXPECT(balance.balanced == 1);
    EXPECT(fabs(balance.out - expected) <= 1e-9 * expected);
    DONE(tepor_field_temperatures(session, field, temperatures, 9));
    EXPECT(tepor_field_temperatures(session, field, temperatures, 8) == TEPOR_INVALID_ARGUMENT);

    DONE(tepor_gradient(session, field, loss, &slopes));
    DONE(tepor_slopes_by(session, slopes, thickness, &slope));
    EXPECT(fabs(slope + expected / resistance / 0.15) <= 1e-9 * fabs(slope));

    sized.size = sizeof sized;
    DONE(tepor_size_for(session, body, thickness, loss, TEPOR_EQUAL_TO, 1000.0, NULL, &sized, NULL));
    EXPECT(sized.reason == 0);
    EXPECT(fabs(sized.value - 0.15 * (2.0 * 875.0 / 1000.0 - resistance + 0.1 / 0.15)) <= 1e-6);

    DONE(tepor_body_set(session, body, thickness, 0.2));
    DONE(tepor_body_value(session, body, thickness, &value));
    EXPECT(value == 0.2);
    tepor_slopes_free(slopes);
    tepor_quantity_free(loss);
    tepor_field_free(field);
    tepor_body_free(body);
    tepor_parameter_free(thickness);
}

/* A source of 1000 + 10 a x per volume, stopped on purpose when a is negative. */
static int32_t rising(const tepor_points* points, double* value, double* slope, void* user_data) {
    (void)slope;
    ++*(int*)user_data;
    if (points->parameters[0] < 0.0) return 7;
    for (size_t i = 0; i < points->count; ++i) value[i] = 1000.0 + 10.0 * points->parameters[0] * points->x[i];
    return 0;
}

static void law(tepor_session* session) {
    int calls = 0;
    tepor_parameter* a = NULL;
    tepor_function* source = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    tepor_field* field = NULL;
    tepor_quantity* heat = NULL;
    DONE(tepor_parameter_create(session, "a", 3.0, &a));
    const tepor_parameter* parameters[1] = {a};
    DONE(tepor_law_create(session, "rising source", rising, &calls, parameters, 1, TEPOR_LAW_OF_PLACE, 0, &source));
    const tepor_layer stack[1] = {{"slab", tepor_number(0.5), 64, 0.0}};
    DONE(tepor_layers_create(session, TEPOR_SEGMENT_1, stack, 1, tepor_planar(1.0), tepor_nothing(), &mesh));
    DONE(tepor_body_create(session, mesh, 0, &body));
    DONE(tepor_body_in_material(session, body, "slab", tepor_number(2.0), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_in_generation_per_volume(session, body, "slab", tepor_by(source)));
    DONE(tepor_body_on_fixed_temperature(session, body, "outer", tepor_number(0.0)));
    DONE(tepor_steady(session, body, &field));
    DONE(tepor_quantity_heat_out_through(session, "outer", &heat));
    EXPECT(fabs(read_value(session, field, heat) - (500.0 + 15.0 * 0.25)) <= 1e-9);
    EXPECT(calls > 0 && calls <= 16); /* once per batch, not per point */
    tepor_field_free(field);
    field = NULL;
    DONE(tepor_body_set(session, body, a, -1.0));
    EXPECT(tepor_steady(session, body, &field) == TEPOR_BAD_LAW);
    EXPECT(field == NULL);
    EXPECT(strstr(tepor_session_message(session), "status 7") != NULL);
    EXPECT(strcmp(tepor_session_offender(session), "rising source") == 0);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_function_free(source);
    tepor_parameter_free(a);
}

static void refusals(tepor_session* session) {
    tepor_parameter* parameter = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    tepor_field* field = NULL;
    EXPECT(tepor_parameter_create(session, "", 1.0, &parameter) == TEPOR_BAD_NAME);
    EXPECT(tepor_parameter_create(session, "p", NAN, &parameter) == TEPOR_BAD_VALUE);
    EXPECT(tepor_parameter_create(session, NULL, 1.0, &parameter) == TEPOR_INVALID_ARGUMENT);
    EXPECT(tepor_parameter_create(NULL, "p", 1.0, &parameter) == TEPOR_INVALID_ARGUMENT);
    EXPECT(parameter == NULL);
    const tepor_layer stack[1] = {{"slab", tepor_number(0.5), 4, 0.0}};
    EXPECT(tepor_layers_create(session, TEPOR_TRIANGLE_1, stack, 1, tepor_planar(1.0), tepor_nothing(), &mesh) ==
           TEPOR_INVALID_ARGUMENT);
    DONE(tepor_layers_create(session, TEPOR_SEGMENT_1, stack, 1, tepor_planar(1.0), tepor_nothing(), &mesh));
    DONE(tepor_body_create(session, mesh, 0, &body));
    EXPECT(tepor_body_in_material(session, body, "slap", tepor_number(2.0), tepor_nothing(), tepor_nothing()) ==
           TEPOR_BAD_NAME);
    EXPECT(strstr(tepor_session_message(session), "\"slab\"") != NULL);
    DONE(tepor_body_in_material(session, body, "slab", tepor_number(2.0), tepor_nothing(), tepor_nothing()));
    EXPECT(tepor_steady(session, body, &field) == TEPOR_NO_LEVEL);
    EXPECT(strcmp(tepor_status_name(TEPOR_NO_LEVEL), "no_level") == 0);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_body_free(NULL);
    tepor_mesh_free(NULL);
    tepor_field_free(NULL);
    tepor_quantity_free(NULL);
    tepor_march_free(NULL);
    tepor_function_free(NULL);
    tepor_parameter_free(NULL);
    tepor_tiles_free(NULL);
    tepor_section_free(NULL);
    tepor_session_free(NULL);
}

int main(void) {
    tepor_session* session = tepor_session_create();
    EXPECT(tepor_abi_version() == TEPOR_ABI_VERSION);
    wall(session);
    law(session);
    refusals(session);
    tepor_session_free(session);
    if (failures == 0) puts("steady: all as expected");
    return failures != 0;
}
