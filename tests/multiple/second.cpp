// The other of the two sources.
#include "everything.hpp"

const char* version_seen_by_second();

const char* version_seen_by_second() {
    return TEPOR_VERSION;
}
