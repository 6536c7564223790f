# find_package(tepor_c): tepor::c (shared) and tepor::c_static, the C interface; needs no other package.
include("${CMAKE_CURRENT_LIST_DIR}/tepor-c-targets.cmake")
