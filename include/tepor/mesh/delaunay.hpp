#pragma once
// Delaunay: a triangulation in a bounding square that points are inserted into, as plain arrays.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/mesh/predicates.hpp>
#include <vector>

namespace tepor::detail {

/// A constrained Delaunay triangulation.
///
/// Triangle t has the half-edges 3t, 3t + 1, 3t + 2; half-edge h runs from org(h) to the org of the next one, with the
/// triangle on its left. Vertices 0..3 are the corners of a square around everything, so that no point lies outside.
/// Constrained half-edges carry the number of a segment and are never flipped or crossed.
class Delaunay {
  public:
    std::vector<Point> points;
    std::vector<Id> org;          ///< vertex a half-edge starts from
    std::vector<Id> twin;         ///< the same edge seen from the other side, -1 on the bounding square
    std::vector<Id> segment;      ///< constraint on this edge, -1 when free
    std::vector<Id> label;        ///< of each triangle; copied to the triangles that replace it
    std::vector<Id> out;          ///< one half-edge leaving each vertex
    std::vector<Id> segment_edge; ///< one half-edge of each segment

    /// A square of four times the extent around the box low..high.
    Delaunay(Point low, Point high);

    static Id next(Id h) noexcept { return h % 3 == 2 ? h - 2 : h + 1; }
    static Id prev(Id h) noexcept { return h % 3 == 0 ? h + 2 : h - 1; }
    [[nodiscard]] Id from(Id h) const noexcept { return org[as_size(h)]; }
    [[nodiscard]] Id to(Id h) const noexcept { return org[as_size(next(h))]; }
    [[nodiscard]] Id apex(Id h) const noexcept { return org[as_size(prev(h))]; }
    [[nodiscard]] Point at(Id v) const noexcept { return points[as_size(v)]; }
    [[nodiscard]] Index triangles() const noexcept { return static_cast<Index>(label.size()); }

    /// Where a walk ended.
    struct Found {
        Id half =
            -1; ///< a half-edge of the triangle that holds the point, or the constrained one that stopped the walk
        bool blocked = false;
    };

    /// Walk from the triangle of half-edge h to the one that holds p; with stop, no constrained edge is crossed.
    /// Source of the walk: visibility walk, Devillers, Pion & Teillaud, Int. J. Found. Comput. Sci. 13 (2002) 181-199.
    [[nodiscard]] Found walk(Point p, Id h, bool stop) const;

    /// Find the cavity of p: the triangles with p inside their circumcircle, starting from the triangle of h that holds p.
    /// Its rim (half-edges inside the cavity, counter-clockwise) is then in `rim`.
    void open_cavity(Point p, Id h);

    /// Replace the open cavity by triangles around the new vertex p. Returns the vertex; its star is `star` (half-edges
    /// opposite to it).
    Id fill_cavity(Point p);

    /// Insert p by walk, cavity and fill; an existing vertex at exactly the same place is returned instead.
    Id insert(Point p, Id hint);

    /// Replace the diagonal h of its two triangles by the other one. Half-edges h and twin(h) then are the new diagonal.
    void flip(Id h);

    /// Flip edges until each edge that faced vertex v, listed in `star`, is locally Delaunay or constrained.
    void legalise(Id v);

    /// Put a new vertex at p, taken to lie on edge h; both halves keep the constraint: the first its segment number, the
    /// second a new one. `star` is set; Delaunay is restored around it. Returns -1 and changes nothing when a triangle would
    /// lose its orientation.
    Id split_edge(Id h, Point p);

    /// Move vertex v towards the target as far as its star lets it, flipping on the way. Returns -1 when it arrived, else
    /// the constrained half-edge in its way (or -2 when none can be named).
    Id move(Id v, Point target);

    /// Flip what is no longer Delaunay around a vertex that has been moved within its star; `star` is set.
    void mend_around(Id v);

    /// Make a-b an edge and give it the segment number. Vertices exactly on it split it: the remainder from the first
    /// such vertex to b is left for the caller, who gets that vertex; b when done; -1 - h when constrained half-edge h is
    /// crossed.
    Id force_edge(Id a, Id b, Id number);

    /// The half-edge from a to b, or -1.
    [[nodiscard]] Id find_edge(Id a, Id b) const;

    /// Give edge h (and its twin) a segment number, or -1.
    void constrain(Id h, Id number);

    /// Call act(h) for each half-edge leaving v, counter-clockwise; on the bounding square's corners the fan is open.
    template <class Act>
    void around(Id v, Act&& act) const {
        const Id first = out[as_size(v)];
        Id h = first;
        do {
            act(h);
            const Id back = prev(h); // comes into v
            h = twin[as_size(back)];
        } while (h >= 0 && h != first);
    }

    std::vector<Id> rim;
    std::vector<Id> star;

  private:
    void link(Id h, Id g) {
        twin[as_size(h)] = g;
        if (g >= 0) twin[as_size(g)] = h;
    }

    std::vector<Id> dead_;
    std::vector<Id> stack_;
};

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/constrained.hpp>
#include <tepor/mesh/impl/delaunay.hpp>
#endif
