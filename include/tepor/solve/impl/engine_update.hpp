#pragma once
// Factors that serve a matrix with a few changed rows, such as the film of a small face in a sweep.

#include <algorithm>
#include <tepor/solve/engine.hpp>

namespace tepor {

TEPOR_INLINE void Engine::keep_base() {
    if (plane_->keep_base()) base_key_ = key;
}

TEPOR_INLINE void Engine::restore_base() {
    plane_->restore_base(matrix);
    key = base_key_;
}

TEPOR_INLINE std::unique_ptr<Engine> EnginePool::borrow_near(const std::vector<double>& key) {
    const std::lock_guard<std::mutex> lock(guard_);
    for (const std::unique_ptr<Engine>& engine : idle_)
        if (engine->key == key) return nullptr;
    if (idle_.empty()) return nullptr;
    const Engine& last = *idle_.back();
    if (!last.updatable() || last.key.size() != key.size()) return nullptr;
    Index differing = 0;
    for (std::size_t k = 0; k < key.size(); ++k) {
        if (key[k] == last.key[k]) continue;
        ++differing;
        if (std::find(wide_.begin(), wide_.end(), k) != wide_.end()) return nullptr;
    }
    if (differing > 1 && mixed_refusals_ >= 3) return nullptr;
    std::unique_ptr<Engine> found = std::move(idle_.back());
    idle_.pop_back();
    return found;
}

TEPOR_INLINE Index EnginePool::update_rows(Index unknowns) {
    const std::lock_guard<std::mutex> lock(guard_);
    // Sixteen columns take about as long as a factor; up to 64 MB of them.
    return std::min<Index>({16 + 24 * refusals_, 192, 8000000 / std::max<Index>(unknowns, 1)});
}

TEPOR_INLINE void EnginePool::refused(const std::vector<double>& from, const std::vector<double>& key, Index rows,
                                      Index unknowns) {
    const std::lock_guard<std::mutex> lock(guard_);
    ++refusals_;
    if (rows <= std::min<Index>(192, 8000000 / std::max<Index>(unknowns, 1))) return;
    std::vector<std::size_t> differing;
    for (std::size_t k = 0; k < key.size(); ++k)
        if (key[k] != from[k]) differing.push_back(k);
    if (differing.size() == 1) wide_.push_back(differing[0]);
    if (differing.size() > 1) ++mixed_refusals_;
}

} // namespace tepor
