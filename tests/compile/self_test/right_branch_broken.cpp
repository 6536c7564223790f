// expect: static_assert.*|static assertion failed
// Does not compile either way.
int twice = "one";
#ifdef TEPOR_WRONG
static_assert(1 + 1 == 3);
#endif
