#pragma once
// Refiner: from a plane graph to triangles of the sizes asked for, with no angle below 25 degrees where the drawing lets it.

#include <tepor/base/config.hpp>
#include <tepor/mesh/delaunay.hpp>
#include <tepor/mesh/of_place.hpp>
#include <tepor/mesh/plane_graph.hpp>
#include <vector>

namespace tepor::detail {

/// What the refiner is to reach.
struct Targets {
    double size = 0.0;               ///< everywhere [m]
    std::vector<double> region_size; ///< by region; may be empty
    SizeLaw law;
    double growth = 0.3;      ///< the size may grow by this much per metre of distance
    double turn = 0.35;       ///< most an arc may turn in one piece [rad]
    double deviation = 1e300; ///< most a chord may lie off its arc [m]
    Index most_triangles = 0;
};

/// Delaunay refinement.
///
/// Sources: Ruppert, J. Algorithms 18 (1995) 548-585 (encroached segments, circumcentres); Miller, Pav & Walkington, 14th
/// Int. Meshing Roundtable (2005) and IJCGA 15 (2005) 25-78 (small input angles: shells of equal distance around the apex;
/// triangles whose shortest edge joins two such shells are left; terminates for angles up to 26.45 degrees);
/// Uengoer, LATIN 2004 (off-centres).
class Refiner {
  public:
    Refiner(const PlaneGraph& graph, const Targets& targets);

    /// Triangulate the graph: pieces of edges within the turn, the deviation and the sizes, all held as edges. Regions are
    /// the labels of the triangles, flooded from the sides of the edges; with `sized` false only the turn counts.
    void start(bool sized);

    /// Refine to the targets.
    void refine();

    Delaunay mesh;
    std::vector<Id> edge_of_segment; ///< edge of the graph that a segment is a piece of
    std::vector<Id> vertex_of_point; ///< vertex of each point of the graph

  private:
    struct Piece {
        Id a;
        Id b;
        Id edge;
    };

    [[nodiscard]] bool pieces_too_long(const PlaneGraph::Edge& e, Point a, Point b, bool sized) const;
    [[nodiscard]] Point split_place(const PlaneGraph::Edge& e, Point a, Point b) const;
    [[nodiscard]] double target_at(Point p, Id region) const;
    void mark_sharp_corners();
    void subdivide(bool sized);
    void part_crossing_chords();
    void insert_pieces();
    void flood();

    [[nodiscard]] bool encroached(Id segment) const;
    [[nodiscard]] bool too_long(Id segment) const;
    void check_segment(Id segment);
    void split_segment(Id segment, int depth);
    void settle(Id vertex);
    void relax(Id vertex);
    void judge(Id triangle);
    [[nodiscard]] int verdict(Id triangle) const; ///< 0 good, 1 too large, 2 a bad angle
    [[nodiscard]] bool bad_angle(Id triangle) const;
    [[nodiscard]] bool across_sharp_corner(Id p, Id q) const;
    void smooth();
    void mend(Id triangle, int fault, bool plain);
    [[noreturn]] void fail(Point p, const char* cause) const;
    void sync_vertex(Id vertex, Id edge, double size);

    const PlaneGraph& graph_;
    const Targets& targets_;
    std::vector<Point> points_; ///< of the graph, then of the pieces
    std::vector<Piece> pieces_;
    std::vector<Id> point_edge_;   ///< edge whose inside holds a point, -1
    std::vector<char> sharp_;      ///< of the graph's points: 1 where two edges meet at less than 75 degrees
    std::vector<Id> vertex_edge_;  ///< edge whose inside holds a vertex of the mesh, -1 for others
    std::vector<Id> vertex_point_; ///< point of the graph of a vertex, -1 for others
    std::vector<double> size_;     ///< target size at each vertex
    std::vector<Id> segments_;     ///< waiting to be looked at
    std::vector<Id> triangles_;
    std::vector<char> waiting_; ///< of triangles
    std::vector<Id> relaxing_;
};

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/pieces.hpp>
#include <tepor/mesh/impl/quality.hpp>
#endif
