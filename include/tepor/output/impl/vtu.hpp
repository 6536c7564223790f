#pragma once
// The arrays of a VTU file.

#include <bit>
#include <cstring>
#include <fmt/format.h>
#include <numeric>
#include <tepor/output/file.hpp>
#include <tepor/output/vtu.hpp>

namespace tepor {

namespace detail {

/// VTK cell type numbers. Source: VTK file formats, cell types (linear, quadratic, Lagrange).
inline int vtk_cell_type(const MeshData& mesh) {
    const bool lagrange = mesh.order == 3;
    switch (mesh.shape) {
    case CellShape::segment: return mesh.order == 1 ? 3 : (lagrange ? 68 : 21);
    case CellShape::triangle: return mesh.order == 1 ? 5 : (lagrange ? 69 : 22);
    case CellShape::quadrilateral:
        if (mesh.order == 2) return mesh.nodes_per_cell == 8 ? 23 : 28;
        return lagrange ? 70 : 9;
    case CellShape::point: break;
    }
    return -1;
}

/// Position in a cell of ours of each node of VTK's. Ours walk all sides counter-clockwise; VTK's Lagrange quadrilateral
/// walks its upper and left edge the other way.
inline std::vector<int> vtk_node_order(const MeshData& mesh) {
    std::vector<int> order(detail::as_size(mesh.nodes_per_cell));
    std::iota(order.begin(), order.end(), 0);
    if (mesh.shape == CellShape::quadrilateral && mesh.order == 3) {
        std::swap(order[8], order[9]);
        std::swap(order[10], order[11]);
    }
    return order;
}

/// Words in an ASCII array of VTK strings: the bytes as numbers, each word ended by 0.
inline std::string vtk_strings(const std::vector<std::string>& words) {
    std::string out;
    for (const std::string& word : words) {
        for (const char c : word) out += fmt::format("{} ", static_cast<int>(static_cast<unsigned char>(c)));
        out += "0 ";
    }
    return out;
}

/// Appended blocks: a 64-bit size, then the numbers.
class VtuBlocks {
  public:
    template <class T>
    std::size_t add(const std::vector<T>& values) {
        const std::size_t offset = bytes_.size();
        const auto size = static_cast<std::uint64_t>(values.size() * sizeof(T));
        const char* const begin = reinterpret_cast<const char*>(values.data()); // NOLINT: the bytes as they lie
        char head[sizeof size];
        std::memcpy(head, &size, sizeof size);
        bytes_.append(head, sizeof size);
        bytes_.append(begin, static_cast<std::size_t>(size));
        return offset;
    }
    [[nodiscard]] const std::string& bytes() const noexcept { return bytes_; }

  private:
    std::string bytes_;
};

} // namespace detail

TEPOR_INLINE std::string vtu_bytes(const Field& field) {
    static_assert(std::endian::native == std::endian::little,
                  "VTU files are written as the memory lies, little endian");
    const Model& model = field.model();
    const MeshData& mesh = field.mesh();
    const int type = detail::vtk_cell_type(mesh);
    if (type < 0)
        throw Error(ErrorCode::not_supported, "vtu",
                    "VTU files hold segments, triangles and quadrilaterals of order 1 to 3");

    // points: nodes as numbered by the user, further copies at contacts behind them
    std::vector<Point> places = field.node_places();
    std::vector<double> temperature = field.node_temperatures();
    std::vector<std::int64_t> point_of(detail::as_size(model.unknowns));
    for (std::size_t u = 0; u < point_of.size(); ++u) {
        const auto node = detail::as_size(model.node_of[u]);
        if (model.unknown_of[node] == static_cast<Id>(u)) {
            point_of[u] = static_cast<std::int64_t>(node);
            continue;
        }
        point_of[u] = static_cast<std::int64_t>(places.size());
        places.push_back(places[node]);
        temperature.push_back(field.temperature()[u]);
    }
    std::vector<double> coordinates;
    coordinates.reserve(3 * places.size());
    for (const Point p : places) coordinates.insert(coordinates.end(), {p.x, p.y, 0.0});

    const std::vector<int> order = detail::vtk_node_order(mesh);
    const auto cells = static_cast<std::size_t>(mesh.cell_count());
    std::vector<std::int64_t> connectivity;
    std::vector<std::int64_t> offsets;
    std::vector<std::uint8_t> types(cells, static_cast<std::uint8_t>(type));
    std::vector<std::int32_t> regions;
    std::vector<double> flux;
    for (std::size_t c = 0; c < cells; ++c) {
        const Id own = model.model_cell(static_cast<Index>(c));
        for (const int i : order) connectivity.push_back(point_of[detail::as_size(model.cell(own)[i])]);
        offsets.push_back(static_cast<std::int64_t>(connectivity.size()));
        regions.push_back(mesh.region[c]);
        const Point q = field.cell_heat_flux(static_cast<Index>(c));
        flux.insert(flux.end(), {q.x, q.y, 0.0});
    }

    detail::VtuBlocks blocks;
    const std::size_t at_temperature = blocks.add(temperature);
    const std::size_t at_region = blocks.add(regions);
    const std::size_t at_flux = blocks.add(flux);
    const std::size_t at_places = blocks.add(coordinates);
    const std::size_t at_connectivity = blocks.add(connectivity);
    const std::size_t at_offsets = blocks.add(offsets);
    const std::size_t at_types = blocks.add(types);
    const char* scale = model.scale == TemperatureScale::celsius ? "degC" : "K";

    std::string out =
        "<?xml version=\"1.0\"?>\n"
        "<VTKFile type=\"UnstructuredGrid\" version=\"1.0\" byte_order=\"LittleEndian\" header_type=\"UInt64\">\n"
        "  <UnstructuredGrid>\n";
    out += fmt::format("    <FieldData>\n      <DataArray type=\"Float64\" Name=\"TimeValue\" NumberOfTuples=\"1\" "
                       "format=\"ascii\">{:.17g}</DataArray>\n",
                       field.time());
    out += fmt::format("      <Array type=\"String\" Name=\"region names\" NumberOfTuples=\"{}\" format=\"ascii\">{}"
                       "</Array>\n",
                       mesh.region_names.size(), detail::vtk_strings(mesh.region_names));
    out += "    </FieldData>\n";
    out += fmt::format("    <Piece NumberOfPoints=\"{}\" NumberOfCells=\"{}\">\n", places.size(), cells);
    const auto array = [&out](const char* number, const std::string& name, int components, std::size_t offset) {
        out += fmt::format("        <DataArray type=\"{}\" Name=\"{}\" NumberOfComponents=\"{}\" format=\"appended\" "
                           "offset=\"{}\"/>\n",
                           number, name, components, offset);
    };
    out += fmt::format("      <PointData Scalars=\"temperature [{}]\">\n", scale);
    array("Float64", fmt::format("temperature [{}]", scale), 1, at_temperature);
    out += "      </PointData>\n      <CellData>\n";
    array("Int32", "region", 1, at_region);
    array("Float64", "heat flux [W/m2]", 3, at_flux);
    out += "      </CellData>\n      <Points>\n";
    array("Float64", "places [m]", 3, at_places);
    out += "      </Points>\n      <Cells>\n";
    array("Int64", "connectivity", 1, at_connectivity);
    array("Int64", "offsets", 1, at_offsets);
    array("UInt8", "types", 1, at_types);
    out += "      </Cells>\n    </Piece>\n  </UnstructuredGrid>\n  <AppendedData encoding=\"raw\">\n_";
    out += blocks.bytes();
    out += "\n  </AppendedData>\n</VTKFile>\n";
    return out;
}

TEPOR_INLINE void write_vtu(const std::string& path, const Field& field) {
    detail::write_file(path, vtu_bytes(field));
}

TEPOR_INLINE void VtuSeries::add(const Field& field) {
    const std::string path = fmt::format("{}_{:04}.vtu", stem_, files_.size());
    write_vtu(path, field);
    files_.push_back(path);
    times_.push_back(field.time());
    std::string index = "time [s],file\n";
    for (std::size_t i = 0; i < files_.size(); ++i) {
        const std::size_t slash = files_[i].find_last_of('/');
        index += fmt::format("{:.17g},{}\n", times_[i],
                             slash == std::string::npos ? files_[i] : files_[i].substr(slash + 1));
    }
    detail::write_file(stem_ + ".csv", index);
}

} // namespace tepor
