#pragma once
// Large arrays of plain numbers: not cleared when made, on huge pages where the system offers them.

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
/// from 4 MB on: a large factor then needs a thousandth of the page faults and address translations.
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
        data_ = static_cast<T*>(::operator new(count, alignment(count)));
        size_ = size;
#if defined(__linux__)
        if (count >= huge_) static_cast<void>(madvise(data_, count, MADV_HUGEPAGE)); // advice: failure changes nothing
#endif
    }

    [[nodiscard]] T* data() noexcept {
        return data_;
    }
    [[nodiscard]] const T* data() const noexcept {
        return data_;
    }
    [[nodiscard]] Index size() const noexcept {
        return size_;
    }
    T& operator[](Index i) noexcept {
        return data_[i];
    }
    const T& operator[](Index i) const noexcept {
        return data_[i];
    }

  private:
    static constexpr std::size_t huge_ = std::size_t{4} << 20;

    static std::size_t bytes(Index size) noexcept {
        return as_size(size) * sizeof(T);
    }
    static std::align_val_t alignment(std::size_t count) noexcept {
        return static_cast<std::align_val_t>(count >= huge_ ? std::size_t{2} << 20 : std::size_t{64});
    }
    void release() noexcept {
        if (data_) ::operator delete(data_, alignment(bytes(size_)));
        data_ = nullptr;
        size_ = 0;
    }

    T* data_ = nullptr;
    Index size_ = 0;
};

} // namespace tepor::detail
