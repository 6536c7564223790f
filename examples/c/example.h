/* What the C examples share: a call that must succeed, and numbers to the last bit, written to the file that TEPOR_NUMBERS
 * names. */
#ifndef TEPOR_EXAMPLE_H
#define TEPOR_EXAMPLE_H

#include <stdio.h>
#include <stdlib.h>
#include <tepor/c/tepor.h>

/* Ends the program with the library's own words when a call is refused. */
#define MUST(call)                                                                                                     \
    do {                                                                                                               \
        if ((call) != TEPOR_OK) {                                                                                      \
            fprintf(stderr, "%s\n", tepor_session_message(session));                                                   \
            exit(1);                                                                                                   \
        }                                                                                                              \
    } while (0)

static inline void number(const char* name, double value) {
    const char* path = getenv("TEPOR_NUMBERS");
    FILE* file = path ? fopen(path, "a") : NULL;
    if (!file) return;
    fprintf(file, "%s %a\n", name, value);
    fclose(file);
}

static inline double read_field(tepor_session* session, const tepor_field* field, const tepor_quantity* quantity) {
    double value = 0.0;
    MUST(tepor_field_value(session, field, quantity, &value));
    return value;
}

/* The heat balance of a field in one line. */
static inline void print_balance(tepor_session* session, const tepor_field* field) {
    tepor_balance b;
    b.size = sizeof b;
    MUST(tepor_field_balance(session, field, &b));
    printf("heat in %.6g W, out %.6g W, generated %.6g W; left over %.1e W (rounding %.1e W): %s\n", b.in, b.out,
           b.generated, b.left_over, b.floor, b.balanced ? "balanced" : "NOT BALANCED");
}

#define CAUTION_TOUCH                                                                                                  \
    "Caution: whether a surface may be touched is decided by local rules and licensed practice, not by this number."

#endif
