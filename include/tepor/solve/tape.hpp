#pragma once
// What a march keeps when it is asked to remember: every state, for derivatives of the whole run.

#include <cstddef>
#include <tepor/body/model.hpp>
#include <utility>
#include <vector>

namespace tepor::detail {

/// States of a run, one substep after the other.
struct MarchTape {
    struct Leg {
        double from = 0.0; ///< [s]
        double to = 0.0;
        double theta = 1.0;
        bool two_stages = false; ///< TR-BDF2: `stage` is the temperature at its inner point
        std::size_t values = 0;  ///< position of the parameter values it ran with
        std::vector<double> T;   ///< at its end, all unknowns
        std::vector<double> stage;
    };
    std::vector<double> start;
    std::vector<Leg> legs;
    std::vector<Values> values;
    std::size_t most_bytes = 0;
    std::size_t bytes = 0;
    bool full = false; ///< the states did not fit

    static std::size_t size_of(const Leg& leg) noexcept {
        return (leg.T.size() + leg.stage.size()) * sizeof(double) + sizeof(Leg);
    }
    void add(Leg leg, const Values& now) {
        if (full) return;
        if (values.empty() || values.back().slots != now.slots) values.push_back(now);
        leg.values = values.size() - 1;
        bytes += size_of(leg);
        if (bytes > most_bytes) {
            full = true;
            legs.clear();
            legs.shrink_to_fit();
            return;
        }
        legs.push_back(std::move(leg));
    }
    /// Takes back what a rejected step has added.
    void shorten(std::size_t to) {
        for (; legs.size() > to; legs.pop_back()) bytes -= size_of(legs.back());
    }
};

} // namespace tepor::detail
