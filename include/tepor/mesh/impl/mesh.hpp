#pragma once
// Copying and destroying a mesh: written once, not where each mesh is used.

#include <tepor/mesh/mesh.hpp>

namespace tepor {

TEPOR_INLINE MeshData::MeshData() = default;
TEPOR_INLINE MeshData::MeshData(const MeshData&) = default;
TEPOR_INLINE MeshData::MeshData(MeshData&&) noexcept = default;
TEPOR_INLINE MeshData& MeshData::operator=(const MeshData&) = default;
TEPOR_INLINE MeshData& MeshData::operator=(MeshData&&) noexcept = default;
TEPOR_INLINE MeshData::~MeshData() = default;

} // namespace tepor
