// expect: static_assert.*|static assertion failed
// Nothing is wrong in its wrong branch.
#ifdef TEPOR_WRONG
static_assert(1 + 1 == 2);
#endif
