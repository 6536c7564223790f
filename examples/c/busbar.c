/* A copper bar carrying current: laws of one's own for its heat and its film, with slopes of their own.
 * The twin of busbar.cpp: the same numbers to the last bit. */
#include "example.h"
#include <math.h>

static const double radius = 0.010;                                /* m */
static const double area = 3.14159265358979323846 * 0.010 * 0.010; /* m2 */

/* Joule heat [W/m3] at the law's one parameter, the current. Resistivity of annealed copper 1.72e-8 ohm m at 20 degC, 0.39 %
 * per kelvin (IEC 60028, rounded; from memory). */
static int32_t joule(const tepor_points* p, double* value, double* slope, void* user_data) {
    (void)user_data;
    const double j = p->parameters[0] / area;
    for (size_t i = 0; i < p->count; ++i) {
        const double resistivity = 1.72e-8 * (1.0 + 0.0039 * (p->temperature[i] - 20.0));
        value[i] = resistivity * j * j;
        if (!slope) continue;
        slope[i] = 1.72e-8 * 0.0039 * j * j; /* by temperature */
        slope[4 * p->count + i] = (resistivity * (1.0 / area)) * j + resistivity * j * (1.0 / area); /* by current */
    }
    return 0;
}

/* Free convection about a horizontal bar: h rises with the fourth root of the difference (common practice, no source). */
static int32_t convection(const tepor_points* p, double* value, double* slope, void* user_data) {
    (void)user_data;
    for (size_t i = 0; i < p->count; ++i) {
        const double difference = p->temperature[i] - p->fluid[i];
        const double base = fabs(difference) + 1e-3;
        value[i] = 1.3 * pow(base, 0.25) * 2.6;
        if (!slope) continue;
        const double by = 1.3 * (0.25 * pow(base, 0.25 - 1.0) * (difference > 0.0 ? 1.0 : -1.0)) * 2.6;
        slope[i] = by;
        slope[p->count + i] = -by; /* by the fluid's temperature */
    }
    return 0;
}

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_parameter* current = NULL;
    tepor_function *heat = NULL, *film = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* bar = NULL;
    tepor_quantity* surface = NULL;
    tepor_field* field = NULL;
    tepor_slopes* slopes = NULL;
    MUST(tepor_parameter_create(session, "current", 800.0, &current)); /* A */
    const tepor_layer stack[1] = {{"copper", tepor_number(radius), 4, 0.0}};
    const tepor_parameter* by[1] = {current};
    MUST(tepor_layers_create(session, TEPOR_SEGMENT_2, stack, 1, tepor_cylindrical(1.0), tepor_nothing(), &mesh));
    MUST(tepor_body_create(session, mesh, 0, &bar));
    MUST(tepor_law_create(session, "Joule heat", joule, NULL, by, 1, TEPOR_LAW_OF_TEMPERATURE, TEPOR_SLOPE_BY_ALL,
                          &heat));
    MUST(tepor_law_create(session, "convection", convection, NULL, NULL, 0, TEPOR_LAW_OF_TEMPERATURE,
                          TEPOR_SLOPE_BY_ALL, &film));
    MUST(tepor_body_in_material(session, bar, "copper", tepor_number(390.0), tepor_nothing(), tepor_nothing()));
    MUST(tepor_body_in_generation_per_volume(session, bar, "copper", tepor_by(heat)));
    MUST(tepor_body_on_film(session, bar, "outer", tepor_by(film), tepor_number(35.0)));

    double slope = 0.0;
    MUST(tepor_quantity_mean_on(session, "outer", &surface));
    MUST(tepor_steady(session, bar, &field));
    MUST(tepor_gradient(session, field, surface, &slopes));
    MUST(tepor_slopes_by(session, slopes, current, &slope));
    printf("800 A: surface at %.1f degC, %.3f K per ampere\n", read_field(session, field, surface), slope);
    print_balance(session, field);
    number("surface", read_field(session, field, surface));
    number("slope", slope);

    tepor_sized rating;
    rating.size = sizeof rating;
    tepor_size_options options = tepor_size_options_default();
    options.from = 100.0;
    options.to = 3000.0;
    MUST(tepor_size_for(session, bar, current, surface, TEPOR_AT_MOST, 90.0, &options, &rating, NULL));
    printf("%s\n%s\n", tepor_session_message(session), CAUTION_TOUCH);
    number("rating", rating.value);

    tepor_slopes_free(slopes);
    tepor_field_free(field);
    tepor_quantity_free(surface);
    tepor_body_free(bar);
    tepor_mesh_free(mesh);
    tepor_function_free(film);
    tepor_function_free(heat);
    tepor_parameter_free(current);
    tepor_session_free(session);
    return rating.reason == TEPOR_SIZE_FOUND ? 0 : 1;
}
