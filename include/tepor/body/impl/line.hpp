#pragma once
// Laying a model out on a line, and filling its pieces.

#include <algorithm>
#include <cmath>
#include <tepor/base/memory.hpp>
#include <tepor/body/line.hpp>

namespace tepor {
namespace detail {

/// The kinds of body a sweep can solve, before its cells are looked at.
inline bool may_be_line(const Model& model) {
    if (model.kernels->dim != 1 || !model.kernels->chain || model.nonlinear || model.free == 0) return false;
    for (const RegionModel& region : model.regions)
        for (const VolumeTerm& term : region.volume)
            if (term.kind == VolumeTerm::Kind::side_film) return false;
    return model.unknowns - model.free <= 2;
}

/// Lays the cells out from left to right, contacts as links between them; false when they make no single line.
inline bool lay_out(const Model& model, LinePlan& plan) {
    const auto cells = static_cast<Index>(model.user_cell.size());
    // where each unknown stands, from the places the cells run through
    const std::vector<Id>& ids = model.cell_unknowns;
    std::vector<Id> cell_of(as_size(model.unknowns), -1); // the cell that begins at an unknown
    std::vector<Id> ends(as_size(model.unknowns), 0);     // how many cells end there
    for (Index c = 0; c < cells; ++c) {
        Id& begins = cell_of[as_size(ids[as_size(2 * c)])];
        if (begins >= 0) return false;
        begins = as_id(c);
        if (++ends[as_size(ids[as_size(2 * c + 1)])] > 1) return false;
    }
    struct Gap {
        Id contact, side, other;
    };
    std::vector<Gap> gap_after(model.contacts.empty() ? 0 : as_size(model.unknowns), Gap{-1, 0, 0});
    std::vector<unsigned char> entered(as_size(model.unknowns), 0); // by a contact
    for (std::size_t k = 0; k < model.contacts.size(); ++k)
        for (Index s = 0; s < model.contacts[k].first.count(); ++s) {
            Id a = model.contacts[k].first.unknowns[as_size(s)];
            Id b = model.contacts[k].second.unknowns[as_size(s)];
            if (ends[as_size(a)] == 0) std::swap(a, b); // a ends a cell, b begins one
            if (cell_of[as_size(a)] >= 0 || ends[as_size(b)] > 0) return false;
            gap_after[as_size(a)] = {as_id(k), as_id(s), b};
            entered[as_size(b)] = 1;
        }
    Id start = -1;
    for (Index u = 0; u < model.unknowns; ++u)
        if (ends[as_size(u)] == 0 && !entered[as_size(u)]) {
            if (start >= 0) return false;
            start = as_id(u);
        }
    if (start < 0) return false;

    plan.positions = model.unknowns;
    plan.left_held = start >= model.free;
    plan.right_held = model.unknowns - model.free > (plan.left_held ? 1 : 0);
    plan.left_unknown = start;
    std::vector<unsigned char> is_special(as_size(model.unknowns), 0);
    const auto mark = [&](const std::vector<Id>& unknowns) {
        for (const Id u : unknowns) is_special[as_size(u)] = 1;
    };
    for (const FaceModel& face : model.faces)
        if (!face.terms.empty()) mark(face.sides.unknowns);
    for (const LocalModel& local : model.locals) mark(local.unknowns);

    Id position = 0;
    Id at = start;
    const auto here = [&](Id u) { return plan.unknown(position) == u; };
    const auto special = [&](Id u) {
        if (!is_special[as_size(u)]) return Id{-1};
        plan.special.push_back(position);
        return as_id(plan.special.size() - 1);
    };
    if (!here(at)) return false;
    while (true) {
        const Id c = cell_of[as_size(at)];
        LinePlan::Piece piece;
        piece.first = position;
        if (c >= 0) {
            piece.cell = c;
            piece.region = model.region_of_cell(c);
            piece.special = special(at);
            Id next = c;
            // a held left end makes a piece of its own, so that the rows inside a piece are neighbours in memory
            const Id most = plan.left_held && position == 0 ? 1 : chain_width;
            do {
                at = ids[as_size(2 * next + 1)];
                ++position;
                ++piece.links;
                if (position >= plan.positions || !here(at)) return false;
                ++next;
            } while (piece.links < most && !is_special[as_size(at)] && next < cells && cell_of[as_size(at)] == next &&
                     model.region_of_cell(next) == piece.region);
        } else if (!gap_after.empty() && gap_after[as_size(at)].contact >= 0) {
            const Gap gap = gap_after[as_size(at)];
            piece.contact = gap.contact;
            piece.side = gap.side;
            piece.links = 1;
            piece.special = special(at);
            at = gap.other;
            ++position;
            if (position >= plan.positions || !here(at)) return false;
        } else {
            break;
        }
        plan.pieces.push_back(piece);
    }
    plan.last_special = special(at);
    return position == plan.positions - 1;
}

} // namespace detail

TEPOR_INLINE std::unique_ptr<LinePlan> plan_line(const Model& model) {
    if (!detail::may_be_line(model)) return nullptr;
    auto plan = std::make_unique<LinePlan>();
    if (!detail::lay_out(model, *plan)) return nullptr;
    for (std::size_t f = 0; f < model.faces.size(); ++f)
        if (!model.faces[f].terms.empty()) plan->acting.faces.push_back({detail::as_id(f), model.faces[f].sides});
    for (std::size_t l = 0; l < model.locals.size(); ++l) plan->acting.locals.push_back(detail::as_id(l));
    for (std::size_t k = 0; k < model.contacts.size(); ++k) plan->contacts.contacts.push_back(detail::as_id(k));
    return plan;
}

TEPOR_INLINE LineCells::LineCells(const Model& model, const LinePlan& plan)
    : model_(model), plan_(plan), work_(model.kernels->points), acting_(plan.special.size()) {
    for (const ContactModel& contact : model.contacts) gap_.emplace_back(detail::as_size(contact.first.count()));
}

TEPOR_INLINE bool LineCells::open(const Values& values, TimeSpan time, Workspace& work, double* scratch_a,
                                  double* scratch_b) {
    values_ = &values;
    time_ = time;
    region_ = -1;
    source_traffic_ = 0.0;
    Pass pass;
    pass.time = time;
    pass.added = true;
    pass.residual = scratch_a;
    pass.diagonal = scratch_b;
    if (!plan_.special.empty()) {
        for (const Id p : plan_.special) scratch_a[plan_.unknown(p)] = scratch_b[plan_.unknown(p)] = 0.0;
        pass.only = &plan_.acting;
        assemble(model_, values, work, pass);
        if (pass.fault) return false;
        source_traffic_ = pass.source_traffic;
        for (std::size_t s = 0; s < acting_.size(); ++s) {
            const Index u = plan_.unknown(plan_.special[s]);
            acting_[s] = {-scratch_a[u], scratch_b[u]};
        }
    }
    if (model_.contacts.empty()) return true;
    for (const ContactModel& contact : model_.contacts)
        for (const SideList* list : {&contact.first, &contact.second})
            for (const Id u : list->unknowns) scratch_a[u] = scratch_b[u] = 0.0;
    pass.only = &plan_.contacts;
    assemble(model_, values, work, pass);
    if (pass.fault) return false;
    for (std::size_t k = 0; k < gap_.size(); ++k)
        for (std::size_t s = 0; s < gap_[k].size(); ++s) gap_[k][s] = scratch_b[model_.contacts[k].first.unknowns[s]];
    return true;
}

TEPOR_INLINE bool LineCells::open_region(Id region) {
    region_ = region;
    const RegionModel& in = model_.regions[detail::as_size(region)];
    work_.block.k = nullptr;
    if (in.k[0].uniform()) {
        const Point* place = model_.places_of(*values_);
        const Points one{1, nullptr, nullptr, &place->x, &place->y};
        if (in.k[0].evaluate(values_->slots.data(), time_, one, &work_.block.k_value, nullptr)) return false;
    } else {
        work_.block.k = work_.k;
    }
    work_.block.source = in.volume.empty() ? nullptr : work_.source;
    return true;
}

TEPOR_INLINE bool LineCells::fill(std::size_t p) {
    const LinePlan::Piece& piece = plan_.pieces[p];
    ChainBlock& block = work_.block;
    if (piece.contact >= 0) {
        region_ = -1;
        block.source = nullptr;
        block.resistance[0] = 1.0 / gap_[detail::as_size(piece.contact)][detail::as_size(piece.side)];
        return true;
    }
    if (piece.region != region_ && !open_region(piece.region)) return false;
    const RegionModel& region = model_.regions[detail::as_size(piece.region)];
    place(piece);
    model_.kernels->open_chain(block);
    if (block.k) {
        const Points at{static_cast<Index>(model_.kernels->points) * block.count, nullptr, nullptr, block.point_x,
                        work_.zeros};
        if (region.k[0].evaluate(values_->slots.data(), time_, at, work_.k, nullptr)) return false;
    }
    if (block.source && !sources(region)) return false;
    model_.kernels->form_chain(block);
    if (block.source) source_traffic_ += block.traffic;
    return true;
}

TEPOR_INLINE bool LineCells::sources(const RegionModel& region) {
    const Index n = static_cast<Index>(model_.kernels->points) * work_.block.count;
    const Points at{n, nullptr, nullptr, work_.block.point_x, work_.zeros};
    for (std::size_t t = 0; t < region.volume.size(); ++t) {
        const VolumeTerm& term = region.volume[t];
        double* TEPOR_RESTRICT to = t == 0 ? work_.source : work_.amount;
        if (term.amount.evaluate(values_->slots.data(), time_, at, to, nullptr)) return false;
        if (term.kind == VolumeTerm::Kind::total) {
            const double scale = 1.0 / values_->region_volume[detail::as_size(region_)];
            for (Index i = 0; i < n; ++i) to[i] *= scale;
        }
        if (t > 0)
            for (Index i = 0; i < n; ++i) work_.source[i] += to[i];
    }
    return true;
}

TEPOR_INLINE void LineCells::place(const LinePlan::Piece& piece) {
    ChainBlock& block = work_.block;
    block.count = piece.links;
    const Point* all = model_.places_of(*values_);
    // inside the piece the nodes are neighbours in memory; its first and last may be held ends
    const Point* inner = all + plan_.unknown(piece.first + (piece.links > 1 ? 1 : 0)) - 1;
    double* TEPOR_RESTRICT x = block.x;
    if (piece.links == chain_width) {
        block.next = chain_lanes;
        detail::fetch_to_read(&inner[chain_width].x, 2 * chain_width); // the next piece
        for (int lane = 0; lane < chain_lanes; ++lane) {
            const Point* at = inner + lane * chain_steps;
            for (int step = 0; step < chain_steps; ++step) x[step * chain_lanes + lane] = at[step].x;
        }
        for (int lane = 0; lane + 1 < chain_lanes; ++lane) x[chain_width + lane] = x[lane + 1];
    } else {
        block.next = 1;
        for (int j = 1; j < piece.links; ++j) x[j] = inner[j].x;
    }
    x[0] = all[plan_.unknown(piece.first)].x;
    x[piece.links + block.next - 1] = all[plan_.unknown(piece.first + piece.links)].x;
}

} // namespace tepor
