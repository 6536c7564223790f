#pragma once
// Statements become terms: names and units checked, parameters turned into slots.

#include <algorithm>
#include <tepor/base/text.hpp>
#include <tepor/body/impl/split.hpp> // SideKey, KeyedSide
#include <tepor/body/model.hpp>

namespace tepor::detail {

class TermCompiler {
  public:
    TermCompiler(Model& model, const Statements& said) : model_(model), mesh_(*model.mesh), said_(said) {}

    void regions() {
        model_.regions.resize(mesh_.region_names.size());
        for (std::size_t r = 0; r < model_.regions.size(); ++r) model_.regions[r].name = mesh_.region_names[r];
        for (const auto& [where, material, also] : said_.materials)
            region_material(model_.regions[as_size(where)], material);
        for (const RegionModel& region : model_.regions)
            if (region.conductivities == 0)
                throw Error(ErrorCode::missing, region.name,
                            text("region \"", region.name, "\" has no Material; say body.in(\"", region.name,
                                 "\", Material{.conductivity = ...})"));
        for (const auto& [where, generation, also] : said_.generations)
            region_generation(model_.regions[as_size(where)], generation);
        for (const auto& [where, film, also] : said_.side_films) region_side_film(model_.regions[as_size(where)], film);
    }

    void faces() {
        model_.faces.resize(mesh_.faces.size());
        for (std::size_t f = 0; f < model_.faces.size(); ++f) model_.faces[f].name = mesh_.faces[f].name;
        for (const auto& [where, film, also] : said_.films) {
            FaceModel& face = model_.faces[as_size(where)];
            FaceTerm term;
            term.kind = FaceTerm::Kind::film;
            const bool by_law = by_temperature(film.coefficient);
            term.amount =
                make(film.coefficient, "film coefficient on", face.name, Range::not_negative, &SlotRole::matrix);
            bool radiates = false;
            for (const auto& radiation : said_.radiations) radiates = radiates || radiation.where == where;
            if (radiates) refuse_low(film.fluid, "fluid temperature on \"" + face.name + '"', face.name);
            term.outside = make(film.fluid, "fluid temperature on", face.name, outside(film.fluid, radiates),
                                by_law ? &SlotRole::matrix : &SlotRole::load);
            no_temperature(term.outside);
            face.terms.push_back(std::move(term));
        }
        for (const auto& [where, radiation, also] : said_.radiations) {
            FaceModel& face = model_.faces[as_size(where)];
            FaceTerm term;
            term.kind = FaceTerm::Kind::radiation;
            term.amount = make(radiation.emissivity, "emissivity on", face.name, Range::fraction, &SlotRole::matrix);
            refuse_low(radiation.surroundings, "surroundings of \"" + face.name + '"', face.name);
            term.outside = make(radiation.surroundings, "surroundings of", face.name,
                                outside(radiation.surroundings, true), &SlotRole::matrix);
            no_temperature(term.outside);
            face.terms.push_back(std::move(term));
        }
        for (const auto& [where, flux, also] : said_.fluxes) {
            FaceModel& face = model_.faces[as_size(where)];
            FaceTerm term;
            term.kind = FaceTerm::Kind::flux;
            term.sign = flux.into.given() ? -1.0 : 1.0;
            const Value& value = flux.into.given() ? flux.into : flux.out_of;
            term.amount = make(value, "flux through", face.name, Range::any, &SlotRole::load);
            face.terms.push_back(std::move(term));
        }
        for (const auto& [where, fixed, also] : said_.fixed) {
            FaceModel& face = model_.faces[as_size(where)];
            face.fixed = make(fixed.temperature, "temperature of", face.name, temperature(), &SlotRole::prescribed);
            no_temperature(face.fixed);
        }
        overlaps();
    }

    /// Terms of the contacts, and the pairs of sides each of them joins.
    std::vector<std::vector<ContactPair>> contacts() {
        std::vector<std::vector<ContactPair>> pairs;
        for (const SaidContact& contact : said_.contacts) {
            const std::string& a = mesh_.region_names[as_size(contact.first)];
            const std::string& b = mesh_.region_names[as_size(contact.second)];
            ContactModel term;
            term.first_region = contact.first;
            term.second_region = contact.second;
            term.resistance = contact.what.resistance.given();
            const Value& value = term.resistance ? contact.what.resistance : contact.what.conductance;
            term.amount = make(value, term.resistance ? "contact resistance between" : "contact conductance between",
                               a + "\" and \"" + b, Range::positive, &SlotRole::matrix);
            no_temperature(term.amount);
            pairs.push_back(interface_between(mesh_, *model_.kernels, contact.first, contact.second));
            if (pairs.back().empty())
                throw Error(ErrorCode::bad_contact, a,
                            text("contact between \"", a, "\" and \"", b,
                                 "\": the two regions share no side; check the names or the drawing"));
            model_.contacts.push_back(std::move(term));
        }
        return pairs;
    }

    void layers() {
        const LayerStack& stack = mesh_.stack;
        const auto take = [this](const Number& n, const std::string& where, Range range) {
            if (!n.parameter()) return;
            model_.moving = true;
            (void)make(Value(n), "thickness of", where, range, &SlotRole::place);
        };
        for (std::size_t l = 0; l < stack.thickness.size(); ++l)
            take(stack.thickness[l], text("layer ", l + 1), Range::positive);
        take(stack.start, "start of the stack", Range::any);
    }

    void locals();

    void finish() {
        for (const RegionModel& r : model_.regions) {
            for (const Coefficient& k : r.k) nonlinear(k, true);
            for (const VolumeTerm& v : r.volume) {
                nonlinear(v.amount, false);
                timed(v.fluid);
                timed(v.extent);
            }
        }
        for (const FaceModel& f : model_.faces) {
            timed(f.fixed);
            for (const FaceTerm& t : f.terms) {
                nonlinear(t.amount, false);
                timed(t.outside);
                model_.nonlinear = model_.nonlinear || t.kind == FaceTerm::Kind::radiation;
            }
        }
        for (const ContactModel& c : model_.contacts) timed(c.amount);
        for (const LocalModel& l : model_.locals) timed(l.total);
    }

  private:
    [[nodiscard]] Range temperature() const {
        return model_.scale == TemperatureScale::celsius ? Range::celsius_temperature : Range::kelvin_temperature;
    }

    void timed(const Coefficient& c) {
        if (!c.depends_on_time()) return;
        model_.time_dependent = true;
        // laws of place may use the time, schedules and of_time do nothing else
        const bool law = c.value().kind() == Value::Kind::law;
        if (!law || (!c.value().law().uses().place && !c.value().law().uses().temperature)) model_.scheduled = true;
    }

    void nonlinear(const Coefficient& c, bool conducts) {
        timed(c);
        if (!c.depends_on_temperature()) return;
        model_.nonlinear = true;
        if (conducts) model_.slope = true;
    }

    static bool by_temperature(const Value& value) {
        return value.kind() == Value::Kind::table ||
               (value.kind() == Value::Kind::law && value.law().uses().temperature);
    }

    static void no_temperature(const Coefficient& c) {
        if (c.depends_on_temperature())
            throw Error(ErrorCode::not_supported, c.label(),
                        c.label() + " depends on the temperature of the body; use a number, a Parameter, a schedule, "
                                    "of_place, of_place_and_time or of_time");
    }

    /// What the fluid or surroundings may be; on a radiating face of a kelvin body low numbers must be said with kelvin().
    [[nodiscard]] Range outside(const Value& value, bool radiates) const {
        const bool watched = radiates && model_.scale == TemperatureScale::kelvin && !value.is_kelvin();
        return watched ? Range::kelvin_radiating : temperature();
    }

    void refuse_low(const Value& value, const std::string& label, const std::string& face) const {
        if (model_.scale == TemperatureScale::kelvin && (value.is_number() || value.is_parameter()) &&
            value.number() < 100.0 && !value.is_kelvin())
            throw Error(ErrorCode::bad_unit, face,
                        text(label, " = ", value.number(),
                             " K on a radiating face looks like degrees Celsius; write kelvin(", value.number(),
                             ") if it is meant"));
    }

    Id slot_for(const Parameter& parameter, bool SlotRole::*role) {
        Index slot = model_.slot_of(parameter);
        if (slot < 0) {
            for (const Parameter& other : model_.parameters)
                if (other.name() == parameter.name())
                    throw Error(ErrorCode::bad_name, parameter.name(),
                                text("two different parameters are named \"", parameter.name(),
                                     "\"; use one Parameter object in both places, or another name"));
            slot = static_cast<Index>(model_.parameters.size());
            model_.parameters.push_back(parameter);
            model_.roles.emplace_back();
            model_.uses.emplace_back();
        }
        model_.roles[as_size(slot)].*role = true;
        return as_id(slot);
    }

    Coefficient make(const Value& value, const char* what, const std::string& where, Range range,
                     bool SlotRole::*role) {
        std::string label = std::string(what) + " \"" + where + '"';
        std::vector<Id> slots;
        const auto door = [&](double v) {
            const Coefficient plain({}, {}, {}, range);
            if (!plain.allows(v))
                throw Error(ErrorCode::bad_value, where,
                            text(label, " = ", v, ", ", rule_of(range), "; check value and unit"));
        };
        switch (value.kind()) {
        case Value::Kind::none: break;
        case Value::Kind::number: door(value.number()); break;
        case Value::Kind::parameter:
            slots.push_back(slot_for(value.parameter(), role));
            model_.uses[as_size(slots.back())].push_back({label, range});
            door(value.number());
            break;
        case Value::Kind::table:
            for (const TablePoint& p : value.table().points()) {
                door(p.value.number());
                slots.push_back(p.value.parameter()
                                    ? slot_for(*p.value.parameter(), role == &SlotRole::load ? &SlotRole::matrix : role)
                                    : -1);
            }
            break;
        case Value::Kind::law: {
            const bool hot = value.law().uses().temperature && role == &SlotRole::load;
            for (const Parameter& p : value.law().parameters())
                slots.push_back(slot_for(p, hot ? &SlotRole::matrix : role));
            break;
        }
        case Value::Kind::schedule:
            for (const ScheduleEntry& e : value.schedule().entries()) door(e.value);
            break;
        }
        return Coefficient(value, std::move(slots), std::move(label), range);
    }

    void region_material(RegionModel& region, const Material& material) {
        const Conductivity& k = material.conductivity;
        if (!k.given())
            throw Error(
                ErrorCode::missing, region.name,
                text("material of \"", region.name, "\" has no conductivity; say Material{.conductivity = ...}"));
        region.conductivities = k.isotropic() ? 1 : (k.full_tensor() ? 3 : 2);
        if (region.conductivities > 1 && mesh_.dim == 1)
            throw Error(ErrorCode::wrong_dimension, region.name,
                        text("material of \"", region.name,
                             "\": a conductivity per direction needs a 2D body; give one number in 1D"));
        region.k[0] = make(k.xx(), "conductivity of", region.name, Range::positive, &SlotRole::matrix);
        if (region.conductivities > 1)
            region.k[1] = make(k.yy(), "conductivity along y of", region.name, Range::positive, &SlotRole::matrix);
        if (region.conductivities == 3) {
            region.k[2] = make(k.xy(), "conductivity xy of", region.name, Range::any, &SlotRole::matrix);
            if (k.xx().is_number() && k.yy().is_number() && k.xy().is_number() &&
                !(k.xx().number() * k.yy().number() > k.xy().number() * k.xy().number()))
                throw Error(ErrorCode::bad_value, region.name,
                            text("conductivity tensor of \"", region.name,
                                 "\" is not positive definite; expected xx yy > xy^2"));
        }
        region.density = make(material.density, "density of", region.name, Range::positive, &SlotRole::capacity);
        region.specific_heat =
            make(material.specific_heat, "specific heat of", region.name, Range::positive, &SlotRole::capacity);
        if (material.specific_heat.is_number() && material.specific_heat.number() < 50.0 &&
            model_.scale == TemperatureScale::celsius)
            throw Error(ErrorCode::bad_unit, region.name,
                        text("specific heat of \"", region.name, "\" = ", material.specific_heat.number(),
                             " J/(kg K) looks like kJ/(kg K); multiply by 1000"));
        region.latent =
            make(material.latent.heat, "latent heat of", region.name, Range::not_negative, &SlotRole::capacity);
        region.solidus = make(material.latent.solidus, "solidus of", region.name, temperature(), &SlotRole::capacity);
        region.liquidus =
            make(material.latent.liquidus, "liquidus of", region.name, temperature(), &SlotRole::capacity);
        if (region.latent.given() != region.solidus.given() || (region.latent.given() && !region.liquidus.given()))
            throw Error(ErrorCode::missing, region.name,
                        text("latent heat of \"", region.name,
                             "\" needs .heat, .solidus and .liquidus (the two may be equal)"));
        if (region.latent.given() && !(region.solidus.value().number() <= region.liquidus.value().number()))
            throw Error(ErrorCode::bad_value, region.name,
                        text("latent heat of \"", region.name, "\": the solidus lies above the liquidus; swap them"));
    }

    void region_generation(RegionModel& region, const Generation& generation) {
        VolumeTerm term;
        term.kind = generation.total.given() ? VolumeTerm::Kind::total : VolumeTerm::Kind::per_volume;
        const Value& value = generation.total.given() ? generation.total : generation.per_volume;
        term.amount = make(value, "generation in", region.name, Range::any, &SlotRole::load);
        region.volume.push_back(std::move(term));
    }

    void region_side_film(RegionModel& region, const SideFilm& film) {
        VolumeTerm term;
        term.kind = VolumeTerm::Kind::side_film;
        term.by_thickness = film.thickness.given();
        if (film.thickness.given() == film.perimeter.given())
            throw Error(ErrorCode::missing, region.name,
                        text("SideFilm in \"", region.name,
                             "\": give either .perimeter [m] of a bar or .thickness [m] of a plate"));
        if (film.perimeter.given() && (mesh_.dim != 1 || mesh_.frame.kind() != Frame::Kind::planar))
            throw Error(ErrorCode::wrong_dimension, region.name,
                        text("SideFilm in \"", region.name,
                             "\": .perimeter is for 1D planar bars; give .thickness of the plate"));
        if (film.wet_sides != 1 && film.wet_sides != 2)
            throw Error(ErrorCode::bad_value, region.name,
                        text("SideFilm in \"", region.name, "\": wet_sides = ", film.wet_sides, ", expected 1 or 2"));
        term.wet = term.by_thickness ? film.wet_sides : 1.0 / model_.frame_area;
        const bool by_law = by_temperature(film.coefficient);
        term.amount =
            make(film.coefficient, "side film coefficient in", region.name, Range::not_negative, &SlotRole::matrix);
        term.fluid = make(film.fluid, "side fluid temperature in", region.name, temperature(),
                          by_law ? &SlotRole::matrix : &SlotRole::load);
        no_temperature(term.fluid);
        term.extent = make(term.by_thickness ? film.thickness : film.perimeter,
                           term.by_thickness ? "plate thickness in" : "wetted perimeter in", region.name,
                           Range::positive, &SlotRole::matrix);
        no_temperature(term.extent);
        region.volume.push_back(std::move(term));
    }

    /// One kind of condition through two faces that share a side is a contradiction.
    void overlaps() {
        overlaps(faces_of(said_.films), "Film");
        overlaps(faces_of(said_.radiations), "Radiation");
        overlaps(faces_of(said_.fluxes), "Flux");
        overlaps(faces_of(said_.fixed), "FixedTemperature");
    }

    /// Faces with a condition that is not said to be one more on purpose.
    template <class Kind>
    static std::vector<Id> faces_of(const std::vector<Said<Kind>>& statements) {
        std::vector<Id> faces;
        for (const Said<Kind>& s : statements)
            if (!s.also && std::find(faces.begin(), faces.end(), s.where) == faces.end()) faces.push_back(s.where);
        return faces;
    }

    void overlaps(const std::vector<Id>& faces, const char* kind) const {
        if (faces.size() < 2) return;
        struct Marked {
            KeyedSide side;
            Id face;
        };
        std::vector<Marked> marked;
        for (const Id face : faces)
            for (const CellSide side : mesh_.faces[as_size(face)].sides)
                marked.push_back({{side_key(mesh_, *model_.kernels, side.cell, side.side), side}, face});
        std::sort(marked.begin(), marked.end(),
                  [](const Marked& a, const Marked& b) { return a.side.key < b.side.key; });
        for (std::size_t i = 1; i < marked.size(); ++i) {
            if (marked[i].side.key != marked[i - 1].side.key || marked[i].face == marked[i - 1].face) continue;
            const std::string& a = mesh_.faces[as_size(marked[i - 1].face)].name;
            const std::string& b = mesh_.faces[as_size(marked[i].face)].name;
            throw Error(ErrorCode::contradiction, b,
                        text("faces \"", a, "\" and \"", b, "\" share an edge (cell ", marked[i].side.side.cell,
                             ") and both have a ", kind, "; keep one, or say also_on when both are meant"),
                        marked[i].side.side.cell);
        }
    }

    Model& model_;
    const MeshData& mesh_;
    const Statements& said_;
};

} // namespace tepor::detail

#include <tepor/body/impl/compile_locals.hpp>
