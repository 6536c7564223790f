// expect: NamedOnly|no matching|could not convert|no viable|cannot convert
// Conductance or resistance: a bare number could be either.
#include <tepor/describe/conditions.hpp>

#ifdef TEPOR_WRONG
const tepor::Contact contact{650.0};
#else
const tepor::Contact contact{.conductance = 650.0};
#endif
