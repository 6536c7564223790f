#pragma once
// Assembly of the storage term.

#include <algorithm>
#include <cmath>
#include <tepor/base/text.hpp>
#include <tepor/solve/capacity.hpp>

namespace tepor {

TEPOR_INLINE Storage::Storage(std::shared_ptr<const Model> model, const Values& values, Capacity kind, Workspace& work)
    : model_(std::move(model)) {
    const Model& m = *model_;
    if (kind == Capacity::automatic) kind = m.kernels->order == 1 ? Capacity::lumped : Capacity::consistent;
    lumped_share_ = kind == Capacity::lumped ? 1.0 : (kind == Capacity::blended ? 0.5 : 0.0);
    consistent_share_ = 1.0 - lumped_share_;
    diagonal_.assign(detail::as_size(m.unknowns), 0.0);
    row_sum_.assign(detail::as_size(m.unknowns), 0.0);
    if (consistent_share_ > 0.0) lower_.assign(m.pattern.column.size(), 0.0);
    std::size_t most = 0;
    for (std::size_t r = 0; r < m.regions.size(); ++r) {
        parts_.push_back({Enthalpy(m.regions[r], values), {}, {}, {}, {}, {}});
        measure(parts_.back(), r, values, work);
        const Part& part = parts_.back();
        linear_ = linear_ && part.enthalpy.constant() && !part.enthalpy.latent();
        most = std::max(most, part.unknown.size());
    }
    std::stable_sort(latent_.begin(), latent_.end(),
                     [](const LatentNode& a, const LatentNode& b) { return a.unknown < b.unknown; });
    if (!linear_) {
        for (std::vector<double>* array : {&from_, &to_, &rise_, &slope_}) array->assign(most, 0.0);
        late_.assign(detail::as_size(m.kernels->points * block_width), 0.0);
    }
}

TEPOR_INLINE void Storage::measure(Part& part, std::size_t r, const Values& values, Workspace& work) {
    const Model& m = *model_;
    const int n = m.kernels->nodes;
    const int pairs = n * (n + 1) / 2;
    const double* slots = values.slots.data();
    const Enthalpy& enthalpy = part.enthalpy;
    const bool constant = enthalpy.constant();
    std::vector<double> volume(detail::as_size(m.unknowns), 0.0);
    std::vector<double> heat(detail::as_size(m.unknowns), 0.0);
    std::vector<double> melting(detail::as_size(m.unknowns), 0.0);
    const auto into = [&](std::vector<double>& row) {
        return [&row, &m, n](const CellBlock& block, Id first) {
            for (int b = 0; b < block.count; ++b)
                for (int i = 0; i < n; ++i)
                    row[detail::as_size(m.cell(first + b)[i])] += block.residual[i * block_width + b];
        };
    };
    Wanted row_only;
    row_only.residual = true;
    const auto ones = [](const Points& at, const Id*, int, double* value, double* slope) -> Fault {
        for (Index i = 0; i < at.count; ++i) value[i] = slope[i] = 1.0;
        return {};
    };
    (void)detail::integrate_density(m, values, work, r, nullptr, row_only, ones, into(volume));
    std::vector<double> zero(detail::as_size(m.kernels->points * block_width), 0.0);
    std::vector<double> one(zero.size(), 1.0);
    if (constant) {
        Wanted wanted = row_only;
        wanted.matrix = consistent_share_ > 0.0;
        const auto capacity = [&](const Points& at, const Id*, int, double* value, double* slope) -> Fault {
            Points from = at;
            from.temperature = zero.data();
            return enthalpy.sensible(slots, from, one.data(), value, slope); // a rise of one kelvin: the capacity
        };
        const auto row = into(heat);
        const auto take = [&](const CellBlock& block, Id first) {
            row(block, first);
            if (!wanted.matrix) return;
            const Id* map = m.scatter.data() + static_cast<Index>(first) * pairs;
            for (int b = 0; b < block.count; ++b)
                for (int p = 0; p < pairs; ++p)
                    lower_[detail::as_size(map[b * pairs + p])] +=
                        consistent_share_ * block.matrix[p * block_width + b];
        };
        if (const Fault fault = detail::integrate_density(m, values, work, r, nullptr, wanted, capacity, take))
            raise(fault);
    }
    if (enthalpy.latent()) {
        const auto density = [&](const Points& at, const Id*, int, double* value, double* slope) -> Fault {
            for (Index i = 0; i < at.count; ++i) slope[i] = 0.0;
            return enthalpy.latent_density(slots, at, value);
        };
        if (const Fault fault =
                detail::integrate_density(m, values, work, r, nullptr, row_only, density, into(melting)))
            raise(fault);
    }
    std::vector<unsigned char> seen(detail::as_size(m.unknowns), 0);
    for (Id c = m.regions[r].first_cell; c < m.regions[r].last_cell; ++c)
        for (int i = 0; i < n; ++i) seen[detail::as_size(m.cell(c)[i])] = 1;
    const Point* place = m.places_of(values);
    for (std::size_t u = 0; u < seen.size(); ++u) {
        if (!seen[u]) continue;
        part.unknown.push_back(detail::as_id(u));
        part.volume.push_back(volume[u]);
        part.capacity.push_back(heat[u]);
        part.x.push_back(place[u].x);
        part.y.push_back(place[u].y);
        diagonal_[u] += lumped_share_ * heat[u];
        row_sum_[u] += heat[u];
        if (melting[u] > 0.0)
            latent_.push_back({detail::as_id(u), detail::as_id(r), enthalpy.latent_heat() * melting[u],
                               enthalpy.solidus(), enthalpy.liquidus()});
    }
    if (lumped_share_ > 0.0) refuse_massless(part);
}

TEPOR_INLINE void Storage::refuse_massless(const Part& part) const {
    const double largest = *std::max_element(part.volume.begin(), part.volume.end());
    for (const double v : part.volume)
        if (!(v > 1e-12 * largest))
            throw Error(ErrorCode::not_supported, "capacity",
                        "lumped capacity: some nodes of this element type have no mass of their own (the corners of "
                        "triangles of order 2); use Capacity::consistent");
}

TEPOR_INLINE void Storage::multiply(const double* v, double* out) const noexcept {
    const Model& m = *model_;
    if (lower_.empty()) {
        for (Index u = 0; u < m.unknowns; ++u) out[u] = diagonal_[detail::as_size(u)] * v[u];
        return;
    }
    const Id* start = m.pattern.start.data();
    const Id* column = m.pattern.column.data();
    for (Index i = 0; i < m.unknowns; ++i) {
        const Index last = start[i + 1] - 1;
        double sum = (diagonal_[detail::as_size(i)] + lower_[detail::as_size(last)]) * v[i];
        for (Index p = start[i]; p < last; ++p) {
            sum += lower_[detail::as_size(p)] * v[column[p]];
            out[column[p]] += lower_[detail::as_size(p)] * v[i];
        }
        out[i] = sum;
    }
}

TEPOR_INLINE void Storage::add_to(SparseMatrix& matrix) const noexcept {
    const Model& m = *model_;
    const auto add = [&](std::vector<double>& values) {
        for (std::size_t p = 0; p < lower_.size(); ++p) values[p] += lower_[p];
        for (Index u = 0; u < m.unknowns; ++u)
            values[detail::as_size(m.pattern.start[detail::as_size(u) + 1] - 1)] += diagonal_[detail::as_size(u)];
    };
    add(matrix.lower);
    if (!matrix.upper.empty()) add(matrix.upper);
}

TEPOR_INLINE void Storage::couple(const double* v, double* out) const noexcept {
    if (lower_.empty()) return;
    const Model& m = *model_;
    const Id* start = m.pattern.start.data();
    for (Index i = m.free; i < m.unknowns; ++i) {
        if (v[i] == 0.0) continue;
        for (Index p = start[i]; p < start[i + 1] - 1; ++p)
            if (m.pattern.column[detail::as_size(p)] < m.free)
                out[m.pattern.column[detail::as_size(p)]] -= lower_[detail::as_size(p)] * v[i];
    }
}

TEPOR_INLINE Fault Storage::rise(const Values& values, Workspace& work, const double* from, const double* to,
                                 double* out, SparseMatrix* matrix, double* by_region) {
    const Model& m = *model_;
    // the constant regions through their matrix, as increments
    for (Index u = 0; u < m.unknowns; ++u) out[u] += diagonal_[detail::as_size(u)] * (to[u] - from[u]);
    if (!lower_.empty()) {
        const Id* start = m.pattern.start.data();
        const Id* column = m.pattern.column.data();
        for (Index i = 0; i < m.unknowns; ++i) {
            const Index last = start[i + 1] - 1;
            const double d = to[i] - from[i];
            out[i] += lower_[detail::as_size(last)] * d;
            for (Index p = start[i]; p < last; ++p) {
                const Id j = column[p];
                out[i] += lower_[detail::as_size(p)] * (to[j] - from[j]);
                out[j] += lower_[detail::as_size(p)] * d;
            }
        }
    }
    if (matrix) add_to(*matrix);
    for (std::size_t r = 0; r < parts_.size(); ++r) {
        Part& part = parts_[r];
        double sum = 0.0;
        if (part.enthalpy.constant()) {
            if (!by_region) continue;
            for (std::size_t k = 0; k < part.unknown.size(); ++k)
                sum += part.capacity[k] * (to[part.unknown[k]] - from[part.unknown[k]]);
        } else {
            if (lumped_share_ > 0.0)
                if (const Fault fault = rise_lumped(part, values, from, to, out, matrix, &sum)) return fault;
            if (consistent_share_ > 0.0)
                if (const Fault fault = rise_consistent(r, values, work, from, to, out, matrix, &sum)) return fault;
        }
        if (by_region) by_region[r] += sum;
    }
    return {};
}

TEPOR_INLINE Fault Storage::rise_lumped(Part& part, const Values& values, const double* from, const double* to,
                                        double* out, SparseMatrix* matrix, double* sum) {
    const auto n = part.unknown.size();
    for (std::size_t k = 0; k < n; ++k) {
        from_[k] = from[part.unknown[k]];
        to_[k] = to[part.unknown[k]];
    }
    const Points at{static_cast<Index>(n), from_.data(), nullptr, part.x.data(), part.y.data()};
    if (const Fault fault =
            part.enthalpy.sensible(values.slots.data(), at, to_.data(), rise_.data(), matrix ? slope_.data() : nullptr))
        return fault;
    for (std::size_t k = 0; k < n; ++k) {
        const double share = lumped_share_ * part.volume[k];
        out[part.unknown[k]] += share * rise_[k];
        *sum += share * rise_[k];
        if (!matrix) continue;
        const auto diagonal = detail::as_size(model_->pattern.start[detail::as_size(part.unknown[k]) + 1] - 1);
        matrix->lower[diagonal] += share * slope_[k];
        if (!matrix->upper.empty()) matrix->upper[diagonal] += share * slope_[k];
    }
    return {};
}

TEPOR_INLINE Fault Storage::rise_consistent(std::size_t r, const Values& values, Workspace& work, const double* from,
                                            const double* to, double* out, SparseMatrix* matrix, double* sum) {
    const Model& m = *model_;
    const int n = m.kernels->nodes;
    const int pairs = n * (n + 1) / 2;
    const Enthalpy& enthalpy = parts_[r].enthalpy;
    Wanted wanted;
    wanted.residual = true;
    wanted.matrix = matrix != nullptr;
    const auto density = [&](const Points& at, const Id* cells, int count, double* value, double* slope) -> Fault {
        // keeps the end's temperatures and puts the start's at the points
        CellBlock& block = work.cells;
        for (Index i = 0; i < at.count; ++i) late_[detail::as_size(i)] = block.point_T[i];
        for (int b = 0; b < block_width; ++b) {
            const Id* ids = m.cell(cells[b < count ? b : count - 1]);
            for (int i = 0; i < n; ++i) block.T[i * block_width + b] = from[ids[i]];
        }
        m.kernels->open(block);
        return enthalpy.sensible(values.slots.data(), at, late_.data(), value, slope);
    };
    const auto take = [&](const CellBlock& block, Id first) {
        const Id* map = m.scatter.data() + static_cast<Index>(first) * pairs;
        for (int b = 0; b < block.count; ++b) {
            for (int i = 0; i < n; ++i) {
                const double heat = consistent_share_ * block.residual[i * block_width + b];
                out[m.cell(first + b)[i]] += heat;
                *sum += heat;
            }
            if (!matrix) continue;
            for (int p = 0; p < pairs; ++p) {
                const double c = consistent_share_ * block.matrix[p * block_width + b];
                matrix->lower[detail::as_size(map[b * pairs + p])] += c;
                if (!matrix->upper.empty()) matrix->upper[detail::as_size(map[b * pairs + p])] += c;
            }
        }
    };
    return detail::integrate_density(m, values, work, r, to, wanted, density, take);
}

TEPOR_INLINE Fault Storage::lumped_capacity(const Values& values, const double* T, double* out) {
    for (std::size_t u = 0; u < row_sum_.size(); ++u) out[u] = row_sum_[u];
    for (Part& part : parts_) {
        if (part.enthalpy.constant()) continue;
        const auto n = part.unknown.size();
        for (std::size_t k = 0; k < n; ++k) from_[k] = T[part.unknown[k]];
        const Points at{static_cast<Index>(n), from_.data(), nullptr, part.x.data(), part.y.data()};
        if (const Fault fault =
                part.enthalpy.sensible(values.slots.data(), at, from_.data(), rise_.data(), slope_.data()))
            return fault;
        for (std::size_t k = 0; k < n; ++k) out[part.unknown[k]] += part.volume[k] * slope_[k];
    }
    return {};
}

TEPOR_INLINE void Storage::by_rise(const double* rise, double* by_region) const noexcept {
    for (std::size_t r = 0; r < parts_.size(); ++r)
        for (std::size_t k = 0; k < parts_[r].unknown.size(); ++k)
            by_region[r] += parts_[r].capacity[k] * rise[parts_[r].unknown[k]];
}

TEPOR_INLINE Fault Storage::by_region(const Values& values, const double* T, const double* by, double* by_region) {
    for (std::size_t r = 0; r < parts_.size(); ++r) {
        const Part& part = parts_[r];
        const auto n = part.unknown.size();
        double sum = 0.0;
        if (part.enthalpy.constant()) {
            for (std::size_t k = 0; k < n; ++k) sum += part.capacity[k] * by[part.unknown[k]];
        } else {
            for (std::size_t k = 0; k < n; ++k) from_[k] = T[part.unknown[k]];
            const Points at{static_cast<Index>(n), from_.data(), nullptr, part.x.data(), part.y.data()};
            if (const Fault fault =
                    part.enthalpy.sensible(values.slots.data(), at, from_.data(), rise_.data(), slope_.data()))
                return fault;
            for (std::size_t k = 0; k < n; ++k) sum += part.volume[k] * slope_[k] * by[part.unknown[k]];
        }
        by_region[r] = sum;
    }
    return {};
}

} // namespace tepor
