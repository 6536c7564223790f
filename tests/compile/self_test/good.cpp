// expect: static_assert.*|static assertion failed
// Right as it stands, refused for the stated reason.
#ifdef TEPOR_WRONG
static_assert(1 + 1 == 3);
#endif
