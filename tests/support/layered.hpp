#pragma once
// An independent solution of steady layered walls, pipes and balls: two nested integrals by fine composite Gauss rules.

#include <array>
#include <cmath>
#include <cstddef>
#include <functional>
#include <limits>
#include <vector>

namespace tepor::test {

/// Five-point Gauss rule on `panels` equal pieces of [a, b].
template <class F>
double integrate(double a, double b, F f, int panels = 20) {
    static constexpr std::array<double, 5> place{-0.90617984593866399, -0.53846931010568309, 0.0, 0.53846931010568309,
                                                 0.90617984593866399};
    static constexpr std::array<double, 5> weight{0.23692688505618909, 0.47862867049936647, 0.56888888888888889,
                                                  0.47862867049936647, 0.23692688505618909};
    double sum = 0.0;
    const double h = (b - a) / panels;
    for (int p = 0; p < panels; ++p)
        for (std::size_t i = 0; i < 5; ++i) sum += 0.5 * h * weight[i] * f(a + h * (p + 0.5 + 0.5 * place[i]));
    return sum;
}

/// One layer: where it ends, what it is made of, and the conductance of the joint to the next one (infinite: perfect).
struct LayerCase {
    double end = 0.0;
    std::function<double(double)> k;
    std::function<double(double)> f; ///< generation per volume
    double joint = std::numeric_limits<double>::infinity();
};

/// Steady heat flow through layers from r = start on, measure factor r^n, film at both ends (a film of infinite coefficient holds
/// the temperature; at a solid centre the inner one is not there). The heat flow at the start is the one unknown.
class LayeredCase {
  public:
    LayeredCase(double start, int n, double factor, std::vector<LayerCase> layers, double inner_film,
                double inner_fluid, double outer_film, double outer_fluid)
        : start_(start), n_(n), factor_(factor), layers_(std::move(layers)), inner_film_(inner_film),
          inner_fluid_(inner_fluid), outer_film_(outer_film), outer_fluid_(outer_fluid) {
        const double end = layers_.back().end;
        if (centre()) {
            // no flow at the centre: the outer film tells its temperature
            flow_ = 0.0;
            inner_fluid_ = 0.0;
            const double q = generated(end);
            inner_fluid_ = outer_fluid_ + q / (outer_film_ * area(end)) - course(end, 0.0);
            return;
        }
        // outer film: flow(end) = h A (T(end) - fluid), affine in the flow at the start
        const auto mismatch = [&](double flow) {
            return course(end, flow) - outer_fluid_ - (flow + generated(end)) / (outer_film_ * area(end));
        };
        const double at_zero = mismatch(0.0);
        flow_ = -at_zero / (mismatch(1.0) - at_zero);
    }

    /// Temperature at r; at a joint that of the layer that ends there.
    [[nodiscard]] double at(double r) const { return course(r, flow_); }
    /// Heat passing outwards at r [W].
    [[nodiscard]] double flow(double r) const { return flow_ + generated(r); }
    [[nodiscard]] double area(double r) const { return factor_ * std::pow(r, n_); }

  private:
    [[nodiscard]] bool centre() const { return n_ > 0 && start_ == 0.0; }

    /// Heat generated between the start and r.
    [[nodiscard]] double generated(double r) const {
        double sum = 0.0;
        double from = start_;
        for (const LayerCase& layer : layers_) {
            const double to = r < layer.end ? r : layer.end;
            sum += integrate(from, to, [&](double s) { return factor_ * std::pow(s, n_) * layer.f(s); });
            from = layer.end;
            if (r <= layer.end) break;
        }
        return sum;
    }

    [[nodiscard]] double course(double r, double flow) const {
        double T = inner_fluid_;
        if (!centre()) T -= flow / (inner_film_ * area(start_));
        double from = start_;
        double before = 0.0; // generated up to `from`
        for (const LayerCase& layer : layers_) {
            const double to = r < layer.end ? r : layer.end;
            const auto heat = [&](double s) { return factor_ * std::pow(s, n_) * layer.f(s); };
            if (!(to > from)) break; // nothing of this layer, and at a centre no area to divide by
            T -= integrate(from, to, [&](double s) {
                return (flow + before + integrate(from, s, heat)) / (layer.k(s) * area(s));
            });
            before += integrate(from, to, heat);
            if (r <= layer.end) break;
            T -= (flow + before) / (layer.joint * area(layer.end));
            from = layer.end;
        }
        return T;
    }

    double start_;
    int n_;
    double factor_;
    std::vector<LayerCase> layers_;
    double inner_film_, inner_fluid_, outer_film_, outer_fluid_;
    double flow_ = 0.0;
};

} // namespace tepor::test
