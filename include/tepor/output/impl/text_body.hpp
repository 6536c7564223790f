#pragma once
// What was said about a body, as text.

#include <tepor/output/table.hpp>
#include <tepor/output/text.hpp>
#include <utility>

namespace tepor {

namespace detail {

/// Writes the statements of a body; `value_of` gives the present value of a parameter.
template <class ValueOf>
class BodyWriter {
  public:
    BodyWriter(const Body& body, ValueOf value_of) : body_(body), value_of_(std::move(value_of)) {}

    std::string write() {
        const MeshData& mesh = body_.mesh();
        out_ = fmt::format("Body: {}, {} {} of order {}, {} nodes, temperatures in {}\n", size_in_words(mesh),
                           mesh.cell_count(), mesh.cell_count() == 1 ? "cell" : "cells", mesh.order, mesh.node_count(),
                           degree());
        for (std::size_t r = 0; r < mesh.region_names.size(); ++r) region(as_id(r));
        for (const SaidContact& s : body_.statements().contacts)
            line("between", fmt::format("\"{}\" and \"{}\"", region_name(s.first), region_name(s.second)),
                 s.what.conductance.given() ? "contact conductance " + words(s.what.conductance, "W/(m2 K)")
                                            : "contact resistance " + words(s.what.resistance, "m2 K/W"));
        for (std::size_t f = 0; f < mesh.faces.size(); ++f) face(as_id(f));
        for (const SaidLocal& s : body_.statements().locals)
            line("at", fmt::format("({}, {})", significant(s.place.x), significant(s.place.y)),
                 "local heat " + words(s.what.total, "W") +
                     (s.what.radius > 0.0 ? fmt::format(", radius {} m", significant(s.what.radius)) : ""));
        for (const std::string& remark : mesh.remarks) out_ += "  mesh: " + remark + '\n';
        return std::move(out_);
    }

  private:
    [[nodiscard]] const char* degree() const {
        return body_.options().scale == TemperatureScale::kelvin ? "K" : "degC";
    }
    [[nodiscard]] const std::string& region_name(Id r) const { return body_.mesh().region_names[as_size(r)]; }

    void line(const char* preposition, const std::string& where, const std::string& what) {
        out_ += fmt::format("  {:<7} {}: {}\n", preposition, where, what);
    }

    [[nodiscard]] std::string words(const Value& value, const char* unit) const {
        const auto with_unit = [unit](double v) {
            return *unit == '\0' ? significant(v) : fmt::format("{} {}", significant(v), unit);
        };
        switch (value.kind()) {
        case Value::Kind::none: return "not given";
        case Value::Kind::number: return with_unit(value.number());
        case Value::Kind::parameter:
            return fmt::format("{} (parameter \"{}\")", with_unit(value_of_(value.parameter())),
                               value.parameter().name());
        case Value::Kind::table: {
            const auto& points = value.table().points();
            const auto entry = [this](const TablePoint& p) {
                return significant(p.value.parameter() ? value_of_(*p.value.parameter()) : p.value.number());
            };
            std::string list;
            if (points.size() <= 6) {
                for (const TablePoint& p : points)
                    list += fmt::format("{}{} at {}", list.empty() ? "" : ", ", entry(p), significant(p.at));
            } else {
                list = fmt::format("{} points from {} at {} to {} at {}", points.size(), entry(points.front()),
                                   significant(points.front().at), entry(points.back()), significant(points.back().at));
            }
            return fmt::format("{} {} ({})", list, degree(), unit);
        }
        case Value::Kind::law: {
            std::string text = value.law().name();
            for (const Parameter& p : value.law().parameters())
                text += fmt::format(", \"{}\" = {}", p.name(), significant(value_of_(p)));
            return fmt::format("{} ({})", text, unit);
        }
        case Value::Kind::schedule:
            return fmt::format("schedule of {} entries from {}", value.schedule().entries().size(),
                               with_unit(value.schedule().entries().front().value));
        }
        return {};
    }

    void region(Id r) {
        const Statements& said = body_.statements();
        const std::string name = '"' + region_name(r) + '"';
        bool any = false;
        for (const auto& s : said.materials) {
            if (s.where != r) continue;
            any = true;
            const Material& m = s.what;
            std::string text = "conductivity " + words(m.conductivity.xx(), "W/(m K)");
            if (!m.conductivity.isotropic()) text += " along x, " + words(m.conductivity.yy(), "W/(m K)") + " along y";
            if (m.conductivity.full_tensor()) text += ", xy " + words(m.conductivity.xy(), "W/(m K)");
            if (m.density.given()) text += ", density " + words(m.density, "kg/m3");
            if (m.specific_heat.given()) text += ", specific heat " + words(m.specific_heat, "J/(kg K)");
            if (m.latent.heat.given())
                text += fmt::format(", latent heat {} from {} to {}", words(m.latent.heat, "J/kg"),
                                    words(m.latent.solidus, degree()), words(m.latent.liquidus, degree()));
            line("in", name, text);
        }
        if (!any) line("in", name, "no material yet");
        for (const auto& s : said.generations)
            if (s.where == r)
                line("in", name,
                     "generation " + (s.what.total.given() ? words(s.what.total, "W in all of it")
                                                           : words(s.what.per_volume, "W/m3")));
        for (const auto& s : said.side_films)
            if (s.where == r)
                line("in", name,
                     fmt::format("side film {} to {}, {}", words(s.what.coefficient, "W/(m2 K)"),
                                 words(s.what.fluid, degree()),
                                 s.what.thickness.given()
                                     ? fmt::format("thickness {}, {} wet {}", words(s.what.thickness, "m"),
                                                   s.what.wet_sides, s.what.wet_sides == 1 ? "side" : "sides")
                                     : "perimeter " + words(s.what.perimeter, "m")));
    }

    void face(Id f) {
        const Statements& said = body_.statements();
        if (body_.mesh().faces[as_size(f)].sides.empty()) return;
        const std::string name = '"' + body_.mesh().faces[as_size(f)].name + '"';
        bool any = false;
        const auto say = [&](const std::string& text) {
            line("on", name, text);
            any = true;
        };
        for (const auto& s : said.fixed)
            if (s.where == f) say("held at " + words(s.what.temperature, degree()));
        for (const auto& s : said.films)
            if (s.where == f)
                say(fmt::format("film {} to {}", words(s.what.coefficient, "W/(m2 K)"), words(s.what.fluid, degree())));
        for (const auto& s : said.radiations)
            if (s.where == f)
                say(fmt::format("radiation, emissivity {}, to {}", words(s.what.emissivity, ""),
                                words(s.what.surroundings, degree())));
        for (const auto& s : said.fluxes)
            if (s.where == f)
                say(s.what.into.given() ? "flux into the body " + words(s.what.into, "W/m2")
                                        : "flux out of the body " + words(s.what.out_of, "W/m2"));
        if (!any) say("nothing said: adiabatic, unless another face says more of its edges");
    }

    const Body& body_;
    ValueOf value_of_;
    std::string out_;
};

} // namespace detail

TEPOR_INLINE std::string to_text(const Body& body) {
    std::string missing;
    try {
        (void)body.model();
    } catch (const Error& error) {
        missing = error.what();
    }
    const auto value_of = [&](const Parameter& p) { return missing.empty() ? body.value(p) : p.value(); };
    std::string out = detail::BodyWriter(body, value_of).write();
    if (!missing.empty()) out += "  not ready to be solved: " + missing + '\n';
    return out;
}

TEPOR_INLINE std::string report(const Body& body, const Field& field, const std::vector<Quantity>& quantities) {
    if (&body.mesh() != &field.mesh())
        throw Error(ErrorCode::bad_value, "report",
                    "report: the field belongs to another mesh than the body; give the body it was solved for");
    std::string out = detail::BodyWriter(body, [&](const Parameter& p) { return field.value(p); }).write();
    out += to_text(field);
    if (!quantities.empty()) {
        const bool kelvin = field.model().scale == TemperatureScale::kelvin;
        detail::TextTable table({"quantity", "value", "unit"});
        for (const Quantity& q : quantities)
            table.row({q.label(), detail::significant(field[q]), q.is_temperature() && kelvin ? "K" : q.unit()});
        out += "Quantities\n" + table.text();
    }
    return out + cautions(field);
}

} // namespace tepor
