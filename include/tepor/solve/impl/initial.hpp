#pragma once
// Initial temperatures, node by node.

#include <cmath>
#include <tepor/base/text.hpp>
#include <tepor/body/coefficient.hpp>
#include <tepor/solve/initial.hpp>

namespace tepor {

TEPOR_INLINE std::vector<double> Initial::temperatures(const Model& model, const Values& values) const {
    const auto n = detail::as_size(model.unknowns);
    const Point* place = model.places_of(values);
    std::vector<double> T(n, temperature_);
    if (field_) {
        const bool same = field_->model().mesh == model.mesh && field_->model().unknowns == model.unknowns &&
                          field_->model().free == model.free;
        if (same) {
            T = field_->temperature();
        } else {
            // by region, so that both sides of a contact keep their own temperature
            std::vector<unsigned char> done(n, 0);
            for (const RegionModel& region : model.regions) {
                const bool known = field_->mesh().find_region(region.name) >= 0;
                for (Id c = region.first_cell; c < region.last_cell; ++c)
                    for (int i = 0; i < model.kernels->nodes; ++i) {
                        const auto u = detail::as_size(model.cell(c)[i]);
                        if (done[u]) continue;
                        T[u] = field_->at(place[u], known ? std::string_view(region.name) : std::string_view());
                        done[u] = 1;
                    }
            }
        }
    } else if (law_) {
        if (law_->uses().temperature)
            throw Error(ErrorCode::not_supported, "initial",
                        "initial: the law depends on temperature; use of_place for a law of place");
        std::vector<double> parameters;
        for (const Parameter& p : law_->parameters()) {
            const Index slot = model.slot_of(p);
            parameters.push_back(slot < 0 ? p.value() : values.slots[detail::as_size(slot)]);
        }
        for (std::size_t u = 0; u < n; ++u) {
            const LawPoints at{1, nullptr, nullptr, &place[u].x, &place[u].y, 0.0, parameters.data()};
            const int status = law_->function().evaluate(at, &T[u], nullptr);
            if (status != 0)
                throw Error(ErrorCode::bad_law, law_->name(),
                            detail::text("initial: ", law_->name(), " stopped with status ", status, " at (",
                                         place[u].x, ", ", place[u].y, ")"));
        }
    }
    const double lowest = -model.absolute_offset();
    for (std::size_t u = 0; u < n; ++u)
        if (!(T[u] >= lowest) || !std::isfinite(T[u]))
            throw Error(ErrorCode::bad_value, "initial",
                        detail::text("initial: temperature = ", T[u], " at (", place[u].x, ", ", place[u].y,
                                     "), expected a finite number at or above absolute zero (", lowest,
                                     " in the body's scale)"));
    return T;
}

} // namespace tepor
