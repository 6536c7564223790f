#pragma once
// What a march keeps when it is asked to remember: its steps and as many states as fit, for derivatives of the whole run.

#include <cstddef>
#include <tepor/body/model.hpp>
#include <utility>
#include <vector>

namespace tepor::detail {

/// A run, one substep after the other. All states are kept while they fit the memory stated; then every second, every fourth ...,
/// and derivatives go through the steps between two kept states again (Griewank 1992: one level of checkpoints).
struct MarchTape {
    struct Leg {
        double from = 0.0; ///< [s]
        double to = 0.0;
        double dt = 0.0; ///< to - from without rounding: the size the step was taken with
        double theta = 1.0;
        bool two_stages = false; ///< TR-BDF2
        std::size_t values = 0;  ///< position of the parameter values it ran with
    };
    struct State {
        std::vector<double> T;            ///< all unknowns
        std::vector<double> molten;       ///< latent heat of every LatentNode [J]
        std::vector<double> stage;        ///< TR-BDF2: temperature at its inner point
        std::vector<double> stage_molten; ///< and what is molten there

        [[nodiscard]] std::size_t bytes() const noexcept {
            return (T.size() + molten.size() + stage.size() + stage_molten.size()) * sizeof(double) + sizeof(State);
        }
        void without_stage() {
            stage = {};
            stage_molten = {};
        }
    };
    State start;
    std::vector<Leg> legs;
    std::vector<Values> values;
    std::vector<State> kept; ///< at the ends of legs stride - 1, 2 stride - 1, ...
    std::size_t stride = 1;
    std::size_t most_bytes = 0;
    bool full = false; ///< not even checkpoints fit

    /// What is held and, with checkpoints, what going through a piece again will hold.
    [[nodiscard]] std::size_t bytes() const noexcept {
        const std::size_t whole = kept.empty() ? 0 : kept.front().bytes();
        std::size_t sum = legs.size() * sizeof(Leg) + kept.size() * whole + (stride > 1 ? stride * state_bytes : 0);
        if (!values.empty()) sum += values.size() * (sizeof(Values) + values.front().slots.size() * sizeof(double));
        return sum;
    }

    void add(Leg leg, State state, const Values& now) {
        if (full) return;
        if (values.empty() || values.back().slots != now.slots) values.push_back(now);
        leg.values = values.size() - 1;
        legs.push_back(leg);
        if (state_bytes == 0) state_bytes = state.bytes();
        if (legs.size() % stride == 0) {
            if (stride > 1) state.without_stage();
            kept.push_back(std::move(state));
        }
        while (bytes() > most_bytes) {
            if (stride >= legs.size() || kept.empty()) {
                full = true;
                legs = {};
                kept = {};
                values = {};
                return;
            }
            thin();
        }
    }
    /// Takes back what a rejected step has added.
    void shorten(std::size_t to) {
        if (legs.size() <= to) return;
        legs.resize(to);
        kept.resize(to / stride);
    }

  private:
    void thin() {
        stride *= 2;
        for (std::size_t i = 1; i < kept.size(); i += 2) {
            if (i / 2 != i) kept[i / 2] = std::move(kept[i]);
            kept[i / 2].without_stage();
        }
        kept.resize(legs.size() / stride);
    }
    std::size_t state_bytes = 0;
};

} // namespace tepor::detail
