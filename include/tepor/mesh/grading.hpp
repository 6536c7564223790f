#pragma once
// How cell lengths change along a run of cells.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <vector>

namespace tepor {

/// Cell lengths in geometric progression. A plain number is the ratio of the last cell to the first; finer_at_start(5) and
/// its sisters say it in words, with the ratio of the longest cell to the shortest. One cell alone cannot be graded.
class Grading {
  public:
    /// Equal cells.
    Grading() = default;
    Grading(double last_to_first) : ratio_(last_to_first) {} // NOLINT: a number is a grading

    /// Last length over first; symmetric: middle over first.
    [[nodiscard]] double ratio() const noexcept { return ratio_; }
    /// Mirrored about the middle of the run.
    [[nodiscard]] bool symmetric() const noexcept { return symmetric_; }

  private:
    friend Grading finer_at_both_ends(double longest_to_shortest);
    friend Grading finer_in_the_middle(double longest_to_shortest);

    double ratio_ = 1.0;
    bool symmetric_ = false;
};

/// Short cells at the start of the run, `longest_to_shortest` times longer ones at its end.
inline Grading finer_at_start(double longest_to_shortest) {
    return {longest_to_shortest};
}
/// Short cells at the end of the run.
inline Grading finer_at_end(double longest_to_shortest) {
    return {1.0 / longest_to_shortest};
}
/// Short cells at both ends, long ones in the middle.
inline Grading finer_at_both_ends(double longest_to_shortest) {
    Grading g(longest_to_shortest);
    g.symmetric_ = true;
    return g;
}
/// Long cells at both ends, short ones in the middle.
inline Grading finer_in_the_middle(double longest_to_shortest) {
    Grading g(1.0 / longest_to_shortest);
    g.symmetric_ = true;
    return g;
}

namespace detail {

/// The borders of `cells` cells as fractions of the run: cells + 1 numbers from exactly 0 to exactly 1, ascending.
/// The second half of a symmetric run is 1 minus the first. Ratio finite and > 0, cells >= 1: checked by the caller.
std::vector<double> graded_fractions(Index cells, const Grading& grading);

/// A usable ratio: finite, positive, and not so large that cells vanish.
inline bool usable(const Grading& grading) noexcept {
    return grading.ratio() >= 1e-6 && grading.ratio() <= 1e6;
}

} // namespace detail
} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/grading.hpp>
#endif
