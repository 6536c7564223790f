/* tepor.h: heat conduction in solids, for C and for languages that call C.
 *
 * The same grammar as in C++: parameters in, quantities out, verbs between. A body is described in a region, on a face,
 * between two regions, at a point. SI units throughout; temperatures in degC unless the body is made in kelvin.
 *
 * Every call that can fail takes a tepor_session first, returns a tepor_status, and leaves its full text in the session:
 *
 *     tepor_session* s = tepor_session_create();
 *     if (tepor_body_on_film(s, wall, "outer", tepor_number(8.0), tepor_number(25.0)) != TEPOR_OK)
 *         puts(tepor_session_message(s));
 *
 * Rules. Results are written only when TEPOR_OK is returned. What a `create` call wrote has to be freed by the matching
 * `free`, which accepts NULL; the order of freeing does not matter. Texts are UTF-8 and end in 0; they are copied. There is
 * no global state: one session and the handles used with it belong to one thread at a time, different threads use
 * sessions and handles of their own. No exception leaves the library. Any call may answer TEPOR_INVALID_ARGUMENT (a
 * pointer is NULL, a number is no member of its enumeration, an array has another length), TEPOR_OUT_OF_MEMORY or
 * TEPOR_INTERNAL. Structs that may grow start with `size`: set it to sizeof the struct, or start from the
 * `..._default()` call, so that programs and libraries of different age understand each other.
 *
 * Cautions: whether a surface may be touched, a fire resistance, the rating of a cable or the wall of a pressure vessel is
 * never decided by a computed temperature alone; local codes and licensed practice decide. */
#ifndef TEPOR_C_TEPOR_H
#define TEPOR_C_TEPOR_H

#include <tepor/c/tepor_answers.h>  /* bracket, estimate, gradient, size_for */
#include <tepor/c/tepor_body.h>     /* in, on, between, at */
#include <tepor/c/tepor_changes.h>  /* also and replace */
#include <tepor/c/tepor_compact.h>  /* a small model for control */
#include <tepor/c/tepor_field.h>    /* steady, fields, balances */
#include <tepor/c/tepor_fit.h>      /* parameters from readings */
#include <tepor/c/tepor_march.h>    /* marching, checkpoints, periodic states */
#include <tepor/c/tepor_mesh.h>     /* layers, tiles, sections, arrays */
#include <tepor/c/tepor_output.h>   /* texts, pictures, files, self-check */
#include <tepor/c/tepor_quantity.h> /* what is asked */
#include <tepor/c/tepor_session.h>  /* statuses, messages, version */
#include <tepor/c/tepor_values.h>   /* parameters, tables, schedules, own laws */

#endif
