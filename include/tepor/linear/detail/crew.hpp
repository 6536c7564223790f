#pragma once
// Helping threads for loops over blocks. What is computed never depends on their number.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>

namespace tepor::detail {

/// Threads that wait for work; defined in impl/crew.hpp.
class Crew;

/// `threads` in all, the caller included; null for one.
TEPOR_INLINE std::shared_ptr<Crew> make_crew(int threads);

/// Calls task(context, k) for k = 0 .. count - 1, on all threads of the crew, and returns when all are done.
TEPOR_INLINE void run_erased(Crew& crew, Index count, void (*task)(const void*, Index) noexcept,
                             const void* context) noexcept;

/// The same for any callable; without a crew, in order on the caller's thread.
template <class Task>
void run_tasks(Crew* crew, Index count, const Task& task) noexcept {
    if (!crew || count < 2) {
        for (Index k = 0; k < count; ++k) task(k);
        return;
    }
    run_erased(
        *crew, count, [](const void* context, Index k) noexcept { (*static_cast<const Task*>(context))(k); }, &task);
}

/// Rows in slices fixed by their number alone, so that sums over slices have the same bits at any number of threads.
struct Slices {
    static constexpr Index most = 16;
    Index rows;

    [[nodiscard]] Index count() const noexcept { return rows < 32768 ? 1 : most; }
    [[nodiscard]] Index begin(Index k) const noexcept { return rows * k / count(); }
    [[nodiscard]] Index end(Index k) const noexcept { return rows * (k + 1) / count(); }
};

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/crew.hpp>
#endif
