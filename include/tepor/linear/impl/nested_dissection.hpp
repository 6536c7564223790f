#pragma once
// Elimination order by nested dissection, cut along coordinates where there are any, along breadth-first order otherwise.
// Source: George, "Nested dissection of a regular finite element mesh" (1973); the smallest vertex cover of a cut by
// matching: Koenig (1931); leaves by minimum degree: Tinney & Walker (1967).

#include <algorithm>
#include <array>
#include <bit>
#include <cstdint>
#include <limits>
#include <tepor/base/point.hpp>
#include <tepor/linear/impl/graph.hpp>
#include <vector>

namespace tepor::detail {

/// Orders the vertices of `graph` for elimination.
class NestedDissection {
  public:
    explicit NestedDissection(const Graph& graph) : graph_(graph) {}

    /// order[position] = vertex. `places` may be null.
    std::vector<Id> order(const Point* places) {
        const Index n = graph_.n;
        state_.assign(as_size(n), free_);
        local_.assign(as_size(n), 0);
        items_.resize(as_size(n));
        x_.resize(as_size(n));
        y_.resize(as_size(n));
        for (Index v = 0; v < n; ++v) {
            x_[as_size(v)] = places ? static_cast<float>(places[v].x) : 0.0f;
            y_[as_size(v)] = places ? static_cast<float>(places[v].y) : 0.0f;
        }
        for (Index v = 0; v < n; ++v) items_[as_size(v)] = item(v);
        std::vector<Segment> stack{{0, n}};
        while (!stack.empty()) {
            const Segment segment = stack.back();
            stack.pop_back();
            if (segment.end - segment.begin <= leaf_size_) {
                order_leaf(segment);
                continue;
            }
            if (!places) number_by_breadth(segment);
            const auto [first, second] = split(segment);
            if (first.end - first.begin == 0 && second.end - second.begin == 0) continue;
            stack.push_back(first);
            stack.push_back(second);
        }
        std::vector<Id> result(as_size(n));
        for (Index v = 0; v < n; ++v) result[as_size(v)] = items_[as_size(v)].vertex;
        return result;
    }

  private:
    /// A vertex with its place and the distances to its farthest neighbours, kept together so that a cut streams.
    struct Item {
        float x, y, reach_x, reach_y;
        Id vertex;
    };
    struct Segment {
        Index begin, end;
    };
    static constexpr Index leaf_size_ = 64;
    static constexpr Index words_ = 4; // a leaf and the separators around it: up to 256 vertices
    static constexpr signed char free_ = 0, done_ = 1;

    Item item(Index v) const {
        Item out{x_[as_size(v)], y_[as_size(v)], 0.0f, 0.0f, as_id(v)};
        for (Index e = graph_.start[as_size(v)]; e < graph_.start[as_size(v) + 1]; ++e) {
            const std::size_t u = as_size(graph_.neighbour[as_size(e)]);
            out.reach_x = std::max(out.reach_x, std::abs(x_[u] - out.x));
            out.reach_y = std::max(out.reach_y, std::abs(y_[u] - out.y));
        }
        return out;
    }

    /// std::popcount without a call into the compiler's library, which processors without the instruction would need.
    static int bits_in(std::uint64_t word) noexcept {
        word -= (word >> 1) & 0x5555555555555555u;
        word = (word & 0x3333333333333333u) + ((word >> 2) & 0x3333333333333333u);
        word = (word + (word >> 4)) & 0x0f0f0f0f0f0f0f0fu;
        return static_cast<int>((word * 0x0101010101010101u) >> 56);
    }

    /// Stands in for coordinates: x = position in breadth-first order from a far vertex.
    void number_by_breadth(Segment segment) {
        queue_.clear();
        const auto spread = [&](Id root) { // marks what it reaches as seen; queue_ keeps the order
            queue_.push_back(root);
            local_[as_size(root)] = ++stamp_;
            for (std::size_t head = queue_.size() - 1; head < queue_.size(); ++head) {
                const Index v = queue_[head];
                for (Index e = graph_.start[as_size(v)]; e < graph_.start[as_size(v) + 1]; ++e) {
                    const Id u = graph_.neighbour[as_size(e)];
                    if (state_[as_size(u)] != free_ || local_[as_size(u)] > base_stamp_) continue;
                    local_[as_size(u)] = ++stamp_;
                    queue_.push_back(u);
                }
            }
        };
        for (Index i = segment.begin; i < segment.end; ++i) {
            const Id v = items_[as_size(i)].vertex;
            if (i > segment.begin && local_[as_size(v)] > base_stamp_) continue;
            if (i == segment.begin) base_stamp_ = stamp_;
            // Twice: the last vertex reached is a far one, and the order from there is long and thin.
            const std::size_t before = queue_.size();
            spread(v);
            const Id far = queue_.back();
            for (std::size_t k = before; k < queue_.size(); ++k) local_[as_size(queue_[k])] = 0;
            queue_.resize(before);
            spread(far);
        }
        for (std::size_t k = 0; k < queue_.size(); ++k) x_[as_size(queue_[k])] = static_cast<float>(k);
        for (Index i = segment.begin; i < segment.end; ++i) {
            Item& it = items_[as_size(i)];
            it = {x_[as_size(it.vertex)], 0.0f, std::numeric_limits<float>::infinity(), 0.0f, it.vertex};
        }
    }

    /// Rearranges a segment into two uncoupled parts followed by their separator.
    std::pair<Segment, Segment> split(Segment segment) {
        Item* const begin = items_.data() + segment.begin;
        Item* const end = items_.data() + segment.end;
        float low_x = begin->x, high_x = begin->x, low_y = begin->y, high_y = begin->y;
        for (const Item* it = begin; it != end; ++it) {
            low_x = std::min(low_x, it->x);
            high_x = std::max(high_x, it->x);
            low_y = std::min(low_y, it->y);
            high_y = std::max(high_y, it->y);
        }
        const bool along_x = high_x - low_x >= high_y - low_y;
        // The middle of a sample is near enough; equal coordinates stay on one side, so that rows of nodes are cut clean.
        std::array<float, 65> sample;
        const Index count = std::min<Index>(static_cast<Index>(sample.size()), end - begin);
        for (Index i = 0; i < count; ++i) {
            const Item& it = begin[i * (end - begin - 1) / std::max<Index>(1, count - 1)];
            sample[as_size(i)] = along_x ? it.x : it.y;
        }
        std::nth_element(sample.begin(), sample.begin() + count / 2, sample.begin() + count);
        const float cut = sample[as_size(count / 2)];
        const auto before = [&](const Item& it) { return (along_x ? it.x : it.y) < cut; };
        Item* middle = std::partition(begin, end, before);
        if ((middle - begin) * 8 < end - begin || (end - middle) * 8 < end - begin) {
            // Too many equal coordinates (or none that compare): cut in lexicographic order at the exact middle.
            return split_at(segment, exact_middle(segment, along_x));
        }
        near_a_.clear();
        near_b_.clear();
        const std::vector<float>& key = along_x ? x_ : y_;
        for (const Item* it = begin; it != middle; ++it) {
            if (!((along_x ? it->x + it->reach_x : it->y + it->reach_y) < cut) &&
                touches(it->vertex, [&](Id u) { return !(key[as_size(u)] < cut); })) {
                near_a_.push_back(it->vertex);
            }
        }
        for (const Item* it = middle; it != end; ++it) {
            if (!((along_x ? it->x - it->reach_x : it->y - it->reach_y) > cut) &&
                touches(it->vertex, [&](Id u) { return key[as_size(u)] < cut; })) {
                near_b_.push_back(it->vertex);
            }
        }
        return separate(segment, middle);
    }

    template <class Other>
    bool touches(Id v, const Other& other) const {
        for (Index e = graph_.start[as_size(v)]; e < graph_.start[as_size(v) + 1]; ++e) {
            const Id u = graph_.neighbour[as_size(e)];
            if (state_[as_size(u)] == free_ && other(u)) return true;
        }
        return false;
    }

    Item* exact_middle(Segment segment, bool along_x) {
        Item* const begin = items_.data() + segment.begin;
        Item* const middle = begin + (segment.end - segment.begin) / 2;
        std::nth_element(begin, middle, items_.data() + segment.end, [along_x](const Item& a, const Item& b) {
            const float ka = along_x ? a.x : a.y, kb = along_x ? b.x : b.y;
            if (ka != kb) return ka < kb;
            const float oa = along_x ? a.y : a.x, ob = along_x ? b.y : b.x;
            return oa != ob ? oa < ob : a.vertex < b.vertex;
        });
        return middle;
    }

    /// The cut between positions, without coordinates to tell the sides apart.
    std::pair<Segment, Segment> split_at(Segment segment, Item* middle) {
        base_stamp_ = stamp_;
        const Id side_a = ++stamp_;
        const Id side_b = ++stamp_;
        Item* const begin = items_.data() + segment.begin;
        Item* const end = items_.data() + segment.end;
        for (Item* it = begin; it != end; ++it) local_[as_size(it->vertex)] = it < middle ? side_a : side_b;
        near_a_.clear();
        near_b_.clear();
        for (const Item* it = begin; it != end; ++it) {
            const Id other = it < middle ? side_b : side_a;
            if (!touches(it->vertex, [&](Id u) { return local_[as_size(u)] == other; })) continue;
            (it < middle ? near_a_ : near_b_).push_back(it->vertex);
        }
        return separate(segment, middle);
    }

    /// Moves the smallest set of vertices that covers all cut couplings to the end of the segment.
    std::pair<Segment, Segment> separate(Segment segment, Item* middle) {
        cover();
        Item* const begin = items_.data() + segment.begin;
        Item* const end = items_.data() + segment.end;
        const auto stays = [&](const Item& it) { return state_[as_size(it.vertex)] == free_; };
        Item* const end_a = std::partition(begin, middle, stays);
        Item* const end_b = std::partition(middle, end, stays);
        const Index count_a = end_a - begin;
        const Index count_b = end_b - middle;
        std::rotate(end_a, middle, end_b);
        const Index b = segment.begin;
        return {{b, b + count_a}, {b + count_a, b + count_a + count_b}};
    }

    /// Marks the separator as done: the smallest vertex cover of the couplings between near_a_ and near_b_.
    void cover() {
        const Index count_a = static_cast<Index>(near_a_.size());
        const Index count_b = static_cast<Index>(near_b_.size());
        base_stamp_ = stamp_;
        for (Index b = 0; b < count_b; ++b) local_[as_size(near_b_[as_size(b)])] = ++stamp_;
        // Couplings by rows of A.
        cut_start_.assign(1, 0);
        cut_.clear();
        for (Index a = 0; a < count_a; ++a) {
            const Index v = near_a_[as_size(a)];
            for (Index e = graph_.start[as_size(v)]; e < graph_.start[as_size(v) + 1]; ++e) {
                const Id u = graph_.neighbour[as_size(e)];
                if (state_[as_size(u)] == free_ && local_[as_size(u)] > base_stamp_) {
                    cut_.push_back(local_[as_size(u)] - base_stamp_ - 1);
                }
            }
            cut_start_.push_back(as_id(cut_.size()));
        }
        mate_a_.assign(as_size(count_a), -1);
        mate_b_.assign(as_size(count_b), -1);
        reached_a_.assign(as_size(count_a), 0);
        reached_b_.assign(as_size(count_b), 0);
        for (Index a = 0; a < count_a; ++a) {
            if (augment(as_id(a))) std::fill(reached_b_.begin(), reached_b_.end(), Id{0});
        }
        // Koenig: from the unmatched of A along alternating paths; the cover is A not reached and B reached.
        std::fill(reached_b_.begin(), reached_b_.end(), Id{0});
        for (Index a = 0; a < count_a; ++a) {
            if (mate_a_[as_size(a)] < 0) reach(as_id(a));
        }
        for (Index a = 0; a < count_a; ++a) {
            if (!reached_a_[as_size(a)]) state_[as_size(near_a_[as_size(a)])] = done_;
        }
        for (Index b = 0; b < count_b; ++b) {
            if (reached_b_[as_size(b)]) state_[as_size(near_b_[as_size(b)])] = done_;
        }
    }

    /// Looks for an augmenting path from `root` by depth; an explicit stack, since paths can be as long as the cut.
    bool augment(Id root) {
        for (Index e = cut_start_[as_size(root)]; e < cut_start_[as_size(root) + 1];
             ++e) { // the usual case: a free mate
            const Id b = cut_[as_size(e)];
            if (mate_b_[as_size(b)] < 0) {
                mate_b_[as_size(b)] = root;
                mate_a_[as_size(root)] = b;
                return true;
            }
        }
        path_.assign(1, {root, cut_start_[as_size(root)]});
        while (!path_.empty()) {
            auto& [a, e] = path_.back();
            if (e == cut_start_[as_size(a) + 1]) {
                path_.pop_back();
                continue;
            }
            const Id b = cut_[as_size(e++)];
            if (reached_b_[as_size(b)]) continue;
            reached_b_[as_size(b)] = 1;
            if (mate_b_[as_size(b)] >= 0) {
                const Id next = mate_b_[as_size(b)];
                path_.push_back({next, cut_start_[as_size(next)]});
                continue;
            }
            for (const auto& [on_path, position] : path_) {
                const Id taken = cut_[as_size(position) - 1];
                mate_a_[as_size(on_path)] = taken;
                mate_b_[as_size(taken)] = on_path;
            }
            return true;
        }
        return false;
    }

    void reach(Id root) {
        queue_.assign(1, root);
        reached_a_[as_size(root)] = 1;
        while (!queue_.empty()) {
            const Id a = queue_.back();
            queue_.pop_back();
            for (Index e = cut_start_[as_size(a)]; e < cut_start_[as_size(a) + 1]; ++e) {
                const Id b = cut_[as_size(e)];
                if (reached_b_[as_size(b)]) continue;
                reached_b_[as_size(b)] = 1;
                const Id next = mate_b_[as_size(b)]; // matched, or the matching could grow
                if (next >= 0 && !reached_a_[as_size(next)]) {
                    reached_a_[as_size(next)] = 1;
                    queue_.push_back(next);
                }
            }
        }
    }

    /// Exact minimum degree on the leaf with the separators around it as vertices that are never eliminated.
    void order_leaf(Segment segment) {
        const Index n = segment.end - segment.begin;
        Item* const item = items_.data() + segment.begin;
        base_stamp_ = stamp_;
        Index count = n;
        for (Index i = 0; i < n; ++i) local_[as_size(item[i].vertex)] = ++stamp_;
        link_.assign(as_size(words_ * 64), {});
        for (Index i = 0; i < n; ++i) {
            const Index v = item[i].vertex;
            for (Index e = graph_.start[as_size(v)]; e < graph_.start[as_size(v) + 1]; ++e) {
                const std::size_t u = as_size(graph_.neighbour[as_size(e)]);
                if (local_[u] <= base_stamp_) {
                    if (count == words_ * 64) continue; // more around the leaf than counts here: only the order suffers
                    local_[u] = ++stamp_;
                    ++count;
                }
                const Index j = local_[u] - base_stamp_ - 1;
                link_[as_size(i)][as_size(j / 64)] |= std::uint64_t{1} << (j % 64);
                link_[as_size(j)][as_size(i / 64)] |= std::uint64_t{1} << (i % 64);
            }
        }
        std::array<int, leaf_size_> degree;
        const auto count_links = [&](Index i) {
            int sum = 0;
            for (const std::uint64_t word : link_[as_size(i)]) sum += word != 0 ? bits_in(word) : 0;
            degree[as_size(i)] = sum;
        };
        for (Index i = 0; i < n; ++i) count_links(i);
        std::array<Id, leaf_size_> left;
        for (Index i = 0; i < n; ++i) left[as_size(i)] = as_id(i);
        std::array<Item, leaf_size_> ordered;
        for (Index step = 0; step < n; ++step) {
            Index best = step;
            int least = std::numeric_limits<int>::max();
            for (Index k = step; k < n; ++k) {
                if (degree[as_size(left[as_size(k)])] < least) {
                    least = degree[as_size(left[as_size(k)])];
                    best = k;
                }
            }
            std::swap(left[as_size(step)], left[as_size(best)]);
            const Index v = left[as_size(step)];
            ordered[as_size(step)] = item[v];
            const std::array<std::uint64_t, words_> row = link_[as_size(v)];
            for (Index w = 0; w < words_; ++w) {
                for (std::uint64_t bits = row[as_size(w)]; bits != 0; bits &= bits - 1) {
                    const Index u = w * 64 + std::countr_zero(bits);
                    auto& other = link_[as_size(u)];
                    for (Index k = 0; k < words_; ++k) other[as_size(k)] |= row[as_size(k)];
                    other[as_size(u / 64)] &= ~(std::uint64_t{1} << (u % 64));
                    other[as_size(v / 64)] &= ~(std::uint64_t{1} << (v % 64));
                    if (u < n) count_links(u);
                }
            }
        }
        std::copy_n(ordered.begin(), n, item);
    }

    const Graph& graph_;
    std::vector<Item> items_;
    std::vector<float> x_, y_;
    std::vector<signed char> state_;
    std::vector<Id> local_; // numbers valid while above base_stamp_
    Id stamp_ = 0;
    Id base_stamp_ = 0;
    std::vector<Id> near_a_, near_b_, cut_start_, cut_, mate_a_, mate_b_, reached_a_, reached_b_, queue_;
    std::vector<std::pair<Id, Id>> path_;
    std::vector<std::array<std::uint64_t, words_>> link_;
};

} // namespace tepor::detail
