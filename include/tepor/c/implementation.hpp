#pragma once
// The definitions of the C interface: include it in one source of a program to have the interface without libtepor.

#include <tepor/c/impl/answers.hpp>
#include <tepor/c/impl/body.hpp>
#include <tepor/c/impl/changes.hpp>
#include <tepor/c/impl/checkpoint.hpp>
#include <tepor/c/impl/compact.hpp>
#include <tepor/c/impl/drawings.hpp>
#include <tepor/c/impl/field.hpp>
#include <tepor/c/impl/fit.hpp>
#include <tepor/c/impl/march.hpp>
#include <tepor/c/impl/mesh.hpp>
#include <tepor/c/impl/output.hpp>
#include <tepor/c/impl/quantity.hpp>
#include <tepor/c/impl/session.hpp>
#include <tepor/c/impl/size_for.hpp>
#include <tepor/c/impl/values.hpp>
