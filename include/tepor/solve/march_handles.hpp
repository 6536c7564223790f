#pragma once
// What a march hands out: probes, inputs, integrals, peaks, and the callables it takes.

#include <tepor/base/numbers.hpp>
#include <type_traits>
#include <utility>

namespace tepor {

class March;

/// A quantity resolved for one march: reading it looks up nothing.
class Probe {
  public:
    Probe() = default;

  private:
    friend class March;
    explicit Probe(Index id) noexcept : id_(id) {}
    Index id_ = -1;
};

/// A parameter resolved for one march: setting it looks up nothing.
class Input {
  public:
    Input() = default;

  private:
    friend class March;
    explicit Input(Index id) noexcept : id_(id) {}
    Index id_ = -1;
};

/// A running integral over time of a quantity, by step means.
class Integral {
  public:
    Integral() = default;

  private:
    friend class March;
    explicit Integral(Index id) noexcept : id_(id) {}
    Index id_ = -1;
};

/// The highest value of a quantity since it was asked for.
class Peak {
  public:
    Peak() = default;

  private:
    friend class March;
    explicit Peak(Index id) noexcept : id_(id) {}
    Index id_ = -1;
};

/// A value and when it was met.
struct Moment {
    double value = 0.0;
    double time = 0.0; ///< [s]
};

namespace detail {

/// Callables behind a march, without <functional>.
class MarchCallback {
  public:
    MarchCallback() = default;
    MarchCallback(const MarchCallback&) = delete;
    MarchCallback& operator=(const MarchCallback&) = delete;
    virtual ~MarchCallback() = default;
    /// @return false to stop
    virtual bool call(const March& march) = 0;
};
template <class F>
class MarchCall final : public MarchCallback {
  public:
    explicit MarchCall(F f) : f_(std::move(f)) {}
    bool call(const March& march) override {
        if constexpr (std::is_same_v<std::invoke_result_t<F&, const March&>, bool>) {
            return f_(march);
        } else {
            f_(march);
            return true;
        }
    }

  private:
    F f_;
};

} // namespace detail

} // namespace tepor
