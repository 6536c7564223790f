// expect: NamedOnly|no matching|could not convert|no viable|cannot convert
// Four numbers in a row would be anybody's guess.
#include <tepor/describe/conditions.hpp>

#ifdef TEPOR_WRONG
const tepor::SideFilm film{100.0, 20.0, 2.0};
#else
const tepor::SideFilm film{.coefficient = 100.0, .fluid = 20.0, .perimeter = 2.0};
#endif
