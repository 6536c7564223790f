#pragma once
// A recorded march gone through for derivatives: values, matrices, slopes of the stored heat and factors of its legs.

#include <cmath>
#include <memory>
#include <tepor/base/text.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/march_states.hpp>

namespace tepor::detail {

/// One evaluation of the weak form in a leg.
struct LegPoint {
    std::vector<double> T;
    TimeSpan span;
    double weight = 0.0;
};

/// Slope of the heat content at a state, where it depends on temperature. A node that is held at a melting temperature without
/// width has its molten heat for an unknown in place of its temperature.
struct HeatSlope {
    SparseMatrix C;
    std::vector<unsigned char> held; ///< all unknowns; empty: none
    [[nodiscard]] bool holds(std::size_t u) const noexcept { return !held.empty() && held[u] != 0; }
};

class MarchReplay {
  public:
    explicit MarchReplay(const March& march)
        : model_(march.shared_model()), states_(march), tape_(states_.tape()), linear_(states_.linear()),
          all_(as_size(model_->unknowns)), work_(model_->kernels->workspace()) {
        prepare_matrix(*model_, K_);
        group_of_.reserve(tape_.values.size());
        for (std::size_t v = 0; v < tape_.values.size(); ++v)
            group_of_.push_back(v > 0 && same_matrices(v - 1, v) ? group_of_.back() : v);
    }
    MarchReplay(const MarchReplay&) = delete;
    MarchReplay& operator=(const MarchReplay&) = delete;
    virtual ~MarchReplay() = default;

    [[nodiscard]] const Values& values() const { return tape_.values[now_]; }

  protected:
    /// Called when a leg has other values than the one before; `matrices`: in a matrix, too.
    virtual void values_changed(bool matrices) { (void)matrices; }
    /// Called before matrices change.
    virtual void leave_group() {}

    /// Values of a leg: capacity and, where nothing depends on temperature or time, K.
    void use(std::size_t which) {
        if (ready_ && which == now_) return;
        const bool other = !ready_ || group_of_[which] != group_of_[now_];
        if (ready_ && other) leave_group();
        now_ = which;
        ready_ = true;
        if (other) {
            const std::unique_ptr<Storage> last = std::move(storage_);
            storage_ = std::make_unique<Storage>(model_, values(), states_.capacity(), work_);
            for (const LatentNode& node : storage_->latent()) refuse_moving_melting_point(node);
            if (last) refuse_driven_melting(*last);
            lanes_.clear();
            if (linear_) assemble_K(tape_.start.T.data(), {});
        }
        values_changed(other);
    }

    void assemble_K(const double* T, TimeSpan span) {
        Pass pass;
        pass.T = T;
        pass.time = span;
        pass.matrix = &K_;
        assemble(*model_, values(), work_, pass);
        if (pass.fault) raise(pass.fault);
    }

    /// Slope of the heat content at T; nothing to do where it is constant.
    void slope_of_heat(const std::vector<double>& T, HeatSlope& slope) {
        if (storage_->linear()) return;
        if (slope.C.lower.empty()) prepare_matrix(*model_, slope.C);
        std::fill(slope.C.lower.begin(), slope.C.lower.end(), 0.0);
        std::fill(slope.C.upper.begin(), slope.C.upper.end(), 0.0);
        nothing_.assign(all_, 0.0);
        if (const Fault fault = storage_->rise(values(), work_, T.data(), T.data(), nothing_.data(), &slope.C, nullptr))
            raise(fault);
        slope.held.assign(storage_->latent().empty() ? 0 : all_, 0);
        for (const LatentNode& node : storage_->latent()) {
            const auto u = as_size(node.unknown);
            const double width = node.liquidus - node.solidus;
            if (!(width > 0.0)) {
                if (T[u] == node.solidus && node.unknown < model_->free) slope.held[u] = 1;
            } else if (T[u] > node.solidus && T[u] < node.liquidus) {
                const auto diagonal = as_size(slope.C.start[u + 1] - 1);
                slope.C.lower[diagonal] += node.full / width;
                if (!slope.C.upper.empty()) slope.C.upper[diagonal] += node.full / width;
            }
        }
    }
    void through_heat(const HeatSlope& slope, const double* x, double* y) const {
        if (storage_->linear())
            storage_->multiply(x, y);
        else
            multiply(slope.C, model_->unknowns, x, y);
    }

    /// b := -(C + a K(at))^-1 b (or its transpose) on the free unknowns, 0 on the rest; held unknowns take -b themselves.
    void solve_leg(const LegPoint& at, double a, const HeatSlope& heat, std::vector<double>& b, bool transposed) {
        Engine& engine = factor(at, a, heat);
        double size = 0.0;
        for (std::size_t u = 0; u < all_; ++u) {
            b[u] = as_id(u) < model_->free ? -b[u] : 0.0;
            size += std::abs(b[u]);
            if (heat.holds(u)) b[u] *= holding_[u];
        }
        if (size == 0.0) return;
        const double limit = 1e-13 * size;
        if (!(transposed ? engine.solve_transposed(b.data(), limit) : engine.solve(b.data(), limit)))
            throw Error(ErrorCode::not_converged, "", "gradient: a linear solve stalled");
    }

    /// C + a K(at) factored; a linear run keeps its factors, those of the march itself included.
    Engine& factor(const LegPoint& at, double a, const HeatSlope& heat) {
        if (linear_) {
            for (const Lane& lane : lanes_)
                if (std::abs(lane.a - a) <= 1e-12 * a) return *lane.engine;
            if (Engine* lent = states_.factored(a, values())) {
                lanes_.push_back({a, lent, nullptr});
                return *lent;
            }
        } else {
            assemble_K(at.T.data(), at.span);
            lanes_.clear();
        }
        std::unique_ptr<Engine> engine = spare_ ? std::move(spare_) : std::make_unique<Engine>(model_);
        for (std::size_t e = 0; e < K_.lower.size(); ++e) engine->matrix.lower[e] = a * K_.lower[e];
        for (std::size_t e = 0; e < K_.upper.size(); ++e) engine->matrix.upper[e] = a * K_.upper[e];
        if (storage_->linear()) {
            storage_->add_to(engine->matrix);
        } else {
            for (std::size_t e = 0; e < heat.C.lower.size(); ++e) engine->matrix.lower[e] += heat.C.lower[e];
            for (std::size_t e = 0; e < heat.C.upper.size(); ++e) engine->matrix.upper[e] += heat.C.upper[e];
            hold(heat, engine->matrix);
        }
        if (!engine->factor(linear_ ? Purpose::many_solves : Purpose::one_solve))
            throw Error(ErrorCode::singular, "", "gradient: a step of the march has no inverse");
        constexpr std::size_t most = 8;
        if (lanes_.size() == most) lanes_.erase(lanes_.begin());
        Engine* raw = engine.get();
        if (linear_)
            lanes_.push_back({a, raw, std::move(engine)});
        else
            spare_ = std::move(engine);
        return *raw;
    }

    void prescribed(double at, bool before, std::vector<double>& T) const {
        model_->prescribe(values(), {at, at, 1.0, before}, T.data());
    }

    std::shared_ptr<const Model> model_;
    MarchStates states_;
    const MarchTape& tape_;
    bool linear_; ///< matrices change with the values alone
    std::size_t all_;
    Workspace work_;
    std::unique_ptr<Storage> storage_;
    SparseMatrix K_;
    std::vector<std::size_t> group_of_; ///< per values: the first of those before it with the same matrices

  private:
    struct Lane {
        double a;
        Engine* engine;
        std::unique_ptr<Engine> own;
    };

    [[nodiscard]] bool same_matrices(std::size_t a, std::size_t b) const {
        for (std::size_t s = 0; s < model_->roles.size(); ++s) {
            const SlotRole& role = model_->roles[s];
            if ((role.matrix || role.capacity || role.place) && tape_.values[a].slots[s] != tape_.values[b].slots[s])
                return false;
        }
        return true;
    }

    /// A weight that outdoes everything else in the row of a held unknown.
    void hold(const HeatSlope& heat, SparseMatrix& matrix) {
        holding_.assign(heat.held.size(), 0.0);
        for (std::size_t u = 0; u < heat.held.size(); ++u) {
            if (heat.held[u] == 0) continue;
            const auto diagonal = as_size(matrix.start[u + 1] - 1);
            holding_[u] = 1e15 * matrix.lower[diagonal];
            matrix.lower[diagonal] += holding_[u];
            if (!matrix.upper.empty()) matrix.upper[diagonal] += holding_[u];
        }
    }

    void refuse_driven_melting(const Storage& last) const {
        for (std::size_t i = 0; i < last.latent().size(); ++i)
            if (last.latent()[i].full != storage_->latent()[i].full)
                throw Error(
                    ErrorCode::not_supported, model_->regions[as_size(last.latent()[i].region)].name,
                    "gradient: the latent heat or the density of what melts was driven during the march; drive what "
                    "acts on the body instead");
    }

    void refuse_moving_melting_point(const LatentNode& node) const {
        const RegionModel& region = model_->regions[as_size(node.region)];
        if (node.liquidus > node.solidus) return;
        for (const Coefficient* c : {&region.solidus, &region.liquidus})
            if (c->value().kind() == Value::Kind::parameter)
                throw Error(
                    ErrorCode::not_supported, region.name,
                    text("gradient: the ", c->label(),
                         " is a Parameter, and the material melts at one temperature, where the march has a kink; "
                         "give numbers, or a solidus below the liquidus"));
    }

    std::vector<Lane> lanes_;
    std::unique_ptr<Engine> spare_;
    std::vector<double> holding_;
    std::vector<double> nothing_;
    bool ready_ = false;
    std::size_t now_ = 0;
};

} // namespace tepor::detail
