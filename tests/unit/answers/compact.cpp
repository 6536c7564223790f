// Compact models: certified order, exact steady gains and steps, closed forms, the bound on random records, C source, refusals.

#include <Eigen/Dense>
#include <cmath>
#include <complex>
#include <cstdlib>
#include <doctest/doctest.h>
#include <filesystem>
#include <fstream>
#include <sstream>
#include <tepor/answers/compact.hpp>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/impl/dense.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/refused.hpp>
#include <tests/support/scale.hpp>

using namespace tepor;

namespace {

const Parameter heater_a{"heater a", 40.0}, heater_b{"heater b", 40.0}, heater_c{"heater c", 40.0},
    ambient{"ambient", 20.0};

/// A plate of 0.2 x 0.1 m of two alloys with three heaters, cooled at its edge and from its sides.
Body plate(double size) {
    Tiles drawing;
    drawing.add("bronze", {0.0, 0.0}, {0.12, 0.1});
    drawing.add("steel", {0.12, 0.0}, {0.2, 0.1});
    drawing.add("a", {0.02, 0.02}, {0.04, 0.04});
    drawing.add("b", {0.08, 0.06}, {0.10, 0.08});
    drawing.add("c", {0.16, 0.04}, {0.18, 0.06});
    Body body{tiles<Triangle<1>>(drawing, {.size = size}, Planar{.depth = 0.01})};
    for (const char* region : {"bronze", "a", "b"})
        body.in(region, Material{.conductivity = 60.0, .density = 8700, .specific_heat = 380});
    for (const char* region : {"steel", "c"})
        body.in(region, Material{.conductivity = 16.0, .density = 7900, .specific_heat = 500});
    body.in("a", Generation{.total = heater_a});
    body.in("b", Generation{.total = heater_b});
    body.in("c", Generation{.total = heater_c});
    for (const char* face : {"left", "right", "bottom", "top"})
        body.on(face, Film{.coefficient = 50.0, .fluid = ambient});
    return body;
}

CompactOptions plate_options() {
    return {.inputs = {heater_a, heater_b, heater_c, ambient},
            .outputs = {at({0.03, 0.03}), at({0.11, 0.05}), at({0.17, 0.08}), mean_in("steel")},
            .sample_time = 1.0,
            .tolerance = 1e-3,
            .input_scale = {40.0, 40.0, 40.0, 10.0}};
}

/// The full plant in modes, M-orthonormal, dense and independent of the model under test.
struct Modal {
    Eigen::VectorXd rate;
    Eigen::MatrixXd B, C, D;

    Modal(const Body& body, const CompactOptions& options) {
        const Field field = steady(body);
        const std::shared_ptr<const Model> model = body.model();
        Workspace work = model->kernels->workspace();
        Storage storage(model, body.values(), options.capacity, work);
        SparseMatrix K, M;
        prepare_matrix(*model, K);
        prepare_matrix(*model, M);
        Pass pass;
        pass.T = field.temperature().data();
        pass.matrix = &K;
        assemble(*model, body.values(), work, pass);
        storage.add_to(M);
        const Index n = model->free;
        REQUIRE(n == model->unknowns);
        const auto dense = [n](const SparseMatrix& S) {
            Eigen::MatrixXd A = Eigen::MatrixXd::Zero(n, n);
            for (Index i = 0; i < n; ++i)
                for (Id p = S.start[detail::as_size(i)]; p < S.start[detail::as_size(i) + 1]; ++p)
                    A(i, S.column[detail::as_size(p)]) = A(S.column[detail::as_size(p)], i) =
                        S.lower[detail::as_size(p)];
            return A;
        };
        const Eigen::GeneralizedSelfAdjointEigenSolver<Eigen::MatrixXd> modes(dense(K), dense(M));
        rate = modes.eigenvalues();
        Eigen::MatrixXd load(n, static_cast<Index>(options.inputs.size()));
        for (std::size_t j = 0; j < options.inputs.size(); ++j) {
            std::vector<double> r(detail::as_size(n));
            residual_by_slot(*model, body.values(), work, field.temperature().data(), {},
                             detail::as_id(model->slot_of(options.inputs[j])), r.data());
            for (Index u = 0; u < n; ++u) load(u, static_cast<Index>(j)) = -r[detail::as_size(u)];
        }
        Eigen::MatrixXd read(static_cast<Index>(options.outputs.size()), n);
        for (std::size_t i = 0; i < options.outputs.size(); ++i) {
            std::vector<double> row(detail::as_size(n), 0.0);
            const Functional f = compile(*model, body.values(), options.outputs[i]);
            temperature_slope(f, *model, body.values(), work, field.temperature().data(), {}, row.data());
            for (Index u = 0; u < n; ++u) read(static_cast<Index>(i), u) = row[detail::as_size(u)];
        }
        B = modes.eigenvectors().transpose() * load;
        C = read * modes.eigenvectors();
    }

    /// Modal amplitudes after a time with the load b held.
    [[nodiscard]] Eigen::VectorXd after(const Eigen::VectorXd& z, const Eigen::VectorXd& b, double t) const {
        Eigen::VectorXd out(z.size());
        for (Index i = 0; i < z.size(); ++i)
            out[i] = std::exp(-rate[i] * t) * z[i] - std::expm1(-rate[i] * t) / rate[i] * b[i];
        return out;
    }
};

std::string read_file(const std::filesystem::path& path) {
    std::ifstream in(path);
    std::stringstream text;
    text << in.rdbuf();
    return text.str();
}

} // namespace

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

TEST_CASE("time constants of a two-layer slab with films are those of its transcendental equation") {
    // T1 = cos(s1 x) + h1/(k1 s1) sin(s1 x), flux and temperature passed on, -k2 T2' = h2 T2 at the end.
    // Source: Ozisik, Heat Conduction, 2nd ed., chapter 8 (composite media).
    const double L1 = 0.03, L2 = 0.05, k1 = 1.2, k2 = 0.15, c1 = 2.1e6, c2 = 0.6e6, h1 = 15.0, h2 = 8.0;
    const Parameter hot{"hot", 80.0}, cold{"cold", 10.0};
    Body slab{layers<Segment<3>>(
        {{.region = "a", .thickness = L1, .cells = 16}, {.region = "b", .thickness = L2, .cells = 20}})};
    slab.in("a", Material{.conductivity = k1, .density = 2100, .specific_heat = 1000});
    slab.in("b", Material{.conductivity = k2, .density = 600, .specific_heat = 1000});
    slab.on("inner", Film{.coefficient = h1, .fluid = hot});
    slab.on("outer", Film{.coefficient = h2, .fluid = cold});
    const auto mismatch = [&](double rate) {
        const double s1 = std::sqrt(rate * c1 / k1), s2 = std::sqrt(rate * c2 / k2);
        const double T = std::cos(s1 * L1) + h1 / (k1 * s1) * std::sin(s1 * L1);
        const double q = k1 * (-s1 * std::sin(s1 * L1) + h1 / k1 * std::cos(s1 * L1));
        const double T2 = T * std::cos(s2 * L2) + q / (k2 * s2) * std::sin(s2 * L2);
        const double q2 = -k2 * s2 * T * std::sin(s2 * L2) + q * std::cos(s2 * L2);
        return q2 + h2 * T2;
    };
    std::vector<double> exact;
    double step = 1e-6;
    for (double a = 1e-7; exact.size() < 5; a += step)
        if (mismatch(a) * mismatch(a + step) < 0.0) {
            double low = a, high = a + step;
            for (int i = 0; i < 100; ++i) {
                const double middle = 0.5 * (low + high);
                (mismatch(low) * mismatch(middle) <= 0.0 ? high : low) = middle;
            }
            exact.push_back(1.0 / low);
        }
    const StateSpace model = compact(slab, {.inputs = {hot, cold},
                                            .outputs = {at(0.0), at(0.02), at(0.06), at(0.08)},
                                            .sample_time = 20.0,
                                            .tolerance = 1e-7,
                                            .passive = true});
    std::vector<double> times;
    for (Index i = 0; i < model.order; ++i) times.push_back(-1.0 / model.Ac[detail::as_size(i * model.order + i)]);
    std::sort(times.rbegin(), times.rend());
    REQUIRE(times.size() >= 5);
    for (std::size_t i = 0; i < 5; ++i) {
        CAPTURE(i);
        CHECK(std::abs(times[i] - exact[i]) <= 2e-6 * exact[i]);
    }
    for (const double t : times) CHECK(t > 0.0);
}

TEST_CASE("the frequency response of a slab is that of its closed form") {
    // insulated at x = 0, film to a swinging fluid at x = L: T(0) / Tf = 1 / (cosh qL + (k q / h) sinh qL), q^2 = i w c / k.
    // Source: Carslaw & Jaeger, 2nd ed., section 3.6 (method).
    const double L = 0.1, k = 1.5, c = 1.8e6, h = 30.0;
    const Parameter fluid{"fluid", 20.0};
    Body slab{layers<Segment<3>>({{.region = "a", .thickness = L, .cells = 12}})};
    slab.in("a", Material{.conductivity = k, .density = 1800, .specific_heat = 1000});
    slab.on("outer", Film{.coefficient = h, .fluid = fluid});
    const StateSpace model = compact(
        slab,
        {.inputs = {fluid}, .outputs = {at(0.0), heat_in_through("outer")}, .sample_time = 60.0, .tolerance = 1e-5});
    for (const double w : {1e-6, 1e-5, 1e-4, 3e-4, 1e-3, 1e-2}) {
        CAPTURE(w);
        const std::complex<double> q = std::sqrt(std::complex<double>(0.0, w * c / k));
        const std::complex<double> down = std::cosh(q * L) + k * q / h * std::sinh(q * L);
        const std::complex<double> exact = 1.0 / down;
        const std::complex<double> heat = h * (1.0 - std::cosh(q * L) / down);
        const StateSpace::Gain g = model.gain(0, 0, w);
        const StateSpace::Gain f = model.gain(1, 0, w);
        CHECK(std::abs(std::complex<double>(g.re, g.im) - exact) <= model.error_bound + 1e-6);
        CHECK(std::abs(std::complex<double>(f.re, f.im) - heat) <= model.error_bound + 1e-4);
    }
}

TEST_CASE("the passive form agrees with the balanced one within both bounds") {
    const Body body = plate(0.01);
    CompactOptions options = plate_options();
    const StateSpace balanced = compact(body, options);
    options.passive = true;
    const StateSpace passive = compact(body, options);
    CHECK(passive.order > balanced.order);
    for (Index i = 0; i < passive.order; ++i)
        for (Index j = 0; j < passive.order; ++j) {
            const double a = passive.Ac[detail::as_size(i * passive.order + j)];
            CHECK((i == j ? a < 0.0 : a == 0.0));
        }
    for (const double w : {0.0, 1e-3, 1e-2, 0.1, 1.0}) {
        const StateSpace::Gain a = balanced.gain(2, 2, w);
        const StateSpace::Gain b = passive.gain(2, 2, w);
        CHECK(std::hypot(a.re - b.re, a.im - b.im) * 40.0 <= balanced.error_bound + passive.error_bound);
    }
    // bounded answers over a long run: all steps contract
    StateSpace run = balanced;
    std::vector<double> u = run.u0;
    u[0] += 100.0;
    for (int k = 0; k < 200000; ++k) (void)run.advance(u);
    CHECK(std::abs(run.y()[0] - run.y0[0] - 100.0 * run.steady_gain(0, 0)) <= 1e-6);
}

TEST_CASE("heats, contacts, laws and prescribed temperatures work as inputs and outputs") {
    const Parameter held{"held", 90.0}, flux{"flux", 200.0}, power{"power", 5.0}, rise{"rise", 0.01};
    Tiles drawing;
    drawing.add("block", {0.0, 0.0}, {0.04, 0.04});
    drawing.add("cap", {0.04, 0.0}, {0.06, 0.04});
    Body body{tiles<Triangle<1>>(drawing, {.size = 0.01})};
    body.in("block", Material{.conductivity = 3.0, .density = 2000, .specific_heat = 900});
    body.in("cap", Material{.conductivity = 20.0, .density = 4000, .specific_heat = 500});
    body.in("cap", Generation{.total = power});
    body.between("block", "cap", Contact{.conductance = 400.0});
    body.on("left", FixedTemperature{held});
    body.on("bottom", Flux{.into = flux});
    body.on("right",
            Film{.coefficient = law({rise}, [](const auto& s, auto b) { return 10.0 + b * (s.temperature - s.fluid); }),
                 .fluid = 15.0});
    CompactOptions options{
        .inputs = {held, flux, power},
        .outputs = {at({0.05, 0.02}), heat_out_through("right"), heat_from("block", "cap"), mean_in("block")},
        .sample_time = 5.0,
        .tolerance = 1e-4};
    const StateSpace model = compact(body, options);
    CHECK(model.linearised);
    const Field field = steady(body, {.tolerance = 1e-13});
    for (std::size_t i = 0; i < options.outputs.size(); ++i) {
        const Gradient slope = gradient(field, options.outputs[i]);
        for (std::size_t j = 0; j < options.inputs.size(); ++j) {
            CAPTURE(options.outputs[i].label());
            CAPTURE(options.inputs[j].name());
            CHECK(std::abs(model.steady_gain(static_cast<Index>(i), static_cast<Index>(j)) -
                           slope[options.inputs[j]]) <= 1e-8 * (1e-3 + std::abs(slope[options.inputs[j]])));
        }
    }
    // the heat through a held face, driven from elsewhere
    options.inputs = {flux, power};
    options.outputs = {heat_out_through("left")};
    const StateSpace reaction = compact(body, options);
    const Gradient slope = gradient(field, options.outputs[0]);
    CHECK(std::abs(reaction.steady_gain(0, 0) - slope[flux]) <= 1e-8 * std::abs(slope[flux]));
    CHECK(std::abs(reaction.steady_gain(0, 1) - slope[power]) <= 1e-8 * std::abs(slope[power]));
}

TEST_CASE("the C source compiles as C99 and gives the same bits as advance") {
    StateSpace model = compact(plate(0.02), plate_options());
    const std::string source = model.c_source("plate");
    CHECK(source.find("0x1.") != std::string::npos);
    CHECK(source.find("plate_advance(plate_state *s, const double *u, double *y)") != std::string::npos);
    test::check_refused([&] { (void)model.c_source("2 plate"); }, ErrorCode::bad_name, "2 plate", "C identifier");
    CHECK(model.csv().find("error_bound,0,") != std::string::npos);
    if (std::system("cc --version > /dev/null 2>&1") != 0) return; // no C compiler here
    const std::filesystem::path where =
        std::filesystem::temp_directory_path() / ("compact_c_source_" + std::to_string(std::rand()));
    std::filesystem::create_directories(where);
    {
        std::ofstream out(where / "plate.c");
        out << source
            << "\n#include <stdio.h>\nint main(void) {\n    plate_state s;\n    double u[4], y[4];\n    int k;\n"
               "    plate_reset(&s);\n    for (k = 0; k < 200; ++k) {\n        u[0] = 40.0 + (k % 7) * 3.5;\n"
               "        u[1] = 40.0 - (k % 5);\n        u[2] = 0.25 * k;\n        u[3] = 20.0 + 0.125 * (k % 3);\n"
               "        plate_advance(&s, u, y);\n"
               "        printf(\"%a %a %a %a\\n\", y[0], y[1], y[2], y[3]);\n    }\n    return 0;\n}\n";
    }
    const std::string dir = where.string();
    REQUIRE(std::system(("cc -std=c99 -pedantic -Wall -Wextra -Werror -O2 -ffp-contract=off -o '" + dir + "/run' '" +
                         dir + "/plate.c' && '" + dir + "/run' > '" + dir + "/out'")
                            .c_str()) == 0);
    std::istringstream lines(read_file(where / "out"));
    bool same_bits = true;
    double largest = 0.0;
    for (int k = 0; k < 200; ++k) {
        const std::vector<double>& y =
            model.advance({40.0 + (k % 7) * 3.5, 40.0 - (k % 5), 0.25 * k, 20.0 + 0.125 * (k % 3)});
        for (std::size_t i = 0; i < 4; ++i) {
            std::string word;
            lines >> word;
            const double c = std::strtod(word.c_str(), nullptr);
            same_bits = same_bits && c == y[i];
            largest = std::max(largest, std::abs(c - y[i]));
        }
    }
    CHECK(largest <= 1e-13 * 100.0);
#if !defined(__FMA__)
    CHECK(same_bits);
#endif
    std::filesystem::remove_all(where);
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

TEST_CASE("compact refuses what has no small linear model and names it") {
    const Body body = plate(0.02);
    const CompactOptions good = plate_options();
    CompactOptions options = good;
    const auto refuse = [&](const Body& of, ErrorCode code, const std::string& who, const std::string& words) {
        test::check_refused([&] { (void)compact(of, options); }, code, who, words);
        options = good;
    };
    options.inputs = {};
    refuse(body, ErrorCode::missing, "", "at least one input");
    options.sample_time = 0.0;
    refuse(body, ErrorCode::missing, "sample_time", "expected > 0");
    options.tolerance = 2.0;
    refuse(body, ErrorCode::bad_value, "tolerance", "0 < tolerance < 1");
    options.input_scale = {1.0};
    refuse(body, ErrorCode::bad_value, "input_scale", "1 entries for 4");
    const Parameter stranger{"stranger", 1.0};
    options.inputs[1] = stranger;
    refuse(body, ErrorCode::unused, "stranger", "no statement");
    options.outputs[0] = hottest_in("steel");
    refuse(body, ErrorCode::not_supported, hottest_in("steel").label(), "no linear output");
    const Parameter film{"film", 50.0};
    Body other = plate(0.02);
    other.replace("left", Film{.coefficient = film, .fluid = ambient});
    options.inputs[0] = film;
    refuse(other, ErrorCode::not_supported, "film", "multiplies temperature");
    const Parameter amps{"amps", 3.0};
    Body squared = plate(0.02);
    squared.also_in("steel", Generation{.per_volume = of_place({amps}, [](const auto&, auto a) { return a * a; })});
    options.inputs[0] = amps;
    refuse(squared, ErrorCode::not_supported, "amps", "enters nonlinearly");
    Body hot = plate(0.02);
    hot.replace("steel",
                Material{.conductivity = table({{0, 10.0}, {1000, 20.0}}), .density = 7900, .specific_heat = 500});
    refuse(hot, ErrorCode::not_supported, "conductivity", "depends on temperature");
    Body timed = plate(0.02);
    timed.also_in("steel", Generation{.per_volume = schedule({{0, 1.0}, {10, 2.0}})});
    refuse(timed, ErrorCode::not_supported, "time", "depend on time");
    Body clocked = plate(0.02);
    clocked.also_in("steel", Generation{.per_volume = of_place_and_time(
                                            [](const auto& p) { return 10.0 + std::sin(p.time) + 0.0 * p.x; })});
    refuse(clocked, ErrorCode::not_supported, "time", "depend on time");
    Body bare = plate(0.02);
    bare.replace("steel", Material{.conductivity = 16.0});
    test::check_refused([&] { (void)compact(bare, good); }, ErrorCode::missing, "steel", "");
}
