/* A furnace wall: heat loss, casing temperature, their slopes, the backing that meets a limit, another gas temperature.
 * The twin of furnace_wall.cpp: the same numbers to the last bit. */
#include "example.h"

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_parameter *thickness = NULL, *gas = NULL, *k_backing = NULL;
    MUST(tepor_parameter_create(session, "backing thickness", 0.115, &thickness));   /* m; belongs to no body */
    MUST(tepor_parameter_create(session, "gas temperature", 1250.0, &gas));          /* degC */
    MUST(tepor_parameter_create(session, "backing conductivity", 0.28, &k_backing)); /* W/(m K) */

    const tepor_layer stack[3] = {{"working lining", tepor_number(0.230), 8, 0.0},
                                  {"backing", tepor_of(thickness), 6, 0.0},
                                  {"casing", tepor_number(0.006), 1, 0.0}};
    const double at[3] = {200.0, 800.0, 1300.0};
    const double k[3] = {1.10, 1.35, 1.53};
    tepor_function* lining = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* wall = NULL;
    MUST(tepor_table_create(session, at, k, 3, 0, &lining));
    MUST(tepor_layers_create(session, TEPOR_SEGMENT_2, stack, 3, tepor_planar(1.0), tepor_nothing(), &mesh));
    MUST(tepor_body_create(session, mesh, 0, &wall));
    MUST(tepor_body_in_material(session, wall, "working lining", tepor_by(lining), tepor_number(2100.0),
                                tepor_number(960.0)));
    MUST(tepor_body_in_material(session, wall, "backing", tepor_of(k_backing), tepor_number(800.0),
                                tepor_number(900.0)));
    MUST(
        tepor_body_in_material(session, wall, "casing", tepor_number(48.0), tepor_number(7850.0), tepor_number(470.0)));
    MUST(tepor_body_between_conductance(session, wall, "working lining", "backing", tepor_number(650.0)));
    MUST(tepor_body_on_film(session, wall, "inner", tepor_number(90.0), tepor_of(gas))); /* W/(m2 K), degC */
    MUST(tepor_body_on_film(session, wall, "outer", tepor_number(8.0), tepor_number(25.0)));
    MUST(tepor_body_on_radiation(session, wall, "outer", tepor_number(0.85), tepor_number(25.0)));

    tepor_quantity *loss = NULL, *shell = NULL;
    tepor_field* field = NULL;
    tepor_slopes* slopes = NULL;
    MUST(tepor_quantity_heat_out_through(session, "outer", &loss)); /* W, for the 1 m2 of this wall */
    MUST(tepor_quantity_mean_on(session, "outer", &shell));         /* degC */
    MUST(tepor_steady(session, wall, &field));
    double inside = 0.0, slope = 0.0;
    MUST(tepor_field_at(session, field, 0.1, 0.0, "", &inside));
    MUST(tepor_gradient(session, field, loss, &slopes));
    MUST(tepor_slopes_by(session, slopes, k_backing, &slope));
    printf("%.1f W, %.1f degC, %.1f degC at x = 0.1 m, %.0f W per W/(m K) of the backing\n",
           read_field(session, field, loss), read_field(session, field, shell), inside, slope);
    print_balance(session, field);
    number("loss", read_field(session, field, loss));
    number("casing", read_field(session, field, shell));
    number("inside", inside);
    number("slope", slope);
    tepor_field_free(field);

    tepor_sized sized;
    sized.size = sizeof sized;
    MUST(tepor_size_for(session, wall, thickness, loss, TEPOR_EQUAL_TO, 900.0, NULL, &sized, NULL));
    printf("%.0f W needs a backing of %.3f m: %s\n", sized.reached, sized.value, tepor_session_message(session));
    number("backing for 900 W", sized.value);
    number("reached", sized.reached);

    MUST(tepor_body_set(session, wall, gas, 1180.0));
    MUST(tepor_steady(session, wall, &field));
    printf("%.1f W, %.1f degC at 1180 degC\n%s\n", read_field(session, field, loss), read_field(session, field, shell),
           CAUTION_TOUCH);
    number("loss at 1180 degC", read_field(session, field, loss));

    tepor_field_free(field);
    tepor_slopes_free(slopes);
    tepor_quantity_free(shell);
    tepor_quantity_free(loss);
    tepor_body_free(wall);
    tepor_mesh_free(mesh);
    tepor_function_free(lining);
    tepor_parameter_free(k_backing);
    tepor_parameter_free(gas);
    tepor_parameter_free(thickness);
    tepor_session_free(session);
    return sized.reason == TEPOR_SIZE_FOUND ? 0 : 1;
}
