#pragma once
// Marks edges until every marked cell has its refinement edge marked, then splits each cell into two, three or four.

#include <algorithm>
#include <array>
#include <tepor/answers/straight_bisection.hpp>
#include <tepor/mesh/sides.hpp>

namespace tepor::detail {

TEPOR_INLINE MeshData prepared_for_bisection(const MeshData& mesh) {
    MeshData out = mesh;
    out.curved.clear();
    std::vector<signed char> turn(as_size(out.cell_count()), 0);
    for (Index c = 0; c < out.cell_count(); ++c) {
        Id* cell = out.cells.data() + as_size(c) * as_size(out.nodes_per_cell);
        int longest = 0;
        double most = 0.0;
        for (int s = 0; s < 3; ++s) { // the first of equally long ones, by a margin that rounding does not flip
            const Point a = out.nodes[as_size(cell[s])], b = out.nodes[as_size(cell[s == 2 ? 0 : s + 1])], d = b - a;
            if (dot(d, d) > most * (1.0 + 1e-10)) {
                most = dot(d, d);
                longest = s;
            }
            if (out.order == 2) out.nodes[as_size(cell[3 + s])] = 0.5 * (a + b);
        }
        const int first = longest == 0 ? 2 : longest - 1; // side s lies opposite vertex s + 2
        turn[as_size(c)] = static_cast<signed char>(first);
        std::rotate(cell, cell + first, cell + 3);
        if (out.order == 2) std::rotate(cell + 3, cell + 3 + first, cell + 6);
    }
    for (MeshFace& face : out.faces)
        for (CellSide& side : face.sides) side.side = (side.side + 3 - turn[as_size(side.cell)]) % 3;
    return out;
}

/// Builds the finer mesh: vertices first, then the middles that order 2 needs.
class Bisection {
  public:
    Bisection(const MeshData& mesh, const std::vector<char>& marked) : mesh_(mesh), map_(match_sides(mesh)) {
        close(marked);
        new_vertices();
        for (Index c = 0; c < mesh.cell_count(); ++c) split(c);
        faces();
        if (mesh.order == 2) middles();
    }

    MeshData take() { return std::move(fine_); }

  private:
    void close(const std::vector<char>& marked) {
        cut_.assign(map_.first.size(), 0);
        std::vector<Index> todo;
        const auto mark = [&](Id side) {
            if (cut_[as_size(side)]) return;
            cut_[as_size(side)] = 1;
            for (const CellSide s : {map_.first[as_size(side)], map_.second[as_size(side)]})
                if (s.cell >= 0 && !cut_[as_size(map_.number(s.cell, 1))]) todo.push_back(s.cell);
        };
        for (Index c = 0; c < mesh_.cell_count(); ++c)
            if (marked[as_size(c)]) mark(map_.number(c, 1)); // side 1 lies opposite vertex 0
        while (!todo.empty()) {
            const Index c = todo.back();
            todo.pop_back();
            mark(map_.number(c, 1));
        }
    }

    void new_vertices() {
        fine_.dim = mesh_.dim, fine_.order = mesh_.order, fine_.nodes_per_cell = mesh_.nodes_per_cell;
        fine_.sides_per_cell = mesh_.sides_per_cell, fine_.shape = mesh_.shape, fine_.frame = mesh_.frame;
        fine_.region_names = mesh_.region_names, fine_.remarks = mesh_.remarks;
        // vertices of the coarse mesh, renumbered without the middles of order 2
        vertex_.assign(mesh_.nodes.size(), -1);
        for (Index c = 0; c < mesh_.cell_count(); ++c)
            for (int i = 0; i < 3; ++i) {
                Id& v = vertex_[as_size(mesh_.cell(c)[i])];
                if (v >= 0) continue;
                v = as_id(fine_.nodes.size());
                fine_.nodes.push_back(mesh_.nodes[as_size(mesh_.cell(c)[i])]);
            }
        middle_.assign(cut_.size(), -1);
        for (std::size_t s = 0; s < cut_.size(); ++s) {
            if (!cut_[s]) continue;
            const CellSide side = map_.first[s];
            const Id* cell = mesh_.cell(side.cell);
            middle_[s] = as_id(fine_.nodes.size());
            fine_.nodes.push_back(0.5 * (mesh_.nodes[as_size(cell[side.side])] +
                                         mesh_.nodes[as_size(cell[side.side == 2 ? 0 : side.side + 1])]));
        }
        piece_.assign(2 * map_.id.size(), CellSide{-1, 0});
    }

    /// One new triangle; `from[s]` is the coarse side its side s lies on (3: none) and whether it is the second half of it.
    void add(Id region, std::array<Id, 3> v, std::array<int, 3> from, Index coarse) {
        const Id cell = as_id(fine_.region.size());
        for (const Id i : v) vertices_.push_back(i);
        fine_.region.push_back(region);
        for (int s = 0; s < 3; ++s)
            if (from[as_size(s)] >= 0) piece_[as_size(6 * coarse + from[as_size(s)])] = {cell, s};
    }

    /// Piece 2 s and 2 s + 1 of coarse side s: its halves in the direction of the side, or 2 s alone when it is whole.
    void split(Index c) {
        const Id r = mesh_.region[as_size(c)];
        const Id* cell = mesh_.cell(c);
        const Id a = vertex_[as_size(cell[0])], b = vertex_[as_size(cell[1])], d = vertex_[as_size(cell[2])];
        const Id mab = middle_[as_size(map_.number(c, 0))], m = middle_[as_size(map_.number(c, 1))],
                 mda = middle_[as_size(map_.number(c, 2))];
        if (m < 0) {
            add(r, {a, b, d}, {0, 2, 4}, c);
            return;
        }
        // children (m, a, b) and (m, d, a): newest vertex first
        if (mab < 0)
            add(r, {m, a, b}, {-1, 0, 2}, c);
        else {
            add(r, {mab, m, a}, {-1, -1, 0}, c);
            add(r, {mab, b, m}, {1, 2, -1}, c);
        }
        if (mda < 0)
            add(r, {m, d, a}, {3, 4, -1}, c);
        else {
            add(r, {mda, m, d}, {-1, 3, 4}, c);
            add(r, {mda, a, m}, {5, -1, -1}, c);
        }
    }

    void faces() {
        for (const MeshFace& face : mesh_.faces) {
            MeshFace out;
            out.name = face.name;
            for (const CellSide side : face.sides)
                for (int half = 0; half < 2; ++half) {
                    const CellSide piece = piece_[as_size(6 * static_cast<Index>(side.cell) + 2 * side.side + half)];
                    if (piece.cell >= 0) out.sides.push_back(piece);
                }
            fine_.faces.push_back(std::move(out));
        }
        if (mesh_.order == 1) fine_.cells = std::move(vertices_);
    }

    void middles() {
        MeshData linear;
        linear.dim = 2, linear.order = 1, linear.nodes_per_cell = 3, linear.sides_per_cell = 3,
        linear.shape = mesh_.shape;
        linear.nodes = fine_.nodes;
        linear.region = fine_.region;
        linear.cells = std::move(vertices_);
        const SideMap sides = match_sides(linear);
        const Id first = as_id(fine_.nodes.size());
        for (std::size_t s = 0; s < sides.first.size(); ++s) {
            const CellSide side = sides.first[s];
            const Id* cell = linear.cell(side.cell);
            fine_.nodes.push_back(0.5 * (linear.nodes[as_size(cell[side.side])] +
                                         linear.nodes[as_size(cell[side.side == 2 ? 0 : side.side + 1])]));
        }
        fine_.cells.resize(2 * linear.cells.size());
        for (Index c = 0; c < linear.cell_count(); ++c)
            for (int i = 0; i < 3; ++i) {
                fine_.cells[as_size(6 * c + i)] = linear.cell(c)[i];
                fine_.cells[as_size(6 * c + 3 + i)] = first + sides.number(c, i);
            }
    }

    const MeshData& mesh_;
    SideMap map_;
    MeshData fine_;
    std::vector<char> cut_;
    std::vector<Id> vertex_, middle_, vertices_;
    std::vector<CellSide> piece_;
};

TEPOR_INLINE MeshData bisected(const MeshData& mesh, const std::vector<char>& marked) {
    return Bisection(mesh, marked).take();
}

} // namespace tepor::detail
