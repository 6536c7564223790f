# The C interface: libtepor, shared (tepor::c) and static (tepor::c_static), for C and for other languages.
#
# One source of one line, tepor/c/implementation.hpp; the public header is tepor/c/tepor.h. Both libraries hold the whole of
# the library; the shared one exports only what the header marks, and its SONAME is the header's ABI version. fmt is
# compiled in from its headers, so that who uses libtepor needs no other package.

option(TEPOR_C_LIBRARY "Build the C interface as libtepor" ${PROJECT_IS_TOP_LEVEL})
if(NOT TEPOR_C_LIBRARY)
    return()
endif()
if(NOT TARGET fmt::fmt-header-only)
    message(STATUS "tepor: fmt not found, the C interface is left out")
    return()
endif()

file(STRINGS "${PROJECT_SOURCE_DIR}/include/tepor/c/tepor_session.h" abi_line REGEX "define TEPOR_ABI_VERSION ")
string(REGEX MATCH "[0-9]+" tepor_abi_version "${abi_line}")

set(tepor_c_source "${PROJECT_BINARY_DIR}/tepor_compiled/c.cpp")
file(CONFIGURE OUTPUT "${tepor_c_source}" CONTENT "#include <tepor/c/implementation.hpp>\n" @ONLY)

set(tepor_c_objects)
foreach(room IN LISTS tepor_numerical_rooms)
    get_target_property(kind tepor_room_${room} TYPE)
    if(kind STREQUAL "STATIC_LIBRARY")
        list(APPEND tepor_c_objects $<TARGET_OBJECTS:tepor_room_${room}>)
    endif()
endforeach()

# The output room once more, with fmt inside.
add_library(tepor_c_output OBJECT EXCLUDE_FROM_ALL "${PROJECT_BINARY_DIR}/tepor_compiled/output.cpp")
target_link_libraries(tepor_c_output PRIVATE tepor::tepor fmt::fmt-header-only)
target_compile_definitions(tepor_c_output PRIVATE TEPOR_COMPILED)
set_target_properties(tepor_c_output PROPERTIES POSITION_INDEPENDENT_CODE ON)
list(APPEND tepor_c_objects $<TARGET_OBJECTS:tepor_c_output>)

add_library(tepor_c SHARED "${tepor_c_source}" ${tepor_c_objects})
set_target_properties(tepor_c PROPERTIES VERSION ${tepor_abi_version}.${PROJECT_VERSION} SOVERSION ${tepor_abi_version})
add_library(tepor_c_static STATIC "${tepor_c_source}" ${tepor_c_objects})

foreach(target tepor_c tepor_c_static)
    target_include_directories(${target} PUBLIC "$<BUILD_INTERFACE:${PROJECT_SOURCE_DIR}/include>"
        "$<INSTALL_INTERFACE:include>")
    target_link_libraries(${target} PRIVATE $<BUILD_INTERFACE:tepor::tepor> $<BUILD_INTERFACE:fmt::fmt-header-only>)
    if(TARGET tepor_house)
        target_link_libraries(${target} PRIVATE $<BUILD_INTERFACE:tepor_house>)
    endif()
    target_compile_definitions(${target} PRIVATE TEPOR_COMPILED)
    set_target_properties(${target} PROPERTIES OUTPUT_NAME tepor CXX_VISIBILITY_PRESET hidden
        VISIBILITY_INLINES_HIDDEN ON POSITION_INDEPENDENT_CODE ON)
endforeach()
set_target_properties(tepor_c PROPERTIES EXPORT_NAME c)
set_target_properties(tepor_c_static PROPERTIES EXPORT_NAME c_static)
add_library(tepor::c ALIAS tepor_c)
add_library(tepor::c_static ALIAS tepor_c_static)

# The rooms are compiled for everybody with default visibility; a list of exports hides them in the shared library.
if(UNIX AND NOT APPLE)
    file(CONFIGURE OUTPUT "${PROJECT_BINARY_DIR}/tepor_c.map" CONTENT "{ global: tepor_*; local: *; };\n")
    target_link_options(tepor_c PRIVATE "-Wl,--version-script=${PROJECT_BINARY_DIR}/tepor_c.map")
endif()

if(TEPOR_INSTALL)
    include(GNUInstallDirs)
    include(CMakePackageConfigHelpers)
    install(TARGETS tepor_c tepor_c_static EXPORT tepor-c-targets)
    install(EXPORT tepor-c-targets NAMESPACE tepor:: DESTINATION "${CMAKE_INSTALL_LIBDIR}/cmake/tepor_c")
    install(FILES "${PROJECT_SOURCE_DIR}/cmake/tepor_c-config.cmake" DESTINATION
        "${CMAKE_INSTALL_LIBDIR}/cmake/tepor_c")
    write_basic_package_version_file("${PROJECT_BINARY_DIR}/tepor_c-config-version.cmake" COMPATIBILITY SameMinorVersion)
    install(FILES "${PROJECT_BINARY_DIR}/tepor_c-config-version.cmake" DESTINATION
        "${CMAKE_INSTALL_LIBDIR}/cmake/tepor_c")

    # pkg-config finds its way from where the file lies, so that the folder can be moved.
    file(RELATIVE_PATH tepor_prefix_from_pc "/prefix/${CMAKE_INSTALL_LIBDIR}/pkgconfig" "/prefix")
    configure_file("${PROJECT_SOURCE_DIR}/cmake/tepor.pc.in" "${PROJECT_BINARY_DIR}/tepor.pc" @ONLY)
    install(FILES "${PROJECT_BINARY_DIR}/tepor.pc" DESTINATION "${CMAKE_INSTALL_LIBDIR}/pkgconfig")
endif()
