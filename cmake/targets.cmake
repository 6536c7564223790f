# The targets for users: tepor::tepor, and on request tepor::output, tepor::compiled, tepor::compiled_output.

find_package(Eigen3 REQUIRED NO_MODULE)
if(Eigen3_VERSION VERSION_LESS 3.4)
    message(FATAL_ERROR "tepor: Eigen ${Eigen3_VERSION} found, 3.4 or newer is needed")
endif()

file(GLOB_RECURSE tepor_headers CONFIGURE_DEPENDS "${PROJECT_SOURCE_DIR}/include/tepor/*.hpp"
    "${PROJECT_SOURCE_DIR}/include/tepor/*.h")

# Header-only, Eigen and nothing else. The opt-in threads of the multigrid solver are std::thread: C libraries that keep
# it apart (glibc before 2.34) want Threads::Threads linked by the program that asks for threads.
add_library(tepor INTERFACE)
add_library(tepor::tepor ALIAS tepor)
target_compile_features(tepor INTERFACE cxx_std_20)
target_sources(tepor INTERFACE FILE_SET HEADERS BASE_DIRS "${PROJECT_SOURCE_DIR}/include" FILES ${tepor_headers})
target_link_libraries(tepor INTERFACE Eigen3::Eigen)

# Printing, pictures and files: adds fmt. Where fmt is not installed the target is left out.
if(NOT TARGET fmt::fmt)
    find_package(fmt QUIET)
endif()
if(TARGET fmt::fmt)
    add_library(tepor_output INTERFACE)
    add_library(tepor::output ALIAS tepor_output)
    set_target_properties(tepor_output PROPERTIES EXPORT_NAME output)
    target_link_libraries(tepor_output INTERFACE tepor fmt::fmt)
endif()

# One precompiled header for all sources of a target.
include("${CMAKE_CURRENT_LIST_DIR}/precompile.cmake")

# The heavy functions compiled once, built only when something links it.
include("${CMAKE_CURRENT_LIST_DIR}/compiled.cmake")
tepor_add_compiled("${PROJECT_SOURCE_DIR}/include" "${PROJECT_BINARY_DIR}/tepor_compiled")
