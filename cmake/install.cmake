# Install and the exported package: find_package(tepor) offers the same target names as the tree.

include(GNUInstallDirs)
include(CMakePackageConfigHelpers)

set(tepor_package_dir "${CMAKE_INSTALL_DATADIR}/cmake/tepor")

# tepor::output is a file of its own, so that a user without fmt never meets its name.
install(TARGETS tepor EXPORT tepor-targets FILE_SET HEADERS DESTINATION "${CMAKE_INSTALL_INCLUDEDIR}")
install(EXPORT tepor-targets NAMESPACE tepor:: DESTINATION "${tepor_package_dir}")
if(TARGET tepor_output)
    install(TARGETS tepor_output EXPORT tepor-output-targets)
    install(EXPORT tepor-output-targets NAMESPACE tepor:: DESTINATION "${tepor_package_dir}")
endif()

configure_package_config_file("${CMAKE_CURRENT_LIST_DIR}/tepor-config.cmake.in"
    "${PROJECT_BINARY_DIR}/tepor-config.cmake" INSTALL_DESTINATION "${tepor_package_dir}"
    PATH_VARS CMAKE_INSTALL_INCLUDEDIR NO_SET_AND_CHECK_MACRO)
# Headers fit any word size.
write_basic_package_version_file("${PROJECT_BINARY_DIR}/tepor-config-version.cmake" COMPATIBILITY SameMinorVersion
    ARCH_INDEPENDENT)
install(FILES "${PROJECT_BINARY_DIR}/tepor-config.cmake" "${PROJECT_BINARY_DIR}/tepor-config-version.cmake"
    "${CMAKE_CURRENT_LIST_DIR}/compiled.cmake" "${CMAKE_CURRENT_LIST_DIR}/precompile.cmake"
    DESTINATION "${tepor_package_dir}")
install(FILES "${PROJECT_SOURCE_DIR}/LICENSE" DESTINATION "${CMAKE_INSTALL_DATADIR}/licenses/tepor")
