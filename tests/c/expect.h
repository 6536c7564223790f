/* Expectations of the C tests. */
#ifndef TEPOR_TESTS_EXPECT_H
#define TEPOR_TESTS_EXPECT_H

#include <math.h>
#include <stdio.h>
#include <string.h>
#include <tepor/c/tepor.h>

static int failures = 0;

#define EXPECT(condition)                                                                                              \
    do {                                                                                                               \
        if (!(condition)) {                                                                                            \
            printf("%s:%d: %s; last message: %s\n", __FILE__, __LINE__, #condition, tepor_session_message(session));   \
            ++failures;                                                                                                \
        }                                                                                                              \
    } while (0)
#define DONE(call) EXPECT((call) == TEPOR_OK)
#define NEAR(a, b, tolerance)                                                                                          \
    do {                                                                                                               \
        const double got_ = (a), wanted_ = (b);                                                                        \
        if (!(fabs(got_ - wanted_) <= (tolerance))) {                                                                  \
            printf("%s:%d: %s is %.12g, expected %.12g; last message: %s\n", __FILE__, __LINE__, #a, got_, wanted_,    \
                   tepor_session_message(session));                                                                    \
            ++failures;                                                                                                \
        }                                                                                                              \
    } while (0)
#define SAYS(words) EXPECT(strstr(tepor_session_message(session), words) != NULL)

#endif
