#pragma once
// CSV texts.

#include <fmt/format.h>
#include <tepor/output/csv.hpp>
#include <tepor/output/file.hpp>

namespace tepor {

namespace detail {

/// A field of a CSV line, quoted where it has to be (RFC 4180).
inline std::string csv_field(const std::string& words) {
    if (words.find_first_of(",\"\n") == std::string::npos) return words;
    std::string out = "\"";
    for (const char c : words) {
        if (c == '"') out += '"';
        out += c;
    }
    return out + '"';
}

} // namespace detail

TEPOR_INLINE std::string csv_of(const Field& field) {
    const Model& model = field.model();
    const bool plane = field.mesh().dim == 2;
    std::string out = fmt::format("node,region,x [m]{},temperature [{}]\n", plane ? ",y [m]" : "",
                                  model.scale == TemperatureScale::celsius ? "degC" : "K");
    const Point* place = model.places_of(field.values());
    // the region of an unknown: that of the first cell that holds it
    std::vector<Id> region(detail::as_size(model.unknowns), 0);
    for (std::size_t e = model.cell_unknowns.size(); e-- > 0;)
        region[detail::as_size(model.cell_unknowns[e])] =
            model.region_of_cell(static_cast<Index>(e / detail::as_size(model.kernels->nodes)));
    for (Index u = 0; u < model.unknowns; ++u) {
        const auto at = detail::as_size(u);
        out += fmt::format("{},{},{:.17g}", model.node_of[at],
                           detail::csv_field(model.regions[detail::as_size(region[at])].name), place[u].x);
        if (plane) out += fmt::format(",{:.17g}", place[u].y);
        out += fmt::format(",{:.17g}\n", field.temperature()[at]);
    }
    return out;
}

TEPOR_INLINE void Record::add(double time, const std::vector<double>& values) {
    if (values.size() != quantities_.size())
        throw Error(
            ErrorCode::bad_value, "Record",
            detail::text("Record: ", values.size(), " values for ", quantities_.size(), " quantities; give one each"));
    times_.push_back(time);
    for (std::size_t i = 0; i < values.size(); ++i) values_[i].push_back(values[i]);
}

TEPOR_INLINE std::string csv_of(const Record& record) {
    std::string out = "time [s]";
    for (const Quantity& q : record.quantities())
        out += ',' + detail::csv_field(fmt::format("{} [{}]", q.label(), q.unit()));
    out += '\n';
    for (std::size_t i = 0; i < record.times().size(); ++i) {
        out += fmt::format("{:.17g}", record.times()[i]);
        for (std::size_t q = 0; q < record.quantities().size(); ++q)
            out += fmt::format(",{:.17g}", record.values(q)[i]);
        out += '\n';
    }
    return out;
}

TEPOR_INLINE void write_csv(const std::string& path, const Field& field) {
    detail::write_file(path, csv_of(field));
}
TEPOR_INLINE void write_csv(const std::string& path, const Record& record) {
    detail::write_file(path, csv_of(record));
}

} // namespace tepor
