/* How thick must the insulation of a hot duct wall be, so that its casing stays at 50 degC? An invented plant. */
#include "example.h"

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_parameter* thickness = NULL;
    tepor_function* k = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* wall = NULL;
    tepor_quantity *casing = NULL, *loss = NULL;
    tepor_field* field = NULL;
    const double at[3] = {20.0, 200.0, 400.0};
    const double conductivity[3] = {0.038, 0.062, 0.105};                            /* W/(m K) over degC */
    MUST(tepor_parameter_create(session, "insulation thickness", 0.05, &thickness)); /* m */
    MUST(tepor_table_create(session, at, conductivity, 3, 0, &k));
    const tepor_layer stack[3] = {{"steel", tepor_number(0.004), 1, 0.0},
                                  {"insulation", tepor_of(thickness), 8, 0.0},
                                  {"casing", tepor_number(0.001), 1, 0.0}};
    MUST(tepor_layers_create(session, TEPOR_SEGMENT_2, stack, 3, tepor_planar(1.0), tepor_nothing(), &mesh));
    MUST(tepor_body_create(session, mesh, 0, &wall));
    MUST(tepor_body_in_material(session, wall, "steel", tepor_number(45.0), tepor_nothing(), tepor_nothing()));
    MUST(tepor_body_in_material(session, wall, "insulation", tepor_by(k), tepor_nothing(), tepor_nothing()));
    MUST(tepor_body_in_material(session, wall, "casing", tepor_number(200.0), tepor_nothing(), tepor_nothing()));
    MUST(tepor_body_on_film(session, wall, "inner", tepor_number(40.0), tepor_number(320.0))); /* W/(m2 K), degC */
    MUST(tepor_body_on_film(session, wall, "outer", tepor_number(6.0), tepor_number(30.0)));
    MUST(tepor_body_on_radiation(session, wall, "outer", tepor_number(0.25), tepor_number(30.0)));
    MUST(tepor_quantity_mean_on(session, "outer", &casing));
    MUST(tepor_quantity_heat_out_through(session, "outer", &loss));

    tepor_sized sized;
    sized.size = sizeof sized;
    tepor_size_options options = tepor_size_options_default();
    options.from = 0.01;
    options.to = 0.6;
    MUST(tepor_size_for(session, wall, thickness, casing, TEPOR_AT_MOST, 50.0, &options, &sized, &field));
    printf("insulation thickness  %8.1f mm   (%d solves)\n", 1000.0 * sized.value, (int)sized.solves);
    printf("casing                %8.2f degC\n", read_field(session, field, casing));
    printf("loss                  %8.1f W/m2\n", read_field(session, field, loss));
    print_balance(session, field);
    puts(CAUTION_TOUCH);

    tepor_field_free(field);
    tepor_quantity_free(loss);
    tepor_quantity_free(casing);
    tepor_body_free(wall);
    tepor_mesh_free(mesh);
    tepor_function_free(k);
    tepor_parameter_free(thickness);
    tepor_session_free(session);
    return sized.reason == TEPOR_SIZE_FOUND ? 0 : 1;
}
