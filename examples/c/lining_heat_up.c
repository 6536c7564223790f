/* How long must a furnace lining be heated before its cold side reaches 60 degC? An invented plant. */
#include "example.h"

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_function *k = NULL, *gas = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* lining = NULL;
    tepor_quantity *shell = NULL, *hot = NULL;
    tepor_march* march = NULL;
    const double at[3] = {20.0, 600.0, 1300.0}, conductivity[3] = {1.10, 1.25, 1.50}; /* degC, W/(m K) */
    const double when[2] = {0.0, 4.0 * 3600.0}, heat[2] = {25.0, 1100.0};             /* s, degC: a ramp, then steady */
    const tepor_layer stack[3] = {{"brick", tepor_number(0.230), 12, 0.0},
                                  {"fibre", tepor_number(0.060), 6, 0.0},
                                  {"casing", tepor_number(0.006), 1, 0.0}};
    MUST(tepor_table_create(session, at, conductivity, 3, 0, &k));
    MUST(tepor_schedule_create(session, when, heat, 2, 1, &gas));
    MUST(tepor_layers_create(session, TEPOR_SEGMENT_2, stack, 3, tepor_planar(1.0), tepor_nothing(), &mesh));
    MUST(tepor_body_create(session, mesh, 0, &lining));
    MUST(tepor_body_in_material(session, lining, "brick", tepor_by(k), tepor_number(2100.0), tepor_number(960.0)));
    MUST(tepor_body_in_material(session, lining, "fibre", tepor_number(0.16), tepor_number(200.0),
                                tepor_number(1050.0)));
    MUST(tepor_body_in_material(session, lining, "casing", tepor_number(48.0), tepor_number(7850.0),
                                tepor_number(470.0)));
    MUST(tepor_body_on_film(session, lining, "inner", tepor_number(60.0), tepor_by(gas)));
    MUST(tepor_body_on_film(session, lining, "outer", tepor_number(8.0), tepor_number(25.0)));
    MUST(tepor_body_on_radiation(session, lining, "outer", tepor_number(0.85), tepor_number(25.0)));
    MUST(tepor_quantity_mean_on(session, "outer", &shell));
    MUST(tepor_quantity_mean_on(session, "inner", &hot));

    double reached = 0.0, now = 0.0;
    tepor_balance b;
    b.size = sizeof b;
    tepor_march_options options = tepor_march_options_default();
    options.step = 60.0;
    MUST(tepor_march_create(session, lining, 25.0, &options, &march));
    MUST(tepor_march_time_to_reach(session, march, shell, 60.0, 48.0 * 3600.0, &reached));
    MUST(tepor_march_value(session, march, hot, &now));
    MUST(tepor_march_balance(session, march, &b));
    printf("casing at 60 degC after %7.2f h\n", reached / 3600.0);
    printf("hot face then           %7.1f degC\n", now);
    printf("last step: in %.1f W, out %.1f W, stored %.1f W; left over %.1e W: %s\n", b.in, b.out, b.stored,
           b.left_over, b.balanced ? "balanced" : "NOT BALANCED");
    puts(CAUTION_TOUCH);

    tepor_march_free(march);
    tepor_quantity_free(hot);
    tepor_quantity_free(shell);
    tepor_body_free(lining);
    tepor_mesh_free(mesh);
    tepor_function_free(gas);
    tepor_function_free(k);
    tepor_session_free(session);
    return 0;
}
