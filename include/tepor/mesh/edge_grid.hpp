#pragma once
// A uniform grid of straight pieces, for finding pieces near a piece.

#include <algorithm>
#include <cmath>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <vector>

namespace tepor::detail {

/// Pieces by number in grid cells of about one piece each. Add all pieces, build, then visit.
class EdgeGrid {
  public:
    void add(Point a, Point b, double margin = 0.0) {
        boxes_.push_back({{std::min(a.x, b.x) - margin, std::min(a.y, b.y) - margin},
                          {std::max(a.x, b.x) + margin, std::max(a.y, b.y) + margin}});
    }

    void build() {
        if (boxes_.empty()) return;
        low_ = boxes_.front().low;
        Point high = boxes_.front().high;
        double mean = 0.0;
        for (const Box& b : boxes_) {
            low_ = {std::min(low_.x, b.low.x), std::min(low_.y, b.low.y)};
            high = {std::max(high.x, b.high.x), std::max(high.y, b.high.y)};
            mean += std::max(b.high.x - b.low.x, b.high.y - b.low.y);
        }
        const double n = as_double(boxes_.size());
        // Cells about as wide as a piece, but no more than a few per piece in all.
        const double span = std::max({high.x - low_.x, high.y - low_.y, 1e-300});
        width_ = std::max(
            {mean / n, std::sqrt((high.x - low_.x) * (high.y - low_.y) / (4.0 * n)), span / (4.0 * n), 1e-300});
        columns_ = std::max<Index>(1, static_cast<Index>((high.x - low_.x) / width_) + 1);
        rows_ = std::max<Index>(1, static_cast<Index>((high.y - low_.y) / width_) + 1);
        start_.assign(as_size(columns_ * rows_ + 1), 0);
        for (const Box& b : boxes_) each_cell(b, [&](Index k) { ++start_[as_size(k) + 1]; });
        for (std::size_t k = 1; k < start_.size(); ++k) start_[k] += start_[k - 1];
        items_.resize(start_.back());
        std::vector<std::size_t> fill(start_.begin(), start_.end() - 1);
        for (std::size_t i = 0; i < boxes_.size(); ++i)
            each_cell(boxes_[i], [&](Index k) { items_[fill[as_size(k)]++] = i; });
        seen_.assign(boxes_.size(), 0);
        stamp_ = 0;
    }

    /// Call visitor(number) once for each piece whose box comes within `margin` of the box of a and b.
    template <class Visitor>
    void visit(Point a, Point b, double margin, Visitor&& visitor) {
        if (boxes_.empty()) return;
        const Box box{{std::min(a.x, b.x) - margin, std::min(a.y, b.y) - margin},
                      {std::max(a.x, b.x) + margin, std::max(a.y, b.y) + margin}};
        ++stamp_;
        each_cell(box, [&](Index k) {
            for (std::size_t m = start_[as_size(k)]; m < start_[as_size(k) + 1]; ++m) {
                const std::size_t i = items_[m];
                if (seen_[i] == stamp_) continue;
                seen_[i] = stamp_;
                const Box& o = boxes_[i];
                if (o.low.x <= box.high.x && o.high.x >= box.low.x && o.low.y <= box.high.y && o.high.y >= box.low.y)
                    visitor(i);
            }
        });
    }

  private:
    struct Box {
        Point low;
        Point high;
    };

    template <class Act>
    void each_cell(const Box& b, Act&& act) const {
        const auto clamp = [&](double v, Index n) {
            const double k = v / width_;
            return k <= 0.0 ? Index{0} : k >= as_double(n) ? n - 1 : std::min(n - 1, static_cast<Index>(k));
        };
        const Index i0 = clamp(b.low.x - low_.x, columns_);
        const Index i1 = clamp(b.high.x - low_.x, columns_);
        const Index j0 = clamp(b.low.y - low_.y, rows_);
        const Index j1 = clamp(b.high.y - low_.y, rows_);
        for (Index j = j0; j <= j1; ++j)
            for (Index i = i0; i <= i1; ++i) act(j * columns_ + i);
    }

    std::vector<Box> boxes_;
    Point low_;
    double width_ = 1.0;
    Index columns_ = 0;
    Index rows_ = 0;
    std::vector<std::size_t> start_;
    std::vector<std::size_t> items_;
    std::vector<unsigned> seen_;
    unsigned stamp_ = 0;
};

} // namespace tepor::detail
