/* Marching through the C interface: a lumped body against its exponential, and a control loop. */
#include "expect.h"

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_parameter* power = NULL;
    tepor_tiles* tiles = NULL;
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    tepor_quantity* middle = NULL;
    tepor_march* march = NULL;
    int64_t probe = -1;
    int64_t input = -1;
    double time = 0.0;
    tepor_balance balance;

    /* 0.1 x 0.1 m of metal with a weak film: Biot number 2.5e-4, so one temperature tells all */
    DONE(tepor_parameter_create(session, "power", 0.0, &power));
    DONE(tepor_tiles_create(session, &tiles));
    DONE(tepor_tiles_add(session, tiles, "metal", 0.0, 0.0, 0.1, 0.1));
    DONE(tepor_tiles_mesh(session, tiles, TEPOR_QUADRILATERAL_1, 0.05, tepor_planar(1.0), &mesh));
    DONE(tepor_body_create(session, mesh, 0, &body));
    DONE(
        tepor_body_in_material(session, body, "metal", tepor_number(200.0), tepor_number(2700.0), tepor_number(900.0)));
    DONE(tepor_body_in_generation_total(session, body, "metal", tepor_of(power)));
    DONE(tepor_body_on_film(session, body, "right", tepor_number(0.5), tepor_number(20.0)));
    DONE(tepor_quantity_at(session, 0.05, 0.05, "", &middle));

    tepor_march_options options = tepor_march_options_default();
    options.step = 100.0;
    DONE(tepor_march_create(session, body, 100.0, &options, &march));
    DONE(tepor_march_watch(session, march, middle, &probe));
    DONE(tepor_march_drive(session, march, power, &input));
    EXPECT(tepor_march_read(march, probe) == 100.0);
    DONE(tepor_march_advance_to(session, march, 200000.0));
    const double capacity = 0.01 * 2700.0 * 900.0; /* J/K */
    const double expected = 20.0 + 80.0 * exp(-0.5 * 0.1 * 200000.0 / capacity);
    EXPECT(fabs(tepor_march_read(march, probe) - expected) <= 0.02);
    balance.size = sizeof balance;
    DONE(tepor_march_balance(session, march, &balance));
    EXPECT(balance.balanced == 1);

    /* a value that is no number keeps the last one and says so */
    tepor_march_set(march, input, NAN);
    EXPECT(tepor_march_advance(march) == 1);
    tepor_march_set(march, input, 100.0);
    const double before = tepor_march_read(march, probe);
    for (int i = 0; i < 10; ++i) EXPECT(tepor_march_advance(march) == 0);
    EXPECT(fabs(tepor_march_read(march, probe) - before - (100.0 - 0.05 * (before - 20.0)) * 1000.0 / capacity) <= 0.1);
    DONE(tepor_march_time_to_reach(session, march, middle, before + 20.0, 1e6, &time));
    EXPECT(time > tepor_march_time(march) - 100.0 && time <= tepor_march_time(march));
    EXPECT(tepor_march_time_to_reach(session, march, middle, -50.0, tepor_march_time(march) + 1000.0, &time) ==
           TEPOR_NO_ANSWER);
    EXPECT(isnan(tepor_march_read(march, 5)));
    EXPECT(tepor_march_advance(NULL) == 16);

    /* lumped capacity knows no step that is too short; otherwise the limit goes with 1 / theta */
    EXPECT(tepor_march_sensible_step(march) == 0.0);
    tepor_march_free(march);
    options.capacity = TEPOR_CAPACITY_CONSISTENT;
    options.theta = 0.5;
    DONE(tepor_march_create(session, body, 100.0, &options, &march));
    const double half = tepor_march_sensible_step(march);
    tepor_march_free(march);
    options.theta = 1.0;
    DONE(tepor_march_create(session, body, 100.0, &options, &march));
    EXPECT(half > 0.0);
    NEAR(half, 2.0 * tepor_march_sensible_step(march), 1e-9 * half);
    tepor_march_free(march);
    tepor_quantity_free(middle);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_tiles_free(tiles);
    tepor_parameter_free(power);
    tepor_session_free(session);
    if (failures == 0) puts("march: all as expected");
    return failures != 0;
}
