#pragma once
// Checkpoints: bytes, and the fields that make up the state of a march.

#include <cstdint>
#include <cstring>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/solve/checkpoint.hpp>

namespace tepor {

namespace detail {

inline constexpr char checkpoint_mark[] = "tepor march 1\n";
inline constexpr std::size_t checkpoint_mark_size = sizeof checkpoint_mark - 1;

/// FNV-1a over bytes.
inline std::uint64_t checksum(const unsigned char* bytes, std::size_t count) noexcept {
    std::uint64_t sum = 14695981039346656037ULL;
    for (std::size_t i = 0; i < count; ++i) sum = (sum ^ bytes[i]) * 1099511628211ULL;
    return sum;
}

inline void put_word(std::vector<unsigned char>& to, std::uint64_t word) {
    for (int i = 0; i < 8; ++i) to.push_back(static_cast<unsigned char>(word >> (8 * i)));
}
inline std::uint64_t word_at(const unsigned char* from) noexcept {
    std::uint64_t word = 0;
    for (int i = 0; i < 8; ++i) word |= static_cast<std::uint64_t>(from[i]) << (8 * i);
    return word;
}

/// Collects fields.
class StateWriter {
  public:
    void operator()(const double& v) {
        std::uint64_t word = 0;
        std::memcpy(&word, &v, sizeof v);
        put_word(bytes_, word);
    }
    void operator()(const Index& v) { put_word(bytes_, static_cast<std::uint64_t>(v)); }
    void operator()(const int& v) { put_word(bytes_, static_cast<std::uint64_t>(static_cast<std::int64_t>(v))); }
    void operator()(const bool& v) { put_word(bytes_, v ? 1 : 0); }
    template <class T>
    void operator()(const std::vector<T>& v) {
        put_word(bytes_, v.size());
        for (const T& one : v) (*this)(one);
    }
    std::vector<unsigned char> take() {
        put_word(bytes_, checksum(bytes_.data(), bytes_.size()));
        return std::move(bytes_);
    }
    StateWriter() { bytes_.assign(checkpoint_mark, checkpoint_mark + checkpoint_mark_size); }

  private:
    std::vector<unsigned char> bytes_;
};

/// Puts them back.
class StateReader {
  public:
    explicit StateReader(const std::vector<unsigned char>& bytes)
        : next_(bytes.data() + checkpoint_mark_size), end_(bytes.data() + bytes.size() - 8) {}
    void operator()(double& v) {
        const std::uint64_t bits = word();
        std::memcpy(&v, &bits, sizeof v);
    }
    void operator()(Index& v) { v = static_cast<Index>(word()); }
    void operator()(int& v) { v = static_cast<int>(static_cast<std::int64_t>(word())); }
    void operator()(bool& v) { v = word() != 0; }
    template <class T>
    void operator()(std::vector<T>& v) {
        const std::uint64_t count = word();
        if (count > static_cast<std::uint64_t>(end_ - next_)) short_of_bytes();
        v.resize(static_cast<std::size_t>(count));
        for (T& one : v) (*this)(one);
    }

  private:
    std::uint64_t word() {
        if (end_ - next_ < 8) short_of_bytes();
        const std::uint64_t v = word_at(next_);
        next_ += 8;
        return v;
    }
    [[noreturn]] static void short_of_bytes() {
        throw Error(ErrorCode::bad_file, "checkpoint", "checkpoint: it ends too early; write it again");
    }
    const unsigned char* next_;
    const unsigned char* end_;
};

} // namespace detail

TEPOR_INLINE Checkpoint::Checkpoint(std::vector<unsigned char> bytes) : bytes_(std::move(bytes)) {
    const auto refuse = [](const char* why) {
        throw Error(ErrorCode::bad_file, "checkpoint", std::string("checkpoint: ") + why);
    };
    const std::size_t head = detail::checkpoint_mark_size;
    if (bytes_.size() < head + 8 || std::memcmp(bytes_.data(), detail::checkpoint_mark, head - 2) != 0)
        refuse("these bytes are no checkpoint of a march");
    if (std::memcmp(bytes_.data(), detail::checkpoint_mark, head) != 0)
        refuse("it was written by another version; this one reads version 1");
    const std::size_t body = bytes_.size() - 8;
    if (detail::word_at(bytes_.data() + body) != detail::checksum(bytes_.data(), body))
        refuse("its checksum does not fit; it was cut short or damaged, write it again");
}

} // namespace tepor
