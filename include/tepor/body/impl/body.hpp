#pragma once
// Statements at the door: names looked up, sense checked, kept.

#include <algorithm>
#include <cmath>
#include <tepor/base/text.hpp>
#include <tepor/body/body.hpp>

namespace tepor {

namespace detail {

/// Adds a statement; the same kind twice in one place is refused unless meant.
template <class Kind>
void say(std::vector<Said<Kind>>& list, Id where, Kind what, bool also, const char* kind, std::string_view place,
         const char* again) {
    if (!also)
        for (const Said<Kind>& s : list)
            if (s.where == where)
                throw Error(ErrorCode::contradiction, std::string(place),
                            text("\"", place, "\" has a ", kind,
                                 " already; to change its value use a Parameter and set(), to change it altogether use "
                                 "replace()",
                                 again));
    list.push_back({where, std::move(what), also});
}

template <class Kind>
void take_back(std::vector<Said<Kind>>& list, Id where, const char* kind, std::string_view place) {
    const auto gone =
        std::remove_if(list.begin(), list.end(), [where](const Said<Kind>& s) { return s.where == where; });
    if (gone == list.end())
        throw Error(ErrorCode::missing, std::string(place),
                    text("replace: \"", place, "\" has no ", kind, " yet; say it first with in() or on()"));
    list.erase(gone, list.end());
}

inline constexpr const char* or_also_on = ", to add a second one on purpose use also_on()";
inline constexpr const char* or_also_in = ", to add a second one on purpose use also_in()";

inline void check(const Film& film, std::string_view face) {
    if (!film.coefficient.given() || !film.fluid.given())
        throw Error(ErrorCode::missing, std::string(face),
                    text("Film on \"", face, "\": both .coefficient and .fluid are needed"));
}
inline void check(const Radiation& radiation, std::string_view face) {
    if (!radiation.emissivity.given() || !radiation.surroundings.given())
        throw Error(ErrorCode::missing, std::string(face),
                    text("Radiation on \"", face, "\": both .emissivity and .surroundings are needed"));
    if (radiation.emissivity.is_number() && radiation.emissivity.number() > 1.0 &&
        radiation.emissivity.number() <= 100.0)
        throw Error(ErrorCode::bad_unit, std::string(face),
                    text("Radiation on \"", face, "\": emissivity = ", radiation.emissivity.number(),
                         " looks like percent, expected a number from 0 to 1"));
}
inline void check(const Flux& flux, std::string_view face) {
    if (flux.into.given() == flux.out_of.given())
        throw Error(ErrorCode::missing, std::string(face),
                    text("Flux on \"", face, "\": say either .into or .out_of the body, in W/m2"));
}
inline void check(const FixedTemperature& fixed, std::string_view face) {
    if (!fixed.temperature.given())
        throw Error(ErrorCode::missing, std::string(face),
                    text("FixedTemperature on \"", face, "\": .temperature is needed"));
}
inline void check(const Generation& generation, std::string_view region) {
    if (generation.per_volume.given() == generation.total.given())
        throw Error(ErrorCode::missing, std::string(region),
                    text("Generation in \"", region, "\": say either .per_volume [W/m3] or .total [W]"));
}
inline void check(const SideFilm& film, std::string_view region) {
    if (!film.coefficient.given() || !film.fluid.given())
        throw Error(ErrorCode::missing, std::string(region),
                    text("SideFilm in \"", region, "\": both .coefficient and .fluid are needed"));
}
inline void check(const Contact& contact, std::string_view region) {
    if (contact.conductance.given() == contact.resistance.given())
        throw Error(ErrorCode::missing, std::string(region),
                    text("Contact at \"", region, "\": say either .conductance [W/(m2 K)] or .resistance [m2 K/W]"));
}

} // namespace detail

TEPOR_INLINE Body::Body(std::shared_ptr<const MeshData> mesh, std::shared_ptr<const CellKernels> kernels,
                        const detail::CellKind& kind, BodyOptions options)
    : Body(std::move(mesh), std::move(kernels), kind, &make_plane_solver, options) {}

TEPOR_INLINE Body::Body(std::shared_ptr<const MeshData> mesh, std::shared_ptr<const CellKernels> kernels,
                        const detail::CellKind& kind, PlaneSolverMaker maker, BodyOptions options)
    : mesh_(std::move(mesh)), kernels_(std::move(kernels)), kind_(&kind), make_plane_solver_(maker), options_(options),
      cache_(std::make_shared<Cache>()) {}

TEPOR_INLINE Body::Body(MeshData&& mesh, const detail::CellKind& kind, PlaneSolverMaker maker, BodyOptions options)
    : Body(std::make_shared<const MeshData>(std::move(mesh)), nullptr, kind, maker, options) {}

TEPOR_INLINE Body::Body(const Body&) = default;
TEPOR_INLINE Body::Body(Body&&) noexcept = default;
TEPOR_INLINE Body& Body::operator=(const Body&) = default;
TEPOR_INLINE Body& Body::operator=(Body&&) noexcept = default;
TEPOR_INLINE Body::~Body() = default;

TEPOR_INLINE Body Body::on_mesh(std::shared_ptr<const MeshData> mesh) const {
    Body other(std::move(mesh), kernels_, *kind_, make_plane_solver_, options_);
    other.adopt(*this);
    return other;
}

TEPOR_INLINE Id Body::region(std::string_view name) const {
    const Index found = mesh_->find_region(name);
    if (found < 0)
        throw Error(ErrorCode::bad_name, std::string(name),
                    detail::text("there is no region \"", name, "\"; the regions are ",
                                 detail::quoted_list(mesh_->region_names)));
    return detail::as_id(found);
}

TEPOR_INLINE Id Body::face(std::string_view name) const {
    const Index found = mesh_->find_face(name);
    if (found < 0 || mesh_->faces[detail::as_size(found)].sides.empty()) {
        std::vector<std::string> names;
        for (const MeshFace& f : mesh_->faces)
            if (!f.sides.empty()) names.push_back(f.name);
        throw Error(ErrorCode::bad_name, std::string(name),
                    detail::text("there is no face \"", name, "\"; the faces are ", detail::quoted_list(names)));
    }
    return detail::as_id(found);
}

TEPOR_INLINE void Body::changed() {
    cache_ = std::make_shared<Cache>();
    values_.reset();
}

TEPOR_INLINE Body& Body::in(std::string_view name, Material material) {
    detail::say(said_.materials, region(name), std::move(material), false, "Material", name, "");
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::in(std::string_view name, Generation what) {
    const Id where = region(name);
    detail::check(what, name);
    detail::say(said_.generations, where, std::move(what), false, "Generation", name, detail::or_also_in);
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::also_in(std::string_view name, Generation what) {
    const Id where = region(name);
    detail::check(what, name);
    detail::say(said_.generations, where, std::move(what), true, "Generation", name, "");
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::in(std::string_view name, SideFilm what) {
    const Id where = region(name);
    detail::check(what, name);
    detail::say(said_.side_films, where, std::move(what), false, "SideFilm", name, detail::or_also_in);
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::also_in(std::string_view name, SideFilm what) {
    const Id where = region(name);
    detail::check(what, name);
    detail::say(said_.side_films, where, std::move(what), true, "SideFilm", name, "");
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::on(std::string_view name, Film what) {
    const Id where = face(name);
    detail::check(what, name);
    detail::say(said_.films, where, std::move(what), false, "Film", name, detail::or_also_on);
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::also_on(std::string_view name, Film what) {
    const Id where = face(name);
    detail::check(what, name);
    detail::say(said_.films, where, std::move(what), true, "Film", name, "");
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::on(std::string_view name, Radiation what) {
    const Id where = face(name);
    detail::check(what, name);
    detail::say(said_.radiations, where, std::move(what), false, "Radiation", name, detail::or_also_on);
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::also_on(std::string_view name, Radiation what) {
    const Id where = face(name);
    detail::check(what, name);
    detail::say(said_.radiations, where, std::move(what), true, "Radiation", name, "");
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::on(std::string_view name, Flux what) {
    const Id where = face(name);
    detail::check(what, name);
    detail::say(said_.fluxes, where, std::move(what), false, "Flux", name, detail::or_also_on);
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::also_on(std::string_view name, Flux what) {
    const Id where = face(name);
    detail::check(what, name);
    detail::say(said_.fluxes, where, std::move(what), true, "Flux", name, "");
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::on(std::string_view name, FixedTemperature what) {
    const Id where = face(name);
    detail::check(what, name);
    detail::say(said_.fixed, where, std::move(what), false, "FixedTemperature", name, "");
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::replace(std::string_view name, Material what) {
    detail::take_back(said_.materials, region(name), "Material", name);
    return in(name, std::move(what));
}

TEPOR_INLINE Body& Body::replace(std::string_view name, Generation what) {
    detail::take_back(said_.generations, region(name), "Generation", name);
    return in(name, std::move(what));
}

TEPOR_INLINE Body& Body::replace(std::string_view name, SideFilm what) {
    detail::take_back(said_.side_films, region(name), "SideFilm", name);
    return in(name, std::move(what));
}

TEPOR_INLINE Body& Body::replace(std::string_view name, Film what) {
    detail::take_back(said_.films, face(name), "Film", name);
    return on(name, std::move(what));
}

TEPOR_INLINE Body& Body::replace(std::string_view name, Radiation what) {
    detail::take_back(said_.radiations, face(name), "Radiation", name);
    return on(name, std::move(what));
}

TEPOR_INLINE Body& Body::replace(std::string_view name, Flux what) {
    detail::take_back(said_.fluxes, face(name), "Flux", name);
    return on(name, std::move(what));
}

TEPOR_INLINE Body& Body::replace(std::string_view name, FixedTemperature what) {
    detail::take_back(said_.fixed, face(name), "FixedTemperature", name);
    return on(name, std::move(what));
}

TEPOR_INLINE Body& Body::between(std::string_view name, std::string_view other, Contact contact) {
    const Id first = region(name);
    const Id second = region(other);
    detail::check(contact, name);
    if (first == second)
        throw Error(ErrorCode::bad_contact, std::string(name),
                    detail::text("Contact between \"", name, "\" and itself; name two different regions"));
    for (const detail::SaidContact& s : said_.contacts)
        if ((s.first == first && s.second == second) || (s.first == second && s.second == first))
            throw Error(ErrorCode::contradiction, std::string(name),
                        detail::text("there is a Contact between \"", name, "\" and \"", other,
                                     "\" already; to change its value use a Parameter and set(), or replace()"));
    said_.contacts.push_back({first, second, std::move(contact)});
    changed();
    return *this;
}

TEPOR_INLINE Body& Body::replace(std::string_view name, std::string_view other, Contact contact) {
    const Id first = region(name);
    const Id second = region(other);
    const auto same = [&](const detail::SaidContact& s) {
        return (s.first == first && s.second == second) || (s.first == second && s.second == first);
    };
    const auto gone = std::remove_if(said_.contacts.begin(), said_.contacts.end(), same);
    if (gone == said_.contacts.end())
        throw Error(ErrorCode::missing, std::string(name),
                    detail::text("replace: there is no Contact between \"", name, "\" and \"", other,
                                 "\" yet; say between() first"));
    said_.contacts.erase(gone, said_.contacts.end());
    return between(name, other, std::move(contact));
}

TEPOR_INLINE Body& Body::at(Point place, LocalHeat heat) {
    if (!heat.total.given())
        throw Error(ErrorCode::missing, "LocalHeat",
                    detail::text("LocalHeat at (", place.x, ", ", place.y, "): .total [W] is needed"));
    said_.locals.push_back({place, std::move(heat)});
    changed();
    return *this;
}

TEPOR_INLINE const std::shared_ptr<const Model>& Body::model() const {
    const std::lock_guard<std::mutex> lock(cache_->guard);
    if (!cache_->model)
        cache_->model =
            compile(mesh_, kernels_, *kind_, make_plane_solver_, said_, options_.scale, options_.lumped_faces);
    return cache_->model;
}

TEPOR_INLINE const Values& Body::values() const {
    const std::shared_ptr<const Model>& compiled = model();
    const std::lock_guard<std::mutex> lock(cache_->guard);
    if (!values_) {
        std::vector<double> slots = compiled->initial_slots();
        for (const Setting& s : settings_) {
            const Index slot = compiled->slot_of(s.parameter);
            if (slot >= 0) slots[detail::as_size(slot)] = s.value;
        }
        values_ = std::make_shared<const Values>(compiled->values_for(std::move(slots)));
    }
    return *values_;
}

TEPOR_INLINE Body& Body::set(const Parameter& parameter, double value) {
    const std::shared_ptr<const Model>& compiled = model();
    const Index slot = compiled->slot_of(parameter);
    if (slot < 0) {
        std::vector<std::string> names;
        for (const Parameter& p : compiled->parameters) names.push_back(p.name());
        throw Error(ErrorCode::unused, parameter.name(),
                    detail::text("set: no statement of this body uses the parameter \"", parameter.name(),
                                 "\"; its parameters are ", detail::quoted_list(names)));
    }
    compiled->check_slot(slot, value);
    bool known = false;
    for (Setting& s : settings_)
        if (s.parameter == parameter) {
            s.value = value;
            known = true;
        }
    if (!known) settings_.push_back({parameter, value});
    Values next = values();
    next.slots[detail::as_size(slot)] = value;
    if (compiled->roles[detail::as_size(slot)].place) compiled->update_geometry(next);
    values_ = std::make_shared<const Values>(std::move(next));
    return *this;
}

TEPOR_INLINE double Body::value(const Parameter& parameter) const {
    const Index slot = model()->slot_of(parameter);
    return slot < 0 ? parameter.value() : values().slots[detail::as_size(slot)];
}

TEPOR_INLINE void Body::adopt(const Body& other) {
    const auto move_over = [&](auto& to, const auto& from, const auto& names, auto find) {
        for (auto s : from) {
            s.where = find(names(s.where));
            to.push_back(s);
        }
    };
    const auto region_name = [&](Id r) -> const std::string& { return other.mesh_->region_names[detail::as_size(r)]; };
    const auto face_name = [&](Id f) -> const std::string& { return other.mesh_->faces[detail::as_size(f)].name; };
    const auto find_region = [&](const std::string& name) { return region(name); };
    const auto find_face = [&](const std::string& name) { return face(name); };
    move_over(said_.materials, other.said_.materials, region_name, find_region);
    move_over(said_.generations, other.said_.generations, region_name, find_region);
    move_over(said_.side_films, other.said_.side_films, region_name, find_region);
    move_over(said_.films, other.said_.films, face_name, find_face);
    move_over(said_.radiations, other.said_.radiations, face_name, find_face);
    move_over(said_.fluxes, other.said_.fluxes, face_name, find_face);
    move_over(said_.fixed, other.said_.fixed, face_name, find_face);
    for (detail::SaidContact s : other.said_.contacts) {
        s.first = find_region(region_name(s.first));
        s.second = find_region(region_name(s.second));
        said_.contacts.push_back(s);
    }
    said_.locals = other.said_.locals;
    settings_ = other.settings_;
    changed();
}

} // namespace tepor
