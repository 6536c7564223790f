# tepor_precompile(TARGET...): the compiler reads <tepor/tepor.hpp> once for all C++ sources of a target.
#
# For programs of several sources that link tepor::compiled: a source then costs its own code and little more. Sources need
# not change; their #include <tepor/...> find everything read already. It works with the header-only targets too, where it
# saves the reading but not the compiling.
function(tepor_precompile)
    foreach(target IN LISTS ARGN)
        if(NOT TARGET ${target})
            message(FATAL_ERROR "tepor_precompile: there is no target `${target}`; call it after add_executable or add_library")
        endif()
        target_precompile_headers(${target} PRIVATE "$<$<COMPILE_LANGUAGE:CXX>:<tepor/tepor.hpp$<ANGLE-R>>")
    endforeach()
endfunction()
