#pragma once
// layers: the mesh of a 1D stack, from the inner (left) face to the outer (right) one.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/describe/number.hpp>
#include <tepor/mesh/grading.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor {

/// One layer of a stack. Two layers of one name are one region.
struct Layer {
    std::string region;
    Number thickness;  ///< [m], a number or a Parameter
    Index cells = 1;   ///< at least 1
    Grading grading{}; ///< equal cells unless said
};

/// What a stack has beside its layers.
struct LayersOptions {
    Number start = 0.0; ///< x of the first face [m]; the inner radius of a pipe or shell; a number or a Parameter
};

/// The mesh of layers one after the other, with the faces "inner" (left, small radius) and "outer" (right).
///
///     layers<Segment<2>>({{.region = "lining", .thickness = 0.23, .cells = 8, .grading = finer_at_start(4)},
///                         {.region = "casing", .thickness = 0.006}});
///     layers<Segment<2>>({{.region = "insulation", .thickness = 0.05, .cells = 4}}, Cylindrical{.length = 10}, {.start = 0.03});
///
/// Nodes are numbered from left to right. In a cylinder or sphere a start of 0 is the solid centre: it has no area, so there
/// is no face "inner". A Parameter as thickness or start stands in the mesh at the value it was made with; the body
/// moves the nodes when it is set.
///
/// E is any 1D element, or a cell law with its two end nodes.
/// @throws Error missing     no layers
///               bad_name    a layer without a region name
///               bad_value   thickness not > 0, start not finite or < 0 where it is a radius, cells < 1, grading outside
///                           1e-6 .. 1e6, frame size not > 0, layers too thin for their place (x does not change)
///               too_large   more nodes than 32-bit ids hold
/// Cost  O(nodes)
template <class E>
requires(E::dim == 1) Mesh<E> layers(const std::vector<Layer>& stack, Frame frame = Planar{},
                                     const LayersOptions& options = {});

// ---------------------------------------------------------------------------------------------------------------------

namespace detail {

/// Fill the arrays of `mesh`, whose element has the given reference nodes: both ends first, then inner nodes ascending.
void build_layers(MeshData& mesh, const std::vector<Layer>& stack, const Frame& frame, const LayersOptions& options,
                  const std::vector<double>& reference_nodes);

/// A frame whose sizes are finite and > 0, and that exists in this dimension; else an Error by the name of the maker.
void check_frame(const Frame& frame, int dim, const char* maker);

/// Reference places of the nodes of a 1D element; a cell law may do without reference_node().
template <class E>
std::vector<double> segment_nodes() {
    std::vector<double> xi{0.0, 1.0};
    if constexpr (requires { E::reference_node(0)[0]; }) {
        xi.clear();
        for (int i = 0; i < E::nodes; ++i) xi.push_back(E::reference_node(i)[0]);
    } else {
        static_assert(E::nodes == 2, "a cell law without reference_node() has its two end nodes");
    }
    return xi;
}

} // namespace detail

template <class E>
requires(E::dim == 1) Mesh<E> layers(const std::vector<Layer>& stack, Frame frame, const LayersOptions& options) {
    Mesh<E> mesh;
    detail::build_layers(mesh, stack, frame, options, detail::segment_nodes<E>());
    return mesh;
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/mesh/impl/layers.hpp>
#endif
