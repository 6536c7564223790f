/* The library's verified cases on this machine, with the compiler and flags of the library. The twin of self_check.cpp. */
#include "example.h"

int main(void) {
    tepor_session* session = tepor_session_create();
    tepor_self_check_result result;
    tepor_text* report = NULL;
    result.size = sizeof result;
    MUST(tepor_self_check(session, &result, &report));
    fputs(tepor_text_data(report), stdout);
    number("cases", (double)result.cases);
    number("rows", (double)result.rows);
    number("failed", (double)result.failed);
    tepor_text_free(report);
    tepor_session_free(session);
    return result.passed == 1 ? 0 : 1;
}
