/* Texts, pictures, files and the self-check. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_OUTPUT_H
#define TEPOR_C_TEPOR_OUTPUT_H

#include <tepor/c/tepor_answers.h>
#include <tepor/c/tepor_compact.h>
#include <tepor/c/tepor_fit.h>

#ifdef __cplusplus
extern "C" {
#endif

/* Bytes and their number; a text ends in 0 beyond them. Valid as long as the handle; "" and 0 for NULL. */
TEPOR_C_API const char* tepor_text_data(const tepor_text* text);
TEPOR_C_API size_t tepor_text_size(const tepor_text* text);
/* Into a file, as it is. TEPOR_BAD_FILE. */
TEPOR_C_API tepor_status tepor_text_write(tepor_session* session, const tepor_text* text, const char* path);
TEPOR_C_API void tepor_text_free(tepor_text* text);

/* For people: a body as described, a field, all of it with `count` quantities (NULL and 0: none) and the cautions, a heat
 * balance, slopes, a fit, a model. */
TEPOR_C_API tepor_status tepor_body_text(tepor_session* session, const tepor_body* body, tepor_text** out);
TEPOR_C_API tepor_status tepor_field_text(tepor_session* session, const tepor_field* field, tepor_text** out);
TEPOR_C_API tepor_status tepor_report(tepor_session* session, const tepor_body* body, const tepor_field* field,
                                      const tepor_quantity* const* quantities, size_t count, tepor_text** out);
TEPOR_C_API tepor_status tepor_balance_text(tepor_session* session, const tepor_field* field, tepor_text** out);
TEPOR_C_API tepor_status tepor_slopes_text(tepor_session* session, const tepor_slopes* slopes, tepor_text** out);
TEPOR_C_API tepor_status tepor_fitted_text(tepor_session* session, const tepor_fitted* fitted, tepor_text** out);
TEPOR_C_API tepor_status tepor_model_text(tepor_session* session, const tepor_model* model, tepor_text** out);

/* Size and words of a picture; start from tepor_picture_options_default(). */
typedef struct tepor_picture_options {
    size_t size;
    double width;      /* [px] */
    double height;     /* [px]; maps take the height the body's shape asks for */
    const char* title; /* NULL: none */
    int32_t isotherms; /* about as many lines in a map; 0: none */
    int32_t arrows;    /* not 0: heat-flow arrows in a map */
} tepor_picture_options;
TEPOR_C_API tepor_picture_options tepor_picture_options_default(void);
/* Self-contained SVG: temperature along a 1D body, the temperature map of a 2D one, quantities over time. `options` may be
 * NULL. TEPOR_WRONG_DIMENSION, TEPOR_MISSING (nothing recorded). */
TEPOR_C_API tepor_status tepor_profile_svg(tepor_session* session, const tepor_field* field,
                                           const tepor_picture_options* options, tepor_text** out);
TEPOR_C_API tepor_status tepor_map_svg(tepor_session* session, const tepor_field* field,
                                       const tepor_picture_options* options, tepor_text** out);
TEPOR_C_API tepor_status tepor_strip_svg(tepor_session* session, const tepor_record* record,
                                         const tepor_picture_options* options, tepor_text** out);

/* A field as the bytes of a VTU file, and its nodes as CSV with units in the header. */
TEPOR_C_API tepor_status tepor_field_vtu(tepor_session* session, const tepor_field* field, tepor_text** out);
TEPOR_C_API tepor_status tepor_field_csv(tepor_session* session, const tepor_field* field, tepor_text** out);

/* Quantities over time, filled in the loop: `entries` is the number of quantities. */
TEPOR_C_API tepor_status tepor_record_create(tepor_session* session, const tepor_quantity* const* quantities,
                                             size_t count, tepor_record** out);
TEPOR_C_API tepor_status tepor_record_add(tepor_session* session, tepor_record* record, double time,
                                          const double* values, size_t entries);
TEPOR_C_API tepor_status tepor_record_csv(tepor_session* session, const tepor_record* record, tepor_text** out);
TEPOR_C_API void tepor_record_free(tepor_record* record);

/* Files STEM_0000.vtu, STEM_0001.vtu ... and an index STEM.csv of times [s] and files, written anew at every add. */
TEPOR_C_API tepor_status tepor_series_create(tepor_session* session, const char* stem, tepor_series** out);
TEPOR_C_API tepor_status tepor_series_add(tepor_session* session, tepor_series* series, const tepor_field* field);
TEPOR_C_API void tepor_series_free(tepor_series* series);

/* The library's verified cases in this build. Set `size` to sizeof(tepor_self_check_result). */
typedef struct tepor_self_check_result {
    size_t size;
    int64_t cases;
    int64_t rows;
    int64_t failed; /* rows out of tolerance, and cases that stopped */
    int32_t passed; /* every row within its tolerance, and a sound build */
    int32_t fast_math;
} tepor_self_check_result;
/* Takes a few seconds. `report` may be NULL; else it receives the table: source, expected, got, verdict, compiler, flags. */
TEPOR_C_API tepor_status tepor_self_check(tepor_session* session, tepor_self_check_result* result, tepor_text** report);

#ifdef __cplusplus
}
#endif

#endif
