// expect: PlaceWithoutTime
// A generic law of place is not told the time: it is integrated once, also when marching.
#include <tepor/describe/law.hpp>

#ifdef TEPOR_WRONG
const tepor::Law law = tepor::of_place([](const auto& place) { return 2.0 * place.x + place.time; });
#else
const tepor::Law law = tepor::of_place_and_time([](const auto& place) { return 2.0 * place.x + place.time; });
#endif
