#pragma once
// Large arrays of plain numbers: not cleared when made, on huge pages where the system offers them.

#include <cstdint>
#include <cstring>
#include <new>
#include <tepor/base/numbers.hpp>
#include <type_traits>
#include <utility>
#if defined(__linux__)
#include <sys/mman.h>
#endif

namespace tepor::detail {

/// An array of `size` values whose contents are unspecified until written. Aligned to a cache line, and to a huge page
/// from 4 MB on: a large factor then needs a thousandth of the page faults and address translations. So large an array goes
/// back to the system when it is released, where malloc would keep it; what is never written costs nothing.
template <class T>
requires std::is_trivially_copyable_v<T>
class Buffer {
  public:
    Buffer() = default;
    explicit Buffer(Index size) { reset(size); }
    Buffer(const Buffer& other) { *this = other; }
    Buffer(Buffer&& other) noexcept
        : data_(std::exchange(other.data_, nullptr)), size_(std::exchange(other.size_, 0)) {}
    Buffer& operator=(const Buffer& other) {
        if (this == &other) return *this;
        reset(other.size_);
        if (size_ > 0) std::memcpy(data_, other.data_, bytes(size_));
        return *this;
    }
    Buffer& operator=(Buffer&& other) noexcept {
        std::swap(data_, other.data_);
        std::swap(size_, other.size_);
        return *this;
    }
    ~Buffer() { release(); }

    /// Makes room for `size` values at least; the old ones are lost when it must grow.
    void reserve(Index size) {
        if (size > size_) reset(size);
    }

    /// Makes room for `size` values exactly; the old ones are lost. Keeps its memory when the size stays.
    void reset(Index size) {
        if (size == size_) return;
        release();
        if (size == 0) return;
        const std::size_t count = bytes(size);
        data_ = static_cast<T*>(count >= huge_ ? take_pages(count) : ::operator new(count, line_));
        size_ = size;
    }

    [[nodiscard]] T* data() noexcept { return data_; }
    [[nodiscard]] const T* data() const noexcept { return data_; }
    [[nodiscard]] Index size() const noexcept { return size_; }
    T& operator[](Index i) noexcept { return data_[i]; }
    const T& operator[](Index i) const noexcept { return data_[i]; }

  private:
    static constexpr std::size_t huge_ = std::size_t{4} << 20;

    static std::size_t bytes(Index size) noexcept { return as_size(size) * sizeof(T); }
    void release() noexcept {
        const std::size_t count = bytes(size_);
        if (data_ && count >= huge_) give_pages(data_, count);
        if (data_ && count < huge_) ::operator delete(data_, line_);
        data_ = nullptr;
        size_ = 0;
    }

#if defined(__linux__)
    static std::size_t whole_pages(std::size_t count) noexcept {
        return (count + page_ - 1) / page_ * page_;
    }
    static void* take_pages(std::size_t count) {
        const std::size_t whole = whole_pages(count), more = whole + page_;
        void* const got = mmap(nullptr, more, PROT_READ | PROT_WRITE, MAP_PRIVATE | MAP_ANONYMOUS, -1, 0);
        if (got == MAP_FAILED) throw std::bad_alloc();
        char* const begin = static_cast<char*>(got);
        const std::size_t before = (page_ - reinterpret_cast<std::uintptr_t>(got) % page_) % page_;
        if (before > 0) munmap(begin, before);
        if (before < page_) munmap(begin + before + whole, page_ - before);
        static_cast<void>(madvise(begin + before, whole, MADV_HUGEPAGE)); // advice: failure changes nothing
        return begin + before;
    }
    static void give_pages(void* data, std::size_t count) noexcept {
        munmap(data, whole_pages(count));
    }
#else
    static void* take_pages(std::size_t count) {
        return ::operator new (count, std::align_val_t{page_});
    }
    static void give_pages(void* data, std::size_t) noexcept {
        ::operator delete (data, std::align_val_t{page_});
    }
#endif

    static constexpr std::size_t page_ = std::size_t{2} << 20;
    static constexpr std::align_val_t line_{64};
    T* data_ = nullptr;
    Index size_ = 0;
};

} // namespace tepor::detail
