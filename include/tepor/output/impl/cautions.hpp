#pragma once
// The cautions a result asks for: hot surfaces, fire, pressure, and the worth of the data.

#include <algorithm>
#include <tepor/output/table.hpp>
#include <tepor/output/text.hpp>

namespace tepor {

namespace detail {

/// The face stands in air or the like that people are in: a film or radiation to something below 60 degC.
inline bool within_reach(const Field& field, const FaceModel& face, double zero) {
    const TimeSpan now{field.time(), field.time(), 1.0};
    return std::any_of(face.terms.begin(), face.terms.end(), [&](const FaceTerm& term) {
        if (term.kind == FaceTerm::Kind::flux || !term.outside.uniform()) return false;
        return term.outside.uniform_value(field.values().slots.data(), now) - zero < 60.0;
    });
}

} // namespace detail

TEPOR_INLINE std::string cautions(const Field& field) {
    const Model& model = field.model();
    const bool kelvin = model.scale == TemperatureScale::kelvin;
    const double zero = kelvin ? zero_celsius : 0.0;
    const char* degree = kelvin ? "K" : "degC";
    std::string out = "Cautions\n";
    // 43 degC: lowest burn threshold of long contact, ISO 13732-1, from memory. 80 degC: common practice, no source.
    for (const FaceModel& face : model.faces) {
        if (face.sides.side.empty() || !detail::within_reach(field, face, zero)) continue;
        const double hottest = field[hottest_on(face.name)];
        const std::string words = fmt::format("\"{}\" reaches {:.1f} {}", face.name, hottest, degree);
        if (hottest - zero > 43.0)
            out +=
                fmt::format("  {}: it can burn who touches it; whether it may be touched depends on material and time "
                            "of contact,\n  and is decided by local rules and licensed practice.\n",
                            words);
        if (hottest - zero > 80.0)
            out += fmt::format("  {}: clearances to combustible material and fire resistance are never decided by this "
                               "number alone.\n",
                               words);
    }
    const double warmest = field.hottest().temperature;
    if (model.mesh->frame.power() > 0.0 && warmest - zero > 80.0)
        out += fmt::format("  Hot round walls often bear pressure: at {:.0f} {} a wall is weaker than cold; stress and "
                           "code checks are a different job.\n",
                           warmest, degree);
    return out +
           "  A result is as good as its data: films, emissivities, joints and aged linings are often known to no "
           "better than 20 percent;\n  compute with the worst values as well as the best.\n";
}

} // namespace tepor
