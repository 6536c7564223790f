// expect: ffast-math breaks NaN checks
// A build that drops NaN checks is refused.
#ifdef TEPOR_WRONG
#define __FAST_MATH__ 1
#endif
#include <tepor/base/config.hpp>
