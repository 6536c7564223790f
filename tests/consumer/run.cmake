# Builds and runs one outside project.
#   WAY    install | package | subdirectory | plain
#   PARTS  numerical | compiled | output | nonsense
# with SOURCE, BINARY, WORK, GENERATOR, CXX, INCLUDES (parted by |) from the test's call.

cmake_minimum_required(VERSION 3.24)

function(run)
    execute_process(COMMAND ${ARGN} RESULT_VARIABLE code OUTPUT_VARIABLE out ERROR_VARIABLE err)
    if(NOT code EQUAL 0)
        message(FATAL_ERROR "failed: ${ARGN}\n${out}${err}")
    endif()
    set(out "${out}" PARENT_SCOPE)
endfunction()

set(moved "${WORK}/moved/deep prefix")

if(WAY STREQUAL "install")
    file(REMOVE_RECURSE "${WORK}/first" "${WORK}/moved")
    run("${CMAKE_COMMAND}" --install "${BINARY}" --prefix "${WORK}/first")
    file(MAKE_DIRECTORY "${WORK}/moved")
    file(RENAME "${WORK}/first" "${moved}")
    file(GLOB_RECURSE texts "${moved}/*.cmake")
    if(NOT texts)
        message(FATAL_ERROR "no package file was installed")
    endif()
    foreach(text IN LISTS texts)
        file(READ "${text}" content)
        foreach(path "${WORK}" "${SOURCE}" "${BINARY}")
            string(FIND "${content}" "${path}" place)
            if(NOT place EQUAL -1)
                message(FATAL_ERROR "${text} names ${path}: the package cannot be moved")
            endif()
        endforeach()
    endforeach()
    return()
endif()

if(WAY STREQUAL "plain")
    file(MAKE_DIRECTORY "${WORK}/plain")
    string(REPLACE "|" ";" INCLUDES "${INCLUDES}")
    run("${CXX}" -std=c++20 ${INCLUDES} -I "${SOURCE}/include" "${CMAKE_CURRENT_LIST_DIR}/main.cpp"
        -o "${WORK}/plain/consumer")
    run("${WORK}/plain/consumer")
    return()
endif()

set(build "${WORK}/${WAY}_${PARTS}")
file(REMOVE_RECURSE "${build}")
set(configure "${CMAKE_COMMAND}" -S "${CMAKE_CURRENT_LIST_DIR}/project" -B "${build}" -G "${GENERATOR}"
    "-DCMAKE_CXX_COMPILER=${CXX}" -DWAY=${WAY} -DPARTS=${PARTS} "-DTEPOR_SOURCE=${SOURCE}"
    "-DCMAKE_PREFIX_PATH=${moved}")

if(PARTS STREQUAL "nonsense")
    execute_process(COMMAND ${configure} RESULT_VARIABLE code OUTPUT_VARIABLE out ERROR_VARIABLE err)
    if(code EQUAL 0 OR NOT err MATCHES "there is no component `nonsense`")
        message(FATAL_ERROR "an unknown component was not refused by name\n${out}${err}")
    endif()
    return()
endif()

run(${configure})
run("${CMAKE_COMMAND}" --build "${build}")
run("${build}/consumer")
if(NOT PARTS STREQUAL "output")
    run("${build}/precompiled")
endif()
