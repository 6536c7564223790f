// expect: NamedOnly|no matching|could not convert|no viable|cannot convert
// Heat per volume or in all: the member says which, so a bare number is refused.
#include <tepor/describe/conditions.hpp>

#ifdef TEPOR_WRONG
const tepor::Generation generation{5e4};
#else
const tepor::Generation generation{.per_volume = 5e4};
#endif
