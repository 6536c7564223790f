#pragma once
// The bodies that are timed, and the same systems by triplets, as one would write them without the library.

#include <Eigen/SparseCore>
#include <cmath>
#include <string>
#include <tepor/body/body.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/drawing.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <utility>
#include <vector>

namespace bodies {

using namespace tepor;

constexpr double film = 10.0; // W/(m2 K), all around

/// About n nodes on the unit square: "lattice" (right triangles), "general" (a triangulation) or "shuffled" (the same with
/// nodes and cells numbered at random).
inline Mesh<Triangle<1>> mesh_of(const std::string& kind, Index n) {
    const double side = std::sqrt(static_cast<double>(n));
    if (kind == "lattice") {
        const Index cells = static_cast<Index>(side + 0.5) - 1;
        Tiles drawing;
        drawing.add("plate", {0.0, 0.0}, {1.0, 1.0});
        drawing.split_x({.from = 0.0, .to = 1.0, .cells = cells}).split_y({.from = 0.0, .to = 1.0, .cells = cells});
        return tiles<Triangle<1>>(drawing);
    }
    Section section;
    section.add("plate", rectangle({0.0, 0.0}, {1.0, 1.0}));
    section.face("left", {0.0, 0.0}, {0.0, 1.0});
    section.face("right", {1.0, 0.0}, {1.0, 1.0});
    section.face("bottom", {0.0, 0.0}, {1.0, 0.0});
    section.face("top", {0.0, 1.0}, {1.0, 1.0});
    Mesh<Triangle<1>> mesh = triangulate<Triangle<1>>(section, {.size = 1.15 / side});
    if (kind != "shuffled") return mesh;
    std::uint64_t state = 88172645463325252U;
    const auto below = [&state](std::size_t bound) { // Marsaglia's xorshift (2003)
        state ^= state << 13U;
        state ^= state >> 7U;
        state ^= state << 17U;
        return static_cast<std::size_t>(state % bound);
    };
    const auto shuffled = [&](std::size_t count) {
        std::vector<Id> to(count);
        for (std::size_t i = 0; i < count; ++i) to[i] = static_cast<Id>(i);
        for (std::size_t i = count - 1; i > 0; --i) std::swap(to[i], to[below(i + 1)]);
        return to;
    };
    const Mesh<Triangle<1>> from = mesh;
    const std::vector<Id> node = shuffled(from.nodes.size());
    const std::vector<Id> cell = shuffled(from.region.size());
    for (std::size_t i = 0; i < node.size(); ++i) mesh.nodes[static_cast<std::size_t>(node[i])] = from.nodes[i];
    for (std::size_t c = 0; c < cell.size(); ++c)
        for (std::size_t k = 0; k < 3; ++k)
            mesh.cells[3 * static_cast<std::size_t>(cell[c]) + k] =
                node[static_cast<std::size_t>(from.cells[3 * c + k])];
    for (std::size_t c = 0; c < cell.size(); ++c) mesh.region[static_cast<std::size_t>(cell[c])] = from.region[c];
    for (MeshFace& face : mesh.faces)
        for (CellSide& s : face.sides) s.cell = cell[static_cast<std::size_t>(s.cell)];
    return mesh;
}

inline double conductivity(double x, double y) {
    return 1.0 + 0.5 * x + 0.25 * y;
}

inline Body body_of(Mesh<Triangle<1>> mesh) {
    Body body{std::move(mesh)};
    body.in("plate", Material{.conductivity = of_place([](const auto& p) { return 1.0 + 0.5 * p.x + 0.25 * p.y; })});
    body.in("plate", Generation{.per_volume = 100.0});
    for (const char* face : {"left", "right", "bottom", "top"}) body.on(face, Film{.coefficient = film, .fluid = 20.0});
    return body;
}

struct System {
    Eigen::SparseMatrix<double> matrix, upper;
    Eigen::VectorXd right;
};

/// The same body by triplets: conductivity at the middle of each triangle.
inline System by_triplets(const MeshData& mesh) {
    std::vector<Eigen::Triplet<double>> entries;
    entries.reserve(static_cast<std::size_t>(9 * mesh.cell_count()));
    System out;
    out.right = Eigen::VectorXd::Zero(mesh.node_count());
    const auto place = [&mesh](Id id) { return mesh.nodes[static_cast<std::size_t>(id)]; };
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id* id = mesh.cell(c);
        const Point a = place(id[0]), b = place(id[1]), d = place(id[2]);
        const double bx[3] = {b.y - d.y, d.y - a.y, a.y - b.y};
        const double by[3] = {d.x - b.x, a.x - d.x, b.x - a.x};
        const double twice = bx[0] * by[1] - bx[1] * by[0];
        const double k = conductivity((a.x + b.x + d.x) / 3.0, (a.y + b.y + d.y) / 3.0) / (2.0 * twice);
        for (int i = 0; i < 3; ++i) {
            out.right[id[i]] += 100.0 * twice / 6.0;
            for (int j = 0; j < 3; ++j) entries.emplace_back(id[i], id[j], k * (bx[i] * bx[j] + by[i] * by[j]));
        }
    }
    for (const MeshFace& face : mesh.faces)
        for (const CellSide& s : face.sides) {
            const Id* id = mesh.cell(s.cell);
            const Id a = id[s.side], b = id[(s.side + 1) % 3];
            const double length = distance(place(a), place(b));
            for (const auto& [i, j, share] : {std::tuple{a, a, 3.0}, {b, b, 3.0}, {a, b, 6.0}, {b, a, 6.0}})
                entries.emplace_back(i, j, film * length / share);
            out.right[a] += 20.0 * film * length / 2.0;
            out.right[b] += 20.0 * film * length / 2.0;
        }
    out.matrix.resize(mesh.node_count(), mesh.node_count());
    out.matrix.setFromTriplets(entries.begin(), entries.end());
    out.matrix.prune([](Index, Index, double v) { return std::abs(v) > 1e-14; });
    out.upper = out.matrix.triangularView<Eigen::Upper>();
    return out;
}

} // namespace bodies
