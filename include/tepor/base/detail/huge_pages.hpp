#pragma once
// Vectors on huge pages where the system offers them.

#include <cstddef>
#include <cstdint>
#include <vector>
#if defined(__linux__)
#include <sys/mman.h>
#endif

namespace tepor::detail {

/// Asks for huge pages under memory that has not been written yet: one page fault then stands for 512. Only whole huge pages
/// inside the range are asked for. Advice: nothing changes where it is not taken.
inline void advise_huge_pages([[maybe_unused]] void* data, [[maybe_unused]] std::size_t bytes) noexcept {
#if defined(__linux__)
    constexpr std::size_t huge = std::size_t{2} << 20;
    const std::size_t off = reinterpret_cast<std::uintptr_t>(data) % huge;
    const std::size_t skipped = off == 0 ? 0 : huge - off;
    if (bytes < skipped + huge) return;
    static_cast<void>(madvise(static_cast<char*>(data) + skipped, (bytes - skipped) / huge * huge, MADV_HUGEPAGE));
#endif
}

/// Room for `count` values in a vector, on huge pages where it is large; values it holds are kept.
template <class T>
void reserve_huge(std::vector<T>& values, std::size_t count) {
    if (count <= values.capacity()) return;
    values.reserve(count);
    advise_huge_pages(values.data(), count * sizeof(T));
}

/// Resizes a vector in such room.
template <class T>
void resize_huge(std::vector<T>& values, std::size_t count) {
    reserve_huge(values, count);
    values.resize(count);
}

} // namespace tepor::detail
