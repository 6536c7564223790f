#pragma once
// Elimination tree and column counts of the factor.
// Source: Liu, "The role of elimination trees in sparse factorization" (1990); counts: Gilbert, Ng & Peyton (1994).

#include <algorithm>
#include <tepor/linear/impl/graph.hpp>
#include <vector>

namespace tepor::detail {

/// An elimination order with its tree, postordered: every subtree is a contiguous range that ends with its root.
struct EliminationTree {
    std::vector<Id> order;   ///< order[position] = vertex
    std::vector<Id> inverse; ///< inverse[vertex] = position
    std::vector<Id> parent;  ///< by position; -1 at a root
    std::vector<Id> count;   ///< entries of each column of the factor, diagonal included
};

inline std::vector<Id> inverse_of(const std::vector<Id>& order) {
    std::vector<Id> inverse(order.size());
    for (std::size_t k = 0; k < order.size(); ++k) inverse[as_size(order[k])] = as_id(k);
    return inverse;
}

/// Positions in postorder of a forest given by parents with parent > child.
inline std::vector<Id> postorder_of(const std::vector<Id>& parent) {
    const Index n = static_cast<Index>(parent.size());
    std::vector<Id> child(as_size(n) + 1, -1), sibling(as_size(n), -1); // child[n] lists the roots
    for (Index j = n - 1; j >= 0; --j) {
        const Index p = parent[as_size(j)] < 0 ? n : parent[as_size(j)];
        sibling[as_size(j)] = child[as_size(p)];
        child[as_size(p)] = as_id(j);
    }
    std::vector<Id> post, stack;
    post.reserve(as_size(n));
    for (Id root = child[as_size(n)]; root >= 0; root = sibling[as_size(root)]) {
        stack.push_back(root);
        while (!stack.empty()) {
            const Id j = stack.back();
            const Id first = child[as_size(j)];
            if (first >= 0) {
                stack.push_back(first);
                child[as_size(j)] = sibling[as_size(first)]; // descend once
            } else {
                post.push_back(j);
                stack.pop_back();
            }
        }
    }
    return post;
}

inline std::vector<Id> tree_parents(const Graph& graph, const std::vector<Id>& order, const std::vector<Id>& inverse) {
    const Index n = graph.n;
    std::vector<Id> parent(as_size(n), -1), ancestor(as_size(n), -1);
    for (Index i = 0; i < n; ++i) {
        const Index v = order[as_size(i)];
        for (Index e = graph.start[as_size(v)]; e < graph.start[as_size(v) + 1]; ++e) {
            Id j = inverse[as_size(graph.neighbour[as_size(e)])];
            while (j >= 0 && j < i) { // climb to the root of j's present tree, shortening the path on the way
                const Id next = ancestor[as_size(j)];
                ancestor[as_size(j)] = as_id(i);
                if (next < 0) parent[as_size(j)] = as_id(i);
                j = next;
            }
        }
    }
    return parent;
}

inline std::vector<Id> column_counts(const Graph& graph, const EliminationTree& tree) {
    const Index n = graph.n;
    const auto none = Id{-1};
    std::vector<Id> first(as_size(n), none), delta(as_size(n), 0), furthest(as_size(n), none),
        previous(as_size(n), none), ancestor(as_size(n));
    for (Index j = 0; j < n; ++j) {
        delta[as_size(j)] = first[as_size(j)] < 0 ? 1 : 0;
        for (Index k = j; k >= 0 && first[as_size(k)] < 0; k = tree.parent[as_size(k)]) first[as_size(k)] = as_id(j);
        ancestor[as_size(j)] = as_id(j);
    }
    for (Index j = 0; j < n; ++j) {
        const Index p = tree.parent[as_size(j)];
        if (p >= 0) --delta[as_size(p)];
        const Index v = tree.order[as_size(j)];
        for (Index e = graph.start[as_size(v)]; e < graph.start[as_size(v) + 1]; ++e) {
            const Index i = tree.inverse[as_size(graph.neighbour[as_size(e)])];
            if (i <= j || first[as_size(j)] <= furthest[as_size(i)]) continue; // not a leaf of the subtree of row i
            furthest[as_size(i)] = first[as_size(j)];
            ++delta[as_size(j)];
            const Id before = previous[as_size(i)];
            previous[as_size(i)] = as_id(j);
            if (before < 0) continue;
            Id common = before; // lowest common ancestor of the last two leaves
            while (common != ancestor[as_size(common)]) common = ancestor[as_size(common)];
            for (Id s = before; s != common;) {
                const Id next = ancestor[as_size(s)];
                ancestor[as_size(s)] = common;
                s = next;
            }
            --delta[as_size(common)];
        }
        if (p >= 0) ancestor[as_size(j)] = as_id(p);
    }
    for (Index j = 0; j < n; ++j) {
        const Index p = tree.parent[as_size(j)];
        if (p >= 0) delta[as_size(p)] += delta[as_size(j)];
    }
    return delta;
}

/// The tree of an elimination order; the order is changed to an equivalent one in postorder.
inline EliminationTree elimination_tree(const Graph& graph, const std::vector<Id>& order) {
    EliminationTree tree;
    const std::vector<Id> parent = tree_parents(graph, order, inverse_of(order));
    const std::vector<Id> post = postorder_of(parent);
    const std::vector<Id> position = inverse_of(post);
    tree.order.resize(order.size());
    tree.parent.resize(order.size());
    for (std::size_t k = 0; k < post.size(); ++k) {
        const Id old = post[k];
        tree.order[k] = order[as_size(old)];
        tree.parent[k] = parent[as_size(old)] < 0 ? Id{-1} : position[as_size(parent[as_size(old)])];
    }
    tree.inverse = inverse_of(tree.order);
    tree.count = column_counts(graph, tree);
    return tree;
}

} // namespace tepor::detail
