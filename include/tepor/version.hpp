#pragma once
// The version of the library: the one source, read by CMake and by the C wrapper.

#define TEPOR_VERSION_MAJOR 0
#define TEPOR_VERSION_MINOR 1
#define TEPOR_VERSION_PATCH 0
#define TEPOR_VERSION "0.1.0"
