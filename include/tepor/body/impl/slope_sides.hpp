#pragma once
// Derivatives of the weak form by slots and places: what acts on faces and across contacts.

#include <tepor/body/impl/slope_corners.hpp>
#include <tepor/body/side_tangent.hpp>

namespace tepor::detail {

/// One block of sides with the weights at its nodes.
class SideSlopes : public CornerSlopes {
  public:
    using CornerSlopes::CornerSlopes;

  protected:
    void reserve_sides() {
        const auto entries = as_size(kernel_.side_points * W);
        for (std::vector<double>* v :
             {&side_l_, &side_p_, &side_value_, &side_outside_, &side_by_fluid_, &side_density_})
            v->assign(entries, 0.0);
        if (by_x_.size() < entries) {
            by_x_.assign(entries, 0.0);
            by_y_.assign(entries, 0.0);
        }
        if (kernel_.dim == 2) tangents();
    }

    /// The block in work_.sides is open, block.T the temperature; `l` holds the weights at its nodes.
    void face_block(const FaceModel& face, const SideList& sides, Index first, const double* l) {
        const SideBlock& block = work_.sides;
        const Points at{static_cast<Index>(kernel_.side_points) * W, block.point_T, nullptr, block.point_x,
                        block.point_y};
        start_sides(l);
        for (const FaceTerm& term : face.terms) {
            if (term.kind == FaceTerm::Kind::flux)
                flux(term, at);
            else
                exchange(term, at);
        }
        if (with_places_) move_sides(sides, first);
    }

    /// The same across a contact; block.T is the jump of the temperature, `l` that of the weights.
    void contact_block(const ContactModel& contact, Index first, const double* l) {
        const SideBlock& block = work_.sides;
        const double* TEPOR_RESTRICT w = block.weight;
        const Points at{static_cast<Index>(kernel_.side_points) * W, nullptr, nullptr, block.point_x, block.point_y};
        const auto n = as_size(at.count);
        start_sides(l);
        evaluate(contact.amount, at, side_value_.data());
        for (std::size_t i = 0; i < n; ++i) {
            const double v = side_value_[i];
            side_p_[i] = (contact.resistance ? -1.0 / (v * v) : 1.0) * w[i] * side_l_[i] * block.point_T[i];
            if (with_places_) side_density_[i] = (contact.resistance ? 1.0 / v : v) * block.point_T[i];
        }
        back(contact.amount, at, side_p_.data());
        if (with_places_) move_sides(contact.first, first);
    }

  private:
    void start_sides(const double* TEPOR_RESTRICT l) {
        const int m = kernel_.side_nodes;
        const double* TEPOR_RESTRICT w = work_.sides.weight;
        for (int q = 0; q < kernel_.side_points; ++q) {
            double* TEPOR_RESTRICT to = side_l_.data() + q * W;
            bool any = false;
            for (int c = 0; c < W; ++c) {
                to[c] = 0.0;
                any = any || w[q * W + c] != 0.0;
            }
            if (!any) continue; // the padding of shorter rules has no shape functions
            const double* shape = kernel_.side_shape_at(q, model_.lumped_faces);
            for (int i = 0; i < m; ++i)
                for (int c = 0; c < W; ++c) to[c] += shape[i] * l[i * W + c];
        }
        if (with_places_)
            for (std::size_t i = 0; i < as_size(kernel_.side_points * W); ++i)
                by_x_[i] = by_y_[i] = side_density_[i] = 0.0;
    }

    void flux(const FaceTerm& term, const Points& at) {
        const double* TEPOR_RESTRICT w = work_.sides.weight;
        const auto n = as_size(at.count);
        if (wants(term.amount) || with_places_) {
            for (std::size_t i = 0; i < n; ++i) side_p_[i] = term.sign * w[i] * side_l_[i];
            back(term.amount, at, side_p_.data());
        }
        if (!with_places_) return;
        evaluate(term.amount, at, side_value_.data());
        for (std::size_t i = 0; i < n; ++i) side_density_[i] += term.sign * side_value_[i];
    }

    /// Film: amount (T - outside). Radiation: amount sigma (T^4 - outside^4), absolute.
    void exchange(const FaceTerm& term, const Points& at) {
        if (!with_places_ && !wants(term.amount) && !wants(term.outside)) return;
        const double* TEPOR_RESTRICT w = work_.sides.weight;
        const auto n = as_size(at.count);
        const bool film = term.kind == FaceTerm::Kind::film;
        const double offset = model_.absolute_offset();
        evaluate(term.outside, at, side_outside_.data());
        const Points near{at.count, at.temperature, side_outside_.data(), at.x, at.y};
        evaluate(term.amount, near, side_value_.data());
        for (std::size_t i = 0; i < n; ++i) {
            const double t = at.temperature[i] + offset;
            const double s = side_outside_[i] + offset;
            const double per_amount = film ? t - s : stefan_boltzmann * (t * std::abs(t * t * t) - s * s * s * s);
            side_p_[i] = w[i] * side_l_[i] * per_amount;
            side_by_fluid_[i] = 0.0;
            if (with_places_) side_density_[i] += side_value_[i] * per_amount;
        }
        back(term.amount, near, side_p_.data(), side_by_fluid_.data());
        for (std::size_t i = 0; i < n; ++i) {
            const double s = side_outside_[i] + offset;
            side_by_fluid_[i] -= w[i] * side_l_[i] * side_value_[i] * (film ? 1.0 : 4.0 * stefan_boltzmann * s * s * s);
        }
        back(term.outside, at, side_by_fluid_.data());
    }

    /// Tangents of all sides at all points: per side number, point and node.
    void tangents() {
        const int m = kernel_.side_nodes;
        tangent_.assign(as_size(kernel_.sides * kernel_.side_points * m), 0.0);
        const bool lumped = model_.lumped_faces;
        const int count = lumped ? m : kernel_.side_points;
        for (int s = 0; s < kernel_.sides; ++s)
            for (int q = 0; q < count; ++q)
                side_tangent(kernel_, s, kernel_.side_shape_at(q, lumped),
                             tangent_.data() + (s * kernel_.side_points + q) * m);
    }

    /// The length grows by t . dt / |t|^2, the radius counts, coefficients are met elsewhere.
    void move_sides(const SideList& sides, Index first) {
        const SideBlock& block = work_.sides;
        const int m = kernel_.side_nodes;
        for (int b = 0; b < block.count; ++b) {
            const Id* ids = sides.unknowns.data() + (first + b) * m;
            const int side = sides.side[as_size(first + b)].side;
            for (int q = 0; q < kernel_.side_points; ++q) {
                const auto i = as_size(q * W + b);
                if (block.weight[i] == 0.0) continue;
                const double integrand = block.weight[i] * side_density_[i] * side_l_[i];
                const double* shape = kernel_.side_shape_at(q, model_.lumped_faces);
                const double grown = over_radius(integrand, block.point_x[i]) + by_x_[i];
                if (kernel_.dim == 1) {
                    give_place(ids[0], grown, 0.0, b);
                    continue;
                }
                const double* slope = tangent_.data() + (side * kernel_.side_points + q) * m;
                double tx = 0.0;
                double ty = 0.0;
                for (int j = 0; j < m; ++j) {
                    tx += slope[j] * block.x[j * W + b];
                    ty += slope[j] * block.y[j * W + b];
                }
                const double per_length = integrand / (tx * tx + ty * ty);
                for (int j = 0; j < m; ++j)
                    give_place(ids[j], per_length * slope[j] * tx + shape[j] * grown,
                               per_length * slope[j] * ty + shape[j] * by_y_[i], b);
            }
        }
    }

    std::vector<double> side_l_, side_p_, side_value_, side_outside_, side_by_fluid_, side_density_, tangent_;
};

} // namespace tepor::detail
