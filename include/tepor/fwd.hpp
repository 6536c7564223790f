#pragma once
// Forward declarations, for headers of your own that name the library's types without including them.

namespace tepor {

struct Point;
struct Planar;
struct Cylindrical;
struct Spherical;
class Frame;
class Error;

struct MeshData;
template <class E>
struct Mesh;

} // namespace tepor
