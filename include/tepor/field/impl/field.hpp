#pragma once
// Reading a field.

#include <tepor/base/text.hpp>
#include <tepor/field/field.hpp>
#include <tepor/field/impl/inner_place.hpp>

namespace tepor {

TEPOR_INLINE Field::Field() = default;
TEPOR_INLINE Field::Field(const Field&) = default;
TEPOR_INLINE Field::Field(Field&&) noexcept = default;
TEPOR_INLINE Field& Field::operator=(const Field&) = default;
TEPOR_INLINE Field& Field::operator=(Field&&) noexcept = default;
TEPOR_INLINE Field::~Field() = default;

TEPOR_INLINE Field::Field(std::shared_ptr<const Model> model, Values values, std::vector<double> temperature,
                          std::vector<double> reaction, double time)
    : model_(std::move(model)), values_(std::move(values)), temperature_(std::move(temperature)),
      reaction_(std::move(reaction)), time_(time) {}

TEPOR_INLINE void Field::begin(std::shared_ptr<const Model> model, const Values& values, double time) {
    model_ = std::move(model);
    values_ = values;
    storage_.clear();
    passes_.clear();
    time_ = time;
}

TEPOR_INLINE double Field::operator[](const Quantity& quantity) const {
    Workspace work = model_->kernels->workspace();
    const Functional functional = compile(*model_, values_, quantity);
    return evaluate(functional, *model_, values_, work, temperature_.data(), reaction_.data(), {time_, time_, 1.0});
}

TEPOR_INLINE Id Field::region_id(std::string_view name) const {
    if (name.empty()) return -1;
    const Index r = mesh().find_region(name);
    if (r < 0)
        throw Error(ErrorCode::bad_name, std::string(name),
                    detail::text("there is no region \"", name, "\"; the regions are ",
                                 detail::quoted_list(mesh().region_names)));
    return detail::as_id(r);
}

TEPOR_INLINE double Field::at(Point place, std::string_view region) const {
    const ModelPlace found = locate(*model_, values_, place, region_id(region));
    if (model_->kernels->exact) {
        Workspace work = model_->kernels->workspace();
        return detail::inner_place(*model_, values_, work, temperature_.data(), found, {time_, time_, 1.0}).temperature;
    }
    double shape[detail::max_cell_nodes];
    (void)shapes_at(*model_, values_, found, shape, nullptr, nullptr);
    double sum = 0.0;
    for (int i = 0; i < model_->kernels->nodes; ++i)
        sum += shape[i] * temperature_[detail::as_size(model_->cell(found.cell)[i])];
    return sum;
}

TEPOR_INLINE Point Field::heat_flux(Point place, std::string_view region) const {
    return flux_at(locate(*model_, values_, place, region_id(region)));
}

TEPOR_INLINE Point Field::cell_heat_flux(Index cell) const {
    ModelPlace middle;
    middle.cell = model_->model_cell(cell);
    const bool triangle = mesh().shape == CellShape::triangle;
    middle.xi[0] = triangle ? 1.0 / 3.0 : 0.5;
    middle.xi[1] = mesh().dim == 1 ? 0.0 : middle.xi[0];
    return flux_at(middle);
}

TEPOR_INLINE Point Field::flux_at(const ModelPlace& found) const {
    if (model_->kernels->exact) {
        Workspace work = model_->kernels->workspace();
        const double flow =
            detail::inner_place(*model_, values_, work, temperature_.data(), found, {time_, time_, 1.0}).flow;
        double shape[detail::max_cell_nodes];
        const double r = shapes_at(*model_, values_, found, shape, nullptr, nullptr).x;
        double area = mesh().frame.factor(1);
        for (int power = 0; power < mesh().frame.power(); ++power) area *= r;
        return {area > 0.0 ? flow / area : 0.0, 0.0};
    }
    double shape[detail::max_cell_nodes];
    double gx[detail::max_cell_nodes];
    double gy[detail::max_cell_nodes];
    const Point p = shapes_at(*model_, values_, found, shape, gx, gy);
    double T = 0.0;
    Point slope;
    for (int i = 0; i < model_->kernels->nodes; ++i) {
        const double t = temperature_[detail::as_size(model_->cell(found.cell)[i])];
        T += shape[i] * t;
        slope = slope + t * Point{gx[i], gy[i]};
    }
    const RegionModel& in = model_->regions[detail::as_size(model_->region_of_cell(found.cell))];
    double k[3] = {0.0, 0.0, 0.0};
    for (int m = 0; m < in.conductivities; ++m)
        if (const Fault fault = in.k[m].evaluate(values_.slots.data(), {time_, time_, 1.0},
                                                 {1, &T, nullptr, &p.x, &p.y}, &k[m], nullptr))
            raise(fault);
    if (in.conductivities == 1) k[1] = k[0];
    return {-(k[0] * slope.x + k[2] * slope.y), -(k[1] * slope.y + k[2] * slope.x)};
}

TEPOR_INLINE Spotted Field::hottest() const {
    const Extreme e = extreme_in(*model_, values_, temperature_.data(), -1, 1.0);
    return {e.value, e.place};
}
TEPOR_INLINE Spotted Field::coldest() const {
    const Extreme e = extreme_in(*model_, values_, temperature_.data(), -1, -1.0);
    return {e.value, e.place};
}
TEPOR_INLINE Spotted Field::hottest(std::string_view region) const {
    const Extreme e = extreme_in(*model_, values_, temperature_.data(), region_id(region), 1.0);
    return {e.value, e.place};
}
TEPOR_INLINE Spotted Field::coldest(std::string_view region) const {
    const Extreme e = extreme_in(*model_, values_, temperature_.data(), region_id(region), -1.0);
    return {e.value, e.place};
}

TEPOR_INLINE std::vector<double> Field::node_temperatures() const {
    std::vector<double> out(mesh().nodes.size(), 0.0);
    for (std::size_t n = 0; n < out.size(); ++n)
        if (model_->unknown_of[n] >= 0) out[n] = temperature_[detail::as_size(model_->unknown_of[n])];
    return out;
}

TEPOR_INLINE std::vector<double> Field::cell_temperatures() const {
    const auto nn = detail::as_size(model_->kernels->nodes);
    std::vector<double> out(model_->cell_unknowns.size());
    for (std::size_t c = 0; c < model_->user_cell.size(); ++c)
        for (std::size_t i = 0; i < nn; ++i)
            out[detail::as_size(model_->user_cell[c]) * nn + i] =
                temperature_[detail::as_size(model_->cell_unknowns[c * nn + i])];
    return out;
}

TEPOR_INLINE std::vector<Point> Field::node_places() const {
    std::vector<Point> out = mesh().nodes;
    if (model_->moving)
        for (std::size_t u = 0; u < model_->node_of.size(); ++u)
            out[detail::as_size(model_->node_of[u])] = values_.places[u];
    return out;
}

TEPOR_INLINE double Field::value(const Parameter& parameter) const {
    const Index slot = model_->slot_of(parameter);
    return slot < 0 ? parameter.value() : values_.slots[detail::as_size(slot)];
}

} // namespace tepor
