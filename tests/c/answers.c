/* The answers through the C interface, each against a closed form: bracket, estimate, gradient, size_for, fit, compact. */
#include "expect.h"
#include <stdlib.h>

typedef struct rod {
    tepor_parameter *k, *h, *power, *length;
    tepor_mesh* mesh;
    tepor_body* body;
    tepor_quantity *end, *loss;
} rod;

/* A slab of thickness L that generates P in 1 m2, a film h at its outer face to 20 degC: T_outer = 20 + P / h,
 * T_inner = T_outer + P L / (2 k). */
static void make(tepor_session* session, rod* r, double capacity) {
    memset(r, 0, sizeof *r);
    DONE(tepor_parameter_create(session, "k", 5.0, &r->k));
    DONE(tepor_parameter_create(session, "h", 25.0, &r->h));
    DONE(tepor_parameter_create(session, "power", 1000.0, &r->power));
    DONE(tepor_parameter_create(session, "length", 0.1, &r->length));
    const tepor_layer stack[1] = {{"slab", tepor_of(r->length), 8, 0.0}};
    DONE(tepor_layers_create(session, TEPOR_SEGMENT_2, stack, 1, tepor_planar(1.0), tepor_nothing(), &r->mesh));
    DONE(tepor_body_create(session, r->mesh, 0, &r->body));
    DONE(
        tepor_body_in_material(session, r->body, "slab", tepor_of(r->k), tepor_number(1000.0), tepor_number(capacity)));
    DONE(tepor_body_in_generation_total(session, r->body, "slab", tepor_of(r->power)));
    DONE(tepor_body_on_film(session, r->body, "outer", tepor_of(r->h), tepor_number(20.0)));
    DONE(tepor_quantity_at(session, 0.0, 0.0, "", &r->end));
    DONE(tepor_quantity_heat_out_through(session, "outer", &r->loss));
}
static void unmake(rod* r) {
    tepor_quantity_free(r->loss);
    tepor_quantity_free(r->end);
    tepor_body_free(r->body);
    tepor_mesh_free(r->mesh);
    tepor_parameter_free(r->length);
    tepor_parameter_free(r->power);
    tepor_parameter_free(r->h);
    tepor_parameter_free(r->k);
}

static void slopes(tepor_session* session) {
    rod r;
    make(session, &r, 900.0);
    tepor_field* field = NULL;
    tepor_slopes* found = NULL;
    double d = 0.0;
    double nodes[34];
    tepor_slope first;
    DONE(tepor_steady(session, r.body, &field));
    DONE(tepor_gradient(session, field, r.end, &found));
    NEAR(tepor_slopes_value(found), 70.0, 1e-9);
    EXPECT(tepor_slopes_count(found) == 4 && tepor_slopes_exact(found) == 1);
    DONE(tepor_slopes_by(session, found, r.power, &d));
    NEAR(d, 1.0 / 25.0 + 0.1 / 10.0, 1e-12);
    DONE(tepor_slopes_by(session, found, r.h, &d));
    NEAR(d, -1000.0 / 625.0, 1e-10);
    DONE(tepor_slopes_by(session, found, r.k, &d));
    NEAR(d, -1000.0 * 0.1 / 50.0, 1e-10);
    DONE(tepor_slopes_by(session, found, r.length, &d));
    NEAR(d, 100.0, 1e-8);
    first.size = sizeof first;
    DONE(tepor_slopes_ranked(session, found, 0, &first));
    EXPECT(strcmp(first.parameter, "power") == 0);
    NEAR(first.relative, 50.0 / 70.0, 1e-10);
    EXPECT(tepor_slopes_ranked(session, found, 4, &first) == TEPOR_INVALID_ARGUMENT);
    DONE(tepor_slopes_nodes(session, found, nodes, 34));
    EXPECT(nodes[1] == 0.0);
    tepor_parameter* stranger = NULL;
    DONE(tepor_parameter_create(session, "stranger", 1.0, &stranger));
    EXPECT(tepor_slopes_by(session, found, stranger, &d) == TEPOR_UNUSED);
    SAYS("stranger");
    tepor_parameter_free(stranger);
    tepor_slopes_free(found);
    tepor_field_free(field);
    unmake(&r);
}

static void bounds(tepor_session* session) {
    rod r;
    make(session, &r, 900.0);
    tepor_quantity* mean = NULL;
    tepor_quantity* hottest = NULL;
    tepor_bracket_result b;
    tepor_estimate_result e;
    tepor_field* field = NULL;
    double total = 0.0;
    double energy = 0.0;
    double per_cell[8];
    b.size = sizeof b;
    e.size = sizeof e;
    DONE(tepor_quantity_mean_in(session, "slab", &mean));
    DONE(tepor_quantity_hottest_in(session, "slab", &hottest));
    tepor_bracket_options options = tepor_bracket_options_default();
    options.relative_width = 1e-4;
    DONE(tepor_bracket(session, r.body, mean, &options, &b));
    const double exact = 20.0 + 40.0 + 1000.0 * 0.1 / 15.0;
    EXPECT(b.reached == 1 && b.lower <= exact && exact <= b.upper && b.upper - b.lower <= 1e-4 * b.value);
    EXPECT(tepor_bracket(session, r.body, hottest, NULL, &b) == TEPOR_NOT_CERTIFIABLE);
    DONE(tepor_estimate(session, r.body, hottest, NULL, &e));
    NEAR(e.value, 70.0, 1e-6);
    EXPECT(e.reached == 1 && e.passes >= 2);
    DONE(tepor_steady(session, r.body, &field));
    DONE(tepor_field_error_bound(session, field, &total, &energy, per_cell, 8));
    EXPECT(total >= 0.0 && total < 1e-3 * energy);
    tepor_field_free(field);
    tepor_quantity_free(hottest);
    tepor_quantity_free(mean);
    unmake(&r);
}

/* A body of another conductivity made from scratch for every value. */
static tepor_body* slab_of(double k, void* user_data) {
    tepor_session* session = user_data;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    if (k > 49.0) return NULL;
    const tepor_layer stack[1] = {{"slab", tepor_number(0.1), 2, 0.0}};
    DONE(tepor_layers_create(session, TEPOR_SEGMENT_2, stack, 1, tepor_planar(1.0), tepor_nothing(), &mesh));
    DONE(tepor_body_create(session, mesh, 0, &body));
    tepor_mesh_free(mesh);
    DONE(tepor_body_in_material(session, body, "slab", tepor_number(k), tepor_nothing(), tepor_nothing()));
    DONE(tepor_body_in_generation_total(session, body, "slab", tepor_number(1000.0)));
    DONE(tepor_body_on_film(session, body, "outer", tepor_number(25.0), tepor_number(20.0)));
    return body;
}

static void sizes(tepor_session* session) {
    rod r;
    make(session, &r, 900.0);
    tepor_sized sized;
    tepor_field* field = NULL;
    double value = 0.0;
    sized.size = sizeof sized;
    tepor_size_options options = tepor_size_options_default();
    options.from = 100.0;
    options.to = 3000.0;
    DONE(tepor_size_for(session, r.body, r.power, r.end, TEPOR_AT_MOST, 90.0, &options, &sized, &field));
    EXPECT(sized.reason == TEPOR_SIZE_FOUND && sized.answer_count == 1 && sized.solves <= 8);
    NEAR(sized.value, 1400.0, 1e-3);
    DONE(tepor_field_value(session, field, r.end, &value));
    NEAR(value, 90.0, 1e-5);
    tepor_field_free(field);
    DONE(tepor_size_for(session, r.body, r.power, r.end, TEPOR_AT_MOST, 500.0, &options, &sized, NULL));
    EXPECT(sized.reason == TEPOR_SIZE_ALWAYS_MET); /* 170 degC at most between the bounds */
    DONE(tepor_size_for(session, r.body, r.power, r.end, TEPOR_AT_LEAST, 500.0, &options, &sized, NULL));
    EXPECT(sized.reason == TEPOR_SIZE_UNREACHABLE);
    DONE(tepor_size_for(session, r.body, r.power, r.end, TEPOR_EQUAL_TO, 900.0, &options, &sized, NULL));
    EXPECT(sized.reason == TEPOR_SIZE_UNREACHABLE);
    NEAR(sized.reached, 170.0, 1e-6); /* at the upper bound */
    EXPECT(strlen(tepor_session_message(session)) > 10);
    EXPECT(tepor_size_for(session, r.body, r.power, r.end, (tepor_target_kind)9, 1.0, NULL, &sized, NULL) ==
           TEPOR_INVALID_ARGUMENT);

    options.from = 1.0;
    options.to = 20.0;
    DONE(tepor_size_for_bodies(session, slab_of, session, r.end, TEPOR_EQUAL_TO, 75.0, &options, &sized, NULL));
    NEAR(sized.value, 50.0 / 15.0, 1e-4);
    options.to = 50.0;
    EXPECT(tepor_size_for_bodies(session, slab_of, session, r.end, TEPOR_EQUAL_TO, 75.0, &options, &sized, NULL) ==
           TEPOR_CANCELLED);

    /* two for two: power and film that give 80 degC inside and 65 degC outside: P L / 2 k = 15, P / h = 45 */
    tepor_quantity* outer = NULL;
    DONE(tepor_quantity_mean_on(session, "outer", &outer));
    const tepor_size_by by[2] = {{r.power, NAN, NAN}, {r.h, 1.0, 100.0}};
    const tepor_size_to to[2] = {{r.end, 80.0, TEPOR_EQUAL_TO, 0}, {outer, 65.0, TEPOR_EQUAL_TO, 0}};
    double values[2];
    double reached[2];
    int32_t reason = -1;
    DONE(tepor_size_for_several(session, r.body, by, to, 2, NULL, values, reached, &reason, NULL));
    EXPECT(reason == TEPOR_SIZE_FOUND);
    NEAR(values[0], 1500.0, 1e-3);
    NEAR(values[1], 1500.0 / 45.0, 1e-4);
    NEAR(reached[1], 65.0, 1e-5);
    tepor_quantity_free(outer);
    unmake(&r);
}

static void fits(tepor_session* session) {
    rod r;
    make(session, &r, 900.0);
    tepor_quantity* outer = NULL;
    tepor_fitted* fitted = NULL;
    tepor_estimated e;
    tepor_agreement a;
    double covariance[4];
    double residuals[4];
    e.size = sizeof e;
    a.size = sizeof a;
    DONE(tepor_quantity_mean_on(session, "outer", &outer));
    /* h = 40, k = 4: T_outer = 20 + P / 40, T_inner = T_outer + P / 80; at 1000 W and 2000 W, exactly */
    const tepor_condition doubled[1] = {{r.power, 2000.0}};
    const tepor_reading readings[4] = {{outer, 0.0, 45.0, 0.1, NULL, 0},
                                       {r.end, 0.0, 57.5, 0.1, NULL, 0},
                                       {outer, 0.0, 70.0, 0.1, doubled, 1},
                                       {r.end, 0.0, 95.0, 0.1, doubled, 1}};
    const tepor_fit_by by[2] = {{r.h, NAN, NAN, 0.0, 0.0}, {r.k, 0.5, 50.0, 0.0, 0.0}};
    DONE(tepor_fit(session, r.body, by, 2, readings, 4, NULL, &fitted));
    DONE(tepor_fitted_value(session, fitted, r.h, &e));
    NEAR(e.value, 40.0, 1e-4);
    EXPECT(e.low < 40.0 && e.high > 40.0);
    NEAR(e.high - e.value, 1.959964 * e.uncertainty, 1e-5 * e.uncertainty);
    DONE(tepor_fitted_value(session, fitted, r.k, &e));
    NEAR(e.value, 4.0, 1e-4);
    DONE(tepor_fitted_agreement(session, fitted, &a));
    EXPECT(a.degrees_of_freedom == 2 && a.on_bounds == 0 && a.chi_square < 1e-4 && a.goodness > 0.99);
    DONE(tepor_fitted_covariance(session, fitted, covariance, 4));
    NEAR(sqrt(covariance[3]), e.uncertainty, 1e-9);
    DONE(tepor_fitted_residuals(session, fitted, residuals, 4));
    DONE(tepor_fitted_predict(session, fitted, r.end, doubled, 1, &e));
    NEAR(e.value, 95.0, 1e-3);
    EXPECT(tepor_fitted_value(session, fitted, r.power, &e) == TEPOR_UNUSED);
    EXPECT(tepor_fitted_predict_at(session, fitted, r.end, 10.0, NULL, 0, &e) == TEPOR_NOT_SUPPORTED);
    tepor_fitted_free(fitted);
    fitted = NULL;
    /* one temperature at one power does not tell the two apart, and both are named */
    EXPECT(tepor_fit(session, r.body, by, 2, readings + 1, 1, NULL, &fitted) == TEPOR_NO_ANSWER && fitted == NULL);
    EXPECT(strstr(tepor_session_offender(session), "h") != NULL &&
           strstr(tepor_session_offender(session), "k") != NULL);
    /* a prior tells them apart */
    const tepor_fit_by known[2] = {{r.h, NAN, NAN, 40.0, 0.5}, {r.k, NAN, NAN, 0.0, 0.0}};
    DONE(tepor_fit(session, r.body, known, 2, readings + 1, 1, NULL, &fitted));
    DONE(tepor_fitted_value(session, fitted, r.h, &e));
    NEAR(e.value, 40.0, 1e-3);
    tepor_fitted_free(fitted);
    fitted = NULL;

    /* over time: a lump of 90 kJ/K under its film cools by exp(-h t / C); k large makes it one */
    const double h = 12.0;
    tepor_reading timed[3];
    DONE(tepor_body_set(session, r.body, r.power, 0.0));
    DONE(tepor_body_set(session, r.body, r.k, 5000.0));
    DONE(tepor_body_set(session, r.body, r.h, 5.0));
    for (int i = 0; i < 3; ++i) {
        memset(&timed[i], 0, sizeof timed[i]);
        timed[i].quantity = outer;
        timed[i].time = 2000.0 * (i + 1);
        timed[i].value = 20.0 + 80.0 * exp(-h * timed[i].time / 90000.0);
        timed[i].uncertainty = 0.05;
    }
    tepor_march_options steps = tepor_march_options_default();
    steps.step = 20.0;
    DONE(tepor_fit_march(session, r.body, 100.0, &steps, by, 1, timed, 3, NULL, &fitted));
    DONE(tepor_fitted_value(session, fitted, r.h, &e));
    NEAR(e.value, h, 0.01);
    DONE(tepor_fitted_predict_at(session, fitted, outer, 9000.0, NULL, 0, &e));
    NEAR(e.value, 20.0 + 80.0 * exp(-h * 9000.0 / 90000.0), 0.02);
    EXPECT(e.uncertainty > 0.0 && tepor_fitted_predict_at(session, fitted, outer, -1.0, NULL, 0, &e) == TEPOR_OUTSIDE);
    DONE(tepor_fitted_predict(session, fitted, outer, NULL, 0, &e));
    NEAR(e.value, 20.0, 1e-9); /* at rest, with no power */
    tepor_fitted_free(fitted);
    steps.step = 0.0; /* adaptive */
    steps.tolerance = 1e-3;
    DONE(tepor_fit_march(session, r.body, 100.0, &steps, by, 1, timed, 3, NULL, &fitted));
    DONE(tepor_fitted_value(session, fitted, r.h, &e));
    NEAR(e.value, h, 0.01);
    tepor_fitted_free(fitted);
    tepor_quantity_free(outer);
    unmake(&r);
}

static void models(tepor_session* session) {
    rod r;
    make(session, &r, 900.0);
    tepor_model* model = NULL;
    tepor_text* text = NULL;
    tepor_model_facts facts;
    double gain = 0.0;
    double re = 0.0;
    double im = 0.0;
    double y[1] = {0.0};
    const tepor_parameter* inputs[1] = {r.power};
    const tepor_quantity* outputs[1] = {r.end};
    facts.size = sizeof facts;
    tepor_compact_options options = tepor_compact_options_default();
    options.inputs = inputs;
    options.input_count = 1;
    options.outputs = outputs;
    options.output_count = 1;
    EXPECT(tepor_compact(session, r.body, &options, &model) == TEPOR_MISSING); /* no sample time */
    options.sample_time = 10.0;
    options.tolerance = 1e-4;
    DONE(tepor_compact(session, r.body, &options, &model));
    DONE(tepor_model_facts_of(session, model, &facts));
    EXPECT(facts.inputs == 1 && facts.outputs == 1 && facts.order >= 1 && facts.order <= 8 && facts.linearised == 0);
    EXPECT(facts.error_bound <= 1e-4 * facts.peak_gain);
    DONE(tepor_model_steady_gain(session, model, 0, 0, &gain));
    NEAR(gain, 0.05, 1e-10); /* 1/h + L / 2k */
    DONE(tepor_model_gain(session, model, 0, 0, 0.0, &re, &im));
    NEAR(re, 0.05, 1e-10);
    NEAR(im, 0.0, 1e-15);
    EXPECT(tepor_model_steady_gain(session, model, 1, 0, &gain) == TEPOR_INVALID_ARGUMENT);
    double* A = malloc((size_t)(facts.order * facts.order) * sizeof(double));
    DONE(tepor_model_numbers(session, model, TEPOR_MODEL_A, A, (size_t)(facts.order * facts.order)));
    EXPECT(tepor_model_numbers(session, model, TEPOR_MODEL_A, A, 0) == TEPOR_INVALID_ARGUMENT);
    free(A);
    /* held at 1000 W it stays, held at 1500 W it comes to 95 degC, step by step as the march of the body does */
    tepor_march* march = NULL;
    int64_t probe = 0;
    int64_t input = 0;
    double u[1] = {1000.0};
    double worst = 0.0;
    tepor_model_advance(model, u, y);
    NEAR(y[0], 70.0, 1e-9);
    tepor_field* field = NULL;
    tepor_march_options steps = tepor_march_options_default();
    steps.step = 1.0;
    DONE(tepor_steady(session, r.body, &field));
    DONE(tepor_march_create_from(session, r.body, field, &steps, &march));
    DONE(tepor_march_watch(session, march, r.end, &probe));
    DONE(tepor_march_drive(session, march, r.power, &input));
    u[0] = 1500.0;
    tepor_march_set(march, input, 1500.0);
    tepor_model_reset(model);
    for (int i = 1; i <= 60; ++i) {
        tepor_model_advance(model, u, y);
        DONE(tepor_march_advance_to(session, march, 10.0 * i));
        if (fabs(y[0] - tepor_march_read(march, probe)) > worst) worst = fabs(y[0] - tepor_march_read(march, probe));
    }
    EXPECT(worst <= 0.02);
    for (int i = 0; i < 20000; ++i) tepor_model_advance(model, u, y);
    NEAR(y[0], 95.0, 1e-6);
    tepor_model_advance(NULL, u, y);
    DONE(tepor_model_c_source(session, model, "plant", &text));
    EXPECT(strstr(tepor_text_data(text), "plant_advance") != NULL);
    tepor_text_free(text);
    EXPECT(tepor_model_c_source(session, model, "not a name", &text) == TEPOR_BAD_NAME);
    DONE(tepor_model_csv(session, model, &text));
    EXPECT(tepor_text_size(text) > 100);
    tepor_text_free(text);
    tepor_march_free(march);
    tepor_field_free(field);
    tepor_model_free(model);
    unmake(&r);
}

int main(void) {
    tepor_session* session = tepor_session_create();
    slopes(session);
    bounds(session);
    sizes(session);
    fits(session);
    models(session);
    tepor_session_free(session);
    if (failures == 0) puts("answers: all as expected");
    return failures != 0;
}
