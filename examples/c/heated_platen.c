/* A heated platen: a plane section marched under control, its useful heat bracketed, a small model of it for the controller.
 * The twin of heated_platen.cpp: the same numbers to the last bit. */
#include "example.h"

/* Proportional heating towards 60 degC, between off and 2500 W. */
static double control_law(double temperature) {
    const double wanted = 200.0 * (60.0 - temperature);
    return wanted < 0.0 ? 0.0 : wanted > 2500.0 ? 2500.0 : wanted;
}

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_parameter* power = NULL;
    tepor_section* section = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* platen = NULL;
    tepor_quantity *sensor = NULL, *useful = NULL;
    tepor_march* march = NULL;
    tepor_model* plant = NULL;
    MUST(tepor_parameter_create(session, "heater power", 500.0, &power)); /* W in all heaters, for the stated depth */
    MUST(tepor_section_create(session, &section));
    MUST(tepor_section_add_rectangle(session, section, "platen", 0.0, 0.0, 0.60, 0.06));
    const double places[5] = {0.06, 0.18, 0.30, 0.42, 0.54};
    for (int i = 0; i < 5; ++i) MUST(tepor_section_add_circle(session, section, "heater", places[i], 0.03, 0.008));
    MUST(tepor_section_cut_circle(session, section, "coolant", 0.12, 0.03, 0.005)); /* its edge is the face "coolant" */
    MUST(tepor_section_face(session, section, "working face", 0.0, 0.06, 0.60, 0.06));
    MUST(tepor_section_mesh(session, section, TEPOR_TRIANGLE_2, 0.008, tepor_planar(0.40), &mesh));
    MUST(tepor_body_create(session, mesh, 0, &platen));
    MUST(tepor_body_in_material(session, platen, "platen", tepor_number(45.0), tepor_number(7850.0),
                                tepor_number(470.0)));
    MUST(tepor_body_in_material(session, platen, "heater", tepor_number(16.0), tepor_number(7900.0),
                                tepor_number(500.0)));
    MUST(tepor_body_in_generation_total(session, platen, "heater", tepor_of(power)));
    MUST(tepor_body_on_film(session, platen, "working face", tepor_number(25.0), tepor_number(22.0)));
    MUST(tepor_body_on_film(session, platen, "coolant", tepor_number(1500.0), tepor_number(18.0)));
    MUST(tepor_quantity_at(session, 0.30, 0.055, "", &sensor));
    MUST(tepor_quantity_heat_out_through(session, "working face", &useful));

    int64_t reading = 0, heater = 0;
    tepor_march_options steps = tepor_march_options_default();
    steps.step = 2.0;
    MUST(tepor_march_create(session, platen, 22.0, &steps, &march));
    MUST(tepor_march_watch(session, march, sensor, &reading)); /* names and places are resolved here, once */
    MUST(tepor_march_drive(session, march, power, &heater));
    while (tepor_march_time(march) < 1800.0) {
        tepor_march_set(march, heater, control_law(tepor_march_read(march, reading)));
        const int32_t verdict = tepor_march_advance(march);
        if (verdict > 1) {
            printf("heaters off: %s\n", tepor_verdict_text(verdict));
            return 1;
        }
    }
    printf("after half an hour: %.1f degC at the sensor\n", tepor_march_read(march, reading));
    number("after half an hour", tepor_march_read(march, reading));

    tepor_bracket_result certain;
    certain.size = sizeof certain;
    tepor_bracket_options narrow = tepor_bracket_options_default();
    narrow.relative_width = 0.01;
    MUST(tepor_bracket(session, platen, useful, &narrow, &certain));
    printf("at 500 W between %.1f and %.1f W leave through the working face\n", certain.lower, certain.upper);
    number("lower", certain.lower);
    number("upper", certain.upper);

    tepor_model_facts facts;
    facts.size = sizeof facts;
    const tepor_parameter* inputs[1] = {power};
    const tepor_quantity* outputs[1] = {sensor};
    tepor_compact_options options = tepor_compact_options_default();
    options.inputs = inputs;
    options.input_count = 1;
    options.outputs = outputs;
    options.output_count = 1;
    options.sample_time = 1.0;
    options.tolerance = 1e-3;
    MUST(tepor_compact(session, platen, &options, &plant));
    MUST(tepor_model_facts_of(session, plant, &facts));
    printf("%d states follow the sensor within %.2g degC of the largest gain\n%s\n", (int)facts.order,
           facts.error_bound, CAUTION_TOUCH);
    number("states", (double)facts.order);
    number("error bound", facts.error_bound);

    tepor_model_free(plant);
    tepor_march_free(march);
    tepor_quantity_free(useful);
    tepor_quantity_free(sensor);
    tepor_body_free(platen);
    tepor_mesh_free(mesh);
    tepor_section_free(section);
    tepor_parameter_free(power);
    tepor_session_free(session);
    return certain.reached == 1 ? 0 : 1;
}
