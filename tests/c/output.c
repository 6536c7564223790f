/* Texts, pictures, files, fields in arrays and the self-check through the C interface. */
#include "expect.h"
#include <stdlib.h>

static int holds(const tepor_text* text, const char* words) {
    return strstr(tepor_text_data(text), words) != NULL;
}

/* Left at 0, right at 100 degC: T = 250 x, 1000 W/m2 to the left. */
static void plane(tepor_session* session) {
    tepor_tiles* tiles = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    tepor_field* field = NULL;
    tepor_text* text = NULL;
    tepor_quantity* loss = NULL;
    double T = 0.0;
    double x = 0.0;
    double y = 0.0;
    double flux[64];
    double places[128];
    double temperatures[64];
    DONE(tepor_tiles_create(session, &tiles));
    DONE(tepor_tiles_add(session, tiles, "plate", 0.0, 0.0, 0.4, 0.2));
    DONE(tepor_tiles_mesh(session, tiles, TEPOR_QUADRILATERAL_1, 0.1, tepor_planar(1.0), &mesh));
    DONE(tepor_body_create(session, mesh, 0, &body));
    DONE(tepor_body_in_material(session, body, "plate", tepor_number(4.0), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_on_fixed_temperature(session, body, "left", tepor_number(0.0)));
    DONE(tepor_body_on_fixed_temperature(session, body, "right", tepor_number(100.0)));
    DONE(tepor_steady(session, body, &field));
    DONE(tepor_field_at(session, field, 0.13, 0.05, "", &T));
    NEAR(T, 32.5, 1e-10);
    DONE(tepor_field_heat_flux(session, field, 0.13, 0.05, "", &x, &y));
    NEAR(x, -1000.0, 1e-8);
    NEAR(y, 0.0, 1e-8);
    DONE(tepor_field_cell_heat_fluxes(session, field, flux, 16));
    NEAR(flux[14], -1000.0, 1e-8);
    DONE(tepor_field_places(session, field, places, 30));
    DONE(tepor_field_temperatures(session, field, temperatures, 15));
    for (int i = 0; i < 15; ++i) NEAR(temperatures[i], 250.0 * places[2 * i], 1e-10);
    DONE(tepor_field_hottest(session, field, "", &T, &x, &y));
    NEAR(T, 100.0, 1e-10);
    NEAR(x, 0.4, 1e-12);
    DONE(tepor_field_coldest(session, field, "plate", &T, &x, &y));
    NEAR(x, 0.0, 1e-12);
    EXPECT(tepor_field_hottest(session, field, "slate", &T, &x, &y) == TEPOR_BAD_NAME);
    EXPECT(tepor_field_pass_count(field) >= 1 && tepor_field_pass_count(NULL) == 0);
    tepor_face_heat heat;
    heat.size = sizeof heat;
    DONE(tepor_field_face_heat(session, field, "left", &heat));
    NEAR(heat.out, 200.0, 1e-9);
    NEAR(heat.prescribed, 200.0, 1e-9);
    NEAR(heat.area, 0.2, 1e-12);
    DONE(tepor_field_face_heat(session, field, "top", &heat));
    EXPECT(heat.adiabatic == 1 && heat.out == 0.0);
    EXPECT(tepor_field_face_heat(session, field, "roof", &heat) == TEPOR_BAD_NAME);

    tepor_picture_options options = tepor_picture_options_default();
    options.title = "A plate & more";
    options.isotherms = 0;
    DONE(tepor_map_svg(session, field, &options, &text));
    EXPECT(holds(text, "<svg ") && holds(text, "A plate &amp; more") && !holds(text, "isotherms"));
    EXPECT(tepor_text_data(text)[tepor_text_size(text)] == '\0');
    tepor_text_free(text);
    text = NULL;
    options.width = NAN;
    EXPECT(tepor_map_svg(session, field, &options, &text) == TEPOR_INVALID_ARGUMENT);
    EXPECT(tepor_profile_svg(session, field, NULL, &text) == TEPOR_WRONG_DIMENSION && text == NULL);
    SAYS("map_svg");
    DONE(tepor_field_vtu(session, field, &text));
    EXPECT(holds(text, "<VTKFile type=\"UnstructuredGrid\""));
    EXPECT(tepor_text_size(text) > strlen(tepor_text_data(text))); /* binary behind the header */
    tepor_text_free(text);
    DONE(tepor_field_csv(session, field, &text));
    EXPECT(holds(text, "node,region,x [m],y [m],temperature [degC]\n"));
    DONE(tepor_text_write(session, text, "tepor_c_output.csv"));
    EXPECT(tepor_text_write(session, text, "/nonexistent/a.csv") == TEPOR_BAD_FILE);
    tepor_text_free(text);
    remove("tepor_c_output.csv");
    DONE(tepor_quantity_heat_out_through(session, "left", &loss));
    tepor_quantity* named = NULL;
    DONE(tepor_quantity_named(session, loss, "what the left side takes", &named));
    const tepor_quantity* asked[1] = {named};
    DONE(tepor_report(session, body, field, asked, 1, &text));
    EXPECT(holds(text, "conductivity 4 W/(m K)") && holds(text, "balanced") &&
           holds(text, "what the left side takes") && holds(text, "Cautions"));
    tepor_text_free(text);
    DONE(tepor_body_text(session, body, &text));
    EXPECT(holds(text, "plate") && !holds(text, "balanced"));
    tepor_text_free(text);
    DONE(tepor_balance_text(session, field, &text));
    EXPECT(holds(text, "Heat balance for"));
    tepor_text_free(text);
    DONE(tepor_field_text(session, field, &text));
    EXPECT(holds(text, "hottest"));
    tepor_text_free(text);
    tepor_quantity_free(named);
    tepor_quantity_free(loss);
    tepor_field_free(field);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_tiles_free(tiles);
}

static void over_time(tepor_session* session) {
    tepor_quantity* mean = NULL;
    tepor_record* record = NULL;
    tepor_text* text = NULL;
    DONE(tepor_quantity_mean_on(session, "outer", &mean));
    const tepor_quantity* watched[1] = {mean};
    DONE(tepor_record_create(session, watched, 1, &record));
    double value = 20.0;
    DONE(tepor_record_add(session, record, 0.0, &value, 1));
    EXPECT(tepor_strip_svg(session, record, NULL, &text) == TEPOR_MISSING && text == NULL);
    value = 30.0;
    DONE(tepor_record_add(session, record, 60.0, &value, 1));
    EXPECT(tepor_record_add(session, record, 60.0, &value, 2) == TEPOR_BAD_VALUE);
    DONE(tepor_strip_svg(session, record, NULL, &text));
    EXPECT(holds(text, "mean on \"outer\"") && holds(text, "time [s]"));
    tepor_text_free(text);
    DONE(tepor_record_csv(session, record, &text));
    EXPECT(strcmp(tepor_text_data(text), "time [s],\"mean on \"\"outer\"\" [degC]\"\n0,20\n60,30\n") == 0);
    tepor_text_free(text);
    tepor_record_free(record);
    tepor_quantity_free(mean);
}

static void frees_and_nulls(tepor_session* session) {
    tepor_text* text = NULL;
    EXPECT(tepor_field_csv(session, NULL, &text) == TEPOR_INVALID_ARGUMENT && text == NULL);
    EXPECT(strcmp(tepor_text_data(NULL), "") == 0 && tepor_text_size(NULL) == 0);
    tepor_text_free(NULL);
    tepor_record_free(NULL);
    tepor_series_free(NULL);
    tepor_slopes_free(NULL);
    tepor_fitted_free(NULL);
    tepor_model_free(NULL);
    tepor_checkpoint_free(NULL);
    tepor_periodic_free(NULL);
}

static void verified_cases(tepor_session* session) {
    tepor_self_check_result result;
    tepor_text* report = NULL;
    result.size = sizeof result;
    DONE(tepor_self_check(session, &result, &report));
    EXPECT(result.passed == 1 && result.failed == 0 && result.fast_math == 0);
    EXPECT(result.cases >= 20 && result.rows >= 100);
    for (const char* const* words = (const char* const[]){"10211", "expected", "got", "tolerance", NULL}; *words;
         ++words)
        if (!holds(report, *words)) {
            printf("the report does not say %s\n", *words);
            ++failures;
        }
    tepor_text_free(report);
}

int main(void) {
    tepor_session* session = tepor_session_create();
    plane(session);
    over_time(session);
    frees_and_nulls(session);
    verified_cases(session);
    tepor_session_free(session);
    if (failures == 0) puts("output: all as expected");
    return failures != 0;
}
