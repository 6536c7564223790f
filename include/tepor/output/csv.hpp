#pragma once
// CSV with units in the header: node temperatures, and quantities over time.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor {

/// One line per node (and per copy of a node at a contact): place and temperature, full precision.
[[nodiscard]] TEPOR_INLINE std::string csv_of(const Field& field);

/// Quantities over time, one column each; fill it in the loop.
class Record {
  public:
    explicit Record(std::vector<Quantity> quantities)
        : quantities_(std::move(quantities)), values_(quantities_.size()) {}

    /// One more instant, with a value per quantity. @throws Error bad_value  another number of values
    TEPOR_INLINE void add(double time, const std::vector<double>& values);

    [[nodiscard]] const std::vector<Quantity>& quantities() const noexcept { return quantities_; }
    [[nodiscard]] const std::vector<double>& times() const noexcept { return times_; }
    [[nodiscard]] const std::vector<double>& values(std::size_t quantity) const { return values_.at(quantity); }

  private:
    std::vector<Quantity> quantities_;
    std::vector<double> times_;
    std::vector<std::vector<double>> values_;
};

/// `time [s]` and one column per quantity with its label and unit.
[[nodiscard]] TEPOR_INLINE std::string csv_of(const Record& record);

/// @throws Error bad_file
TEPOR_INLINE void write_csv(const std::string& path, const Field& field);
TEPOR_INLINE void write_csv(const std::string& path, const Record& record);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/output/impl/csv.hpp>
#endif
