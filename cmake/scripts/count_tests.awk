# Reads the JUnit files of ctest and prints `PASSED FAILED`.
#
# An executable of doctest counts as many tests as it has cases; any other test counts as one. A test that failed
# without a failed case (a crash, a missing executable) counts as one failed, and so does an executable without cases.

/<testcase / {
    status = $0
    sub(/.* status="/, "", status)
    sub(/".*/, "", status)
    cases_passed = -1
    cases_failed = 0
}
/^(\t*<system-out>)?\[doctest\] test cases:/ {
    line = $0
    gsub(/[^0-9]+/, " ", line)
    split(line, number, " ")
    cases_passed = (cases_passed < 0 ? 0 : cases_passed) + number[2]
    cases_failed += number[3]
}
/<\/testcase>/ {
    if (status == "disabled" || status == "notrun") {
        failed += 1
    } else if (cases_passed < 0) {
        if (status == "run") passed += 1
        else failed += 1
    } else {
        if (cases_passed + cases_failed == 0) cases_failed = 1
        if (status != "run" && cases_failed == 0) cases_failed = 1
        passed += cases_passed
        failed += cases_failed
    }
}
END { printf "%d %d\n", passed, failed }
