/* States over time and statements changed: checkpoints that go on bit for bit, integrals, peaks, observers, cancelling,
 * periodic states, gradients of marches, statements added and replaced, options of a steady solve. */
#include "expect.h"
#include <stdlib.h>

/* A lump of C = 90 kJ/K under a film of 20 W/K, heated by `power`. */
static tepor_body* lump(tepor_session* session, const tepor_parameter* power) {
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    const tepor_layer stack[1] = {{"slab", tepor_number(0.1), 2, 0.0}};
    DONE(tepor_layers_create(session, TEPOR_SEGMENT_1, stack, 1, tepor_planar(1.0), tepor_nothing(), &mesh));
    DONE(tepor_body_create(session, mesh, 0, &body));
    tepor_mesh_free(mesh);
    DONE(tepor_body_in_material(session, body, "slab", tepor_number(1e5), tepor_number(1000.0), tepor_number(900.0)));
    DONE(tepor_body_in_generation_total(session, body, "slab", tepor_of(power)));
    DONE(tepor_body_on_film(session, body, "outer", tepor_number(20.0), tepor_number(0.0)));
    return body;
}

static int32_t count_calls(const tepor_march* march, void* user_data) {
    int* calls = user_data;
    if (tepor_march_time(march) > 0.0) ++*calls;
    return *calls >= 7;
}

static void checkpoints(tepor_session* session) {
    tepor_parameter* power = NULL;
    tepor_quantity* mean = NULL;
    tepor_quantity* heat = NULL;
    tepor_march* march = NULL;
    tepor_march* again = NULL;
    tepor_checkpoint* saved = NULL;
    tepor_checkpoint* loaded = NULL;
    int64_t integral = -1;
    int64_t peak = -1;
    double when = 0.0;
    double here = 0.0;
    double there = 0.0;
    const char* path = "tepor_c_states.checkpoint";
    DONE(tepor_parameter_create(session, "power", 1000.0, &power));
    tepor_body* body = lump(session, power);
    DONE(tepor_quantity_mean_in(session, "slab", &mean));
    DONE(tepor_quantity_generated_in(session, "slab", &heat));
    tepor_march_options options = tepor_march_options_default();
    options.step = 50.0;
    DONE(tepor_march_create(session, body, 0.0, &options, &march));
    DONE(tepor_march_integral(session, march, heat, &integral));
    DONE(tepor_march_peak(session, march, mean, &peak));
    DONE(tepor_march_advance_to(session, march, 1000.0));
    NEAR(tepor_march_read_integral(march, integral), 1e6, 1e-3);
    DONE(tepor_march_value(session, march, mean, &here));
    NEAR(tepor_march_read_peak(march, peak, &when), here, 0.0);
    NEAR(when, 1000.0, 0.0);
    NEAR(here, 50.0 * (1.0 - exp(-1000.0 / 4500.0)), 0.01);
    EXPECT(isnan(tepor_march_read_integral(march, 3)) && isnan(tepor_march_read_peak(march, -1, NULL)));
    EXPECT(tepor_march_steps(march) == 20 && tepor_march_last_step(march) == 50.0);
    EXPECT(tepor_march_factorisations(march) >= 1 && tepor_march_rejections(march) == 0);
    DONE(tepor_march_parameter(session, march, power, &there));
    NEAR(there, 1000.0, 0.0);

    DONE(tepor_march_checkpoint(session, march, &saved));
    DONE(tepor_checkpoint_save(session, saved, path));
    DONE(tepor_checkpoint_load(session, path, &loaded));
    EXPECT(tepor_checkpoint_size(loaded) == tepor_checkpoint_size(saved) &&
           memcmp(tepor_checkpoint_bytes(loaded), tepor_checkpoint_bytes(saved), tepor_checkpoint_size(saved)) == 0);
    DONE(tepor_march_resume(session, body, loaded, &options, &again));
    DONE(tepor_march_advance_to(session, march, 4000.0));
    DONE(tepor_march_advance_to(session, again, 4000.0));
    DONE(tepor_march_value(session, march, mean, &here));
    DONE(tepor_march_value(session, again, mean, &there));
    EXPECT(memcmp(&here, &there, sizeof here) == 0); /* to the last bit */
    tepor_checkpoint_free(loaded);
    loaded = NULL;
    EXPECT(tepor_checkpoint_from_bytes(session, tepor_checkpoint_bytes(saved), 40, &loaded) == TEPOR_BAD_FILE);
    EXPECT(tepor_checkpoint_load(session, "/nonexistent/file", &loaded) == TEPOR_BAD_FILE && loaded == NULL);
    DONE(tepor_checkpoint_from_bytes(session, tepor_checkpoint_bytes(saved), tepor_checkpoint_size(saved), &loaded));

    /* an observer counts, then stops the run */
    int calls = 0;
    DONE(tepor_march_observe(session, again, 100.0, count_calls, &calls));
    EXPECT(tepor_march_advance_to(session, again, 9000.0) == TEPOR_CANCELLED);
    EXPECT(calls == 7 && tepor_march_time(again) < 4800.0);
    calls = 0;
    EXPECT(tepor_march_advance_to_with(session, march, 9000.0, count_calls, &calls) == TEPOR_CANCELLED);
    NEAR(tepor_march_time(march), 4000.0 + 7 * 50.0, 1e-9);

    remove(path);
    tepor_checkpoint_free(loaded);
    tepor_checkpoint_free(saved);
    tepor_march_free(again);
    tepor_march_free(march);
    tepor_quantity_free(heat);
    tepor_quantity_free(mean);
    tepor_body_free(body);
    tepor_parameter_free(power);
}

static int32_t sine(const tepor_points* points, double* value, double* slope, void* user_data) {
    (void)slope;
    (void)user_data;
    for (size_t i = 0; i < points->count; ++i) value[i] = 20.0 + 10.0 * sin(points->time * 6.283185307179586 / 3600.0);
    return 0;
}
static int32_t ramp(const tepor_points* points, double* value, double* slope, void* user_data) {
    (void)slope;
    (void)user_data;
    for (size_t i = 0; i < points->count; ++i) value[i] = 10.0 + 100.0 * points->x[i];
    return 0;
}

static void over_time(tepor_session* session) {
    tepor_parameter* power = NULL;
    tepor_function* day = NULL;
    tepor_function* start = NULL;
    tepor_quantity* mean = NULL;
    tepor_quantity* stored = NULL;
    tepor_march* march = NULL;
    tepor_periodic* periodic = NULL;
    tepor_slopes* slopes = NULL;
    tepor_field* field = NULL;
    tepor_swing swing;
    double value = 0.0;
    double when = 0.0;
    int32_t one_sided = 0;
    swing.size = sizeof swing;
    DONE(tepor_parameter_create(session, "power", 0.0, &power));
    tepor_body* body = lump(session, power);
    DONE(tepor_quantity_mean_in(session, "slab", &mean));
    DONE(tepor_quantity_stored_in(session, "slab", &stored));
    tepor_march_options options = tepor_march_options_default();
    options.step = 36.0;

    /* dT/dP after time t: (1 - exp(-t h / C)) / h, for the discrete steps within their error */
    DONE(tepor_march_create(session, body, 50.0, &options, &march));
    DONE(tepor_march_record(session, march, 16.0));
    DONE(tepor_march_advance_to(session, march, 3600.0));
    DONE(tepor_gradient_at_end(session, march, mean, &slopes));
    DONE(tepor_slopes_by(session, slopes, power, &value));
    NEAR(value, (1.0 - exp(-3600.0 / 4500.0)) / 20.0, 2e-4);
    tepor_slopes_free(slopes);
    DONE(tepor_gradient_at(session, march, mean, 1800.0, &slopes));
    DONE(tepor_slopes_by(session, slopes, power, &value));
    NEAR(value, (1.0 - exp(-1800.0 / 4500.0)) / 20.0, 2e-4);
    tepor_slopes_free(slopes);
    DONE(tepor_gradient_of_integral(session, march, mean, &slopes));
    DONE(tepor_slopes_by(session, slopes, power, &value));
    NEAR(value, (3600.0 - 4500.0 * (1.0 - exp(-0.8))) / 20.0, 0.3);
    tepor_slopes_free(slopes);
    DONE(tepor_gradient_of_peak(session, march, mean, &slopes, &when, &one_sided));
    EXPECT(when > 0.0 && when <= 36.0 && one_sided == 1); /* it only cools */
    tepor_slopes_free(slopes);
    tepor_march_free(march);
    march = NULL;

    /* a law of place to start from: the mean of 10 + 100 x over 0.1 m is 15 */
    DONE(tepor_law_create(session, "ramp", ramp, NULL, NULL, 0, TEPOR_LAW_OF_PLACE, 0, &start));
    DONE(tepor_march_create_by(session, body, start, &options, &march));
    DONE(tepor_march_value(session, march, mean, &value));
    NEAR(value, 15.0, 1e-9);
    DONE(tepor_march_value(session, march, stored, &value));
    NEAR(value, 15.0 * 90000.0, 1e-4);
    tepor_march_free(march);

    /* air that swings by 10 K an hour: amplitude 10 / sqrt(1 + (w C / h)^2) */
    DONE(tepor_law_create(session, "day", sine, NULL, NULL, 0, TEPOR_LAW_OF_TIME, 0, &day));
    DONE(tepor_body_replace_on_film(session, body, "outer", tepor_number(20.0), tepor_by(day)));
    EXPECT(tepor_steady(session, body, &field) == TEPOR_MISSING && field == NULL); /* at which instant? */
    tepor_steady_options steady = tepor_steady_options_default();
    steady.time = 900.0;
    DONE(tepor_steady_with(session, body, &steady, &field));
    DONE(tepor_field_value(session, field, mean, &value));
    NEAR(value, 30.0, 1e-9);
    tepor_field_free(field);
    field = NULL;
    DONE(tepor_periodic_steady(session, body, 3600.0, &options, &periodic));
    DONE(tepor_periodic_swing(session, periodic, mean, &swing));
    const double w = 6.283185307179586 / 3600.0 * 4500.0;
    NEAR(0.5 * (swing.high - swing.low), 10.0 / sqrt(1.0 + w * w), 5e-3);
    NEAR(swing.mean, 20.0, 1e-3);
    EXPECT(swing.low_time != swing.high_time);
    DONE(tepor_periodic_field(session, periodic, &field));
    DONE(tepor_field_value(session, field, mean, &value));
    EXPECT(value >= swing.low - 1e-9 && value <= swing.high + 1e-9);

    tepor_field_free(field);
    tepor_periodic_free(periodic);
    tepor_quantity_free(stored);
    tepor_quantity_free(mean);
    tepor_function_free(start);
    tepor_function_free(day);
    tepor_body_free(body);
    tepor_parameter_free(power);
}

static double mean_now(tepor_session* session, const tepor_body* body) {
    tepor_field* field = NULL;
    tepor_quantity* mean = NULL;
    double value = NAN;
    DONE(tepor_quantity_mean_on(session, "outer", &mean));
    DONE(tepor_steady(session, body, &field));
    if (field) DONE(tepor_field_value(session, field, mean, &value));
    tepor_field_free(field);
    tepor_quantity_free(mean);
    return value;
}

/* Surface temperature = (sum of heats + h T) / h for every way of saying it. */
static void statements(tepor_session* session) {
    tepor_parameter* power = NULL;
    DONE(tepor_parameter_create(session, "power", 1000.0, &power));
    tepor_body* body = lump(session, power);
    tepor_body* copy = NULL;
    NEAR(mean_now(session, body), 50.0, 1e-9);
    DONE(tepor_body_copy(session, body, &copy));
    EXPECT(tepor_body_on_film(session, body, "outer", tepor_number(5.0), tepor_number(0.0)) == TEPOR_CONTRADICTION);
    SAYS("also_on");
    DONE(tepor_body_also_on_film(session, body, "outer", tepor_number(5.0), tepor_number(0.0)));
    NEAR(mean_now(session, body), 40.0, 1e-9);
    DONE(tepor_body_on_flux_into(session, body, "inner", tepor_number(100.0)));
    DONE(tepor_body_also_on_flux_into(session, body, "inner", tepor_number(200.0)));
    DONE(tepor_body_also_on_flux_out_of(session, body, "inner", tepor_number(50.0)));
    NEAR(mean_now(session, body), 50.0, 1e-9);
    DONE(tepor_body_replace_on_flux_out_of(session, body, "inner", tepor_number(500.0)));
    NEAR(mean_now(session, body), 20.0, 1e-9);
    DONE(tepor_body_replace_on_flux_into(session, body, "inner", tepor_number(0.0)));
    DONE(tepor_body_also_in_generation_per_volume(session, body, "slab", tepor_number(5000.0)));
    DONE(tepor_body_also_in_generation_total(session, body, "slab", tepor_number(250.0)));
    NEAR(mean_now(session, body), (1000.0 + 500.0 + 250.0) / 25.0, 1e-9);
    DONE(tepor_body_replace_in_generation_per_volume(session, body, "slab", tepor_number(2500.0)));
    NEAR(mean_now(session, body), 10.0, 1e-9);
    DONE(tepor_body_replace_in_generation_total(session, body, "slab", tepor_number(500.0)));
    NEAR(mean_now(session, body), 20.0, 1e-9);
    DONE(tepor_body_replace_on_film(session, body, "outer", tepor_number(10.0), tepor_number(5.0)));
    NEAR(mean_now(session, body), 55.0, 1e-9);
    DONE(tepor_body_in_side_film_plate(session, body, "slab", tepor_number(1.0), tepor_number(5.0), tepor_number(0.1),
                                       2));
    NEAR(mean_now(session, body), 5.0 + 500.0 / 12.0, 0.01);
    DONE(tepor_body_also_in_side_film_plate(session, body, "slab", tepor_number(1.0), tepor_number(5.0),
                                            tepor_number(0.1), 2));
    NEAR(mean_now(session, body), 5.0 + 500.0 / 14.0, 0.01);
    DONE(tepor_body_replace_in_side_film_bar(session, body, "slab", tepor_number(10.0), tepor_number(5.0),
                                             tepor_number(10.0)));
    NEAR(mean_now(session, body), 5.0 + 500.0 / 20.0, 0.01);
    DONE(tepor_body_replace_in_material(session, body, "slab", tepor_number(2e5), tepor_nothing(), tepor_nothing()));
    EXPECT(tepor_body_replace_on_radiation(session, body, "outer", tepor_number(0.5), tepor_number(5.0)) ==
           TEPOR_MISSING);
    EXPECT(tepor_body_replace_between_conductance(session, body, "slab", "slab", tepor_number(5.0)) != TEPOR_OK);
    DONE(tepor_body_on_fixed_temperature(session, body, "inner", tepor_number(70.0)));
    DONE(tepor_body_replace_on_fixed_temperature(session, body, "inner", tepor_number(80.0)));
    NEAR(mean_now(session, body), 80.0, 0.01);
    NEAR(mean_now(session, copy), 50.0, 1e-9); /* the copy was not touched */
    tepor_body_free(copy);
    tepor_body_free(body);
    tepor_parameter_free(power);
}

int main(void) {
    tepor_session* session = tepor_session_create();
    checkpoints(session);
    over_time(session);
    statements(session);
    tepor_session_free(session);
    if (failures == 0) puts("states: all as expected");
    return failures != 0;
}
