#pragma once
// The passes over cells, faces, contacts and local heats.

#include <cmath>
#include <tepor/body/assemble.hpp>
#include <tepor/body/gather.hpp>

namespace tepor {

TEPOR_INLINE void prepare_matrix(const Model& model, SparseMatrix& matrix) {
    matrix.rows = model.unknowns;
    matrix.start = model.pattern.start;
    matrix.column = model.pattern.column;
    matrix.lower.assign(matrix.column.size(), 0.0);
    matrix.upper.clear();
    if (model.slope) matrix.upper.assign(matrix.column.size(), 0.0);
}

namespace detail {

/// One model, its values and a workspace, and the passes over its parts.
class Assembler {
  public:
    Assembler(const Model& model, const Values& values, Workspace& work, Pass& pass)
        : model_(model), kernel_(*model.kernels), slots_(values.slots.data()), values_(values),
          place_(model.places_of(values)), work_(work), pass_(pass) {}

    void run() {
        start();
        if (pass_.only) return run_part(*pass_.only);
        for (std::size_t r = 0; pass_.cells && r < model_.regions.size() && !pass_.fault; ++r) cells(r);
        std::size_t term = 0;
        for (std::size_t f = 0; f < model_.faces.size() && !pass_.fault; ++f) {
            if (!model_.faces[f].terms.empty()) face(model_.faces[f], model_.faces[f].sides, term);
            term += model_.faces[f].terms.size();
        }
        for (std::size_t c = 0; c < model_.contacts.size() && !pass_.fault; ++c) contact(c);
        for (std::size_t l = 0; l < model_.locals.size() && !pass_.fault; ++l) local(l);
    }

    void run_part(const Restriction& only) {
        for (const Id r : only.regions)
            if (!pass_.fault) cells(as_size(r));
        for (const Restriction::Sides& f : only.faces)
            if (!pass_.fault) face(model_.faces[as_size(f.face)], f.sides, first_term(f.face));
        for (const Id c : only.contacts)
            if (!pass_.fault) contact(as_size(c));
        for (const Id l : only.locals)
            if (!pass_.fault) local(as_size(l));
    }

  private:
    static constexpr int W = block_width;

    void start() {
        if (pass_.residual)
            for (Index u = 0; u < model_.unknowns; ++u) pass_.residual[u] = 0.0;
        if (pass_.matrix) {
            for (double& v : pass_.matrix->lower) v = 0.0;
            for (double& v : pass_.matrix->upper) v = 0.0;
        }
        pass_.side_traffic = pass_.source_traffic = 0.0;
        pass_.weighted = 0.0;
        pass_.fault = {};
        if (!pass_.accounts) return;
        Accounts& a = *pass_.accounts;
        std::size_t terms = 0;
        for (const FaceModel& f : model_.faces) terms += f.terms.size();
        a.generated.assign(model_.regions.size(), 0.0);
        a.side_loss.assign(model_.regions.size(), 0.0);
        a.local.assign(model_.locals.size(), 0.0);
        a.face.assign(terms, 0.0);
        a.contact.assign(model_.contacts.size(), 0.0);
    }

    [[nodiscard]] std::size_t first_term(Id face) const {
        std::size_t term = 0;
        for (Id f = 0; f < face; ++f) term += model_.faces[as_size(f)].terms.size();
        return term;
    }

    [[nodiscard]] bool wants_residual() const { return pass_.residual || pass_.weights; }
    [[nodiscard]] bool wants_matrix() const { return pass_.matrix || (pass_.weights && pass_.transposed); }

    /// A coefficient on the points of the block into `value` (and `slope`); faults are kept with their cell.
    bool evaluate(const Coefficient& c, const Points& at, double* value, double* slope, const Id* cells, int count) {
        Fault fault = c.evaluate(slots_, pass_.time, at, value, slope);
        if (!fault) return true;
        const Index b = fault.point % W;
        fault.cell = model_.user_cell[as_size(cells[b < count ? b : count - 1])];
        pass_.fault = fault;
        return false;
    }

    void cells(std::size_t r) {
        const RegionModel& region = model_.regions[r];
        CellBlock& block = work_.cells;
        double* const nodal_T = work_.nodal_T;
        block.T = pass_.T ? nodal_T : nullptr;
        block.conductivities = region.conductivities;
        bool k_uniform = true;
        bool k_slope = false;
        for (int m = 0; m < region.conductivities; ++m) {
            k_uniform = k_uniform && region.k[m].uniform();
            k_slope = k_slope || region.k[m].depends_on_temperature();
        }
        const bool sources = !region.volume.empty();
        Wanted wanted;
        wanted.residual = wants_residual();
        wanted.matrix = wants_matrix();
        wanted.slope = wanted.matrix && k_slope && pass_.T;
        block.k_uniform = k_uniform;
        for (int m = 0; m < 3; ++m) {
            block.k[m] = m < region.conductivities ? work_.coefficient[m] : nullptr;
            block.k_slope[m] = wanted.slope && m < region.conductivities ? work_.coefficient[3 + m] : nullptr;
        }
        if (k_uniform)
            for (int m = 0; m < region.conductivities; ++m)
                if (const Fault fault =
                        region.k[m].evaluate(slots_, pass_.time, {1, nullptr, nullptr, &place_->x, &place_->y},
                                             work_.coefficient[m], nullptr)) {
                    pass_.fault = fault;
                    return;
                }
        block.source = sources ? work_.coefficient[6] : nullptr;
        block.source_slope = sources ? work_.coefficient[7] : nullptr;
        Id ids[W];
        for (Id c = region.first_cell; c < region.last_cell; c += W) {
            block.count = gather_cells(model_, place_, pass_.T, nodal_T, c, region.last_cell, block, ids);
            kernel_.open(block);
            const Points at{static_cast<Index>(kernel_.points) * W, pass_.T ? block.point_T : nullptr, nullptr,
                            block.point_x, block.point_y};
            if (!k_uniform)
                for (int m = 0; m < region.conductivities; ++m)
                    if (!evaluate(region.k[m], at, work_.coefficient[m],
                                  wanted.slope ? work_.coefficient[3 + m] : nullptr, ids, block.count))
                        return;
            if (sources && !volume_terms(r, at, ids)) return;
            kernel_.form(block, wanted);
            scatter(block, c, wanted);
        }
    }

    /// Heat taken up per volume, all terms of the region, at the points of the block.
    bool volume_terms(std::size_t r, const Points& at, const Id* ids) {
        const RegionModel& region = model_.regions[r];
        const CellBlock& block = work_.cells;
        double* TEPOR_RESTRICT source = work_.coefficient[6];
        double* TEPOR_RESTRICT slope = work_.coefficient[7];
        double* TEPOR_RESTRICT amount = work_.coefficient[8];
        double* TEPOR_RESTRICT by_T = work_.coefficient[9];
        double* TEPOR_RESTRICT fluid = work_.coefficient[10];
        double* TEPOR_RESTRICT extent = work_.coefficient[11];
        const Index n = at.count;
        for (Index i = 0; i < n; ++i) source[i] = slope[i] = 0.0;
        for (const VolumeTerm& term : region.volume) {
            if (term.kind == VolumeTerm::Kind::side_film) {
                if (!evaluate(term.fluid, at, fluid, nullptr, ids, block.count)) return false;
                if (!evaluate(term.extent, at, extent, nullptr, ids, block.count)) return false;
                const Points film{at.count, at.temperature, fluid, at.x, at.y};
                if (!evaluate(term.amount, film, amount, by_T, ids, block.count)) return false;
                for (Index i = 0; i < n; ++i) {
                    const double per_volume = term.by_thickness ? term.wet / extent[i] : term.wet * extent[i];
                    const double T = at.temperature ? at.temperature[i] : 0.0;
                    amount[i] *= per_volume;
                    slope[i] += amount[i] + by_T[i] * per_volume * (T - fluid[i]);
                    amount[i] *= T - fluid[i];
                    source[i] += amount[i];
                }
                account(pass_.accounts ? &pass_.accounts->side_loss[r] : nullptr, amount, 1.0);
                continue;
            }
            const double scale = term.kind == VolumeTerm::Kind::total ? 1.0 / values_.region_volume[r] : 1.0;
            if (!evaluate(term.amount, at, amount, by_T, ids, block.count)) return false;
            for (Index i = 0; i < n; ++i) {
                amount[i] *= scale;
                source[i] -= amount[i];
                slope[i] -= scale * by_T[i];
            }
            account(pass_.accounts ? &pass_.accounts->generated[r] : nullptr, amount, 1.0);
        }
        for (int c = 0; c < block.count; ++c) {
            double sum = 0.0;
            for (int q = 0; q < kernel_.points; ++q) sum += block.weight[q * W + c] * source[q * W + c];
            pass_.source_traffic += std::abs(sum);
        }
        return true;
    }

    void account(double* sum, const double* density, double sign) const {
        if (!sum) return;
        const CellBlock& block = work_.cells;
        double total = 0.0;
        for (int q = 0; q < kernel_.points; ++q)
            for (int c = 0; c < block.count; ++c) total += block.weight[q * W + c] * density[q * W + c];
        *sum += sign * total;
    }

    void scatter(const CellBlock& block, Id first, Wanted wanted) {
        const int n = kernel_.nodes;
        const int pairs = n * (n + 1) / 2;
        if (pass_.residual)
            for (int b = 0; b < block.count; ++b) {
                const Id* ids = model_.cell(first + b);
                for (int i = 0; i < n; ++i) pass_.residual[ids[i]] += block.residual[i * W + b];
            }
        if (pass_.weights) weigh_cells(block, first, wanted);
        if (!pass_.matrix) return;
        double* lower = pass_.matrix->lower.data();
        const Id* map = model_.scatter.data() + static_cast<Index>(first) * pairs;
        for (int b = 0; b < block.count; ++b)
            for (int p = 0; p < pairs; ++p) lower[map[b * pairs + p]] += block.matrix[p * W + b];
        if (pass_.matrix->upper.empty()) return;
        double* upper = pass_.matrix->upper.data();
        for (int b = 0; b < block.count; ++b)
            for (int p = 0; p < pairs; ++p) upper[map[b * pairs + p]] += block.matrix[p * W + b];
        if (!wanted.slope) return;
        for (int b = 0; b < block.count; ++b) {
            const Id* ids = model_.cell(first + b);
            int p = 0;
            for (int i = 0; i < n; ++i)
                for (int j = 0; j <= i; ++j, ++p) {
                    const double ij = block.slope[(i * n + j) * W + b];
                    const double ji = block.slope[(j * n + i) * W + b];
                    const Id at = map[b * pairs + p];
                    if (i == j) {
                        lower[at] += ij;
                        upper[at] += ij;
                        continue;
                    }
                    const bool as_stored = ids[i] > ids[j]; // row i, column j is below the diagonal
                    lower[at] += as_stored ? ij : ji;
                    upper[at] += as_stored ? ji : ij;
                }
        }
    }

    void weigh_cells(const CellBlock& block, Id first, Wanted wanted) {
        const int n = kernel_.nodes;
        for (int b = 0; b < block.count; ++b) {
            const Id* ids = model_.cell(first + b);
            for (int i = 0; i < n; ++i) {
                const double w = pass_.weights[ids[i]];
                if (w == 0.0) continue;
                pass_.weighted += w * block.residual[i * W + b];
                if (!pass_.transposed) continue;
                for (int j = 0; j < n; ++j) {
                    const int pair = i > j ? i * (i + 1) / 2 + j : j * (j + 1) / 2 + i;
                    double J = block.matrix[pair * W + b];
                    if (wanted.slope) J += block.slope[(i * n + j) * W + b];
                    pass_.transposed[ids[j]] += w * J;
                }
            }
        }
    }

    void face(const FaceModel& face, const SideList& sides, std::size_t first_term) {
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

    bool face_term(const FaceTerm& term, Index n, const Id* ids, double* sum) {
        const SideBlock& block = work_.sides;
        double* TEPOR_RESTRICT flux = work_.side_coefficient[0];
        double* TEPOR_RESTRICT slope = work_.side_coefficient[1];
        double* TEPOR_RESTRICT amount = work_.side_coefficient[2];
        double* TEPOR_RESTRICT by_T = work_.side_coefficient[3];
        double* TEPOR_RESTRICT outside = work_.side_coefficient[4];
        Points at{n, pass_.T ? block.point_T : nullptr, nullptr, block.point_x, block.point_y};
        if (term.kind != FaceTerm::Kind::flux) {
            if (!evaluate(term.outside, at, outside, nullptr, ids, block.count)) return false;
            at.fluid = outside;
        }
        if (!evaluate(term.amount, at, amount, by_T, ids, block.count)) return false;
        const double offset = model_.absolute_offset();
        for (Index i = 0; i < n; ++i) {
            const double T = at.temperature ? at.temperature[i] : 0.0;
            double q = term.sign * amount[i];
            double dq = term.sign * by_T[i];
            if (term.kind == FaceTerm::Kind::film) {
                q = amount[i] * (T - outside[i]);
                dq = amount[i] + by_T[i] * (T - outside[i]);
            } else if (term.kind == FaceTerm::Kind::radiation) {
                // |t| keeps the law rising for iterates below absolute zero
                const double t = T + offset;
                const double t_outside = outside[i] + offset;
                const double exchange =
                    stefan_boltzmann * (t * std::abs(t * t * t) - t_outside * t_outside * t_outside * t_outside);
                q = amount[i] * exchange;
                dq = amount[i] * 4.0 * stefan_boltzmann * std::abs(t * t * t) + by_T[i] * exchange;
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
    void scatter_sides(const SideList& sides, Index first, int count, double sign) {
        const SideBlock& block = work_.sides;
        const int m = kernel_.side_nodes;
        for (int b = 0; b < count; ++b) {
            const Id* ids = sides.unknowns.data() + (first + b) * m;
            if (pass_.residual)
                for (int i = 0; i < m; ++i) pass_.residual[ids[i]] += sign * block.residual[i * W + b];
            if (pass_.weights) weigh_side(ids, ids, b, sign);
            if (pass_.matrix) add_side_matrix(sides.side[as_size(first + b)].cell, ids, b);
        }
    }

    /// Rows of the unknowns `row`, columns of `column`; the residual counts once, with its own columns.
    void weigh_side(const Id* row, const Id* column, int b, double sign) {
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
    void add_side_matrix(Id cell, const Id* ids, int b) {
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
    void add_both(Id at, double value) {
        pass_.matrix->lower[as_size(at)] += value;
        if (!pass_.matrix->upper.empty()) pass_.matrix->upper[as_size(at)] += value;
    }

    void contact(std::size_t k) {
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

    void cross_terms(const ContactModel& contact, Index first, int count) {
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

    void local(std::size_t l) {
        const LocalModel& heat = model_.locals[l];
        double total = 0.0;
        const Points at{1, nullptr, nullptr, &heat.place.x, &heat.place.y};
        Fault fault = heat.total.evaluate(slots_, pass_.time, at, &total, nullptr);
        if (fault) {
            pass_.fault = fault;
            return;
        }
        if (pass_.residual)
            for (std::size_t i = 0; i < heat.unknowns.size(); ++i)
                pass_.residual[heat.unknowns[i]] -= total * heat.share[i];
        if (pass_.weights)
            for (std::size_t i = 0; i < heat.unknowns.size(); ++i)
                pass_.weighted -= pass_.weights[heat.unknowns[i]] * total * heat.share[i];
        if (pass_.accounts) pass_.accounts->local[l] = total;
        pass_.source_traffic += std::abs(total);
    }

    const Model& model_;
    const CellKernels& kernel_;
    const double* slots_;
    const Values& values_;
    const Point* place_;
    Workspace& work_;
    Pass& pass_;
};

} // namespace detail

TEPOR_INLINE void assemble(const Model& model, const Values& values, Workspace& work, Pass& pass) {
    detail::Assembler(model, values, work, pass).run();
}

} // namespace tepor
