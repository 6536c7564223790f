#pragma once
// Numbers drawn at random, the same on every machine.

#include <cmath>
#include <random>

namespace tepor::test {

class Draw {
  public:
    explicit Draw(unsigned seed) : engine_(seed) {}
    double between(double low, double high) {
        return low + (high - low) * (static_cast<double>(engine_()) / 4294967296.0);
    }
    double of_magnitude(double low, double high) { return std::exp(between(std::log(low), std::log(high))); }
    int up_to(int count) { return static_cast<int>(engine_() % static_cast<unsigned>(count)); }
    bool one_in(int count) { return up_to(count) == 0; }

  private:
    std::mt19937 engine_;
};

} // namespace tepor::test
