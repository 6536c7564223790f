#pragma once
// A plate of two alloys with three heaters: the body the compact models are tried on, and its dense plant in modes.

#include <Eigen/Dense>
#include <cmath>
#include <tepor/answers/compact.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::test::two_alloys {

inline const Parameter heater_a{"heater a", 40.0}, heater_b{"heater b", 40.0}, heater_c{"heater c", 40.0},
    ambient{"ambient", 20.0};

/// A plate of 0.2 x 0.1 m of two alloys with three heaters, cooled at its edge and from its sides.
inline Body plate(double size) {
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

inline CompactOptions plate_options() {
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

} // namespace tepor::test::two_alloys
