#pragma once
// What the mesh room needs to know of an element type, as plain data, so that its algorithms are compiled once.

#include <array>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/element/concept.hpp>
#include <tepor/element/map.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor {
template <int P>
struct Segment;
template <int P>
struct Triangle;
template <int P>
struct Quadrilateral;
struct ExactSegment;
} // namespace tepor

namespace tepor::detail {

/// Most nodes a cell may have in the algorithms of this room (their work arrays are on the stack).
inline constexpr int max_cell_nodes = 64;

/// An element type as tables and functions.
struct CellKind {
    int dim = 0;
    int order = 0;
    int nodes = 0;
    int sides = 0;
    int side_nodes = 0;
    CellShape shape = CellShape::segment;
    std::vector<Point> reference_nodes; ///< y = 0 in 1D
    std::vector<int> side_node_table;   ///< local node j of side s at s * side_nodes + j

    /// Shape functions (nodes) and their derivatives (nodes x dim, node by node) at xi; either may be null.
    void (*evaluate)(Point xi, double* shape, double* gradient) = nullptr;
    /// Reference coordinates of a place; false when none was found.
    bool (*invert)(const Point* nodes, Point p, Point* xi) = nullptr;

    [[nodiscard]] int vertices() const noexcept { return dim == 1 ? 2 : sides; }
    [[nodiscard]] int side_node(int side, int j) const noexcept {
        return side_node_table[as_size(side * side_nodes + j)];
    }
};

template <Element E>
void evaluate_cell(Point xi, double* shape, double* gradient) {
    typename E::point at;
    at[0] = xi.x;
    if constexpr (E::dim == 2) at[1] = xi.y;
    if (shape != nullptr) {
        const auto n = E::shape(at);
        for (int i = 0; i < E::nodes; ++i) shape[i] = n[i];
    }
    if (gradient != nullptr) {
        const auto g = E::gradient(at);
        for (int i = 0; i < E::nodes; ++i)
            for (int d = 0; d < E::dim; ++d) gradient[i * E::dim + d] = g(i, d);
    }
}

template <Element E>
bool invert_cell(const Point* nodes, Point p, Point* xi) {
    const auto found = inverse_map<E>(CellNodes<E>(nodes, as_size(E::nodes)), p);
    xi->x = found.xi[0];
    xi->y = 0.0;
    if constexpr (E::dim == 2) xi->y = found.xi[1];
    return found.converged;
}

/// The kind of an element type; built once.
template <class E>
const CellKind& cell_kind() {
    static_assert(Element<E>, "cell_kind: not an element; see element/concept.hpp for what one has");
    static_assert(E::nodes <= max_cell_nodes, "an element may have at most 64 nodes");
    static const CellKind kind = [] {
        CellKind k;
        k.dim = E::dim;
        k.order = E::order;
        k.nodes = E::nodes;
        k.sides = E::sides;
        k.side_nodes = E::Side::nodes;
        k.shape = E::shape_of_cell;
        for (int i = 0; i < E::nodes; ++i) {
            const auto xi = E::reference_node(i);
            Point p{xi[0], 0.0};
            if constexpr (E::dim == 2) p.y = xi[1];
            k.reference_nodes.push_back(p);
        }
        for (int s = 0; s < E::sides; ++s)
            for (int j = 0; j < E::Side::nodes; ++j) k.side_node_table.push_back(E::side_node(s, j));
        k.evaluate = &evaluate_cell<E>;
        k.invert = &invert_cell<E>;
        return k;
    }();
    return kind;
}

// With tepor::compiled the library's own elements stand in it, and their code is not made again; see mesh/impl/instances.hpp.
#if defined(TEPOR_COMPILED) && !defined(TEPOR_BUILDING)
extern template const CellKind& cell_kind<Segment<1>>();
extern template const CellKind& cell_kind<Segment<2>>();
extern template const CellKind& cell_kind<Segment<3>>();
extern template const CellKind& cell_kind<Triangle<1>>();
extern template const CellKind& cell_kind<Triangle<2>>();
extern template const CellKind& cell_kind<Triangle<3>>();
extern template const CellKind& cell_kind<Quadrilateral<1>>();
extern template const CellKind& cell_kind<Quadrilateral<2>>();
extern template const CellKind& cell_kind<Quadrilateral<3>>();
extern template const CellKind& cell_kind<ExactSegment>();
#endif

/// Local vertices at the two ends of a side; in 1D the one vertex twice.
inline std::array<int, 2> side_ends(const MeshData& mesh, int side) noexcept {
    if (mesh.dim == 1) return {side, side};
    return {side, side + 1 == mesh.sides_per_cell ? 0 : side + 1};
}

/// The place of reference point xi in a cell with the given node coordinates.
inline Point place_in_cell(const CellKind& kind, const Point* x, Point xi) noexcept {
    double n[max_cell_nodes];
    kind.evaluate(xi, n, nullptr);
    Point p;
    for (int i = 0; i < kind.nodes; ++i) p = p + n[i] * x[i];
    return p;
}

/// Determinant of the Jacobian at xi.
inline double jacobian_in_cell(const CellKind& kind, const Point* x, Point xi) noexcept {
    double g[2 * max_cell_nodes];
    kind.evaluate(xi, nullptr, g);
    Point a;
    Point b;
    if (kind.dim == 1) {
        for (int i = 0; i < kind.nodes; ++i) a = a + g[i] * x[i];
        return a.x;
    }
    for (int i = 0; i < kind.nodes; ++i) {
        a = a + g[2 * i] * x[i];
        b = b + g[2 * i + 1] * x[i];
    }
    return cross(a, b);
}

/// The node coordinates of a cell, copied to x.
inline void cell_points(const MeshData& mesh, Index c, Point* x) noexcept {
    const Id* ids = mesh.cell(c);
    const Point* nodes = mesh.nodes.data();
    for (int i = 0; i < mesh.nodes_per_cell; ++i) x[i] = nodes[ids[i]];
}

} // namespace tepor::detail
