# Settings for building this project itself (tests, examples, benchmarks). Nothing here reaches the targets for users.

set(TEPOR_WARNINGS "on" CACHE STRING "Warnings for the project's own sources: off, on or error")
set_property(CACHE TEPOR_WARNINGS PROPERTY STRINGS off on error)
set(TEPOR_SANITIZE "" CACHE STRING "Sanitizers for the project's own sources, such as address,undefined")
set(TEPOR_TEST_SCALE "1.0" CACHE STRING "Factor on the sizes of tests; smaller under sanitizers")

if(PROJECT_IS_TOP_LEVEL)
    get_property(tepor_multi_config GLOBAL PROPERTY GENERATOR_IS_MULTI_CONFIG)
    if(NOT tepor_multi_config AND NOT CMAKE_BUILD_TYPE)
        set(CMAKE_BUILD_TYPE Release CACHE STRING "Debug, Release, RelWithDebInfo or MinSizeRel" FORCE)
    endif()
endif()

# Link this, privately, to whatever is built for the project itself.
add_library(tepor_house INTERFACE)
if(NOT TEPOR_WARNINGS MATCHES "^(off|on|error)$")
    message(FATAL_ERROR "tepor: TEPOR_WARNINGS is '${TEPOR_WARNINGS}', expected off, on or error")
endif()
if(NOT TEPOR_WARNINGS STREQUAL "off")
    if(MSVC)
        target_compile_options(tepor_house INTERFACE /W4)
    else()
        target_compile_options(tepor_house INTERFACE -Wall -Wextra -Wpedantic -Wconversion -Wsign-conversion -Wshadow
            -Wold-style-cast -Wdouble-promotion)
    endif()
    if(TEPOR_WARNINGS STREQUAL "error")
        target_compile_options(tepor_house INTERFACE $<IF:$<CXX_COMPILER_ID:MSVC>,/WX,-Werror>)
    endif()
endif()
if(TEPOR_SANITIZE)
    target_compile_options(tepor_house INTERFACE -fsanitize=${TEPOR_SANITIZE} -fno-sanitize-recover=all
        -fno-omit-frame-pointer)
    target_link_options(tepor_house INTERFACE -fsanitize=${TEPOR_SANITIZE})
endif()

# The project's own copy of the compiled rooms is held to the same rules.
foreach(room IN LISTS tepor_numerical_rooms ITEMS output)
    if(TARGET tepor_room_${room})
        get_target_property(kind tepor_room_${room} TYPE)
        if(kind STREQUAL "STATIC_LIBRARY")
            target_link_libraries(tepor_room_${room} PRIVATE tepor_house)
        endif()
    endif()
endforeach()
