# Proves that run_case.cmake can tell a good case from the four kinds of bad ones. Same arguments, less CASE.

foreach(check
        "good.cpp|passes"
        "right_branch_broken.cpp|the right branch does not compile"
        "wrong_branch_compiles.cpp|the wrong branch compiles"
        "refused_for_another_reason.cpp|does not match"
        "no_pattern.cpp|the first line is not"
        "no_branch.cpp|no TEPOR_WRONG branch")
    string(REGEX MATCH "^([^|]*)\\|(.*)$" unused "${check}")
    set(file "${CMAKE_MATCH_1}")
    set(expected "${CMAKE_MATCH_2}")
    execute_process(COMMAND "${CMAKE_COMMAND}" -D "CXX=${CXX}" -D "FLAGS=${FLAGS}"
        -D "CASE=${CMAKE_CURRENT_LIST_DIR}/self_test/${file}" -P "${CMAKE_CURRENT_LIST_DIR}/run_case.cmake"
        RESULT_VARIABLE code OUTPUT_VARIABLE out ERROR_VARIABLE err)
    string(REGEX REPLACE "[ \n]+" " " err "${err}")
    if(expected STREQUAL "passes")
        if(NOT code EQUAL 0)
            message(SEND_ERROR "${file} should pass: ${err}")
        endif()
    elseif(code EQUAL 0 OR NOT err MATCHES "${expected}")
        message(SEND_ERROR "${file} should be judged '${expected}', exit code ${code}: ${err}")
    endif()
endforeach()
