#pragma once
// Field: a temperature field and everything that can be asked of it.

#include <memory>
#include <string>
#include <string_view>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/field/balance.hpp>
#include <tepor/field/error_bound.hpp>
#include <tepor/field/functional.hpp>
#include <vector>

namespace tepor {

/// One pass of a solve, for its history.
struct SolvePass {
    double residual = 0.0; ///< sum of |r| over the free unknowns [W] before the pass
    double limit = 0.0;    ///< what it had to fall below [W]
    double step = 0.0;     ///< largest temperature change made [K]
    double damping = 1.0;  ///< share of the full step taken
};

/// An extreme temperature and its place.
struct Spotted {
    double temperature = 0.0; ///< body's scale
    Point place;              ///< [m]
};

/// A temperature field of a body: owns an immutable snapshot and its parameter values, so later calls on the Body do not
/// touch it. Temperatures are in the body's scale. Safe to read from many threads.
class Field {
  public:
    TEPOR_INLINE Field();
    TEPOR_INLINE Field(const Field& other);
    TEPOR_INLINE Field(Field&& other) noexcept;
    TEPOR_INLINE Field& operator=(const Field& other);
    TEPOR_INLINE Field& operator=(Field&& other) noexcept;
    TEPOR_INLINE ~Field();

    /// @param temperature  all unknowns; @param reaction  residual at all unknowns (capacity terms included)
    TEPOR_INLINE Field(std::shared_ptr<const Model> model, Values values, std::vector<double> temperature,
                       std::vector<double> reaction, double time = 0.0);

    /// The value of a quantity.
    /// @throws Error bad_name, outside, no_answer (unbounded flow), wrong_dimension
    [[nodiscard]] TEPOR_INLINE double operator[](const Quantity& quantity) const;

    /// Temperature at a place; with a region where a contact gives the place two temperatures.
    /// @throws Error outside
    [[nodiscard]] double at(double x, std::string_view region = {}) const { return at(Point{x, 0.0}, region); }
    [[nodiscard]] TEPOR_INLINE double at(Point place, std::string_view region = {}) const;

    /// Heat flux vector -k grad T at a place [W/m2] (y = 0 in 1D).
    [[nodiscard]] Point heat_flux(double x, std::string_view region = {}) const {
        return heat_flux(Point{x, 0.0}, region);
    }
    [[nodiscard]] TEPOR_INLINE Point heat_flux(Point place, std::string_view region = {}) const;

    /// Heat flux vector in the middle of a cell of the mesh [W/m2], user's numbering.
    [[nodiscard]] TEPOR_INLINE Point cell_heat_flux(Index cell) const;

    /// Hottest and coldest place of the whole body.
    [[nodiscard]] TEPOR_INLINE Spotted hottest() const;
    [[nodiscard]] TEPOR_INLINE Spotted coldest() const;
    /// Hottest and coldest place of a region.
    [[nodiscard]] TEPOR_INLINE Spotted hottest(std::string_view region) const;
    [[nodiscard]] TEPOR_INLINE Spotted coldest(std::string_view region) const;

    /// Heat balance, every face and region listed.
    [[nodiscard]] TEPOR_INLINE Balance balance() const;

    /// Guaranteed bound of the error of this field in the energy norm, in total and per cell (linear steady bodies on triangles of
    /// order 1 and 2 and segments).
    /// @throws Error not_certifiable, naming the term for which there is none
    [[nodiscard]] TEPOR_INLINE ErrorBound error_bound() const;

    /// Temperatures at the mesh's nodes in the user's numbering (at a contact the first region's).
    [[nodiscard]] TEPOR_INLINE std::vector<double> node_temperatures() const;
    /// Temperatures cell by cell in the user's numbering, `nodes_per_cell` each: keeps the jumps of contacts.
    [[nodiscard]] TEPOR_INLINE std::vector<double> cell_temperatures() const;
    /// Coordinates of the mesh's nodes at this field's parameter values [m].
    [[nodiscard]] TEPOR_INLINE std::vector<Point> node_places() const;

    [[nodiscard]] const Model& model() const noexcept { return *model_; }
    [[nodiscard]] const std::shared_ptr<const Model>& shared_model() const noexcept { return model_; }
    [[nodiscard]] const MeshData& mesh() const noexcept { return *model_->mesh; }
    [[nodiscard]] const Values& values() const noexcept { return values_; }
    /// The value a parameter had when this field was made.
    [[nodiscard]] TEPOR_INLINE double value(const Parameter& parameter) const;
    /// [s]; 0 for a steady state.
    [[nodiscard]] double time() const noexcept { return time_; }
    /// All unknowns in the model's numbering.
    [[nodiscard]] const std::vector<double>& temperature() const noexcept { return temperature_; }
    /// Residual at all unknowns: about zero where free, heat into the body where prescribed [W].
    [[nodiscard]] const std::vector<double>& reaction() const noexcept { return reaction_; }
    /// Rate of storage per region [W]; empty in a steady state.
    [[nodiscard]] const std::vector<double>& storage() const noexcept { return storage_; }
    /// What the solve did, pass by pass.
    [[nodiscard]] const std::vector<SolvePass>& passes() const noexcept { return passes_; }

    // for the solvers
    /// Becomes the field of another solve; vectors keep their memory.
    TEPOR_INLINE void begin(std::shared_ptr<const Model> model, const Values& values, double time);
    std::vector<double>& temperature() noexcept { return temperature_; }
    std::vector<double>& reaction() noexcept { return reaction_; }
    std::vector<double>& storage() noexcept { return storage_; }
    std::vector<SolvePass>& passes() noexcept { return passes_; }
    /// What the solve left with its body (factors), for whoever asks more of this field while the body lives; may be gone.
    [[nodiscard]] std::shared_ptr<Body::Store> store() const noexcept { return store_.lock(); }
    void keep(const std::shared_ptr<Body::Store>& store) noexcept { store_ = store; }

  private:
    [[nodiscard]] TEPOR_INLINE Point flux_at(const ModelPlace& found) const;
    [[nodiscard]] TEPOR_INLINE Id region_id(std::string_view name) const;

    std::shared_ptr<const Model> model_;
    Values values_;
    std::vector<double> temperature_;
    std::vector<double> reaction_;
    std::vector<double> storage_;
    std::vector<SolvePass> passes_;
    std::weak_ptr<Body::Store> store_;
    double time_ = 0.0;
};

/// Heat over a field or a span of time, from which a Balance is made; watts, or joules all through.
struct HeatSums {
    Accounts accounts;
    const double* reaction = nullptr; ///< all unknowns: heat into the body at prescribed ones
    const double* stored = nullptr;   ///< per region; null when nothing is stored
    double side_traffic = 0.0;
    double source_traffic = 0.0;
    double duration = 1.0; ///< what turns the rounding floor from watts into the unit of the sums
};

/// The balance of the sums; flows through faces that overlap others or have corners between prescribed temperatures are taken at T.
[[nodiscard]] TEPOR_INLINE Balance balance_of(const Model& model, const Values& values, Workspace& work,
                                              const HeatSums& sums, const double* T, TimeSpan span);

/// What the frame's size is in words: "1 m2 of wall", "a depth of 0.4 m", "a length of 2 m", "the whole sphere" ...
[[nodiscard]] TEPOR_INLINE std::string size_in_words(const MeshData& mesh);

/// What rounding can leave over in a heat balance [W]: eps max|T| max(k/h) max(16, sqrt(n)) per area (n = cells of a 1D
/// body; 16 in 2D), times the area through which heat passes.
[[nodiscard]] TEPOR_INLINE double rounding_floor(const Model& model, const Values& values, Workspace& work,
                                                 const double* T);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/field/impl/balance.hpp>
#include <tepor/field/impl/error_bound.hpp>
#include <tepor/field/impl/field.hpp>
#endif
