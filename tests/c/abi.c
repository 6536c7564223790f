/* What programs already built rely on: the size of everything that crosses the border by value, the numbers of statuses
 * and kinds, and that a struct of an older, shorter version is still understood. Compiled as C99. */
#include <math.h>
#include <stdio.h>
#include <string.h>
#include <tepor/c/tepor.h>

static int failures = 0;

#define SIZE(type, bytes)                                                                                              \
    do {                                                                                                               \
        if (sizeof(type) != (bytes)) {                                                                                 \
            printf(#type " has %u bytes, expected %u\n", (unsigned)sizeof(type), (unsigned)(bytes));                   \
            ++failures;                                                                                                \
        }                                                                                                              \
    } while (0)
#define EXPECT(condition)                                                                                              \
    do {                                                                                                               \
        if (!(condition)) {                                                                                            \
            printf("%s:%d: %s\n", __FILE__, __LINE__, #condition);                                                     \
            ++failures;                                                                                                \
        }                                                                                                              \
    } while (0)

static void sizes(void) {
    SIZE(tepor_body_options, 24);
    SIZE(tepor_condition, 16);
    SIZE(tepor_reading, 48);
    SIZE(tepor_fit_by, 40);
    SIZE(tepor_fit_options, 32);
    SIZE(tepor_estimated, 40);
    SIZE(tepor_agreement, 48);
    SIZE(tepor_march_options, 80);
    SIZE(tepor_swing, 48);
    SIZE(tepor_frame, 16);
    SIZE(tepor_layer, 48);
    SIZE(tepor_stroke, 40);
    SIZE(tepor_arrays, 104);
    SIZE(tepor_bracket_options, 40);
    SIZE(tepor_bracket_result, 56);
    SIZE(tepor_estimate_options, 40);
    SIZE(tepor_estimate_result, 40);
    SIZE(tepor_slope, 40);
    SIZE(tepor_size_options, 56);
    SIZE(tepor_sized, 128);
    SIZE(tepor_size_by, 24);
    SIZE(tepor_size_to, 24);
    SIZE(tepor_picture_options, 40);
    SIZE(tepor_self_check_result, 40);
    SIZE(tepor_compact_options, 96);
    SIZE(tepor_model_facts, 88);
    SIZE(tepor_steady_options, 48);
    SIZE(tepor_meshing, 56);
    SIZE(tepor_balance, 72);
    SIZE(tepor_face_heat, 64);
    SIZE(tepor_value, 24);
    SIZE(tepor_points, 64);
}

static void numbers(void) {
    EXPECT(tepor_abi_version() == TEPOR_ABI_VERSION && TEPOR_ABI_VERSION == 1);
    EXPECT(TEPOR_OK == 0 && TEPOR_BAD_VALUE == 10 && TEPOR_BAD_GEOMETRY == 20 && TEPOR_NO_LEVEL == 30);
    EXPECT(TEPOR_OUTSIDE_TABLE == 40 && TEPOR_NOT_CONVERGED == 50 && TEPOR_BAD_FILE == 60 && TEPOR_INTERNAL == 90);
    EXPECT(TEPOR_SEGMENT_1 == 11 && TEPOR_EXACT_SEGMENT == 19 && TEPOR_TRIANGLE_2 == 22 && TEPOR_QUADRILATERAL_3 == 33);
    EXPECT(TEPOR_PLANAR == 0 && TEPOR_CYLINDRICAL == 1 && TEPOR_SPHERICAL == 2);
    EXPECT(strcmp(tepor_status_name(TEPOR_BAD_LAW), "bad_law") == 0);
    EXPECT(strlen(tepor_status_text(TEPOR_CONTRADICTION)) > 10);
    EXPECT(strlen(tepor_version()) >= 5);
}

/* A program built when tepor_balance ended after `out` gets its three numbers and nothing beyond them. */
static void older_struct(void) {
    tepor_session* session = tepor_session_create();
    tepor_mesh* mesh = NULL;
    tepor_body* body = NULL;
    tepor_field* field = NULL;
    struct {
        size_t size;
        double in, out, beyond;
    } old = {0, 0.0, 0.0, -7.0};
    tepor_balance now;
    const tepor_layer stack[1] = {{"slab", tepor_number(0.5), 4, 0.0}};
    EXPECT(tepor_layers_create(session, TEPOR_SEGMENT_1, stack, 1, tepor_planar(1.0), tepor_nothing(), &mesh) == 0);
    EXPECT(tepor_body_create(session, mesh, 0, &body) == 0);
    EXPECT(tepor_body_in_material(session, body, "slab", tepor_number(2.0), tepor_nothing(), tepor_nothing()) == 0);
    EXPECT(tepor_body_on_fixed_temperature(session, body, "inner", tepor_number(100.0)) == 0);
    EXPECT(tepor_body_on_fixed_temperature(session, body, "outer", tepor_number(0.0)) == 0);
    EXPECT(tepor_steady(session, body, &field) == 0);
    old.size = 3 * sizeof(double);
    EXPECT(tepor_field_balance(session, field, (tepor_balance*)(void*)&old) == TEPOR_OK);
    EXPECT(fabs(old.out - 400.0) <= 1e-9 && fabs(old.in - 400.0) <= 1e-9);
    EXPECT(old.beyond == -7.0);
    now.size = 0;
    EXPECT(tepor_field_balance(session, field, &now) == TEPOR_INVALID_ARGUMENT);
    EXPECT(strstr(tepor_session_message(session), "`size`") != NULL);
    tepor_field_free(field);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_session_free(session);
}

int main(void) {
    sizes();
    numbers();
    older_struct();
    if (failures == 0) puts("abi: all as expected");
    return failures != 0;
}
