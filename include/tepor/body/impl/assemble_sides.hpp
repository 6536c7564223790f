#pragma once
// The passes over faces, contacts and local heats.

#include <cmath>
#include <tepor/body/impl/assemble.hpp>

namespace tepor::detail {

inline void Assembler::face(const FaceModel& face, const SideList& sides, std::size_t first_term) {
    SideBlock& block = work_.sides;
    block.T = pass_.T ? work_.side_nodal_T : nullptr;
    double* TEPOR_RESTRICT flux = work_.side_coefficient[0];
    double* TEPOR_RESTRICT slope = work_.side_coefficient[1];
    block.flux = flux;
    block.flux_slope = slope;
    Wanted wanted;
    wanted.residual = wants_residual();
    wanted.matrix = wants_matrix();
    Id ids[W];
    const Index n = static_cast<Index>(kernel_.side_points) * W;
    for (Index s = 0; s < sides.count(); s += W) {
        block.count = gather_sides(model_, place_, pass_.T, work_.side_nodal_T, sides, s, block, ids);
        kernel_.open_side(block, model_.lumped_faces);
        for (Index i = 0; i < n; ++i) flux[i] = slope[i] = 0.0;
        for (std::size_t t = 0; t < face.terms.size(); ++t)
            if (!face_term(face.terms[t], n, ids, pass_.accounts ? &pass_.accounts->face[first_term + t] : nullptr))
                return;
        for (int c = 0; c < block.count; ++c) {
            double sum = 0.0;
            for (int q = 0; q < kernel_.side_points; ++q) sum += block.weight[q * W + c] * flux[q * W + c];
            pass_.side_traffic += std::abs(sum);
        }
        kernel_.form_side(block, wanted, model_.lumped_faces);
        scatter_sides(sides, s, block.count, 1.0);
    }
}

inline bool Assembler::face_term(const FaceTerm& term, Index n, const Id* ids, double* sum) {
    const SideBlock& block = work_.sides;
    double* TEPOR_RESTRICT flux = work_.side_coefficient[0];
    double* TEPOR_RESTRICT slope = work_.side_coefficient[1];
    double* TEPOR_RESTRICT amount = work_.side_coefficient[2];
    double* TEPOR_RESTRICT by_T = work_.side_coefficient[3];
    double* TEPOR_RESTRICT outside = work_.side_coefficient[4];
    Points at{n, pass_.T ? block.point_T : nullptr, nullptr, block.point_x, block.point_y};
    if (term.kind != FaceTerm::Kind::flux) {
        if (!evaluate_load(term.outside, at, outside, nullptr, ids, block.count)) return false;
        at.fluid = outside;
    }
    const bool given = term.kind == FaceTerm::Kind::flux;
    if (!(given ? evaluate_load(term.amount, at, amount, by_T, ids, block.count)
                : evaluate(term.amount, at, amount, by_T, ids, block.count)))
        return false;
    const double offset = model_.absolute_offset();
    for (Index i = 0; i < n; ++i) {
        const double T = at.temperature ? at.temperature[i] : 0.0;
        double q = term.sign * amount[i];
        double dq = kept_slope(term.sign * by_T[i]);
        if (term.kind == FaceTerm::Kind::film) {
            q = amount[i] * (T - outside[i]);
            dq = amount[i] + kept_slope(by_T[i] * (T - outside[i]));
        } else if (term.kind == FaceTerm::Kind::radiation) {
            // |t| keeps the law rising for iterates below absolute zero
            const double t = T + offset;
            const double t_outside = outside[i] + offset;
            const double exchange =
                stefan_boltzmann * (t * std::abs(t * t * t) - t_outside * t_outside * t_outside * t_outside);
            q = amount[i] * exchange;
            dq = amount[i] * 4.0 * stefan_boltzmann * std::abs(t * t * t) + kept_slope(by_T[i] * exchange);
        }
        amount[i] = q;
        flux[i] += q;
        slope[i] += dq;
    }
    if (!sum) return true;
    for (int q = 0; q < kernel_.side_points; ++q)
        for (int c = 0; c < block.count; ++c) *sum += block.weight[q * W + c] * amount[q * W + c];
    return true;
}

/// Side results into the system; `sign` turns a heat that leaves into one that enters.
inline void Assembler::scatter_sides(const SideList& sides, Index first, int count, double sign) {
    const SideBlock& block = work_.sides;
    const int m = kernel_.side_nodes;
    for (int b = 0; b < count; ++b) {
        const Id* ids = sides.unknowns.data() + (first + b) * m;
        if (pass_.residual)
            for (int i = 0; i < m; ++i) pass_.residual[ids[i]] += sign * block.residual[i * W + b];
        if (pass_.weights) weigh_side(ids, ids, b, sign);
        if (pass_.matrix) add_side_matrix(sides.side[as_size(first + b)].cell, ids, b);
        if (pass_.diagonal) pass_.diagonal[ids[0]] += block.matrix[b];
    }
}

/// Rows of the unknowns `row`, columns of `column`; the residual counts once, with its own columns.
inline void Assembler::weigh_side(const Id* row, const Id* column, int b, double sign) {
    const SideBlock& block = work_.sides;
    const int m = kernel_.side_nodes;
    for (int i = 0; i < m; ++i) {
        const double w = pass_.weights[row[i]];
        if (w == 0.0) continue;
        if (row == column) pass_.weighted += sign * w * block.residual[i * W + b];
        if (!pass_.transposed) continue;
        const double column_sign = row == column ? 1.0 : -1.0;
        for (int j = 0; j < m; ++j) {
            const int pair = i > j ? i * (i + 1) / 2 + j : j * (j + 1) / 2 + i;
            pass_.transposed[column[j]] += column_sign * w * block.matrix[pair * W + b];
        }
    }
}

/// The side matrix of place b among the unknowns `ids` of a cell.
inline void Assembler::add_side_matrix(Id cell, const Id* ids, int b) {
    const int m = kernel_.side_nodes;
    const int n = kernel_.nodes;
    const Id* of_cell = model_.cell(cell);
    const Id* map = model_.scatter.data() + static_cast<Index>(cell) * (n * (n + 1) / 2);
    int local[max_side_nodes];
    for (int i = 0; i < m; ++i)
        for (int a = 0; a < n; ++a)
            if (of_cell[a] == ids[i]) local[i] = a;
    int p = 0;
    for (int i = 0; i < m; ++i)
        for (int j = 0; j <= i; ++j, ++p) {
            const int high = local[i] > local[j] ? local[i] : local[j];
            const int low = local[i] > local[j] ? local[j] : local[i];
            add_both(map[high * (high + 1) / 2 + low], work_.sides.matrix[p * W + b]);
        }
}

/// A symmetric contribution.
inline void Assembler::add_both(Id at, double value) {
    pass_.matrix->lower[as_size(at)] += value;
    if (!pass_.matrix->upper.empty()) pass_.matrix->upper[as_size(at)] += value;
}

inline void Assembler::contact(std::size_t k) {
    const ContactModel& contact = model_.contacts[k];
    SideBlock& block = work_.sides;
    block.T = work_.side_nodal_T; // the jump, node by node
    double* TEPOR_RESTRICT flux = work_.side_coefficient[0];
    double* TEPOR_RESTRICT slope = work_.side_coefficient[1];
    block.flux = flux;
    block.flux_slope = slope;
    const int m = kernel_.side_nodes;
    Wanted wanted;
    wanted.residual = wants_residual() || pass_.accounts != nullptr;
    wanted.matrix = wants_matrix();
    Id ids[W];
    const Index n = static_cast<Index>(kernel_.side_points) * W;
    for (Index s = 0; s < contact.first.count(); s += W) {
        block.count = gather_sides(model_, place_, nullptr, work_.side_nodal_T, contact.first, s, block, ids);
        for (int b = 0; b < W; ++b) {
            const Index at = (s + (b < block.count ? b : block.count - 1)) * m;
            for (int i = 0; i < m; ++i)
                block.T[i * W + b] = pass_.T ? pass_.T[contact.first.unknowns[as_size(at + i)]] -
                                                   pass_.T[contact.second.unknowns[as_size(at + i)]]
                                             : 0.0;
        }
        kernel_.open_side(block, model_.lumped_faces);
        const Points at{n, nullptr, nullptr, block.point_x, block.point_y};
        if (!evaluate(contact.amount, at, slope, nullptr, ids, block.count)) return;
        for (Index i = 0; i < n; ++i) {
            if (contact.resistance) slope[i] = 1.0 / slope[i];
            flux[i] = slope[i] * block.point_T[i];
        }
        kernel_.form_side(block, wanted, model_.lumped_faces);
        if (pass_.accounts)
            for (int i = 0; i < m; ++i)
                for (int b = 0; b < block.count; ++b) pass_.accounts->contact[k] += block.residual[i * W + b];
        scatter_sides(contact.first, s, block.count, 1.0);
        scatter_sides(contact.second, s, block.count, -1.0);
        if (pass_.weights)
            for (int b = 0; b < block.count; ++b) {
                const Id* first = contact.first.unknowns.data() + (s + b) * m;
                const Id* second = contact.second.unknowns.data() + (s + b) * m;
                weigh_side(first, second, b, 1.0);
                weigh_side(second, first, b, 1.0);
            }
        if (pass_.matrix) cross_terms(contact, s, block.count);
    }
}

inline void Assembler::cross_terms(const ContactModel& contact, Index first, int count) {
    const int m = kernel_.side_nodes;
    for (int b = 0; b < count; ++b)
        for (int i = 0; i < m; ++i)
            for (int j = 0; j < m; ++j) {
                const int pair = i > j ? i * (i + 1) / 2 + j : j * (j + 1) / 2 + i;
                const Index side = first + b;
                // where the joint is closed both are one unknown, and its diagonal takes the entry and its mirror
                const bool closed =
                    contact.first.unknowns[as_size(side * m + i)] == contact.second.unknowns[as_size(side * m + j)];
                add_both(contact.cross[as_size((side * m + i) * m + j)],
                         (closed ? -2.0 : -1.0) * work_.sides.matrix[pair * W + b]);
            }
}

inline void Assembler::local(std::size_t l) {
    const LocalModel& heat = model_.locals[l];
    double total = 0.0;
    const Points at{1, nullptr, nullptr, &heat.place.x, &heat.place.y};
    if (!evaluate_load(heat.total, at, &total, nullptr, nullptr, 1)) return;
    if (pass_.residual)
        for (std::size_t i = 0; i < heat.unknowns.size(); ++i)
            pass_.residual[heat.unknowns[i]] -= total * heat.share[i];
    if (pass_.weights)
        for (std::size_t i = 0; i < heat.unknowns.size(); ++i)
            pass_.weighted -= pass_.weights[heat.unknowns[i]] * total * heat.share[i];
    if (pass_.accounts) pass_.accounts->local[l] = total;
    pass_.source_traffic += std::abs(total);
}

} // namespace tepor::detail
