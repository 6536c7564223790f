#pragma once
// VTU files (VTK XML, unstructured grid, binary appended) of fields and series of them.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor {

/// A field as the bytes of a VTU file: temperatures at the nodes, region and mean heat flux of the cells, the names of the
/// regions by their number, the time value.
///
/// Nodes come in the mesh's numbering; the second and further copies of nodes at contacts follow, so that jumps are kept.
/// Cells of order 1 and 2 are the linear and quadratic VTK cells, those of order 3 Lagrange cells.
/// Format: VTK XML file format 1.0, raw appended data, 64-bit block sizes, little endian.
/// @throws Error not_supported  an element that is none of the library's
[[nodiscard]] TEPOR_INLINE std::string vtu_bytes(const Field& field);

/// The same into a file. @throws Error bad_file (names the path), not_supported
TEPOR_INLINE void write_vtu(const std::string& path, const Field& field);

/// A series of VTU files `stem_0000.vtu`, `stem_0001.vtu` ... with an index `stem.csv` of times and files.
class VtuSeries {
  public:
    explicit VtuSeries(std::string stem) : stem_(std::move(stem)) {}
    /// Writes the next file and the index anew. @throws Error bad_file
    TEPOR_INLINE void add(const Field& field);
    [[nodiscard]] const std::vector<std::string>& files() const noexcept { return files_; }

  private:
    std::string stem_;
    std::vector<std::string> files_;
    std::vector<double> times_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/output/impl/vtu.hpp>
#endif
