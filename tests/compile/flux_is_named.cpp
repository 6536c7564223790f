// expect: NamedOnly|no matching|could not convert|no viable|cannot convert
// There is no signed flux: a bare number says no direction.
#include <tepor/describe/conditions.hpp>

#ifdef TEPOR_WRONG
const tepor::Flux flux{5000.0};
#else
const tepor::Flux flux{.into = 5000.0};
#endif
