#pragma once
// Initial: the temperatures a march starts from.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/describe/law.hpp>
#include <tepor/field/field.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// Which side a material is on that starts exactly at a melting temperature without width.
enum class Phase { solid, liquid };

/// Where a march starts: one temperature, a law of place, or a field. Made by `initial(...)`.
class Initial {
  public:
    explicit Initial(double temperature, Phase phase) : temperature_(temperature), phase_(phase) {}
    explicit Initial(Law law, Phase phase) : phase_(phase), law_(std::make_shared<const Law>(std::move(law))) {}
    explicit Initial(Field field, Phase phase)
        : phase_(phase), field_(std::make_shared<const Field>(std::move(field))) {}

    /// Temperatures of all unknowns of a model. @throws Error bad_value (names the place), outside
    [[nodiscard]] TEPOR_INLINE std::vector<double> temperatures(const Model& model, const Values& values) const;
    [[nodiscard]] Phase phase() const noexcept { return phase_; }
    /// The time the field was taken at; 0 otherwise [s].
    [[nodiscard]] double time() const noexcept { return field_ ? field_->time() : 0.0; }

  private:
    double temperature_ = 0.0;
    Phase phase_ = Phase::solid;
    std::shared_ptr<const Law> law_;
    std::shared_ptr<const Field> field_;
};

/// The same temperature everywhere, in the body's scale.
inline Initial initial(double temperature, Phase phase = Phase::solid) {
    return Initial(temperature, phase);
}
/// A law of place: `initial(of_place([](Point p) { return 20.0 + 5.0 * p.x; }))`.
inline Initial initial(Law law, Phase phase = Phase::solid) {
    return Initial(std::move(law), phase);
}
/// A steady or marched field, of this body or of another that covers it (then read at the places of the nodes).
inline Initial initial(Field field, Phase phase = Phase::solid) {
    return Initial(std::move(field), phase);
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/initial.hpp>
#endif
