#pragma once
// Threads that wait for loops to help with.

#include <atomic>
#include <mutex>
#include <tepor/linear/detail/crew.hpp>
#include <thread>
#include <vector>

namespace tepor::detail {

class Crew {
  public:
    explicit Crew(int helpers) {
        for (int t = 0; t < helpers; ++t) threads_.emplace_back([this] { wait_for_work(); });
    }
    Crew(const Crew&) = delete;
    Crew& operator=(const Crew&) = delete;
    ~Crew() {
        stop_ = true;
        round_.fetch_add(1, std::memory_order_release);
        round_.notify_all();
        for (std::thread& thread : threads_) thread.join();
    }

    void run(Index count, void (*task)(const void*, Index) noexcept, const void* context) noexcept {
        const std::lock_guard<std::mutex> alone(running_);
        task_ = task;
        context_ = context;
        count_ = count;
        next_.store(0, std::memory_order_relaxed);
        busy_.store(static_cast<int>(threads_.size()), std::memory_order_relaxed);
        round_.fetch_add(1, std::memory_order_release);
        round_.notify_all();
        work();
        for (int tries = 0; busy_.load(std::memory_order_acquire) != 0; ++tries) {
            if (tries > patience_) std::this_thread::yield();
        }
    }

  private:
    // Loops follow each other within microseconds: look again this often before falling asleep.
    static constexpr int patience_ = 4000;

    void work() noexcept {
        for (Index k = next_.fetch_add(1); k < count_; k = next_.fetch_add(1)) task_(context_, k);
    }

    void wait_for_work() noexcept {
        unsigned seen = 0;
        while (true) {
            for (int tries = 0; round_.load(std::memory_order_acquire) == seen; ++tries) {
                if (tries > patience_) round_.wait(seen, std::memory_order_acquire);
            }
            ++seen;
            if (stop_) return;
            work();
            busy_.fetch_sub(1, std::memory_order_release);
        }
    }

    std::vector<std::thread> threads_;
    std::mutex running_;
    std::atomic<unsigned> round_{0};
    std::atomic<int> busy_{0};
    std::atomic<Index> next_{0};
    std::atomic<bool> stop_{false};
    void (*task_)(const void*, Index) noexcept = nullptr;
    const void* context_ = nullptr;
    Index count_ = 0;
};

TEPOR_INLINE std::shared_ptr<Crew> make_crew(int threads) {
    return threads > 1 ? std::make_shared<Crew>(threads - 1) : nullptr;
}

TEPOR_INLINE void run_erased(Crew& crew, Index count, void (*task)(const void*, Index) noexcept,
                             const void* context) noexcept {
    crew.run(count, task, context);
}

} // namespace tepor::detail
