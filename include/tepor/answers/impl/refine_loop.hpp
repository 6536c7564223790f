#pragma once
// Pass after pass on finer meshes until the accuracy asked for or a budget is reached: what bracket and estimate share.

#include <algorithm>
#include <chrono>
#include <cmath>
#include <memory>
#include <tepor/base/error.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/text.hpp>
#include <tepor/mesh/mesh.hpp>
#include <utility>

namespace tepor::detail {

/// The accuracy asked for and what it may cost.
class RefineBudget {
  public:
    /// A limit as its owner calls it.
    struct Limit {
        const char* name;
        double value;
    };

    /// With neither accuracy given: 1 % of |value|. @throws Error bad_value  naming the option
    RefineBudget(const char* options, Limit relative, Limit absolute, Index max_unknowns, double max_seconds)
        : relative_(relative.value == 0.0 && absolute.value == 0.0 ? 0.01 : relative.value), absolute_(absolute.value),
          max_unknowns_(as_double(max_unknowns)), max_seconds_(max_seconds) {
        const auto check = [&](const char* name, double value, bool fine, const char* rule) {
            if (!fine)
                throw Error(ErrorCode::bad_value, name, text(options, ": ", name, " = ", value, ", expected ", rule));
        };
        check(relative.name, relative.value, relative.value >= 0.0, "a number >= 0");
        check(absolute.name, absolute.value, absolute.value >= 0.0, "a number >= 0");
        check("max_unknowns", max_unknowns_, max_unknowns > 0, "at least 1");
        check("max_seconds", max_seconds, max_seconds > 0.0, "a number > 0");
    }

    void begin_pass() { began_ = Clock::now(); }
    [[nodiscard]] double seconds_of_pass() const { return since(began_); }

    /// With both accuracies given the one reached first counts.
    [[nodiscard]] bool reached(double width, double value) const {
        return width <= std::max(relative_ * std::abs(value), absolute_);
    }
    [[nodiscard]] bool time_for(double seconds) const { return since(started_) + seconds <= max_seconds_; }
    [[nodiscard]] bool room_for(double unknowns) const { return unknowns <= max_unknowns_; }

  private:
    using Clock = std::chrono::steady_clock;
    static double since(Clock::time_point then) { return std::chrono::duration<double>(Clock::now() - then).count(); }

    double relative_, absolute_, max_unknowns_, max_seconds_;
    Clock::time_point started_ = Clock::now(), began_ = started_;
};

/// What a pass leaves to decide.
struct PassEnd {
    Index unknowns = 0;
    double seconds = 0.0;
    bool finished = false; ///< the accuracy is reached, or nothing is left to gain
    bool excused = false;  ///< the next pass comes whatever it costs
};

/// An empty mesh of the kind of another.
inline std::shared_ptr<MeshData> mesh_like(const MeshData& mesh) {
    auto out = std::make_shared<MeshData>();
    out->dim = mesh.dim, out->order = mesh.order, out->nodes_per_cell = mesh.nodes_per_cell;
    out->sides_per_cell = mesh.sides_per_cell, out->shape = mesh.shape, out->frame = mesh.frame;
    return out;
}

/// Calls `pass(mesh)` for a PassEnd, and `finer(mesh)` for the next mesh, which may be the same in size when nothing is left to
/// refine. The next pass is taken to cost `growth` times the last, with half as much again in reserve.
template <class Pass, class Finer>
void refine_loop(RefineBudget& budget, std::shared_ptr<const MeshData> mesh, double growth, Pass pass, Finer finer) {
    for (;;) {
        budget.begin_pass();
        const PassEnd end = pass(mesh);
        if (end.finished) return;
        if (!end.excused && !budget.time_for(1.5 * growth * end.seconds)) return;
        std::shared_ptr<const MeshData> next = finer(*mesh);
        const double before = as_double(mesh->cell_count()), after = as_double(next->cell_count());
        if (after == before) return;
        // cells to unknowns as in the last pass
        if (!end.excused && !budget.room_for(as_double(end.unknowns) * after / before)) return;
        mesh = std::move(next);
    }
}

} // namespace tepor::detail
