#pragma once
// The passes over the parts of a model that collect its derivatives by slots and places.

#include <algorithm>
#include <tepor/body/impl/slope_sides.hpp>

namespace tepor::detail {

class SlopePasses : public SideSlopes {
  public:
    using SideSlopes::SideSlopes;

    /// factor * weights . r, all slots at once.
    void contract(const SlopePass& pass, SlopeSums& sums) {
        collect_all(sums, pass.factor);
        T_ = pass.T;
        weights_ = pass.weights;
        reserve();
        const Restriction* only = pass.only;
        for (std::size_t r = 0; r < model_.regions.size(); ++r)
            if (!only || listed(only->regions, as_id(r))) cells(r);
        if (only)
            for (const Restriction::Sides& f : only->faces) face(model_.faces[as_size(f.face)], f.sides);
        else
            for (const FaceModel& f : model_.faces) face(f, f.sides);
        for (std::size_t c = 0; c < model_.contacts.size(); ++c)
            if (!only || listed(only->contacts, as_id(c))) contact(model_.contacts[c]);
        for (std::size_t l = 0; l < model_.locals.size(); ++l)
            if (!only || listed(only->locals, as_id(l))) local(model_.locals[l]);
    }

    /// The sum over all pairs of unknowns of `pairs` times the weak form's matrix, and `scale` times its loads at every unknown.
    void contract_pairs(const double* pairs, double scale, SlopeSums& sums) {
        pairs_ = pairs;
        pair_scale_ = scale;
        contract({nullptr, nullptr, time_, nullptr, 1.0}, sums);
        pairs_ = nullptr;
    }
    /// The same with the capacity matrix.
    void contract_storage_pairs(const double* pairs, double lumped_share, SlopeSums& sums) {
        pairs_ = pairs;
        pair_scale_ = 1.0;
        contract_storage(nullptr, nullptr, lumped_share, sums);
        pairs_ = nullptr;
    }

    /// weights . M rise, all slots at once.
    void contract_storage(const double* rise, const double* weights, double lumped_share, SlopeSums& sums) {
        collect_all(sums, 1.0);
        weights_ = weights;
        storage(rise, lumped_share);
    }
    /// A column of d(M rise)/dslot.
    void storage_column(const double* rise, Id slot, const std::vector<Point>& velocity, double lumped_share,
                        double* column) {
        collect_column(slot, velocity);
        column_ = column;
        storage(rise, lumped_share);
    }

    /// A column of dr/dslot: every unit weight of a cell in turn, for all cells of a block together.
    void column(const double* T, Id slot, const std::vector<Point>& velocity, double* column) {
        collect_column(slot, velocity);
        T_ = T;
        column_ = column;
        reserve();
        for (std::size_t r = 0; r < model_.regions.size(); ++r)
            if (with_places_ || acts_in(model_.regions[r])) cells(r);
        for (const LocalModel& l : model_.locals)
            if (wants(l.total)) local(l);
        sides_column();
    }
    /// The part of it that comes through faces and contacts, places left out; added to `column`.
    void column_of_sides(const double* T, Id slot, double* column) {
        collect_column(slot, {});
        T_ = T;
        column_ = column;
        reserve();
        sides_column();
    }

  private:
    void sides_column() {
        for (const FaceModel& f : model_.faces)
            if (with_places_ || acts_on(f)) face(f, f.sides);
        for (const ContactModel& c : model_.contacts)
            if (with_places_ || wants(c.amount)) contact(c);
    }

    void storage(const double* rise, double lumped_share) {
        reserve_cells();
        l_nodes_.assign(as_size(kernel_.nodes * W), 0.0);
        CellBlock& block = work_.cells;
        block.T = work_.nodal_T;
        Id cell[W];
        const Id* ids[W];
        for (const RegionModel& region : model_.regions) {
            if (!with_places_ && !wants(region.density) && !wants(region.specific_heat)) continue;
            for (Id c = region.first_cell; c < region.last_cell; c += W) {
                block.count = gather_cells(model_, place_, rise, work_.nodal_T, c, region.last_cell, block, cell);
                for (int b = 0; b < block.count; ++b) ids[b] = model_.cell(cell[b]);
                with_weights(
                    ids, kernel_.nodes, block.count, block.T, [&] { kernel_.open(block); },
                    [&](const double* l) { capacity_block(region, cell, l, lumped_share); });
            }
        }
    }

    static bool listed(const std::vector<Id>& ids, Id id) {
        for (const Id i : ids)
            if (i == id) return true;
        return false;
    }

    [[nodiscard]] bool acts_in(const RegionModel& region) const {
        for (const Coefficient& k : region.k)
            if (wants(k)) return true;
        for (const VolumeTerm& term : region.volume)
            if (wants(term.amount) || wants(term.fluid) || wants(term.extent)) return true;
        return false;
    }
    [[nodiscard]] bool acts_on(const FaceModel& face) const {
        for (const FaceTerm& term : face.terms)
            if (wants(term.amount) || wants(term.outside)) return true;
        return false;
    }

    void reserve() {
        reserve_cells();
        reserve_sides();
        const int most = kernel_.nodes > kernel_.side_nodes ? kernel_.nodes : kernel_.side_nodes;
        l_nodes_.assign(as_size(most * W), 0.0);
    }

    /// The sum of products of two unknowns.
    [[nodiscard]] double pair(Id u, Id v) const {
        const Id row = u > v ? u : v;
        const Id column = u > v ? v : u;
        const Id* first = model_.pattern.column.data();
        const Id* at = std::lower_bound(first + model_.pattern.start[as_size(row)],
                                        first + model_.pattern.start[as_size(row) + 1], column);
        return pairs_[at - first];
    }

    /// Runs a block once with the given weights, or once for each unit weight: with its row of products for temperatures, or
    /// handing each column entry on. `T` are the temperatures at its nodes, `open` readies the block for them.
    template <class Open, class Run>
    void with_weights(const Id* const* ids, int nodes, int count, double* T, const Open& open, const Run& run) {
        double* l = l_nodes_.data();
        if (pairs_) {
            for (int i = 0; i < nodes; ++i) {
                for (int b = 0; b < nodes * W; ++b) l[b] = T[b] = 0.0;
                for (int b = 0; b < count; ++b) {
                    l[i * W + b] = pair_scale_;
                    for (int j = 0; j < nodes; ++j) T[j * W + b] = pair(ids[b][i], ids[b][j]) / pair_scale_;
                }
                open();
                run(l);
            }
            return;
        }
        open();
        if (sums_) {
            bool any = false;
            for (int i = 0; i < nodes; ++i)
                for (int b = 0; b < W; ++b) {
                    l[i * W + b] = b < count ? weights_[ids[b][i]] : 0.0;
                    any = any || l[i * W + b] != 0.0;
                }
            if (any) run(l);
            return;
        }
        for (int i = 0; i < nodes; ++i) {
            for (int b = 0; b < nodes * W; ++b) l[b] = 0.0;
            for (int b = 0; b < count; ++b) l[i * W + b] = 1.0;
            for (double& v : lane_) v = 0.0;
            run(l);
            for (int b = 0; b < count; ++b) column_[ids[b][i]] += lane_[b];
        }
    }

    void cells(std::size_t r) {
        const RegionModel& region = model_.regions[r];
        CellBlock& block = work_.cells;
        block.T = work_.nodal_T;
        const double volume = values_.region_volume[r];
        const double grown = sums_ || !with_places_ ? 0.0 : volume_growth(region);
        double generated_all = 0.0;
        const bool corners = by_corners(region);
        Id cell[W];
        const Id* ids[W];
        for (Id c = region.first_cell; c < region.last_cell; c += W) {
            block.count = gather_cells(model_, place_, T_, work_.nodal_T, c, region.last_cell, block, cell);
            for (int b = 0; b < block.count; ++b) ids[b] = model_.cell(cell[b]);
            with_weights(
                ids, kernel_.nodes, block.count, block.T,
                [&] {
                    if (!corners) kernel_.open(block);
                },
                [&](const double* l) {
                    double generated[W] = {};
                    if (corners)
                        corner_block(region, volume, cell, l, generated);
                    else
                        cell_block(region, volume, cell, l, generated);
                    for (int b = 0; b < W; ++b) {
                        generated_all += generated[b];
                        lane_[b] += generated[b] * grown;
                    }
                });
        }
        if (sums_ && with_places_ && generated_all != 0.0) share_growth(region, generated_all);
    }

    /// Rate at which the volume of a region grows with the velocity of its nodes.
    double volume_growth(const RegionModel& region) {
        double sum = 0.0;
        each_growth(region, [&](Id unknown, double x, double y) {
            sum += x * velocity_[unknown].x + y * velocity_[unknown].y;
        });
        return sum;
    }

    /// A total generation is spread over a volume that its region's nodes change.
    void share_growth(const RegionModel& region, double by_volume) {
        each_growth(region,
                    [&](Id unknown, double x, double y) { give_place(unknown, by_volume * x, by_volume * y, 0); });
    }

    template <class Take>
    void each_growth(const RegionModel& region, const Take& take) {
        CellBlock& block = work_.cells;
        const int nodes = kernel_.nodes;
        block.T = nullptr;
        Id cell[W];
        for (Id c = region.first_cell; c < region.last_cell; c += W) {
            block.count = gather_cells(model_, place_, nullptr, nullptr, c, region.last_cell, block, cell);
            kernel_.open(block);
            for (int b = 0; b < block.count; ++b)
                for (int a = 0; a < nodes; ++a) {
                    double x = 0.0;
                    double y = 0.0;
                    for (int q = 0; q < kernel_.points; ++q) {
                        const double w = block.weight[q * W + b];
                        x += w * block.gradient_x[(q * nodes + a) * W + b] +
                             over_radius(w, block.point_x[q * W + b]) * kernel_.shape_at(q)[a];
                        y += w * block.gradient_y[(q * nodes + a) * W + b];
                    }
                    take(model_.cell(cell[b])[a], x, kernel_.dim == 2 ? y : 0.0);
                }
        }
        block.T = work_.nodal_T;
    }

    void face(const FaceModel& face, const SideList& sides) {
        if (face.terms.empty()) return;
        SideBlock& block = work_.sides;
        block.T = work_.side_nodal_T;
        Id cell[W];
        const Id* ids[W];
        for (Index s = 0; s < sides.count(); s += W) {
            block.count = gather_sides(model_, place_, T_, work_.side_nodal_T, sides, s, block, cell);
            for (int b = 0; b < block.count; ++b) ids[b] = sides.unknowns.data() + (s + b) * kernel_.side_nodes;
            with_weights(
                ids, kernel_.side_nodes, block.count, block.T, [&] { kernel_.open_side(block, model_.lumped_faces); },
                [&](const double* l) { face_block(face, sides, s, l); });
        }
    }

    void contact(const ContactModel& contact) {
        SideBlock& block = work_.sides;
        block.T = work_.side_nodal_T;
        const int m = kernel_.side_nodes;
        Id cell[W];
        for (Index s = 0; s < contact.first.count(); s += W) {
            block.count = gather_sides(model_, place_, nullptr, nullptr, contact.first, s, block, cell);
            const auto jump = [&](const double* v, double* to) {
                for (int b = 0; b < W; ++b) {
                    const Index at = (s + (b < block.count ? b : block.count - 1)) * m;
                    for (int i = 0; i < m; ++i)
                        to[i * W + b] =
                            v[contact.first.unknowns[as_size(at + i)]] - v[contact.second.unknowns[as_size(at + i)]];
                }
            };
            double* l = l_nodes_.data();
            if (pairs_) {
                contact_pairs(contact, s);
                continue;
            }
            jump(T_, block.T);
            kernel_.open_side(block, model_.lumped_faces);
            if (sums_) {
                jump(weights_, l);
                for (int i = 0; i < m; ++i)
                    for (int b = block.count; b < W; ++b) l[i * W + b] = 0.0;
                contact_block(contact, s, l);
                continue;
            }
            for (int i = 0; i < m; ++i) {
                for (int b = 0; b < m * W; ++b) l[b] = 0.0;
                for (int b = 0; b < block.count; ++b) l[i * W + b] = 1.0;
                for (double& v : lane_) v = 0.0;
                contact_block(contact, s, l);
                for (int b = 0; b < block.count; ++b) {
                    const auto at = as_size((s + b) * m + i);
                    column_[contact.first.unknowns[at]] += lane_[b];
                    column_[contact.second.unknowns[at]] -= lane_[b];
                }
            }
        }
    }

    /// Across a contact the jumps of both count.
    void contact_pairs(const ContactModel& contact, Index s) {
        SideBlock& block = work_.sides;
        const int m = kernel_.side_nodes;
        double* l = l_nodes_.data();
        for (int i = 0; i < m; ++i) {
            for (int b = 0; b < m * W; ++b) l[b] = block.T[b] = 0.0;
            for (int b = 0; b < block.count; ++b) {
                const Id* first = contact.first.unknowns.data() + (s + b) * m;
                const Id* second = contact.second.unknowns.data() + (s + b) * m;
                l[i * W + b] = 1.0;
                for (int j = 0; j < m; ++j)
                    block.T[j * W + b] = pair(first[i], first[j]) - pair(first[i], second[j]) -
                                         pair(second[i], first[j]) + pair(second[i], second[j]);
            }
            kernel_.open_side(block, model_.lumped_faces);
            contact_block(contact, s, l);
        }
    }

    void local(const LocalModel& heat) {
        const Points at{1, nullptr, nullptr, &heat.place.x, &heat.place.y};
        const bool moves = with_places_;
        with_places_ = false; // heat at a place moves with its cell
        if (sums_) {
            double p = 0.0;
            for (std::size_t i = 0; i < heat.unknowns.size(); ++i)
                p -= (pairs_ ? pair_scale_ : weights_[heat.unknowns[i]]) * heat.share[i];
            back(heat.total, at, &p);
        } else {
            for (double& v : lane_) v = 0.0;
            const double p = -1.0;
            back(heat.total, at, &p);
            for (std::size_t i = 0; i < heat.unknowns.size(); ++i)
                column_[heat.unknowns[i]] += lane_[0] * heat.share[i];
        }
        with_places_ = moves;
    }

    const double* T_ = nullptr;
    const double* weights_ = nullptr;
    double* column_ = nullptr;
    const double* pairs_ = nullptr; // on the model's pattern, in place of weights and temperatures
    double pair_scale_ = 1.0;
    std::vector<double> l_nodes_;
};

/// Prescribed temperatures by slots and places.
class PrescribedSlopes : public SlopeCollector {
  public:
    using SlopeCollector::SlopeCollector;

    void run(const double* by_prescribed, double* column) {
        by_x_.assign(1, 0.0);
        by_y_.assign(1, 0.0);
        const double cold = 0.0;
        for (Index u = model_.free; u < model_.unknowns; ++u) {
            const std::size_t j = as_size(u - model_.free);
            const Id first = model_.fixed_start[j];
            const Id last = model_.fixed_start[j + 1];
            const Points at{1, &cold, nullptr, &place_[u].x, &place_[u].y};
            const double p = (by_prescribed ? by_prescribed[u] : 1.0) / (last - first);
            by_x_[0] = by_y_[0] = lane_[0] = 0.0;
            for (Id e = first; e < last; ++e) back(model_.faces[as_size(model_.fixed_face[as_size(e)])].fixed, at, &p);
            if (with_places_) give_place(as_id(u), by_x_[0], by_y_[0], 0);
            if (column) column[u] = lane_[0];
        }
    }
};

} // namespace tepor::detail
