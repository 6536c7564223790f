#pragma once
// Marcher: the state of a march and the parts of a step.

#include <memory>
#include <string>
#include <string_view>
#include <tepor/field/field.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/checkpoint.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/initial.hpp>
#include <tepor/solve/loads.hpp>
#include <tepor/solve/march_handles.hpp>
#include <tepor/solve/step.hpp>
#include <tepor/solve/tape.hpp>
#include <vector>

namespace tepor::detail {

/// Theta and Adaptive in one.
struct Scheme {
    bool adaptive = false;
    double theta = 0.5;
    double step = 0.0;
    bool damped = true;
    int passes = 0;
    Index expected_steps = 0;
    double tolerance = 1e-10;
    Capacity capacity = Capacity::automatic;
    double error = 0.0;
    double first = 0.0;
    double largest = 0.0;
    double smallest = 0.0;
};

/// Heat over a span of time [J].
struct Ledger {
    Accounts accounts;
    std::vector<double> reaction; ///< all unknowns
    std::vector<double> stored;   ///< per region
    double side_traffic = 0.0;
    double source_traffic = 0.0;
};

class Marcher {
  public:
    Marcher(const Body& body, const Initial& start, const Scheme& options)
        : Marcher(body.model(), body.values(), start, options) {}
    Marcher(std::shared_ptr<const Model> of, const Values& with, const Initial& start, const Scheme& options);

    // ---- handles
    Index watch(const Quantity& quantity);
    Index drive(const Parameter& parameter);
    Index integral(const Quantity& quantity);
    Index peak(const Quantity& quantity);
    void set(Index input, double value) noexcept;
    [[nodiscard]] double read(Index probe) noexcept;

    // ---- steps
    Verdict advance() noexcept;
    /// To `end`, which lies less than a step (Theta) or any distance (Adaptive) ahead.
    Verdict advance_short(double end) noexcept;
    /// Throws what the last verdict stands for.
    [[noreturn]] void raise_verdict(Verdict verdict) const;
    void run(double t, const March& march, MarchCallback* progress);
    double time_to_reach(const March& march, const Quantity& quantity, double value, double latest);

    // ---- cold
    [[nodiscard]] double read(const Quantity& quantity);
    [[nodiscard]] Field field();
    [[nodiscard]] Balance balance_of(bool whole_run);
    [[nodiscard]] double residual();
    [[nodiscard]] double molten_in(std::string_view region) const;
    [[nodiscard]] double sensible_step() const noexcept;
    [[nodiscard]] bool below_minimum() const noexcept { return least_leg_ < minimum_leg_ * (1.0 - 1e-9); }
    [[nodiscard]] const std::vector<double>& temperatures() const noexcept { return T_; }
    [[nodiscard]] const Storage& storage() const noexcept { return *storage_; }
    /// Prescribed temperatures just before a time, in an array over all unknowns.
    const std::vector<double>& prescribed_end(double at);
    void restart(const std::vector<double>& T, double at);
    [[nodiscard]] Checkpoint checkpoint();
    void restore(const Checkpoint& checkpoint);

    struct Observer {
        double start = 0.0;
        double interval = 0.0;
        Index calls = 0;
        std::unique_ptr<MarchCallback> call;
        [[nodiscard]] double next() const noexcept { return start + as_double(calls + 1) * interval; }
    };
    std::vector<Observer> observers;

    double time = 0.0;
    Index steps = 0;
    Index factorisations = 0;
    Index rejections = 0;
    Index passes = 0; ///< Newton passes of the last step
    double last_step = 0.0;
    Values values; ///< of the last step
    std::shared_ptr<const Model> model;
    Scheme scheme;
    std::unique_ptr<MarchTape> tape; ///< states of the run, when they are recorded
    void record(double megabytes) {
        tape = std::make_unique<MarchTape>();
        tape->start = {T_, molten_, {}, {}};
        tape->most_bytes = static_cast<std::size_t>(megabytes * 1048576.0);
    }
    /// Goes through a recorded leg again from the state at its start; `end` receives the state at its end, as it was.
    void repeat(const MarchTape::Leg& leg, const Values& with, const MarchTape::State& start, MarchTape::State& end);
    /// The factor of M + a K that the march holds; null when it has none, or was driven away from these values.
    [[nodiscard]] Engine* factored(double a, const Values& with) noexcept;
    /// Nothing depends on temperature and no matrix on time.
    [[nodiscard]] bool linear() const noexcept { return linear_; }
    struct Summed {
        Index reading = 0;
        double sum = 0.0;
        double pending = 0.0; ///< of the step in hand
    };
    struct Highest {
        Index reading = 0;
        Moment moment;
    };
    std::vector<Summed> integrals;
    std::vector<Highest> peaks;

  private:
    /// A compiled quantity with what reading needs.
    struct Reading {
        Functional functional;
        Functional rest;                          ///< its parts that are neither weights on T nor heats
        std::vector<std::vector<double>> weights; ///< of its heats, over all unknowns
    };
    struct Driven {
        Id slot = -1;
        double value = 0.0; ///< to hold from the next step on
        double low = 0.0;   ///< what its uses allow
        double high = 0.0;
        bool remake = false; ///< it stands in a matrix
    };
    /// Matrix M + a K and its factor.
    struct Lane {
        double a = 0.0;
        std::unique_ptr<Engine> engine;
    };
    /// The free block of K in 1D at order 1, and its couplings to prescribed unknowns.
    struct Line {
        bool on = false;
        std::vector<double> diagonal, off;
        struct Coupling {
            Id row, column;
            double value;
        };
        std::vector<Coupling> couplings;
    };

    // state
    [[nodiscard]] double signature() const;
    template <class Stream, class Self>
    static void transfer(Stream& stream, Self& self);

    // setup
    [[nodiscard]] bool matrix_depends_on_time() const;
    void collect_events();
    void prepare_linear();
    void prepare_line();
    void start_latent(Phase phase);
    void measure_minimum();
    Lane* lane_for(double a);

    // values
    void remake_storage();
    Verdict take_inputs();
    void remade(bool capacity);
    [[nodiscard]] bool prescribe_ends(TimeSpan from, TimeSpan to);
    [[nodiscard]] double next_event(double after) const noexcept;
    [[nodiscard]] bool jumps_at(double event) const noexcept;

    // one step
    Verdict advance_by(double end, double dt) noexcept;
    void keep_start();
    void back_to_start() noexcept;
    Verdict interval(double end, double dt);
    Verdict piece(double end, double dt);
    Verdict substep(double end, double dt, double theta);
    Verdict linear_substep(double end, double dt, double theta);
    Verdict newton_substep(double end, double dt, double theta);
    Verdict newton(double scale, double leg, TimeSpan span, const double* explicit_part);
    bool evaluate(double scale, double leg, TimeSpan span, const double* explicit_part, bool with_matrix);
    void add_latent_slopes();
    void take(double share);
    void invert_latent(std::size_t first, std::size_t last, double a, double heat) noexcept;
    void melt_prescribed() noexcept;
    [[nodiscard]] bool inside_tables() noexcept;
    void unbalanced_line(const double* T, const double* load, double dt, double* b) const noexcept;
    Verdict fail(const Fault& fault) noexcept;
    [[nodiscard]] static Verdict verdict_of(const Error& error) noexcept;

    // TR-BDF2
    Verdict advance_adaptive(double end) noexcept;
    Verdict tr_bdf2(double end, double dt, double& error);
    bool residual_at(const double* T, TimeSpan span, double* out);
    Verdict adaptive_stage(double scale, TimeSpan at, const double* explicit_part);
    [[nodiscard]] bool prescribe_stage(TimeSpan from, TimeSpan to);
    [[nodiscard]] double choose_first_step();
    [[nodiscard]] double smallest_step() const noexcept;

    // books
    void begin_books(double dt) noexcept;
    void end_books(double from, double dt);
    Verdict book(const double* T, TimeSpan span, double dt, const double* stored);
    bool enter(const double* T, TimeSpan span, double dt);
    Verdict book_storage(const double* stored);
    void end_integrals(double dt);
    [[nodiscard]] bool open_run(Ledger& to);
    void close_run();
    void lazy_ledger(const double* T, const double* rise, TimeSpan span, const Values& at, Ledger& to);
    void add(Ledger& to, const Ledger& what) const;
    void clear(Ledger& ledger) const;
    [[nodiscard]] double value_of(const Reading& reading, const double* T, const double* reaction, TimeSpan span);
    [[nodiscard]] double now_value(const Reading& reading);
    [[nodiscard]] double curve(const Reading& reading, double share);
    void rates(const double* T, TimeSpan span);
    Reading compile_reading(const Quantity& quantity) const;

    // data
    std::unique_ptr<Storage> storage_;
    std::unique_ptr<Loads> loads_; ///< linear bodies
    bool linear_ = false;          ///< constant matrices: the fast path
    bool lazy_books_ = false;      ///< sums over time follow from mean temperatures
    Workspace work_;
    SparseMatrix K_;
    Line line_;
    std::vector<Lane> lanes_;
    std::size_t kept_lanes_ = 0; ///< prepared at the start, never given up
    std::unique_ptr<Engine> newton_;
    std::vector<double> factored_; ///< matrix of the last factor, to tell whether it can be used again
    std::vector<Driven> driven_;
    bool input_kept_ = false;
    std::vector<double> events_; ///< where schedules have their entries
    std::vector<unsigned char> event_jumps_;
    int damp_ = 0; ///< backward Euler half steps to come
    double grid_start_ = 0.0;
    Index grid_steps_ = 0;

    std::vector<double> T_;       ///< all unknowns
    std::vector<double> start_T_; ///< before the step
    double start_time_ = 0.0;
    int start_damp_ = 0;
    std::size_t start_legs_ = 0;      ///< of the tape
    double whole_ = 1.0;              ///< size of the step in hand [s]
    bool whole_leg_ = false;          ///< the substep in hand is all of it and enters the run's sums itself
    std::vector<double> piece_T_;     ///< before the substep
    std::vector<double> early_T_;     ///< the same with prescribed temperatures after their jump
    std::vector<double> try_T_;       ///< before a Newton pass
    std::vector<double> leg_T_;       ///< where the right-hand side is taken
    std::vector<double> rise_;        ///< increment of the substep
    std::vector<double> step_rise_;   ///< of the step
    std::vector<double> stored_rise_; ///< heat stored in the substep at each unknown [J]
    std::vector<double> b_;
    std::vector<double> mean_;     ///< mean temperature of the step
    std::vector<double> run_mean_; ///< integral of the temperature since the run's books were opened
    std::vector<double> run_start_T_;
    double run_start_ = 0.0;
    std::vector<double> run_slots_;                       ///< integrals of the slot values
    std::vector<double> prescribed_from_, prescribed_to_; ///< at the start, after a jump, and at the end
    std::vector<double> rate_, instant_;                  ///< dT/dt and reactions of an instant
    bool instant_fresh_ = false;
    double prescribed_dt_ = 0.0; ///< size of the substep the prescribed temperatures last went through
    bool prescribed_timed_ = false;
    bool prescribed_fresh_ = false;
    bool slope_fresh_ = false; ///< factored_ belongs to the present values
    Id singular_ = -1;
    std::unique_ptr<Engine> rate_engine_;
    /// Latent heat held by each LatentNode [J].
    std::vector<double> molten_, start_molten_, piece_molten_, try_molten_, stage_molten_;
    std::vector<double> latent_slope_, capacity_;
    std::vector<double> r0_, rg_, r1_, stage_T_, explicit_;
    double minimum_leg_ = 0.0; ///< implicit share of the smallest sensible step [s]
    double least_leg_ = 0.0;   ///< the smallest of the last step's substeps [s]
    double step_ = 0.0;        ///< Adaptive: the step to try next
    double birth_ = 0.0;       ///< time at the start
    Accounts pass_accounts_;
    std::vector<double> instant_book_;
    Ledger step_book_, run_book_;
    TimeSpan step_span_;
    std::vector<double> next_slots_; ///< checkpoints: with what has been set already
    std::vector<double> kept_sums_;  ///< of a checkpoint: integrals and peaks to go on from
    std::vector<double> kept_peaks_;
    std::vector<Reading> readings_;
    Pass pass_;
    Fault fault_;
    double gross_ = 0.0;                 ///< traffic of the last evaluation [W]
    double residual_ = 0.0;              ///< of Newton's last pass [W]
    const Coefficient* table_ = nullptr; ///< read outside its range
    double table_T_ = 0.0;
};

} // namespace tepor::detail
