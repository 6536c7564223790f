#pragma once
// The front door: everything numerical. Printing and pictures are in <tepor/output/...>; this header defines nothing.

#include <tepor/version.hpp>

#include <tepor/base/config.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/base/text.hpp>

#include <tepor/element/concept.hpp>

#include <tepor/mesh/mesh.hpp>
