# tepor::compiled: the definitions that stand behind TEPOR_INLINE, compiled once into static libraries.
#
# Header-only use is the default. A program of many sources compiles faster when it links this target instead: its
# sources then read declarations only (the target defines TEPOR_COMPILED for its users). Which files hold definitions is
# read off the tree: every include/tepor/<room>/impl/*.hpp. Each room is a library of its own that needs the rooms
# before it, so that rooms compile side by side and the tests of one room wait for nothing behind it. They are built in
# the project that asks for them, with that project's compiler and flags, and only when something links them.

set(tepor_numerical_rooms base quadrature element describe mesh assembly linear body flux field solve answers check)

# The library of one room on top of `needs`; a room without definitions only passes on what it needs.
function(tepor_add_room room include_dir binary_dir)
    set(needs ${ARGN})
    file(GLOB definitions CONFIGURE_DEPENDS "${include_dir}/tepor/${room}/impl/*.hpp")
    if(NOT definitions)
        add_library(tepor_room_${room} INTERFACE)
        target_link_libraries(tepor_room_${room} INTERFACE ${needs})
        return()
    endif()
    set(text "// Generated: the definitions of the room `${room}`.\n#define TEPOR_BUILDING\n")
    foreach(file IN LISTS definitions)
        cmake_path(RELATIVE_PATH file BASE_DIRECTORY "${include_dir}")
        string(APPEND text "#include <${file}>\n")
    endforeach()
    file(CONFIGURE OUTPUT "${binary_dir}/${room}.cpp" CONTENT "${text}" @ONLY)
    add_library(tepor_room_${room} STATIC EXCLUDE_FROM_ALL "${binary_dir}/${room}.cpp")
    target_link_libraries(tepor_room_${room} PUBLIC ${needs})
    target_compile_definitions(tepor_room_${room} PUBLIC TEPOR_COMPILED)
    set_target_properties(tepor_room_${room} PROPERTIES POSITION_INDEPENDENT_CODE ON)
endfunction()

# Defines tepor::compiled, and tepor::compiled_output where fmt is there.
function(tepor_add_compiled include_dir binary_dir)
    if(NOT EXISTS "${include_dir}/tepor/tepor.hpp")
        message(FATAL_ERROR "tepor: ${include_dir} does not hold the headers")
    endif()
    set(needs tepor::tepor)
    foreach(room IN LISTS tepor_numerical_rooms)
        tepor_add_room(${room} "${include_dir}" "${binary_dir}" ${needs})
        set(needs tepor_room_${room})
    endforeach()
    add_library(tepor_compiled INTERFACE)
    add_library(tepor::compiled ALIAS tepor_compiled)
    target_link_libraries(tepor_compiled INTERFACE ${needs})
    target_compile_definitions(tepor_compiled INTERFACE TEPOR_COMPILED)

    if(TARGET fmt::fmt)
        tepor_add_room(output "${include_dir}" "${binary_dir}" ${needs} fmt::fmt)
        add_library(tepor_compiled_output INTERFACE)
        add_library(tepor::compiled_output ALIAS tepor_compiled_output)
        target_link_libraries(tepor_compiled_output INTERFACE tepor_room_output tepor_compiled)
    endif()
endfunction()
