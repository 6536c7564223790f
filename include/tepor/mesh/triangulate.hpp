#pragma once
// triangulate(section, options, frame): the mesh of a drawing.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/of_place.hpp>
#include <tepor/mesh/section.hpp>
#include <vector>

namespace tepor {

/// A cell size for a named region or face.
struct NamedSize {
    std::string name;
    double size = 0.0; ///< [m]
};

/// How finely to mesh. `size` is the length cell sides are to have; the smallest of all that apply counts.
struct Meshing {
    double size = 0.0;           ///< everywhere [m]; 0 takes a 40th of the drawing's diagonal
    std::vector<NamedSize> in{}; ///< by region
    std::vector<NamedSize> on{}; ///< along faces; an edge that passes the test of a face in part is sized as a whole
    SizeLaw law{};               ///< by place, asked at nodes: details much smaller than `size` can be missed
    double growth =
        0.3; ///< sizes grow by at most this much per unit of distance, so neighbouring sides by about 1 to 1.3
    double turn = 20.0;             ///< most an arc turns within one cell side [degrees], at most 30
    double deviation = 0.0;         ///< most a chord lies off its arc [m]; 0: only `turn` counts
    Index most_triangles = 4000000; ///< more is an Error, for sizes in the wrong unit
};

namespace detail {
/// Fill `mesh`, whose element description is set.
void triangulate(const Section& section, const Meshing& meshing, const CellKind& kind, MeshData& mesh);
} // namespace detail

/// Mesh what a drawing shows.
///
/// - Constrained Delaunay triangles; no angle is below 25 degrees, save in triangles that touch an input angle below 60
///   degrees: at its corner, or from one of its sides to the other.
/// - Sides on arcs are listed in `curved`. For order 2 and 3 their nodes lie on the true arc; for order 1 a chord lies off the
///   arc by at most r (1 - cos(turn / 2)), and by at most `deviation`. Where two curves touch so closely that a curved cell
///   would fold, its side is kept straight, and a remark says so.
/// - Regions without visible area have no name in the mesh; the remarks tell.
///
/// @throws Error bad_geometry  the drawing cannot be meshed: the place and the cause are in the message
///               bad_name      a size or a face names nothing
///               bad_value     an option outside its range
///               bad_law       the size law gives no size > 0
///               too_large     more triangles than most_triangles
/// Cost    about 1 us per triangle
/// Source  see detail::Refiner
template <Element E>
Mesh<E> triangulate(const Section& section, const Meshing& meshing = {}, const Frame& frame = {}) {
    static_assert(E::dim == 2 && E::shape_of_cell == CellShape::triangle,
                  "triangulate makes triangles: triangulate<Triangle<2>>(...)");
    Mesh<E> mesh;
    mesh.frame = frame;
    detail::triangulate(section, meshing, detail::cell_kind<E>(), mesh);
    return mesh;
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/triangulate.hpp>
#endif
