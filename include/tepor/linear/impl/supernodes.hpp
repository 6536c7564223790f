#pragma once
// Supernodes: groups of columns with (nearly) the same rows, merged where the machine gains by it.
// Source: the multifrontal method, Duff & Reid (1983); relaxed amalgamation, Ashcraft & Grimes (1989).

#include <algorithm>
#include <tepor/linear/detail/supernode_tree.hpp>
#include <tepor/linear/impl/elimination_tree.hpp>
#include <vector>

namespace tepor::detail {

namespace supernodes {

/// Time of one front in arbitrary units: the call, moving the update twice, the elimination. Fitted to measurements.
inline double cost(Index pivots, Index below) noexcept {
    const double k = as_double((pivots + 3) / 4 * 4), r = as_double((below + 3) / 4 * 4);
    return 300.0 + 12.0 * (k + r) + 1.3 * r * r + 4.0 * k * (k + r) + 0.20 * k * (k * k / 3.0 + k * r + r * r);
}

/// Groups of columns: group[position] = representative, merged upwards while that lowers the cost.
struct Groups {
    std::vector<Id> of;     ///< fundamental supernode of each position
    std::vector<Id> into;   ///< fundamental supernode -> itself or the one it was merged into
    std::vector<Id> parent; ///< of each fundamental supernode, before merging
};

inline Groups merge(const EliminationTree& tree) {
    const Index n = static_cast<Index>(tree.order.size());
    Groups groups;
    groups.of.resize(as_size(n));
    std::vector<Id> pivots, below;
    for (Index j = 0; j < n; ++j) {
        const bool joins =
            j > 0 && tree.parent[as_size(j) - 1] == j && tree.count[as_size(j) - 1] == tree.count[as_size(j)] + 1;
        if (!joins) {
            pivots.push_back(0);
            below.push_back(0);
        }
        ++pivots.back();
        below.back() = tree.count[as_size(j)] - 1;
        groups.of[as_size(j)] = as_id(pivots.size() - 1);
    }
    const std::size_t count = pivots.size();
    groups.into.resize(count);
    groups.parent.assign(count, -1);
    for (Index j = 0; j < n; ++j) {
        const Id s = groups.of[as_size(j)];
        const bool last = j + 1 == n || groups.of[as_size(j) + 1] != s;
        if (last && tree.parent[as_size(j)] >= 0)
            groups.parent[as_size(s)] = groups.of[as_size(tree.parent[as_size(j)])];
    }
    std::vector<Id> head(count, -1), sibling(count, -1); // children of each; merging appends the child's own
    std::vector<Id> children;
    for (std::size_t s = 0; s < count; ++s) {
        groups.into[s] = as_id(s);
        children.clear();
        for (Id c = head[s]; c >= 0; c = sibling[as_size(c)]) children.push_back(c);
        std::sort(children.begin(), children.end(), [&](Id a, Id b) {
            return below[as_size(a)] != below[as_size(b)] ? below[as_size(a)] > below[as_size(b)] : a < b;
        });
        for (const Id c : children) {
            const std::size_t child = as_size(c);
            const double apart = cost(pivots[child], below[child]) + cost(pivots[s], below[s]);
            if (cost(pivots[child] + pivots[s], below[s]) > apart) continue;
            pivots[s] += pivots[child];
            groups.into[child] = as_id(s);
        }
        if (groups.parent[s] >= 0) {
            sibling[s] = head[as_size(groups.parent[s])];
            head[as_size(groups.parent[s])] = as_id(s);
        }
    }
    return groups;
}

inline void find_rows(SupernodeTree& out, const Graph& graph, const std::vector<Id>& inverse,
                      const std::vector<Id>& of) {
    const Index n = graph.n;
    std::vector<Index> next(out.node.size());
    for (std::size_t s = 0; s < next.size(); ++s) next[s] = out.node[s].rows;
    std::vector<Id> mark(out.node.size(), -1);
    for (Index i = 0; i < n; ++i) { // rows ascend, so every list comes out sorted
        const Id own = of[as_size(i)];
        mark[as_size(own)] = as_id(i);
        const Index v = out.order[as_size(i)];
        for (Index e = graph.start[as_size(v)]; e < graph.start[as_size(v) + 1]; ++e) {
            const Index j = inverse[as_size(graph.neighbour[as_size(e)])];
            if (j > i) continue;
            for (Id s = of[as_size(j)]; mark[as_size(s)] != i; s = out.node[as_size(s)].parent) {
                mark[as_size(s)] = as_id(i);
                out.row[as_size(next[as_size(s)]++)] = as_id(i);
            }
        }
    }
}

/// Where the children's rows and the entries of the matrix land in each front.
inline void find_places(SupernodeTree& out, const SparseMatrix& matrix, const Graph& graph,
                        const std::vector<Id>& inverse) {
    std::vector<Id> position(as_size(graph.n));
    out.place.resize(out.row.size());
    out.source.reserve(graph.entry.size() / 2 + as_size(graph.n));
    out.target.reserve(graph.entry.size() / 2 + as_size(graph.n));
    for (Supernode& node : out.node) {
        for (Index r = 0; r < node.below; ++r) position[as_size(out.row[as_size(node.rows + r)])] = as_id(r);
        for (Index k = 0; k < node.pivots; ++k) position[as_size(node.first + k)] = as_id(~k);
        for (Index c = node.child_begin; c < node.child_end; ++c) {
            const Supernode& child = out.node[as_size(out.child[as_size(c)])];
            for (Index r = 0; r < child.below; ++r) {
                out.place[as_size(child.rows + r)] = position[as_size(out.row[as_size(child.rows + r)])];
            }
        }
        node.scatter = static_cast<Index>(out.source.size());
        const Index stride = node.stride();
        for (Index k = 0; k < node.pivots; ++k) {
            const Index v = out.order[as_size(node.first + k)];
            const Index column = k * stride;
            out.source.push_back(matrix.start[as_size(v) + 1] - 1);
            out.target.push_back(as_id(column + node.pad() + k));
            for (Index e = graph.start[as_size(v)]; e < graph.start[as_size(v) + 1]; ++e) {
                const Index i = inverse[as_size(graph.neighbour[as_size(e)])];
                if (i < node.first + k) continue;
                const Index p = position[as_size(i)];
                out.source.push_back(graph.entry[as_size(e)]);
                out.target.push_back(as_id(column + (p < 0 ? node.pad() + ~p : node.top() + p)));
            }
        }
    }
}

} // namespace supernodes

/// Supernodes of an elimination tree; the order changes to an equivalent one in which each is contiguous.
inline SupernodeTree supernode_tree(const SparseMatrix& matrix, const Graph& graph, const EliminationTree& tree) {
    SupernodeTree out;
    const Index n = graph.n;
    supernodes::Groups groups = supernodes::merge(tree);
    const Index raw = static_cast<Index>(groups.into.size());
    for (Index s = raw - 1; s >= 0; --s) groups.into[as_size(s)] = groups.into[as_size(groups.into[as_size(s)])];
    // Parents among representatives, in an order with children first.
    std::vector<Id> parent(as_size(raw), -1);
    for (Index s = 0; s < raw; ++s) {
        if (groups.into[as_size(s)] == s && groups.parent[as_size(s)] >= 0) {
            parent[as_size(s)] = groups.into[as_size(groups.parent[as_size(s)])];
        }
    }
    const std::vector<Id> post = postorder_of(parent);
    std::vector<Id> number(as_size(raw), -1);
    for (const Id s : post) {
        if (groups.into[as_size(s)] != s) continue; // merged ones have become roots of their own here
        number[as_size(s)] = as_id(out.node.size());
        out.node.emplace_back();
    }
    std::vector<Id> of(as_size(n));
    for (Index j = 0; j < n; ++j) {
        const Id s = number[as_size(groups.into[as_size(groups.of[as_size(j)])])];
        of[as_size(j)] = s;
        ++out.node[as_size(s)].pivots;
        out.node[as_size(s)].below = tree.count[as_size(j)] - 1; // its last column decides
    }
    Index first = 0, rows = 0;
    for (Supernode& node : out.node) {
        node.first = as_id(first);
        node.rows = rows;
        node.panel = out.panel_size;
        first += node.pivots;
        rows += node.below;
        out.panel_size += node.stride() * node.pivots;
        out.longest = std::max(out.longest, node.stride());
    }
    out.row.resize(as_size(rows));
    out.order.resize(as_size(n));
    std::vector<Id> next(out.node.size());
    for (std::size_t s = 0; s < next.size(); ++s) next[s] = out.node[s].first;
    for (Index j = 0; j < n; ++j) out.order[as_size(next[as_size(of[as_size(j)])]++)] = tree.order[as_size(j)];
    std::vector<Id> by_position(as_size(n));
    for (std::size_t s = 0; s < out.node.size(); ++s) {
        for (Index k = 0; k < out.node[s].pivots; ++k) by_position[as_size(out.node[s].first + k)] = as_id(s);
    }
    for (Index s = 0; s < raw; ++s) {
        if (number[as_size(s)] >= 0 && parent[as_size(s)] >= 0) {
            out.node[as_size(number[as_size(s)])].parent = number[as_size(parent[as_size(s)])];
        }
    }
    const std::vector<Id> inverse = inverse_of(out.order);
    supernodes::find_rows(out, graph, inverse, by_position);
    // Children lists, depths, and the height of the two stacks of pending updates.
    std::vector<Id> children(out.node.size() + 1, 0);
    for (const Supernode& node : out.node) {
        if (node.parent >= 0) ++children[as_size(node.parent)];
    }
    Id begin = 0;
    for (std::size_t s = 0; s < out.node.size(); ++s) {
        out.node[s].child_begin = out.node[s].child_end = begin;
        begin += children[s];
    }
    out.child.resize(as_size(begin));
    for (std::size_t s = 0; s < out.node.size(); ++s) {
        if (out.node[s].parent < 0) continue;
        out.child[as_size(out.node[as_size(out.node[s].parent)].child_end++)] = as_id(s);
    }
    for (std::size_t s = out.node.size(); s-- > 0;) {
        if (out.node[s].parent >= 0) out.node[s].depth = out.node[as_size(out.node[s].parent)].depth + 1;
    }
    Index height[2] = {0, 0};
    for (const Supernode& node : out.node) {
        const int side = node.depth % 2;
        for (Index c = node.child_begin; c < node.child_end; ++c) {
            const Index width = out.node[as_size(out.child[as_size(c)])].update_stride();
            height[1 - side] -= width * width;
        }
        height[side] += node.update_stride() * node.update_stride();
        out.stack_size[side] = std::max(out.stack_size[side], height[side]);
    }
    supernodes::find_places(out, matrix, graph, inverse);
    return out;
}

} // namespace tepor::detail
