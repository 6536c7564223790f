#pragma once
// Pictures as self-contained SVG: temperature along a 1D body, temperature maps of sections, strip charts over time.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/field/field.hpp>
#include <tepor/output/csv.hpp>
#include <tepor/output/picture_style.hpp>
#include <vector>

namespace tepor {

/// Temperature along a 1D body: layers as bands with their names, films and surroundings marked beyond the faces, jumps at
/// contacts. @throws Error wrong_dimension  a 2D body
[[nodiscard]] TEPOR_INLINE std::string profile_svg(const Field& field, const PictureOptions& options = {});

/// Filled temperature map of a 2D body with isotherms, region outlines, face names, heat-flow arrows, hottest and coldest
/// place with values, and a scale with its unit below the picture. @throws Error wrong_dimension  a 1D body
[[nodiscard]] TEPOR_INLINE std::string map_svg(const Field& field, const PictureOptions& options = {});

/// Quantities over time, one panel per unit, every curve labelled at its end.
/// @throws Error missing  nothing recorded
[[nodiscard]] TEPOR_INLINE std::string strip_svg(const Record& record, const PictureOptions& options = {});

/// Any of them into a file. @throws Error bad_file
TEPOR_INLINE void write_svg(const std::string& path, const std::string& picture);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/output/impl/map_svg.hpp>
#include <tepor/output/impl/profile_svg.hpp>
#include <tepor/output/impl/strip_svg.hpp>
#endif
