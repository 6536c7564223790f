#pragma once
// Small meshes for tests of the mesh room.

#include <algorithm>
#include <cmath>
#include <random>
#include <string>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/inner_nodes.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor::test {

/// n x n squares on the unit square, whole or as two triangles each, or n segments; the left half is region "left", the rest
/// "right"; faces "bottom" and "right side" (1D: "left end"). Inner vertices are moved about by up to `distortion` of the width.
template <class E>
Mesh<E> unit_mesh(int n, unsigned seed = 1, double distortion = 0.25) {
    Mesh<E> mesh;
    std::mt19937 random(seed);
    std::uniform_real_distribution<double> shift(-distortion / n, distortion / n);
    const auto size = [](auto i) { return static_cast<std::size_t>(i); };
    std::vector<Id> corners;
    mesh.region_names = {"left", "right"};
    if constexpr (E::dim == 1) {
        for (int i = 0; i <= n; ++i) mesh.nodes.push_back({1.0 * i / n + (i > 0 && i < n ? shift(random) : 0.0), 0.0});
        for (int i = 0; i < n; ++i) {
            corners.insert(corners.end(), {i, i + 1});
            mesh.region.push_back(2 * i < n ? 0 : 1);
        }
        mesh.faces = {{"left end", {{0, 0}}}};
    } else {
        for (int j = 0; j <= n; ++j)
            for (int i = 0; i <= n; ++i) {
                const bool inner = i > 0 && i < n && j > 0 && j < n;
                mesh.nodes.push_back(
                    {1.0 * i / n + (inner ? shift(random) : 0.0), 1.0 * j / n + (inner ? shift(random) : 0.0)});
            }
        mesh.faces = {{"bottom", {}}, {"right side", {}}};
        const auto id = [&](int i, int j) { return j * (n + 1) + i; };
        for (int j = 0; j < n; ++j)
            for (int i = 0; i < n; ++i) {
                const auto cell = static_cast<Id>(mesh.region.size());
                const bool whole = E::shape_of_cell == CellShape::quadrilateral;
                if (whole)
                    corners.insert(corners.end(), {id(i, j), id(i + 1, j), id(i + 1, j + 1), id(i, j + 1)});
                else
                    corners.insert(corners.end(), {id(i, j), id(i + 1, j), id(i + 1, j + 1), id(i, j), id(i + 1, j + 1),
                                                   id(i, j + 1)});
                mesh.region.insert(mesh.region.end(), whole ? 1U : 2U, 2 * i < n ? 0 : 1);
                if (j == 0) mesh.faces[size(0)].sides.push_back({cell, 0});
                if (i == n - 1) mesh.faces[size(1)].sides.push_back({cell, 1});
            }
    }
    detail::add_inner_nodes(mesh, detail::cell_kind<E>(), corners);
    return mesh;
}

/// A disc of radius r as n triangles around its middle, outer sides on the circle (face "rim").
template <class E>
Mesh<E> disc_mesh(int n, double r, Point middle = {}) {
    static_assert(E::shape_of_cell == CellShape::triangle);
    Mesh<E> mesh;
    std::vector<Id> corners;
    mesh.region_names = {"disc"};
    mesh.nodes.push_back(middle);
    mesh.arcs = {{middle, r}};
    mesh.faces = {{"rim", {}}};
    for (int i = 0; i < n; ++i) {
        const double a = 2.0 * pi * i / n;
        mesh.nodes.push_back({middle.x + r * std::cos(a), middle.y + r * std::sin(a)});
        corners.insert(corners.end(), {0, i + 1, (i + 1) % n + 1});
        mesh.region.push_back(0);
        mesh.faces[0].sides.push_back({i, 1});
        mesh.curved.push_back({{i, 1}, 0});
    }
    detail::add_inner_nodes(mesh, detail::cell_kind<E>(), corners);
    return mesh;
}

/// Area (2D) or length (1D) of a mesh or of one of its regions, exact for the polynomial cells: quadrature by a fine product
/// of midpoint sums would not be, so the determinant is integrated by Gauss points on the square folded to the triangle.
inline double area_of(const MeshData& mesh, const detail::CellKind& kind, Index region = -1) {
    static constexpr double node[4] = {0.069431844202973712, 0.330009478207571868, 0.669990521792428132,
                                       0.930568155797026288};
    static constexpr double weight[4] = {0.173927422568726929, 0.326072577431273071, 0.326072577431273071,
                                         0.173927422568726929};
    double sum = 0.0;
    Point x[detail::max_cell_nodes];
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        if (region >= 0 && mesh.region[static_cast<std::size_t>(c)] != region) continue;
        detail::cell_points(mesh, c, x);
        for (int i = 0; i < 4; ++i)
            for (int j = 0; j < (kind.dim == 1 ? 1 : 4); ++j) {
                Point xi{node[i], kind.dim == 1 ? 0.0 : node[j]};
                double w = weight[i] * (kind.dim == 1 ? 1.0 : weight[j]);
                if (kind.shape == CellShape::triangle) {
                    w *= 1.0 - xi.x;
                    xi.y *= 1.0 - xi.x;
                }
                sum += w * detail::jacobian_in_cell(kind, x, xi);
            }
    }
    return sum;
}

template <class E>
double area_of(const Mesh<E>& mesh, Index region = -1) {
    return area_of(mesh, detail::cell_kind<E>(), region);
}

} // namespace tepor::test
