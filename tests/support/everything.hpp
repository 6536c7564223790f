#pragma once
// One body with every kind of statement, each with a Parameter, and the same in complex numbers.

#include <array>
#include <string>
#include <tepor/body/body.hpp>
#include <tepor/describe/quantity.hpp>
#include <tests/support/complex_body.hpp>
#include <tests/support/meshes.hpp>

namespace tepor::test::everything {

enum Name : std::size_t {
    k0,
    beta,
    grade,
    k_hot,
    k_across,
    film,
    fluid,
    emissivity,
    around,
    into,
    held,
    total,
    amps,
    sink,
    sink_fluid,
    plate,
    joint,
    spot,
    rho,
    heat,
    c_right,
    count
};

inline const std::vector<Parameter>& data() {
    static const std::vector<Parameter> p = {
        {"k0", 1.5},     {"beta", 0.002},     {"grade", 0.4},       {"k hot", 2.4}, {"k across", 0.9}, {"film", 3.0},
        {"fluid", 12.0}, {"emissivity", 0.8}, {"around", -5.0},     {"into", 40.0}, {"held", 35.0},    {"total", 60.0},
        {"amps", 4.0},   {"sink", 1.7},       {"sink fluid", 18.0}, {"plate", 0.3}, {"joint", 0.15},   {"spot", 9.0},
        {"rho", 900.0},  {"heat", 400.0},     {"c right", 700.0}};
    return p;
}

/// The mesh: left and right half joined by a contact, all edges named; off the axis, so that it serves r-z too.
template <class E>
Mesh<E> mesh_of(Frame frame) {
    Mesh<E> mesh = unit_mesh<E>(2, 3);
    for (Point& p : mesh.nodes) p.x += 0.5;
    mesh.frame = frame;
    if constexpr (E::dim == 1) {
        mesh.faces = {{"bottom", {}}, {"right side", {{1, 1}}}, {"top", {}}, {"left side", {{0, 0}}}};
        return mesh;
    }
    mesh.faces.push_back({"top", {}});
    mesh.faces.push_back({"left side", {}});
    for (Index c = 0; c < mesh.cell_count(); ++c)
        for (int s = 0; s < E::sides; ++s) {
            const Point a = mesh.nodes[static_cast<std::size_t>(mesh.cell(c)[E::side_node(s, 0)])];
            const Point b = mesh.nodes[static_cast<std::size_t>(mesh.cell(c)[E::side_node(s, 1)])];
            if (a.y == 1.0 && b.y == 1.0) mesh.faces[2].sides.push_back({static_cast<Id>(c), s});
            if (a.x == 0.5 && b.x == 0.5) mesh.faces[3].sides.push_back({static_cast<Id>(c), s});
        }
    return mesh;
}

/// A node inside the left half: what local heat acts on there acts on one unknown.
template <class E>
Id heated_node(const MeshData& mesh) {
    return E::dim == 1 ? mesh.cell(0)[E::nodes - 1] : mesh.cell(0)[E::order > 1 ? E::nodes - 1 : 0];
}

template <class E>
Body body_of(const Mesh<E>& mesh) {
    const auto& p = data();
    Body body{mesh};
    const Value left = law({p[k0], p[beta], p[grade]}, [](const auto& s, auto k, auto b, auto g) {
        return k * (1.0 + b * (s.temperature - 20.0)) + g * s.x * s.x;
    });
    const Value warm = of_place({p[heat]}, [](const auto& s, auto c) { return c * (1.0 + 0.5 * s.x); });
    body.in("left", Material{.conductivity = left, .density = p[rho], .specific_heat = warm});
    const Value hot = table({{-200.0, 1.0}, {500.0, p[k_hot]}});
    body.in("right", Material{.conductivity = E::dim == 1 ? Conductivity(hot) : tensor(hot, 0.2, p[k_across]),
                              .density = 1100.0,
                              .specific_heat = p[c_right]});
    body.in("left", Generation{.total = p[total]});
    body.in("right", Generation{.per_volume = law({p[amps]}, [](const auto& s, auto a) {
                                    return a * a * (1.0 + 0.01 * s.temperature) * (1.0 + s.x);
                                })});
    body.in("right", SideFilm{.coefficient = law({p[sink]},
                                                 [](const auto& s, auto h) {
                                                     return h * (1.0 + 0.001 * (s.temperature - s.fluid) *
                                                                           (s.temperature - s.fluid));
                                                 }),
                              .fluid = p[sink_fluid],
                              .thickness = p[plate]});
    body.between("left", "right", Contact{.resistance = p[joint]});
    if (E::dim == 2) {
        body.on("bottom",
                Film{.coefficient =
                         law({p[film]},
                             [](const auto& s, auto h) {
                                 return h * pow((s.temperature - s.fluid) * (s.temperature - s.fluid) + 1.0, 0.15) *
                                        (1.0 + 0.2 * s.x);
                             }),
                     .fluid = p[fluid]});
        body.on("top", Flux{.into = p[into]});
    }
    body.on("right side", Radiation{.emissivity = p[emissivity], .surroundings = p[around]});
    body.on("left side", FixedTemperature{p[held]});
    const Point heated = mesh.nodes[static_cast<std::size_t>(heated_node<E>(mesh))];
    if (E::dim == 2) body.at(heated, LocalHeat{.total = p[spot], .radius = 0.01});
    return body;
}

/// The same in complex numbers, at any data.
template <class E>
void describe(ComplexBody<E>& body, const std::vector<Complex>& p) {
    body.conductivity = [p](std::size_t region, const ComplexSpot& s) -> std::array<Complex, 3> {
        if (region == 0) {
            const Complex k = p[k0] * (1.0 + p[beta] * (s.T - 20.0)) + p[grade] * s.x * s.x;
            return {k, k, 0.0};
        }
        const Complex k = 1.0 + (p[k_hot] - 1.0) * (s.T + 200.0) / 700.0;
        if (E::dim == 1) return {k, k, 0.0};
        return {k, p[k_across], 0.2};
    };
    const Complex volume = body.over_region(0, [](const ComplexSpot&) { return Complex(1.0); });
    body.source = [p, volume](std::size_t region, const ComplexSpot& s) -> Complex {
        if (region == 0) return -p[total] / volume;
        const Complex d = s.T - p[sink_fluid];
        return -p[amps] * p[amps] * (1.0 + 0.01 * s.T) * (1.0 + s.x) +
               p[sink] * (1.0 + 0.001 * d * d) * d * 2.0 / p[plate];
    };
    body.outflow = [p](std::size_t face, const ComplexSpot& s) -> Complex {
        switch (face) {
        case 0: {
            const Complex d = s.T - p[fluid];
            return p[film] * std::pow(d * d + 1.0, 0.15) * (1.0 + 0.2 * s.x) * d;
        }
        case 1: return p[emissivity] * stefan_boltzmann * (std::pow(s.T + 273.15, 4) - std::pow(p[around] + 273.15, 4));
        case 2: return -p[into];
        default: return 0.0;
        }
    };
    body.capacity = [p](std::size_t region, const ComplexSpot& s) -> Complex {
        return region == 0 ? p[rho] * p[heat] * (1.0 + 0.5 * s.x) : 1100.0 * p[c_right];
    };
    body.contact = 1.0 / p[joint];
    for (const CellSide side : body.mesh_.faces[3].sides)
        for (int j = 0; j < E::Side::nodes; ++j) {
            body.fixed[body.side_unknown(side, j)] = true;
            body.fixed_value[body.side_unknown(side, j)] = p[held];
        }
    if (E::dim == 2) body.load[body.unknown(heated_node<E>(body.mesh_), 0)] += p[spot];
}

/// Quantities both can tell.
struct Asked {
    Quantity quantity;
    std::string name;
};
inline std::vector<Asked> asked() {
    return {{heat_out_through("right side"), "radiated"},
            {heat_out_through("left side"), "reaction"},
            {mean_in("right"), "mean"},
            {heat_from("left", "right"), "crossing"},
            {generated_in("left"), "generated"}};
}

template <class E>
std::vector<Complex> answers(ComplexBody<E>& body, const std::vector<Complex>& p) {
    std::vector<Complex> out;
    out.push_back(body.over_face(1, [&](const ComplexSpot& s) { return body.outflow(1, s); }));
    Complex in = 0.0;
    const std::vector<Complex> r = body.residual();
    for (std::size_t u = 0; u < r.size(); ++u)
        if (body.fixed[u]) in += r[u];
    out.push_back(-in);
    out.push_back(body.over_region(1, [](const ComplexSpot& s) { return s.T; }) /
                  body.over_region(1, [](const ComplexSpot&) { return Complex(1.0); }));
    // what crosses the joint enters the right half: its own balance
    out.push_back(out[0] + body.over_region(1, [&](const ComplexSpot& s) { return body.source(1, s); }));
    if (E::dim == 2) {
        for (int f : {0, 2})
            for (const CellSide side : body.mesh_.faces[static_cast<std::size_t>(f)].sides)
                if (body.mesh_.region[static_cast<std::size_t>(side.cell)] == 1) {
                    // only the sides of the right half: integrate with a face of its own
                    MeshData one = body.mesh_;
                    one.faces[static_cast<std::size_t>(f)].sides = {side};
                    ComplexBody<E> part(one);
                    part.places = body.places;
                    part.T = body.T;
                    out[3] += part.over_face(static_cast<std::size_t>(f), [&](const ComplexSpot& s) {
                        return body.outflow(static_cast<std::size_t>(f), s);
                    });
                }
    }
    out.push_back(p[total] + (E::dim == 2 ? p[spot] : Complex(0.0)));
    return out;
}

} // namespace tepor::test::everything
