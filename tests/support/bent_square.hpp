#pragma once
// Systems of linear triangles on an image of the unit square, with a contact along its middle if asked for.

#include "square.hpp"

namespace tepor::test {

/// The lattice of square_of() moved by `image`, which keeps the turning sense; nodes are jittered before. `contact` > 0 [W/(m2 K)]
/// doubles the nodes of the middle line: consistent terms hc (T1 - T2) between its sides.
template <class Image, class Conductivity>
Square bent_square(Index cells, bool jittered, std::uint64_t seed, double film, const Image& image,
                   const Conductivity& conductivity, double contact = 0.0) {
    Random random(seed);
    const double h = 1.0 / static_cast<double>(cells);
    const Index middle = contact > 0.0 ? cells / 2 : cells;
    const Index row = cells + 1 + (contact > 0.0 ? 1 : 0);
    const auto left_of = [&](Index i, Index j) { return j * row + i + (i > middle ? 1 : 0); }; // as seen from the left
    const auto right_of = [&](Index i, Index j) {                                              // as seen from the right
        return j * row + i + (contact > 0.0 && i >= middle ? 1 : 0);
    };
    Square out;
    out.places.resize(detail::as_size(row * (cells + 1)));
    for (Index j = 0; j <= cells; ++j) {
        for (Index i = 0; i <= cells; ++i) {
            double x = static_cast<double>(i) * h, y = static_cast<double>(j) * h;
            if (jittered && i > 0 && i < middle) x += random.between(-0.25, 0.25) * h;
            if (jittered && i > middle && i < cells) x += random.between(-0.25, 0.25) * h;
            if (jittered && j > 0 && j < cells) y += random.between(-0.25, 0.25) * h;
            out.places[detail::as_size(left_of(i, j))] = out.places[detail::as_size(right_of(i, j))] = image(x, y);
        }
    }
    std::vector<double> diagonal(out.places.size(), 0.0);
    std::vector<Entry> entries;
    const auto place = [&](Index v) { return out.places[detail::as_size(v)]; };
    const auto triangle = [&](Index a, Index b, Index c) {
        const Index id[3] = {a, b, c};
        const double area = 0.5 * cross(place(b) - place(a), place(c) - place(a));
        const Point centre = (1.0 / 3.0) * (place(a) + place(b) + place(c));
        const double k = conductivity(centre.x, centre.y);
        for (int r = 0; r < 3; ++r) {
            const int s = (r + 1) % 3, t = (r + 2) % 3;
            const Point er = place(id[t]) - place(id[s]), es = place(id[r]) - place(id[t]);
            diagonal[detail::as_size(id[r])] += k * dot(er, er) / (4.0 * area);
            const double value = k * dot(er, es) / (4.0 * area);
            if (jittered || std::abs(value) > 1e-14 * k) entries.push_back({id[r], id[s], value, value});
        }
    };
    const auto couple = [&](Index a, Index b, double value) { entries.push_back({a, b, value, value}); };
    const auto edge = [&](Index a, Index b) {
        const double share = film * distance(place(a), place(b)) / 6.0;
        diagonal[detail::as_size(a)] += 2.0 * share;
        diagonal[detail::as_size(b)] += 2.0 * share;
        couple(a, b, share);
    };
    for (Index j = 0; j < cells; ++j) {
        for (Index i = 0; i < cells; ++i) {
            const Index a = right_of(i, j), b = left_of(i + 1, j), c = left_of(i + 1, j + 1), d = right_of(i, j + 1);
            if (jittered && random.next() < 0.5) {
                triangle(a, b, d);
                triangle(b, c, d);
            } else {
                triangle(a, b, c);
                triangle(a, c, d);
            }
        }
        edge(right_of(j, 0), left_of(j + 1, 0));
        edge(right_of(j, cells), left_of(j + 1, cells));
        edge(left_of(0, j), left_of(0, j + 1));
        edge(right_of(cells, j), right_of(cells, j + 1));
        if (!(contact > 0.0)) continue;
        const Index side[2][2] = {{left_of(middle, j), left_of(middle, j + 1)},
                                  {right_of(middle, j), right_of(middle, j + 1)}};
        const double share = contact * distance(place(side[0][0]), place(side[0][1])) / 6.0;
        for (const auto& [a, b] : side) {
            diagonal[detail::as_size(a)] += 2.0 * share;
            diagonal[detail::as_size(b)] += 2.0 * share;
            couple(a, b, share);
        }
        couple(side[0][0], side[1][0], -2.0 * share);
        couple(side[0][1], side[1][1], -2.0 * share);
        couple(side[0][0], side[1][1], -share);
        couple(side[0][1], side[1][0], -share);
    }
    out.matrix = sparse(std::move(diagonal), std::move(entries));
    return out;
}

} // namespace tepor::test
