// The step of a march beside what it cannot do without: in 1D a hand-written prefactored tridiagonal step, in 2D one pair of
// triangular solves and one matrix-vector product with the same factor. And the slowest step beside the median one.
//
//   bench-march [--small]
//
// Figures per step are processor time, the least of several batches; the spread is wall-clock time step by step.

#include <algorithm>
#include <cstdio>
#include <cstring>
#include <ctime>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/march.hpp>
#include <vector>

namespace {

using namespace tepor;

double seconds(clockid_t clock) {
    std::timespec t{};
    clock_gettime(clock, &t);
    return static_cast<double>(t.tv_sec) + 1e-9 * static_cast<double>(t.tv_nsec);
}

/// Least time of one call over batches.
template <class Work>
double least(int batches, long calls, Work work) {
    double best = 1e30;
    for (int b = 0; b < batches; ++b) {
        const double begin = seconds(CLOCK_PROCESS_CPUTIME_ID);
        for (long i = 0; i < calls; ++i) work();
        best = std::min(best, (seconds(CLOCK_PROCESS_CPUTIME_ID) - begin) / static_cast<double>(calls));
    }
    return best;
}

template <class Work>
void spread(const char* what, long calls, Work work) {
    std::vector<double> took(static_cast<std::size_t>(calls));
    for (double& t : took) {
        const double begin = seconds(CLOCK_MONOTONIC);
        work();
        t = seconds(CLOCK_MONOTONIC) - begin;
    }
    std::sort(took.begin(), took.end());
    const auto at = [&](double share) {
        return 1e6 * took[static_cast<std::size_t>(share * static_cast<double>(calls - 1))];
    };
    std::printf("  %-34s median %10.3f us   99 %% %10.3f   99.9 %% %10.3f   slowest %10.3f (%.1f x)\n", what, at(0.5),
                at(0.99), at(0.999), at(1.0), at(1.0) / at(0.5));
}

/// The theta step of a tridiagonal system, eliminated beforehand from both ends, as one would write it by hand.
class HandWritten {
  public:
    HandWritten(std::size_t n, double capacity, double conductance, double film, double dt, double theta)
        : n_(n), middle_(n / 2), ratio_(n), inverse_(n), own_(n), next_(n), load_(n), T_(n, 20.0), b_(n) {
        std::vector<double> diagonal(n);
        const double off = -theta * dt * conductance;
        for (std::size_t i = 0; i < n; ++i) {
            const bool end = i == 0 || i + 1 == n;
            const double M = end ? 0.5 * capacity : capacity;
            const double K = (end ? 1.0 : 2.0) * conductance + (i + 1 == n ? film : 0.0);
            diagonal[i] = M + theta * dt * K;
            own_[i] = M - (1.0 - theta) * dt * K;
            next_[i] = (1.0 - theta) * dt * conductance;
            load_[i] = dt * (end ? 0.5 : 1.0) / static_cast<double>(n - 1);
        }
        film_ = dt * film;
        double left = diagonal[0], right = diagonal[n - 1];
        for (std::size_t i = 0; i < middle_; ++i) {
            inverse_[i] = 1.0 / left;
            ratio_[i] = off * inverse_[i];
            left = diagonal[i + 1] - ratio_[i] * off;
        }
        double from_right = 0.0;
        for (std::size_t j = n - 1; j > middle_; --j) {
            inverse_[j] = 1.0 / right;
            ratio_[j] = off * inverse_[j];
            from_right = ratio_[j] * off;
            right = diagonal[j - 1] - from_right;
        }
        inverse_[middle_] = 1.0 / (left - from_right);
    }
    void step(double power, double fluid) {
        const std::size_t n = n_, m = middle_;
        double* b = b_.data();
        const double* T = T_.data();
        b[0] = own_[0] * T[0] + next_[0] * T[1] + power * load_[0];
        for (std::size_t i = 1; i + 1 < n; ++i)
            b[i] = own_[i] * T[i] + next_[i] * (T[i - 1] + T[i + 1]) + power * load_[i];
        b[n - 1] = own_[n - 1] * T[n - 1] + next_[n - 1] * T[n - 2] + power * load_[n - 1] + film_ * fluid;
        const std::size_t both = n - 1 - m;
        double left = b[0], right = b[n - 1], from_right = 0.0;
        for (std::size_t i = 0; i < both; ++i) {
            const std::size_t j = n - 1 - i;
            const double next_left = b[i + 1] - ratio_[i] * left;
            from_right = ratio_[j] * right;
            const double next_right = b[j - 1] - from_right;
            b[i] = left * inverse_[i];
            b[j] = right * inverse_[j];
            left = next_left;
            right = next_right;
        }
        if (both < m) {
            const double next_left = b[both + 1] - ratio_[both] * left;
            b[both] = left * inverse_[both];
            left = next_left;
        }
        double up = (left - from_right) * inverse_[m];
        double down = up;
        T_[m] = up;
        for (std::size_t i = 0; i < both; ++i) {
            down = T_[m + 1 + i] = b[m + 1 + i] - ratio_[m + 1 + i] * down;
            up = T_[m - 1 - i] = b[m - 1 - i] - ratio_[m - 1 - i] * up;
        }
        if (both < m) T_[0] = b[0] - ratio_[0] * up;
    }
    [[nodiscard]] const std::vector<double>& temperature() const { return T_; }

  private:
    std::size_t n_, middle_;
    std::vector<double> ratio_, inverse_, own_, next_, load_, T_, b_;
    double film_ = 0.0;
};

void line(bool small) {
    const Parameter power{"power", 500.0};
    const Parameter air{"air", 20.0};
    Body body{layers<Segment<1>>({{.region = "bar", .thickness = 0.05, .cells = 49}})};
    body.in("bar", Material{.conductivity = 45.0, .density = 7850.0, .specific_heat = 470.0});
    body.in("bar", Generation{.total = power});
    body.on("outer", Film{.coefficient = 25.0, .fluid = air});
    March march{body, initial(20.0), Theta{.theta = 0.5, .step = 1.0, .damped_start = false}};
    const Input heater = march.drive(power);
    const Input outside = march.drive(air);
    const double h = 0.05 / 49.0;
    HandWritten hand(50, 7850.0 * 470.0 * h, 45.0 / h, 25.0, 1.0, 0.5);

    const long calls = small ? 2000 : 200000;
    double u = 0.0;
    const auto ours = [&] {
        u = u < 7.0 ? u + 1.0 : 0.0;
        march.set(heater, 400.0 + u);
        march.set(outside, 20.0 + u);
        (void)march.advance();
    };
    const auto theirs = [&] {
        u = u < 7.0 ? u + 1.0 : 0.0;
        hand.step(400.0 + u, 20.0 + u);
    };
    const double a = least(9, calls, theirs);
    u = 0.0;
    const double b = least(9, calls, ours);
    double worst = 0.0;
    const std::vector<double> T = march.field().temperature();
    std::vector<double> other = hand.temperature();
    std::vector<double> sorted = T;
    std::sort(sorted.begin(), sorted.end());
    std::sort(other.begin(), other.end());
    for (std::size_t i = 0; i < T.size(); ++i) worst = std::max(worst, std::abs(sorted[i] - other[i]));
    std::printf("1D, 50 nodes, order 1, a step with two inputs changed\n");
    std::printf("  hand-written, prefactored          %8.1f ns\n", 1e9 * a);
    std::printf("  march                              %8.1f ns   %.2f x (to reach: 2); differs by %.1e K\n", 1e9 * b,
                b / a, worst);
    const Probe probe = march.watch(at(0.02));
    const Probe loss = march.watch(heat_out_through("outer"));
    volatile double sink = 0.0;
    std::printf("  reading a temperature              %8.1f ns, a heat flow %.1f ns\n",
                1e9 * least(5, calls, [&] { sink = march[probe]; }),
                1e9 * least(5, calls, [&] { sink = march[loss]; }));
    spread("steps of the march", calls, ours);
    spread("steps written by hand", calls, theirs);
}

void plane(bool small) {
    const Parameter power{"power", 500.0};
    const Index cells = small ? 40 : 316;
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.3, 0.3});
    drawing.split_x({.from = 0.0, .to = 0.3, .cells = cells}).split_y({.from = 0.0, .to = 0.3, .cells = cells});
    Body body{tiles<Triangle<1>>(drawing)};
    body.in("plate", Material{.conductivity = 45.0, .density = 7850.0, .specific_heat = 470.0});
    body.in("plate", Generation{.total = power});
    body.on("top", Film{.coefficient = 25.0, .fluid = 20.0});
    March march{body, initial(20.0), Theta{.theta = 0.5, .step = 1.0}};
    const Input heater = march.drive(power);
    const std::shared_ptr<const Model>& model = body.model();
    Engine engine(model);
    Values values = body.values();
    std::vector<double> zero(static_cast<std::size_t>(model->unknowns), 0.0);
    Pass pass;
    pass.T = zero.data();
    pass.matrix = &engine.matrix;
    assemble(*model, values, engine.work, pass);
    SparseMatrix K = engine.matrix;
    for (double& v : engine.matrix.lower) v *= 0.5;
    Storage(model, values, Capacity::automatic, engine.work).add_to(engine.matrix);
    if (!engine.factor(Purpose::many_solves)) return;
    std::vector<double> b(zero.size(), 1.0);
    std::vector<double> y(zero.size(), 1.0);
    const long calls = small ? 200 : 40;
    const double solve = least(7, calls, [&] { (void)engine.solve(b.data(), 0.0); });
    const double product = least(7, calls, [&] { multiply(K, K.rows, y.data(), b.data()); });
    double u = 0.0;
    const auto step = [&] {
        u = u < 7.0 ? u + 1.0 : 0.0;
        march.set(heater, 400.0 + u);
        (void)march.advance();
    };
    const double ours = least(7, calls, step);
    std::printf("2D, %ld unknowns, order 1, a step with an input of every node changed\n",
                static_cast<long>(model->unknowns));
    std::printf("  pair of triangular solves          %8.3f ms\n  product                            %8.3f ms\n",
                1e3 * solve, 1e3 * product);
    std::printf("  march                              %8.3f ms   %.2f x of both (to reach: 1.3)\n", 1e3 * ours,
                ours / (solve + product));
    spread("steps of the march", small ? 500 : 300, step);
}

} // namespace

int main(int argc, char** argv) {
    const bool small = argc > 1 && std::strcmp(argv[1], "--small") == 0;
    line(small);
    plane(small);
    return 0;
}
