#pragma once
// operator new, counted. Include it in one source of an executable: it replaces the operators of the whole program. They are
// kept out of line, or the compiler takes malloc and delete for a mismatch.

#include <cstdlib>
#include <new>

namespace tepor::test {
inline long allocations = 0;
} // namespace tepor::test

[[gnu::noinline]] void* operator new(std::size_t size) {
    ++tepor::test::allocations;
    if (void* p = std::malloc(size > 0 ? size : 1)) return p;
    throw std::bad_alloc();
}
[[gnu::noinline]] void* operator new(std::size_t size, const std::nothrow_t&) noexcept {
    ++tepor::test::allocations;
    return std::malloc(size > 0 ? size : 1);
}
[[gnu::noinline]] void* operator new(std::size_t size, std::align_val_t alignment) {
    ++tepor::test::allocations;
    const std::size_t a = static_cast<std::size_t>(alignment);
    if (void* p = std::aligned_alloc(a, (size + a - 1) / a * a)) return p;
    throw std::bad_alloc();
}
[[gnu::noinline]] void operator delete(void* p) noexcept {
    std::free(p);
}
[[gnu::noinline]] void operator delete(void* p, std::size_t) noexcept {
    std::free(p);
}
[[gnu::noinline]] void operator delete(void* p, std::align_val_t) noexcept {
    std::free(p);
}
[[gnu::noinline]] void operator delete(void* p, std::size_t, std::align_val_t) noexcept {
    std::free(p);
}
