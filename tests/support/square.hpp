#pragma once
// Systems of linear triangles on the unit square, made here so that solver tests need no mesh room.

#include "dense_system.hpp"

namespace tepor::test {

/// A system and the places of its unknowns.
struct Square {
    SparseMatrix matrix;
    std::vector<Point> places;
};

/// (cells + 1)^2 nodes, two linear triangles per cell, conductivity k(x, y), film `film` on the whole edge.
/// `jittered`: nodes moved and diagonals turned at random; `shuffled`: nodes numbered at random.
/// `stretch` scales y, so that cells get a large aspect ratio.
template <class Conductivity>
Square square_of(Index cells, bool jittered, bool shuffled, std::uint64_t seed, double film, double stretch,
                 const Conductivity& conductivity) {
    Random random(seed);
    const Index side = cells + 1;
    const double h = 1.0 / static_cast<double>(cells);
    std::vector<Id> number(detail::as_size(side * side));
    for (std::size_t i = 0; i < number.size(); ++i) number[i] = detail::as_id(i);
    if (shuffled) {
        for (std::size_t i = number.size() - 1; i > 0; --i) {
            std::swap(number[i], number[detail::as_size(random.below(static_cast<Index>(i) + 1))]);
        }
    }
    Square out;
    out.places.resize(number.size());
    const auto node = [&](Index i, Index j) { return number[detail::as_size(j * side + i)]; };
    for (Index j = 0; j < side; ++j) {
        for (Index i = 0; i < side; ++i) {
            double x = static_cast<double>(i) * h, y = static_cast<double>(j) * h;
            if (jittered && i > 0 && i < cells) x += random.between(-0.25, 0.25) * h;
            if (jittered && j > 0 && j < cells) y += random.between(-0.25, 0.25) * h;
            out.places[detail::as_size(node(i, j))] = {x, y * stretch};
        }
    }
    std::vector<double> diagonal(number.size(), 0.0);
    std::vector<Entry> entries;
    entries.reserve(6 * number.size());
    const auto triangle = [&](Id a, Id b, Id c) {
        const Id id[3] = {a, b, c};
        Point p[3];
        for (int k = 0; k < 3; ++k) p[k] = out.places[detail::as_size(id[k])];
        const double area = 0.5 * cross(p[1] - p[0], p[2] - p[0]);
        const Point middle = (1.0 / 3.0) * (p[0] + p[1] + p[2]);
        const double k = conductivity(middle.x, middle.y);
        for (int r = 0; r < 3; ++r) {
            const Point er = p[(r + 2) % 3] - p[(r + 1) % 3];
            diagonal[detail::as_size(id[r])] += k * dot(er, er) / (4.0 * area);
            const int s = (r + 1) % 3;
            const Point es = p[(s + 2) % 3] - p[(s + 1) % 3];
            const double value = k * dot(er, es) / (4.0 * area);
            if (jittered || std::abs(value) > 1e-14 * k) entries.push_back({id[r], id[s], value, value});
        }
    };
    for (Index j = 0; j < cells; ++j) {
        for (Index i = 0; i < cells; ++i) {
            const Id a = node(i, j), b = node(i + 1, j), c = node(i + 1, j + 1), d = node(i, j + 1);
            if (jittered && random.next() < 0.5) {
                triangle(a, b, d);
                triangle(b, c, d);
            } else {
                triangle(a, b, c);
                triangle(a, c, d);
            }
        }
    }
    for (Index i = 0; i < cells; ++i) {
        const Id ends[4][2] = {{node(i, 0), node(i + 1, 0)},
                               {node(i, cells), node(i + 1, cells)},
                               {node(0, i), node(0, i + 1)},
                               {node(cells, i), node(cells, i + 1)}};
        for (const auto& [a, b] : ends) {
            const double length = distance(out.places[detail::as_size(a)], out.places[detail::as_size(b)]);
            diagonal[detail::as_size(a)] += film * length / 3.0;
            diagonal[detail::as_size(b)] += film * length / 3.0;
            entries.push_back({a, b, film * length / 6.0, film * length / 6.0});
        }
    }
    out.matrix = sparse(std::move(diagonal), std::move(entries));
    return out;
}

inline Square square(Index cells, bool jittered, bool shuffled, std::uint64_t seed, double film = 10.0) {
    return square_of(cells, jittered, shuffled, seed, film, 1.0,
                     [](double x, double y) { return 1.0 + 0.5 * std::sin(3.0 * x + 5.0 * y); });
}

} // namespace tepor::test
