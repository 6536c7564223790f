# The C interface: libtepor, shared (tepor::c) and static (tepor::c_static), for C and for other languages.
#
# The definitions are include/tepor/c/impl/*.hpp, found by glob like those of any room; the public header is
# tepor/c/tepor.h. Both libraries hold the whole of the library; the shared one exports only what the header marks.

option(TEPOR_C_LIBRARY "Build the C interface as libtepor" ${PROJECT_IS_TOP_LEVEL})
if(NOT TEPOR_C_LIBRARY)
    return()
endif()

file(GLOB definitions CONFIGURE_DEPENDS "${PROJECT_SOURCE_DIR}/include/tepor/c/impl/*.hpp")
set(text "// Generated: the definitions of the C interface.\n#define TEPOR_BUILDING\n")
foreach(file IN LISTS definitions)
    cmake_path(RELATIVE_PATH file BASE_DIRECTORY "${PROJECT_SOURCE_DIR}/include")
    string(APPEND text "#include <${file}>\n")
endforeach()
set(tepor_c_source "${PROJECT_BINARY_DIR}/tepor_compiled/c.cpp")
file(CONFIGURE OUTPUT "${tepor_c_source}" CONTENT "${text}" @ONLY)

set(tepor_c_objects)
foreach(room IN LISTS tepor_numerical_rooms)
    get_target_property(kind tepor_room_${room} TYPE)
    if(kind STREQUAL "STATIC_LIBRARY")
        list(APPEND tepor_c_objects $<TARGET_OBJECTS:tepor_room_${room}>)
    endif()
endforeach()

add_library(tepor_c SHARED "${tepor_c_source}" ${tepor_c_objects})
set_target_properties(tepor_c PROPERTIES VERSION ${PROJECT_VERSION} SOVERSION
    ${PROJECT_VERSION_MAJOR}.${PROJECT_VERSION_MINOR})
add_library(tepor_c_static STATIC "${tepor_c_source}" ${tepor_c_objects})

foreach(target tepor_c tepor_c_static)
    target_include_directories(${target} PUBLIC "$<BUILD_INTERFACE:${PROJECT_SOURCE_DIR}/include>"
        "$<INSTALL_INTERFACE:include>")
    target_link_libraries(${target} PRIVATE $<BUILD_INTERFACE:tepor::tepor>)
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
endif()
