// Compact models: certified order, exact steady gains, the bound at every frequency and on random records.

#include <Eigen/Dense>
#include <cmath>
#include <complex>
#include <cstdint>
#include <doctest/doctest.h>
#include <tepor/answers/compact.hpp>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/impl/dense.hpp>
#include <tests/support/scale.hpp>
#include <tests/support/two_alloy_plate.hpp>

using namespace tepor;
using namespace tepor::test::two_alloys;

TEST_CASE("a plate of two alloys needs at most 20 states for a certified 0.1 % of its peak gain") {
    const Body body = plate(0.005);
    const CompactOptions options = plate_options();
    const StateSpace model = compact(body, options);
    MESSAGE("states ", model.order, ", basis ", model.basis_size, ", factorisations ", model.factorisations, ", bound ",
            model.error_bound / model.peak_gain, ", basis error ", model.basis_error / model.peak_gain);
    CHECK(model.order <= 20);
    CHECK(model.order >= 4);
    CHECK(model.factorisations <= 14);
    CHECK(model.error_bound <= 1e-3 * model.peak_gain);
    CHECK(model.x0 == std::vector<double>(detail::as_size(model.order), 0.0));
    // steady gains are the slopes of the steady body
    const Field field = steady(body);
    for (std::size_t i = 0; i < options.outputs.size(); ++i) {
        const Gradient slope = gradient(field, options.outputs[i]);
        CHECK(std::abs(model.y0[i] - slope.value()) <= 1e-9);
        for (std::size_t j = 0; j < options.inputs.size(); ++j)
            CHECK(
                std::abs(model.steady_gain(static_cast<Index>(i), static_cast<Index>(j)) - slope[options.inputs[j]]) <=
                1e-10 * std::abs(slope[options.inputs[0]]) + 1e-10 * std::abs(slope[options.inputs[j]]));
    }
    CHECK_FALSE(model.linearised);
}

TEST_CASE("the gain keeps its bound at frequencies between and beyond those sampled") {
    const Body body = plate(0.01);
    const CompactOptions options = plate_options();
    const StateSpace model = compact(body, options);
    const Modal full(body, options);
    double worst = 0.0;
    for (double w = 1e-6; w < 100.0; w *= 1.17) {
        Eigen::MatrixXcd E(4, 4);
        for (Index i = 0; i < 4; ++i)
            for (Index j = 0; j < 4; ++j) {
                std::complex<double> h = 0.0;
                for (Index e = 0; e < full.rate.size(); ++e)
                    h += full.C(i, e) * full.B(e, j) / std::complex<double>(full.rate[e], w);
                const StateSpace::Gain g = model.gain(i, j, w);
                E(i, j) = (h - std::complex<double>(g.re, g.im)) * options.input_scale[detail::as_size(j)];
            }
        worst = std::max(worst, E.jacobiSvd().singularValues()[0]);
    }
    CHECK(worst <= model.error_bound);
    CHECK(worst >= 1e-3 * model.error_bound); // the bound is no wild guess
    MESSAGE("bound over true error: ", model.error_bound / worst);
}

TEST_CASE("on random records the output error never exceeds the bound times the input") {
    const Body body = plate(0.01); // about 500 unknowns at this size
    CompactOptions options = plate_options();
    options.tolerance = 1e-2;
    const StateSpace model = compact(body, options);
    const Modal full(body, options);
    const Index modes = full.rate.size();
    const Index n = model.order;
    // three Gauss points in each step: the errors are smooth there
    static constexpr double at[3] = {0.112701665379258, 0.5, 0.887298334620742};
    static constexpr double weight[3] = {5.0 / 18.0, 8.0 / 18.0, 5.0 / 18.0};
    Eigen::MatrixXd Phi[3];
    for (int g = 0; g < 3; ++g) {
        detail::Dense joined(detail::as_size(n) + 4, detail::as_size(n) + 4);
        for (Index i = 0; i < n; ++i) {
            for (Index j = 0; j < n; ++j)
                joined(detail::as_size(i), detail::as_size(j)) = model.Ac[detail::as_size(i * n + j)] * at[g];
            for (Index j = 0; j < 4; ++j)
                joined(detail::as_size(i), detail::as_size(n + j)) = model.Bc[detail::as_size(i * 4 + j)] * at[g];
        }
        const detail::Dense e = detail::exponential(joined);
        Phi[g] = Eigen::MatrixXd(n, n + 4);
        for (Index i = 0; i < n; ++i)
            for (Index j = 0; j < n + 4; ++j) Phi[g](i, j) = e(detail::as_size(i), detail::as_size(j));
    }
    Eigen::MatrixXd C(4, n);
    Eigen::MatrixXd D(4, 4);
    for (Index i = 0; i < 4; ++i) {
        for (Index j = 0; j < n; ++j) C(i, j) = model.C[detail::as_size(i * n + j)];
        for (Index j = 0; j < 4; ++j) D(i, j) = model.D[detail::as_size(i * 4 + j)];
    }
    std::uint64_t state = 7;
    const auto uniform = [&state] {
        state = state * 6364136223846793005U + 1442695040888963407U;
        return 2.0 * (static_cast<double>(state >> 11) / 9007199254740992.0) - 1.0;
    };
    const long records = test::scaled(1000, 20);
    double worst = 0.0;
    double worst_sample = 0.0;
    StateSpace run = model;
    for (long r = 0; r < records; ++r) {
        run.reset();
        Eigen::VectorXd z = Eigen::VectorXd::Zero(modes);
        Eigen::VectorXd x = Eigen::VectorXd::Zero(n);
        double in = 0.0;
        double out = 0.0;
        Eigen::Vector4d u = Eigen::Vector4d::Zero();
        const int hold = 1 + static_cast<int>(r % 7); // slow and fast records
        for (int k = 0; k < 24; ++k) {
            if (k % hold == 0)
                for (Index j = 0; j < 4; ++j) u[j] = options.input_scale[detail::as_size(j)] * uniform();
            const Eigen::VectorXd b = full.B * u;
            for (Index j = 0; j < 4; ++j) {
                const double s = u[j] / options.input_scale[detail::as_size(j)];
                in += s * s;
            }
            for (int g = 0; g < 3; ++g) {
                Eigen::VectorXd joined(n + 4);
                joined << x, u;
                const Eigen::Vector4d error = full.C * full.after(z, b, at[g]) - C * (Phi[g] * joined) - D * u;
                out += weight[g] * error.squaredNorm();
            }
            z = full.after(z, b, 1.0);
            const double held[4] = {model.u0[0] + u[0], model.u0[1] + u[1], model.u0[2] + u[2], model.u0[3] + u[3]};
            double y[4];
            run.advance(held, y);
            for (Index i = 0; i < n; ++i) x[i] = run.state()[detail::as_size(i)];
            const Eigen::Vector4d exact = full.C * z;
            for (Index i = 0; i < 4; ++i)
                worst_sample = std::max(worst_sample, std::abs(y[i] - model.y0[detail::as_size(i)] - exact[i]));
        }
        worst = std::max(worst, std::sqrt(out / in));
    }
    MESSAGE("largest error over records ", worst, " of a bound of ", model.error_bound, ", at samples ", worst_sample,
            " K");
    CHECK(worst <= model.error_bound);
    CHECK(worst >= 1e-4 * model.error_bound);
}

TEST_CASE("the order can be asked for and its bound is then told") {
    CompactOptions options = plate_options();
    options.order = 5;
    const StateSpace small = compact(plate(0.01), options);
    CHECK(small.order == 5);
    CHECK(small.error_bound > 1e-3 * small.peak_gain);
    options.order = 10;
    CHECK(compact(plate(0.01), options).error_bound < small.error_bound);
}
