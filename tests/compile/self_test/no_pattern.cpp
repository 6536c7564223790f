// The pattern is missing.
#ifdef TEPOR_WRONG
static_assert(1 + 1 == 3);
#endif
