// expect: no matching (function|constructor)
// A plain number is no cause of an Error: codes are named.
#include <tepor/base/error.hpp>

#ifdef TEPOR_WRONG
const tepor::Error error(10, "k", "k = 0, expected > 0");
#else
const tepor::Error error(tepor::ErrorCode::bad_value, "k", "k = 0, expected > 0");
#endif
