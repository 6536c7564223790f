#pragma once
// Refinement studies: an error at several mesh widths, and the order it falls with.

#include <cmath>
#include <cstdio>
#include <string>
#include <vector>

namespace tepor::test {

/// Errors over mesh widths, coarsest first.
struct Study {
    std::vector<double> h;
    std::vector<double> error;

    /// Order between the two finest meshes, or between row i - 1 and row i.
    [[nodiscard]] double order(std::size_t i) const {
        return std::log(error[i - 1] / error[i]) / std::log(h[i - 1] / h[i]);
    }
    [[nodiscard]] double order() const { return order(h.size() - 1); }

    /// Order over the whole range: on random meshes single steps scatter.
    [[nodiscard]] double mean_order() const {
        return std::log(error.front() / error.back()) / std::log(h.front() / h.back());
    }

    /// One row per mesh: h, error, order.
    [[nodiscard]] std::string text() const {
        std::string out = "\n           h        error   order\n";
        for (std::size_t i = 0; i < h.size(); ++i) {
            char row[80];
            if (i == 0)
                std::snprintf(row, sizeof row, "%12.4e %12.4e\n", h[i], error[i]);
            else
                std::snprintf(row, sizeof row, "%12.4e %12.4e %7.2f\n", h[i], error[i], order(i));
            out += row;
        }
        return out;
    }
};

/// Runs `error_at(n)` for every number of cells n along a side.
template <class Error>
Study refine(const std::vector<int>& cells, Error error_at) {
    Study study;
    for (const int n : cells) {
        study.h.push_back(1.0 / n);
        study.error.push_back(error_at(n));
    }
    return study;
}

} // namespace tepor::test
