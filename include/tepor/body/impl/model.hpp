#pragma once
// Values of a model and what follows from them.

#include <tepor/base/text.hpp>
#include <tepor/body/model.hpp>

namespace tepor {

TEPOR_INLINE std::vector<double> Model::initial_slots() const {
    std::vector<double> slots;
    slots.reserve(parameters.size());
    for (const Parameter& p : parameters) slots.push_back(p.value());
    return slots;
}

TEPOR_INLINE Values Model::values_for(std::vector<double> slots) const {
    Values values;
    values.slots = std::move(slots);
    update_geometry(values);
    return values;
}

TEPOR_INLINE void Model::update_geometry(Values& values) const {
    if (moving) {
        const LayerStack& stack = mesh->stack;
        const auto now = [&](const Number& n) {
            return n.parameter() ? values.slots[detail::as_size(slot_of(*n.parameter()))] : n.number();
        };
        std::vector<double> thickness;
        thickness.reserve(stack.thickness.size());
        for (const Number& n : stack.thickness) thickness.push_back(now(n));
        std::vector<Point> nodes(stack.place.size());
        detail::place_nodes(stack, now(stack.start), thickness.data(), nodes.data());
        values.places.resize(places.size());
        for (std::size_t u = 0; u < node_of.size(); ++u) values.places[u] = nodes[detail::as_size(node_of[u])];
    }
    const CellKernels& kernel = *kernels;
    Workspace work = kernel.workspace();
    CellBlock& block = work.cells;
    block.T = nullptr;
    const Point* place = places_of(values);
    values.region_volume.assign(regions.size(), 0.0);
    for (std::size_t r = 0; r < regions.size(); ++r) {
        bool needed = moving;
        for (const VolumeTerm& term : regions[r].volume) needed = needed || term.kind == VolumeTerm::Kind::total;
        if (!needed) continue;
        double volume = 0.0;
        for (Id c = regions[r].first_cell; c < regions[r].last_cell; c += block_width) {
            block.count = regions[r].last_cell - c < block_width ? regions[r].last_cell - c : block_width;
            for (int b = 0; b < block_width; ++b) {
                const Id* ids = cell(c + (b < block.count ? b : block.count - 1));
                for (int i = 0; i < kernel.nodes; ++i) {
                    block.x[i * block_width + b] = place[ids[i]].x;
                    block.y[i * block_width + b] = place[ids[i]].y;
                }
            }
            kernel.open(block);
            for (int q = 0; q < kernel.points; ++q)
                for (int b = 0; b < block.count; ++b) volume += block.weight[q * block_width + b];
        }
        values.region_volume[r] = volume;
    }
}

TEPOR_INLINE void Model::check_slot(Index slot, double value) const {
    const std::string& name = parameters[detail::as_size(slot)].name();
    if (!(value - value == 0.0))
        throw Error(ErrorCode::bad_value, name,
                    detail::text("set: parameter \"", name, "\" = ", value, ", expected a finite number"));
    for (const SlotUse& use : uses[detail::as_size(slot)]) {
        const Coefficient plain({}, {}, {}, use.range);
        if (!plain.allows(value))
            throw Error(ErrorCode::bad_value, name,
                        detail::text("set: parameter \"", name, "\" = ", value, " as ", use.label, ", ",
                                     rule_of(use.range), "; check value and unit"));
    }
}

TEPOR_INLINE Fault Model::try_prescribe(const Values& values, TimeSpan time, double* T) const {
    const Point* place = places_of(values);
    for (Index u = free; u < unknowns; ++u) {
        const std::size_t j = detail::as_size(u - free);
        double sum = 0.0;
        for (Id e = fixed_start[j]; e < fixed_start[j + 1]; ++e) {
            const Coefficient& fixed = faces[detail::as_size(fixed_face[detail::as_size(e)])].fixed;
            const double cold = 0.0;
            double value = 0.0;
            const Points at{1, &cold, nullptr, &place[u].x, &place[u].y};
            if (Fault fault = fixed.evaluate(values.slots.data(), time, at, &value, nullptr)) return fault;
            sum += value;
        }
        T[u] = sum / (fixed_start[j + 1] - fixed_start[j]);
    }
    return {};
}

TEPOR_INLINE const Locator& Model::locator() const {
    std::call_once(locator_made_, [this] { locator_ = std::make_unique<Locator>(*mesh, *kind); });
    return *locator_;
}

TEPOR_INLINE Id Model::model_cell(Index user) const {
    std::call_once(cells_made_, [this] {
        model_cell_.resize(user_cell.size());
        for (std::size_t c = 0; c < user_cell.size(); ++c)
            model_cell_[detail::as_size(user_cell[c])] = detail::as_id(c);
    });
    return model_cell_[detail::as_size(user)];
}

} // namespace tepor
