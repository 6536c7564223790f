// expect: one argument for each listed parameter
// A law with a parameter takes the spot and the parameter's value.
#include <tepor/describe/law.hpp>

const tepor::Parameter current{"current", 800.0};

#ifdef TEPOR_WRONG
const tepor::Law law = tepor::law({current}, [](const auto& spot) { return 2.0 * spot.temperature; });
#else
const tepor::Law law = tepor::law({current}, [](const auto& spot, auto amps) { return amps * spot.temperature; });
#endif
