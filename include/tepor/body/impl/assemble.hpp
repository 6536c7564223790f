#pragma once
// The passes over cells, faces, contacts and local heats.

#include <cmath>
#include <tepor/body/assemble.hpp>
#include <tepor/body/gather.hpp>
#include <tepor/body/impl/prepare_matrix.hpp>

namespace tepor {

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

    bool run_block(Id region, const Id* cells, Wanted wanted) {
        pass_.fault = {};
        const RegionPass pass = prepare(as_size(region), wanted);
        return !pass_.fault && form_block(pass, cells);
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
        if (pass_.residual && !pass_.added)
            for (Index u = 0; u < model_.unknowns; ++u) pass_.residual[u] = 0.0;
        if (pass_.matrix && pass_.matrix->entries() != model_.pattern.entries()) { // a solver has dropped its zeros
            prepare_matrix(model_, *pass_.matrix);
        } else if (pass_.matrix) {
            for (double& v : pass_.matrix->lower) v = 0.0;
            for (double& v : pass_.matrix->upper) v = 0.0;
        }
        pass_.side_traffic = pass_.source_traffic = 0.0;
        pass_.weighted = 0.0;
        pass_.fault = {};
        if (pass_.content)
            for (std::size_t r = 0; r < model_.regions.size(); ++r) pass_.content[r] = 0.0;
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
    [[nodiscard]] bool wants_matrix() const {
        return pass_.matrix || pass_.diagonal || (pass_.weights && pass_.transposed);
    }

    /// A coefficient on the points of the block into `value` (and `slope`); faults are kept with their cell.
    bool evaluate(const Coefficient& c, const Points& at, double* value, double* slope, const Id* cells, int count) {
        Fault fault = c.evaluate(slots_, pass_.time, at, value, slope);
        if (!fault) return true;
        const Index b = fault.point % W;
        if (cells) fault.cell = model_.user_cell[as_size(cells[b < count ? b : count - 1])];
        pass_.fault = fault;
        return false;
    }

    /// The same for what stands in the load; a pass may ask for some of the loads alone.
    bool evaluate_load(const Coefficient& c, const Points& at, double* value, double* slope, const Id* cells,
                       int count) {
        if (!pass_.loads) return evaluate(c, at, value, slope, cells, count);
        bool counts = false;
        for (const Coefficient* load : *pass_.loads) counts = counts || load == &c;
        if (counts && !pass_.unit_loads) return evaluate(c, at, value, slope, cells, count);
        for (Index i = 0; i < at.count; ++i) value[i] = counts ? 1.0 : 0.0;
        if (slope)
            for (Index i = 0; i < at.count; ++i) slope[i] = 0.0;
        return true;
    }

    /// What the coefficients of a region ask of a pass.
    struct RegionPass {
        std::size_t region = 0;
        bool sources = false;
        bool k_slope = false;
        bool own_mean = false;       ///< conductivity of temperature in an exact cell
        bool by_temperature = false; ///< some coefficient is
        Wanted wanted;
    };

    RegionPass prepare(std::size_t r, Wanted wanted) {
        const RegionModel& region = model_.regions[r];
        CellBlock& block = work_.cells;
        RegionPass pass;
        pass.region = r;
        bool k_uniform = true;
        for (int m = 0; m < region.conductivities; ++m) {
            k_uniform = k_uniform && region.k[m].uniform();
            pass.k_slope = pass.k_slope || region.k[m].depends_on_temperature();
        }
        pass.sources = !region.volume.empty();
        pass.own_mean = kernel_.exact && pass.k_slope && block.T;
        wanted.slope = wanted.matrix && pass.k_slope && block.T && !pass_.restoring_only;
        pass.wanted = wanted;
        block.conductivities = region.conductivities;
        block.k_uniform = k_uniform;
        for (int m = 0; m < 3; ++m) {
            block.k[m] = m < region.conductivities ? work_.coefficient[m] : nullptr;
            block.k_slope[m] = wanted.slope && m < region.conductivities ? work_.coefficient[3 + m] : nullptr;
        }
        block.k_mean = pass.own_mean ? work_.coefficient[1] : nullptr;
        block.k_end[0] = pass.own_mean ? work_.coefficient[2] : nullptr;
        block.k_end[1] = pass.own_mean ? work_.coefficient[4] : nullptr;
        block.sink = 0.0;
        if (k_uniform)
            for (int m = 0; m < region.conductivities; ++m)
                if (const Fault fault =
                        region.k[m].evaluate(slots_, pass_.time, {1, nullptr, nullptr, &place_->x, &place_->y},
                                             work_.coefficient[m], nullptr)) {
                    pass_.fault = fault;
                    return pass;
                }
        bool by_temperature = false;
        for (const VolumeTerm& term : region.volume) {
            if (linear_sink(region, term)) {
                block.sink += sink_of(term);
                continue;
            }
            by_temperature =
                by_temperature || term.kind == VolumeTerm::Kind::side_film || term.amount.depends_on_temperature();
        }
        block.source = pass.sources ? work_.coefficient[6] : nullptr;
        block.source_slope = by_temperature ? work_.coefficient[7] : nullptr;
        pass.by_temperature = by_temperature || pass.k_slope;
        return pass;
    }

    void cells(std::size_t r) {
        const RegionModel& region = model_.regions[r];
        CellBlock& block = work_.cells;
        block.T = pass_.T ? work_.nodal_T : nullptr;
        Wanted wanted;
        wanted.residual = wants_residual();
        wanted.matrix = wants_matrix();
        const RegionPass pass = prepare(r, wanted);
        if (pass_.fault) return;
        struct Reset { // whatever a law throws, others find the block as they expect it
            CellBlock::Unread& unread;
            ~Reset() { unread = {}; }
        } const reset{block.unread};
        if (!kernel_.exact) {
            block.unread.gradients = true;
            block.unread.conduction = block.k_uniform;
            block.unread.sources = !pass.sources && !pass_.content;
            block.unread.temperatures = !pass.by_temperature && !pass_.content;
        }
        // a linear cell's temperatures enter its residual alone
        const double* T = block.unread.temperatures && !wanted.residual ? nullptr : pass_.T;
        Id ids[W];
        for (Id c = region.first_cell; c < region.last_cell; c += W) {
            block.count = gather_cells(model_, place_, T, work_.nodal_T, c, region.last_cell, block, ids);
            if (!form_block(pass, ids)) return;
            scatter(block, c, pass.wanted);
            if (pass_.content && !add_content(pass, c, ids)) return;
        }
    }

    /// Coefficients and element arrays of the block, whose nodes are in place.
    bool form_block(const RegionPass& pass, const Id* ids) {
        const RegionModel& region = model_.regions[pass.region];
        CellBlock& block = work_.cells;
        kernel_.open(block);
        const double* const point_T = block.T && !block.unread.temperatures ? block.point_T : nullptr;
        if (pass.own_mean) {
            if (!mean_conductivity(region.k[0], ids)) return false;
        } else if (!block.k_uniform) {
            const Points at = conduction_points(kernel_, block, point_T);
            for (int m = 0; m < region.conductivities; ++m)
                if (!evaluate(region.k[m], at, work_.coefficient[m],
                              pass.wanted.slope ? work_.coefficient[3 + m] : nullptr, ids, block.count))
                    return false;
        }
        const Points at{static_cast<Index>(kernel_.points) * W, point_T, nullptr, block.point_x, block.point_y};
        Accounts* const a = pass_.accounts;
        const std::size_t r = pass.region;
        const double generated = a ? a->generated[r] : 0.0;
        const double side_loss = a ? a->side_loss[r] : 0.0;
        const double traffic = pass_.source_traffic;
        block.divided = false;
        if (pass.sources && !volume_terms(r, at, ids)) return false;
        Wanted wanted = pass.wanted;
        const bool sink_account = a && block.sink > 0.0;
        wanted.residual = wanted.residual || sink_account;
        kernel_.form(block, wanted);
        if (kernel_.exact && block.unresolved >= 0) {
            if (a) {
                a->generated[r] = generated;
                a->side_loss[r] = side_loss;
            }
            pass_.source_traffic = traffic;
            if (!form_divided(pass, wanted, ids)) return false;
        }
        if (sink_account) {
            // all the cells give off, and what they generate, less what other side films take
            double loss = a->generated[r] - a->side_loss[r] - (generated - side_loss);
            for (int c = 0; c < block.count; ++c) loss += block.residual[c] + block.residual[W + c];
            a->side_loss[r] += loss;
        }
        return true;
    }

    /// The derivative of a heat loss by temperature, or nothing where only restoring ones are wanted and it is not.
    [[nodiscard]] double kept_slope(double loss_by_T) const noexcept {
        return pass_.restoring_only ? std::max(loss_by_T, 0.0) : loss_by_T;
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
            if (linear_sink(region, term)) {
                if (!evaluate_load(term.fluid, at, fluid, nullptr, ids, block.count)) return false;
                const double sink = sink_of(term);
                for (Index i = 0; i < n; ++i) source[i] -= sink * fluid[i];
                continue;
            }
            if (term.kind == VolumeTerm::Kind::side_film) {
                if (!evaluate_load(term.fluid, at, fluid, nullptr, ids, block.count)) return false;
                if (!evaluate(term.extent, at, extent, nullptr, ids, block.count)) return false;
                const Points film{at.count, at.temperature, fluid, at.x, at.y};
                if (!evaluate(term.amount, film, amount, by_T, ids, block.count)) return false;
                for (Index i = 0; i < n; ++i) {
                    const double per_volume = term.by_thickness ? term.wet / extent[i] : term.wet * extent[i];
                    const double T = at.temperature ? at.temperature[i] : 0.0;
                    amount[i] *= per_volume;
                    slope[i] += amount[i] + kept_slope(by_T[i] * per_volume * (T - fluid[i]));
                    amount[i] *= T - fluid[i];
                    source[i] += amount[i];
                }
                account(pass_.accounts ? &pass_.accounts->side_loss[r] : nullptr, amount, 1.0);
                continue;
            }
            const double scale = term.kind == VolumeTerm::Kind::total ? 1.0 / values_.region_volume[r] : 1.0;
            if (!evaluate_load(term.amount, at, amount, by_T, ids, block.count)) return false;
            for (Index i = 0; i < n; ++i) {
                amount[i] *= scale;
                source[i] -= amount[i];
                slope[i] += kept_slope(-scale * by_T[i]);
            }
            account(pass_.accounts ? &pass_.accounts->generated[r] : nullptr, amount, 1.0);
        }
        for (int c = 0; c < block.count; ++c) {
            double sum = 0.0;
            for (int q = 0; q < kernel_.points; ++q) sum += block.weight[q * W + c] * source[q * W + c];
            if (block.sink > 0.0 && at.temperature)
                for (int q = 0; q < kernel_.points; ++q)
                    sum += block.weight[q * W + c] * block.sink * at.temperature[q * W + c];
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

    // from the block into the system: assemble_scatter.hpp
    void scatter(const CellBlock& block, Id first, Wanted wanted);
    void add_matrices(const CellBlock& block, const Id* map, double* to) const;
    void weigh_cells(const CellBlock& block, Id first, Wanted wanted);

    // sides and places: assemble_sides.hpp
    void face(const FaceModel& face, const SideList& sides, std::size_t first_term);
    bool face_term(const FaceTerm& term, Index n, const Id* ids, double* sum);
    void scatter_sides(const SideList& sides, Index first, int count, double sign);
    void weigh_side(const Id* row, const Id* column, int b, double sign);
    void add_side_matrix(Id cell, const Id* ids, int b);
    void add_both(Id at, double value);
    void contact(std::size_t k);
    void cross_terms(const ContactModel& contact, Index first, int count);
    void local(std::size_t l);

    // exact cells: assemble_exact.hpp
    [[nodiscard]] bool linear_sink(const RegionModel& region, const VolumeTerm& term) const;
    [[nodiscard]] double sink_of(const VolumeTerm& term) const;
    bool mean_conductivity(const Coefficient& k, const Id* ids);
    bool refuse(Fault::Kind kind, const Coefficient& which, int c, const Id* ids);
    bool unresolved(const RegionModel& region, const Id* ids);
    bool add_content(const RegionPass& pass, Id first, const Id* ids);
    double temperature_of(const Coefficient& k, double T, double rise, double* k_there);

    // exact cells in pieces: assemble_divided.hpp
    struct Piece {
        double from = 0.0;
        double to = 0.0;
        double conductance = 0.0;    ///< couples its two nodes [W/K]
        double loss[2] = {0.0, 0.0}; ///< couples each to the fluid [W/K]
        double load[2] = {0.0, 0.0}; ///< residual at a temperature of zero [W]
    };
    struct Amounts {
        double resistance = 0.0;
        double source = 0.0;
        bool by_source = false;
    };
    bool form_piece(const RegionPass& pass, double from, double to, const Id* ids);
    bool divide(const RegionPass& pass, double from, double to, int depth, const Id* ids);
    [[nodiscard]] static Piece joined(const Piece& left, const Piece& right) noexcept;
    bool form_divided(const RegionPass& pass, Wanted wanted, const Id* ids);
    bool add_divided_content(const RegionPass& pass, Id first, const Id* ids);

    const Model& model_;
    const CellKernels& kernel_;
    const double* slots_;
    const Values& values_;
    const Point* place_;
    Workspace& work_;
    Pass& pass_;
    std::vector<double> shape_;
    std::vector<Piece> pieces_;
    std::size_t first_piece_[W + 1] = {}; ///< of each cell of the block
    Amounts seen_, total_, rough_;        ///< largest in one piece, in all, in those taken as they come
};

} // namespace detail

TEPOR_INLINE void assemble(const Model& model, const Values& values, Workspace& work, Pass& pass) {
    detail::Assembler(model, values, work, pass).run();
}

TEPOR_INLINE Fault form_cells(const Model& model, const Values& values, Workspace& work, TimeSpan time, Id region,
                              const Id* cells, Wanted wanted) {
    Pass pass;
    pass.time = time;
    (void)detail::Assembler(model, values, work, pass).run_block(region, cells, wanted);
    return pass.fault;
}

} // namespace tepor

#include <tepor/body/impl/assemble_divided.hpp>
#include <tepor/body/impl/assemble_exact.hpp>
#include <tepor/body/impl/assemble_scatter.hpp>
#include <tepor/body/impl/assemble_sides.hpp>
