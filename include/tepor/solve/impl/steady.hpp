#pragma once
// The steady solve: one linear solve, or Newton's method with a line search.

#include <cmath>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/impl/newton.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor {

namespace detail {

/// The instant a steady state is asked for.
inline TimeSpan instant(const SteadyOptions& options) noexcept {
    const double t = options.time ? *options.time : 0.0;
    return {t, t, 1.0};
}

class SteadySolve {
  public:
    SteadySolve(Engine& engine, const Values& values, const SteadyOptions& options)
        : engine_(engine), model_(engine.model()), values_(values), options_(options), at_(instant(options)) {}

    /// Fills T (prescribed part set already), leaves the residual of the result in the engine. With `update_rows` the factor of a
    /// similar matrix is used by a low-rank update of so many rows.
    /// @return 0, or the rows such an update would need when these are more; nothing has then been done
    Index run(double* T, bool factored, Index update_rows = 0) {
        evaluate(T, !factored);
        if (pass_.fault) raise(pass_.fault);
        bool updated = update_rows > 0;
        if (updated) {
            const Index needed = engine_.update(update_rows);
            if (needed > 0) return needed;
            factored = true;
        }
        for (Index pass = 0;; ++pass) {
            const double limit = options_.tolerance * gross_traffic(model_, pass_, engine_.residual.data()) +
                                 residual_rounding(model_, engine_.matrix, T);
            const double now = residual_sum(model_, engine_.residual.data());
            history_.push_back({now, limit, 0.0, 1.0});
            if (!std::isfinite(now)) stalled(T, "the residual is not finite");
            // a linear body is solved at least once, so that its answer does not depend on where it started
            const bool solved = now <= limit && (pass > 0 || model_.nonlinear);
            if (solved && (in_balance(T) || refinements_ == most_refinements)) break;
            if (solved)
                ++refinements_;
            else if (model_.nonlinear ? pass >= options_.most_passes : pass >= 4)
                stalled(T, "the passes ran out");
            if (updated && !solved && pass == 2) updated = factored = false; // the update has lost digits
            if (!factored && !engine_.factor(Purpose::one_solve)) {
                if (!model_.nonlinear) raise_singular(model_, engine_.singular_unknown());
                restore(T);
                continue;
            }
            if (crawling_ == 2) { // a conductivity that turns at some temperature holds Newton's method up there
                restore(T);
                continue;
            }
            factored = !model_.nonlinear;
            find_step(T, now, limit);
            advance(T, now, limit);
        }
        return 0;
    }

    [[nodiscard]] std::vector<SolvePass> take_history() { return std::move(history_); }

  private:
    /// What rounding may leave of sum |r| grows with the number of rows; the heat left over, their signed sum, has to stay below
    /// the floor the balance is judged by. Rows that all lean one way fail that, and another step rights them.
    [[nodiscard]] bool in_balance(const double* T) {
        const double goal = options_.tolerance * gross_traffic(model_, pass_, engine_.residual.data());
        // the matrix times a step has the rounding of the matrix in every row; the fluxes of a fresh pass cancel between rows
        if (!model_.nonlinear && refinements_ == 0 && rounding_of_sum(model_, engine_.matrix, T) > goal)
            evaluate(T, false);
        double left_over = 0.0;
        for (Index u = 0; u < model_.free; ++u) left_over += engine_.residual[as_size(u)];
        return std::abs(left_over) <= goal ||
               std::abs(left_over) <= goal + rounding_floor(model_, values_, engine_.work, T);
    }

    void find_step(const double* T, double now, double limit) {
        for (Index u = 0; u < model_.free; ++u) engine_.step[as_size(u)] = -engine_.residual[as_size(u)];
        if (!engine_.solve(engine_.step.data(), linear_limit(now, limit))) stalled(T, "the linear solve stalled");
    }

    /// A step with the slopes that restore balance only and the conductivity as it is, where the full derivative is not positive
    /// definite or leads nowhere: the body warms up past the place where its sources outgrow its losses, or where its conductivity
    /// turns. The residual rises on the way, so no search along the line; the step is halved only where a law cannot be
    /// evaluated, and a residual that keeps rising means that the body runs away.
    void restore(double* T) {
        restored_ = true;
        crawling_ = 0;
        if (lost_ < 0) lost_ = engine_.singular_unknown();
        if (history_.back().residual > 1e6 * history_.front().residual) raise_singular(model_, lost_, told());
        evaluate(T, true, true);
        if (pass_.fault) raise(pass_.fault);
        if (!engine_.factor(Purpose::one_solve)) raise_singular(model_, engine_.singular_unknown(), told());
        find_step(T, history_.back().residual, history_.back().limit);
        const double* step = engine_.step.data();
        double share = 1.0, taken = 0.0;
        for (int halving = 0; halving <= 40; ++halving, share *= 0.5) {
            for (Index u = 0; u < model_.free; ++u) T[u] += (share - taken) * step[u];
            taken = share;
            evaluate(T, true);
            if (!pass_.fault && std::isfinite(residual_sum(model_, engine_.residual.data()))) break;
        }
        if (pass_.fault) raise_singular(model_, lost_, told());
        double largest = 0.0;
        for (Index u = 0; u < model_.free; ++u) largest = std::max(largest, std::abs(step[u]));
        history_.back().step = taken * largest;
        history_.back().damping = taken;
    }

    void evaluate(const double* T, bool with_matrix, bool restoring_only = false) {
        pass_ = Pass{};
        pass_.restoring_only = restoring_only;
        pass_.T = T;
        pass_.time = at_;
        pass_.residual = engine_.residual.data();
        pass_.matrix = with_matrix ? &engine_.matrix : nullptr;
        assemble(model_, values_, engine_.work, pass_);
    }

    /// How far an iterative linear solve has to go: Newton's own progress tells (Eisenstat & Walker 1996, choice 2).
    [[nodiscard]] double linear_limit(double now, double limit) const {
        limit = std::min(limit, now); // a refinement starts below the limit
        if (!model_.nonlinear) return 0.5 * limit;
        double forcing = 0.01;
        if (history_.size() > 1) {
            const double drop = now / history_[history_.size() - 2].residual;
            forcing = std::min(forcing, 0.5 * drop * drop);
        }
        return std::max(0.1 * limit, forcing * now);
    }

    /// A linear body's new residual is the old one plus the matrix times the step; only what passes the faces is asked anew.
    void advance_linear(double* T) {
        const double* step = engine_.step.data();
        double largest = 0.0;
        for (Index u = 0; u < model_.free; ++u) {
            T[u] += step[u];
            largest = std::max(largest, std::abs(step[u]));
        }
        history_.back().step = largest;
        if (refinements_ > 0) return evaluate(T, false);
        multiply(engine_.matrix, model_.unknowns, step, engine_.product.data());
        for (Index u = 0; u < model_.unknowns; ++u) engine_.residual[as_size(u)] += engine_.product[as_size(u)];
        Pass faces;
        faces.T = T;
        faces.time = at_;
        for (const RegionModel& region : model_.regions)
            for (const VolumeTerm& term : region.volume)
                if (term.kind == VolumeTerm::Kind::side_film) return evaluate(T, false); // its traffic depends on T
        faces.cells = false;
        assemble(model_, values_, engine_.work, faces);
        if (faces.fault) raise(faces.fault);
        pass_.side_traffic = faces.side_traffic;
    }

    /// Takes the step; in a nonlinear body halves it until the residual falls.
    void advance(double* T, double before, double limit) {
        if (!model_.nonlinear) return advance_linear(T);
        const double* step = engine_.step.data();
        double largest = 0.0;
        for (Index u = 0; u < model_.free; ++u) largest = std::max(largest, std::abs(step[u]));
        double share = 1.0;
        double taken = 0.0;
        for (int halving = 0;; ++halving) {
            for (Index u = 0; u < model_.free; ++u) T[u] += (share - taken) * step[u];
            taken = share;
            const bool last_try = halving == 40;
            // the matrix comes along with the first try, which is nearly always taken
            evaluate(T, halving == 0);
            const double now = pass_.fault ? HUGE_VAL : residual_sum(model_, engine_.residual.data());
            if (now <= (1.0 - 1e-4 * share) * before || now <= limit || last_try) {
                if (pass_.fault) raise(pass_.fault);
                if (last_try && !(now < before)) {
                    if (restored_) stalled(T, "no step along Newton's direction lowers the residual");
                    for (Index u = 0; u < model_.free; ++u) T[u] -= taken * step[u];
                    return restore(T);
                }
                if (halving > 0) evaluate(T, true);
                break;
            }
            share *= 0.5;
        }
        history_.back().step = share * largest;
        history_.back().damping = share;
        crawling_ = share <= 0.25 ? crawling_ + 1 : 0;
        restored_ = false;
    }

    [[noreturn]] void stalled(const double* T, const char* why) {
        Id worst = 0;
        for (Index u = 0; u < model_.free; ++u)
            if (!(std::abs(engine_.residual[as_size(u)]) <= std::abs(engine_.residual[as_size(worst)])))
                worst = as_id(u);
        const Point p = model_.free > 0 ? model_.places_of(values_)[worst] : Point{};
        throw Error(ErrorCode::not_converged, "",
                    text("steady: not converged, ", why, "; worst at (", p.x, ", ", p.y, "), temperature ",
                         model_.free > 0 ? T[worst] : 0.0, told()));
    }

    /// The history in words, and what to try.
    [[nodiscard]] std::string told() const {
        std::string words = text("; ", history_.size(), " passes, residual [W] by pass:");
        for (const SolvePass& pass : history_) words += text(" ", pass.residual);
        words += text(
            " (limit ", history_.empty() ? 0.0 : history_.back().limit,
            "); check values and units, start nearer with SteadyOptions::start, or look for a source that runs away");
        return words;
    }

    static constexpr int most_refinements = 2;

    Engine& engine_;
    const Model& model_;
    const Values& values_;
    const SteadyOptions& options_;
    TimeSpan at_;
    Pass pass_;
    std::vector<SolvePass> history_;
    int refinements_ = 0;   ///< passes taken for the balance alone
    int crawling_ = 0;      ///< steps in a row that were cut to a quarter or less
    bool restored_ = false; ///< the last step was one of restore()
    Id lost_ = -1;          ///< where a pivot was lost first
};

inline void validate(const SteadyOptions& options) {
    if (!(options.tolerance > 0.0 && options.tolerance < 1.0))
        throw Error(ErrorCode::bad_value, "tolerance",
                    text("SteadyOptions: tolerance = ", options.tolerance, ", expected 0 < tolerance < 1"));
    if (options.threads < 1 || options.threads > 1024)
        throw Error(ErrorCode::bad_value, "threads",
                    text("SteadyOptions: threads = ", options.threads, ", expected 1 to 1024"));
    if (options.most_passes < 1)
        throw Error(ErrorCode::bad_value, "most_passes",
                    text("SteadyOptions: most_passes = ", options.most_passes, ", expected at least 1"));
}

} // namespace detail

namespace detail {

/// Solves a body that is a line by a sweep; false when it is none, or when the plain way has to tell what is wrong.
inline bool steady_sweep(const std::shared_ptr<const Model>& model, EnginePool& pool, const SteadyOptions& options,
                         Field& into) {
    std::unique_ptr<LineSweep> sweep = pool.borrow_sweep(model);
    if (!sweep) return false;
    const TimeSpan at = instant(options);
    LineSweep::Report report;
    Pass faces;
    std::vector<double>& T = into.temperature();
    bool fine = sweep->run(into.values(), at, T.data(), into.reaction().data(), report);
    if (fine) {
        faces.T = T.data();
        faces.time = at;
        faces.cells = false;
        assemble(*model, into.values(), sweep->work(), faces);
        faces.source_traffic = report.source_traffic;
        const double limit = options.tolerance * gross_traffic(*model, faces, into.reaction().data()) + report.rounding;
        into.passes().push_back({report.given, limit, report.hottest, 1.0});
        into.passes().push_back({report.residual, limit, 0.0, 1.0});
        fine = !faces.fault && report.residual <= limit;
    }
    pool.give_back(std::move(sweep));
    if (!fine) into.passes().clear();
    return fine;
}

/// A linear body whose matrix differs little from one that is factored; see Engine::update. False when it does not.
inline bool steady_update(EnginePool& pool, const std::vector<double>& key, const SteadyOptions& options, Field& into) {
    std::unique_ptr<Engine> engine = pool.borrow_near(key);
    if (!engine) return false;
    const std::vector<double> former = engine->key;
    engine->keep_base();
    engine->key.clear();
    const Index free = engine->model().free;
    SteadySolve solve(*engine, into.values(), options);
    const Index needed = solve.run(into.temperature().data(), false, pool.update_rows(free));
    if (needed > 0) {
        engine->restore_base();
        pool.refused(former, key, needed, free);
    } else {
        check_tables(engine->model(), into.values(), engine->work, into.temperature().data());
        into.reaction() = engine->residual;
        into.passes() = solve.take_history();
        engine->key = key;
    }
    pool.give_back(std::move(engine));
    return needed == 0;
}

/// The plain way: a matrix, a factor, and Newton's method where it is needed.
inline void steady_solve(const std::shared_ptr<const Model>& model, EnginePool& pool, const SteadyOptions& options,
                         Field& into) {
    std::vector<double>& T = into.temperature();
    const std::vector<double> key = matrix_key(*model, into.values());
    if (!options.solver && !model->nonlinear && steady_update(pool, key, options, into)) return;
    std::unique_ptr<Engine> engine = options.solver ? std::make_unique<Engine>(model) : pool.borrow(model, key);
    if (options.solver) engine->use(options.solver);
    engine->may_drop_zeros = true;
    engine->use_threads(options.threads);
    const bool factored = !model->nonlinear && engine->key == key;
    engine->key.clear();
    SteadySolve solve(*engine, into.values(), options);
    static_cast<void>(solve.run(T.data(), factored));
    check_tables(*model, into.values(), engine->work, T.data());
    into.reaction() = engine->residual;
    into.passes() = solve.take_history();
    if (options.solver) return; // an engine that points to it is not kept
    if (!model->nonlinear) engine->key = key;
    pool.give_back(std::move(engine));
}

inline void steady_into(const Body& body, const SteadyOptions& options, Field& into) {
    validate(options);
    const std::shared_ptr<const Model>& model = body.model();
    if (model->scheduled && !options.time)
        throw Error(
            ErrorCode::missing, "time",
            "steady: the data of this body change with time (a schedule or of_time); say at which instant the steady "
            "state is asked for with SteadyOptions{.time = ...}, or march");
    const TimeSpan at = instant(options);
    if (options.from && options.from->temperature().size() != as_size(model->unknowns))
        throw Error(ErrorCode::bad_value, "from",
                    "SteadyOptions: the field to start from belongs to another mesh; start from a field of this body");
    into.begin(model, body.values(), at.to);
    const Values& values = into.values();
    require_level(*model, values);
    std::vector<double>& T = into.temperature();
    T.resize(as_size(model->unknowns));
    into.reaction().resize(as_size(model->unknowns));
    const std::shared_ptr<EnginePool> pool = body.shared_kept<EnginePool>();
    into.keep(pool);
    model->prescribe(values, at, T.data());
    if (!options.solver && steady_sweep(model, *pool, options, into)) return;
    if (options.from && options.from != &into)
        T = options.from->temperature();
    else if (!options.from || !model->nonlinear) // a sweep has left nothing to start from
        std::fill(T.begin(), T.end(), options.start ? *options.start : start_temperature(*model, values, at));
    model->prescribe(values, at, T.data());
    steady_solve(model, *pool, options, into);
}

} // namespace detail

TEPOR_INLINE Field steady(const Body& body, const SteadyOptions& options) {
    Field field;
    detail::steady_into(body, options, field);
    return field;
}

TEPOR_INLINE void steady(const Body& body, Field& into, const SteadyOptions& options) {
    try {
        detail::steady_into(body, options, into);
    } catch (...) {
        into = Field{};
        throw;
    }
}

} // namespace tepor
