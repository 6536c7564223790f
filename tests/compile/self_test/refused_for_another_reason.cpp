// expect: static_assert.*|static assertion failed
// Refused for a typo, not for what was meant.
#ifdef TEPOR_WRONG
static_asert(1 + 1 == 3);
#endif
