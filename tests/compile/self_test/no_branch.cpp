// expect: static_assert.*|static assertion failed
// The branch is missing.
static_assert(1 + 1 == 2);
