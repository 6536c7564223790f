// One of two sources that include everything, header-only. A definition that is not inline breaks the link.
#include "everything.hpp"

const char* version_seen_by_second();

int main() {
    return version_seen_by_second() == nullptr ? 1 : 0;
}
