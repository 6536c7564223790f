// expect: (no matching function for call to|error: cannot convert).*exp
// A generic law is called with dual numbers, which std::exp does not know: write exp, and the right one is found.
#include <cmath>
#include <tepor/describe/law.hpp>

#ifdef TEPOR_WRONG
const tepor::Law law = tepor::law([](const auto& spot) { return std::exp(0.001 * spot.temperature); });
#else
const tepor::Law law = tepor::law([](const auto& spot) { return exp(0.001 * spot.temperature); });
#endif
