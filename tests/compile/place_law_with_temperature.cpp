// expect: no member|has no member
// A law of place is not told the temperature: the body it is used in stays linear.
#include <tepor/describe/law.hpp>

#ifdef TEPOR_WRONG
const tepor::Law law = tepor::of_place([](const auto& place) { return place.temperature; });
#else
const tepor::Law law = tepor::of_place([](const auto& place) { return 2.0 * place.x; });
#endif
