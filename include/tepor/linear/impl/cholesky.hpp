#pragma once
// Multifrontal factorisation and the solves with its panels.

#include <algorithm>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/impl/front.hpp>
#include <tepor/linear/impl/nested_dissection.hpp>
#include <tepor/linear/impl/pivot.hpp>
#include <tepor/linear/impl/supernodes.hpp>

namespace tepor {

TEPOR_INLINE void SparseCholesky::analyze(const SparseMatrix& pattern, Index n, const Point* places) {
    size_ = n;
    singular_row_ = -1;
    kernels_ = detail::front_kernels();
    const detail::Graph graph = detail::graph_of(pattern, n);
    const std::vector<Id> order = detail::NestedDissection(graph).order(places);
    tree_ = detail::supernode_tree(pattern, graph, detail::elimination_tree(graph, order));
    panel_.reset(tree_.panel_size);
    for (int side = 0; side < 2; ++side) stack_[side].reset(tree_.stack_size[side]);
    work_.reset(4 * work_size());
}

TEPOR_INLINE bool SparseCholesky::factor(const SparseMatrix& matrix) {
    singular_row_ = -1;
    const double floor = detail::pivot_floor(size_);
    const double* value = matrix.lower.data();
    double* floors = work_.data();
    Index height[2] = {0, 0};
    for (std::size_t s = 0; s < tree_.node.size(); ++s) {
        const detail::Supernode& node = tree_.node[s];
        const Index stride = node.stride(), width = node.update_stride(), top = node.top(), pad = node.pad();
        double* panel = panel_.data() + node.panel;
        std::fill_n(panel, stride * node.pivots, 0.0);
        const Index scatter_end =
            s + 1 < tree_.node.size() ? tree_.node[s + 1].scatter : static_cast<Index>(tree_.source.size());
        const Id* source = tree_.source.data();
        const Id* target = tree_.target.data();
        for (Index e = node.scatter; e < scatter_end; ++e) panel[target[e]] = value[source[e]];
        for (Index k = 0; k < node.pivots; ++k) floors[k] = floor * panel[k * stride + pad + k];

        const int side = node.depth % 2;
        double* update = stack_[side].data() + height[side];
        height[side] += width * width;
        std::fill_n(update, width * width, 0.0);
        for (Index c = node.child_end - 1; c >= node.child_begin; --c) {
            const detail::Supernode& child = tree_.node[detail::as_size(tree_.child[detail::as_size(c)])];
            const Index child_width = child.update_stride();
            height[1 - side] -= child_width * child_width;
            const double* from = stack_[1 - side].data() + height[1 - side];
            const Id* place = tree_.place.data() + child.rows;
            for (Index j = 0; j < child.below; ++j, from += child_width) {
                if (place[j] < 0) { // this column belongs to a pivot of ours
                    double* column = panel + (~place[j]) * stride;
                    Index i = j;
                    for (; i < child.below && place[i] < 0; ++i) column[pad + ~place[i]] += from[i];
                    for (; i < child.below; ++i) column[top + place[i]] += from[i];
                } else {
                    double* column = update + place[j] * width;
                    for (Index i = j; i < child.below; ++i) column[place[i]] += from[i];
                }
            }
        }
        const Index bad = kernels_.eliminate(panel, node.pivots, pad, top, stride, floors, update);
        if (bad >= 0 && singular_row_ < 0) singular_row_ = tree_.order[detail::as_size(node.first + bad)];
    }
    return singular_row_ < 0;
}

TEPOR_INLINE void SparseCholesky::solve(double* b, double* work) const noexcept {
    double* x = work;            // by position
    double* part = work + size_; // rows below one front
    const Id* order = tree_.order.data();
    for (Index k = 0; k < size_; ++k) x[k] = b[order[k]];
    for (const detail::Supernode& node : tree_.node) {
        const double* panel = panel_.data() + node.panel;
        kernels_.forward(panel, node.pivots, node.pad(), node.top(), node.stride(), x + node.first, part);
        const Id* row = tree_.row.data() + node.rows;
        for (Index i = 0; i < node.below; ++i) x[row[i]] -= part[i];
    }
    for (auto node = tree_.node.rbegin(); node != tree_.node.rend(); ++node) {
        const double* panel = panel_.data() + node->panel;
        const Id* row = tree_.row.data() + node->rows;
        for (Index i = 0; i < node->below; ++i) part[i] = x[row[i]];
        for (Index i = node->below; i < node->update_stride(); ++i) part[i] = 0.0;
        kernels_.backward(panel, node->pivots, node->pad(), node->top(), node->stride(), x + node->first, part);
    }
    for (Index k = 0; k < size_; ++k) b[order[k]] = x[k];
}

TEPOR_INLINE void SparseCholesky::solve(double* b, Index count) const noexcept {
    Index k = 0;
    for (; k + 4 <= count; k += 4) solve_four(b + k * size_);
    for (; k < count; ++k) solve(b + k * size_, work_.data());
}

TEPOR_INLINE void SparseCholesky::solve_four(double* b) const noexcept {
    double* x = work_.data(); // by position, four values each
    double* part = x + 4 * size_;
    const Id* order = tree_.order.data();
    for (Index k = 0; k < size_; ++k) {
        for (Index c = 0; c < 4; ++c) x[4 * k + c] = b[c * size_ + order[k]];
    }
    for (const detail::Supernode& node : tree_.node) {
        const double* panel = panel_.data() + node.panel;
        kernels_.forward_four(panel, node.pivots, node.pad(), node.top(), node.stride(), x + 4 * node.first, part);
        const Id* row = tree_.row.data() + node.rows;
        for (Index i = 0; i < node.below; ++i) {
            double* to = x + 4 * static_cast<Index>(row[i]);
            for (Index c = 0; c < 4; ++c) to[c] -= part[4 * i + c];
        }
    }
    for (auto node = tree_.node.rbegin(); node != tree_.node.rend(); ++node) {
        const double* panel = panel_.data() + node->panel;
        const Id* row = tree_.row.data() + node->rows;
        for (Index i = 0; i < node->below; ++i) {
            const double* from = x + 4 * static_cast<Index>(row[i]);
            for (Index c = 0; c < 4; ++c) part[4 * i + c] = from[c];
        }
        std::fill(part + 4 * node->below, part + 4 * node->update_stride(), 0.0);
        kernels_.backward_four(panel, node->pivots, node->pad(), node->top(), node->stride(), x + 4 * node->first,
                               part);
    }
    for (Index k = 0; k < size_; ++k) {
        for (Index c = 0; c < 4; ++c) b[c * size_ + order[k]] = x[4 * k + c];
    }
}

} // namespace tepor
