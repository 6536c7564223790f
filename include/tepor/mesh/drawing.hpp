#pragma once
// From the shapes of a Section to the plane graph of what can be seen: crossings, painting, faces.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/mesh/plane_graph.hpp>
#include <tepor/mesh/section.hpp>
#include <vector>

namespace tepor::detail {

/// All edges of a drawing split where they meet. Each piece knows the shapes whose outline it is.
struct Arrangement {
    /// A piece stands for part of the outline of a part of an item, walked forward (sign 1: inside on the left of a -> b) or
    /// backward (-1); for a line the item is -1.
    struct Owner {
        Id item;
        Id part; ///< number of the part over all items; -1 for a line
        int sign;
    };
    struct Piece {
        Id a;
        Id b;
        Id arc = -1;
        std::vector<Owner> owners;
        Id left_face = -1; ///< faces of the arrangement beside it, set by paint()
        Id right_face = -1;
    };
    std::vector<Point> points;
    std::vector<char> corner; ///< 1 where the drawing itself put the point: ends of edges and held points
    std::vector<Piece> pieces;
    std::vector<MeshArc> arcs;
    std::vector<Id> held; ///< point of each held point of the section
    double tolerance = 0.0;
    double diagonal = 0.0;
    int parts = 0;
    std::vector<Id> item_of_part;
};

/// Split all edges where they meet, and merge points within the tolerance; merges are added to the remarks.
Arrangement arrange(const Section& section, std::vector<std::string>& remarks);

/// Position along an edge, 0 at a, 1 at b (by chord or by turn), and how far a place lies off it.
struct OnEdge {
    double t;
    double off;
};
OnEdge project_on_edge(const ShapeEdge& e, Point p);

/// What the picture shows.
struct Picture {
    PlaneGraph graph;
    std::vector<std::string> regions;
    std::vector<std::string> faces; ///< in the order first named; also those by test and rest
    std::vector<std::string> remarks;
};

/// Region and faces of everything that is left to see.
///
/// @throws Error bad_geometry  nothing is left; a face's points lie off the edge; edges that cannot be told apart
///               bad_name      a face names no outer edge
Picture look_at(const Section& section);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/arrange.hpp>
#include <tepor/mesh/impl/painter.hpp>
#include <tepor/mesh/impl/picture.hpp>
#endif
