// expect: NamedOnly|no matching|could not convert|no viable|cannot convert
#include <tepor/describe/conditions.hpp>

#ifdef TEPOR_WRONG
const tepor::LocalHeat heat{100.0, 0.01};
#else
const tepor::LocalHeat heat{.total = 100.0, .radius = 0.01};
#endif
