#pragma once
// The front door: everything numerical. Printing and pictures are in <tepor/output/...>; this header defines nothing.

#include <tepor/version.hpp>

#include <tepor/base/config.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/base/text.hpp>

#include <tepor/quadrature/gauss.hpp>
#include <tepor/quadrature/rule.hpp>
#include <tepor/quadrature/rules.hpp>
#include <tepor/quadrature/triangle_rules.hpp>

#include <tepor/element/concept.hpp>
#include <tepor/element/lagrange.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>

#include <tepor/mesh/mesh.hpp>
