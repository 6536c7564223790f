#pragma once
// Finding interfaces and splitting nodes along contacts.

#include <algorithm>
#include <tepor/body/split.hpp>
#include <utility>

namespace tepor::detail {

TEPOR_INLINE std::vector<ContactPair> interface_between(const MeshData& mesh, const CellKernels& kernels, Id first,
                                                        Id second) {
    std::vector<unsigned char> touched(mesh.nodes.size(), 0);
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id region = mesh.region[as_size(c)];
        const unsigned char bit = region == first ? 1 : (region == second ? 2 : 0);
        if (bit == 0) continue;
        for (int i = 0; i < mesh.nodes_per_cell; ++i) touched[as_size(mesh.cell(c)[i])] |= bit;
    }
    std::vector<KeyedSide> of_second;
    std::vector<KeyedSide> of_first;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id region = mesh.region[as_size(c)];
        if (region != first && region != second) continue;
        for (int s = 0; s < mesh.sides_per_cell; ++s) {
            const SideKey key = side_key(mesh, kernels, as_id(c), s);
            if (touched[as_size(key.first)] != 3 || touched[as_size(key.second)] != 3) continue;
            (region == first ? of_first : of_second).push_back({key, {as_id(c), s}});
        }
    }
    sort_by_key(of_second);
    std::vector<ContactPair> pairs;
    for (const KeyedSide& a : of_first) {
        const KeyedSide* b = find_key(of_second, a.key);
        if (!b) continue;
        const Id from_a = mesh.cell(a.side.cell)[kernels.side_node(a.side.side, 0)];
        const Id from_b = mesh.cell(b->side.cell)[kernels.side_node(b->side.side, 0)];
        pairs.push_back({a.side, b->side, kernels.dim == 2 && from_a != from_b});
    }
    return pairs;
}

TEPOR_INLINE std::vector<Id> split_nodes(const MeshData& mesh, const CellKernels& kernels,
                                         const std::vector<ContactPair>& contacts, std::vector<Id>& owner) {
    const auto nn = as_size(mesh.nodes_per_cell);
    std::vector<Id> unknowns = mesh.cells;
    owner.resize(mesh.nodes.size());
    for (std::size_t n = 0; n < owner.size(); ++n) owner[n] = as_id(n);
    if (contacts.empty()) return unknowns;

    std::vector<SideKey> closed;
    std::vector<unsigned char> on_contact(mesh.nodes.size(), 0);
    for (const ContactPair& pair : contacts) {
        closed.push_back(side_key(mesh, kernels, pair.first.cell, pair.first.side));
        for (int j = 0; j < kernels.side_nodes; ++j)
            on_contact[as_size(mesh.cell(pair.first.cell)[kernels.side_node(pair.first.side, j)])] = 1;
    }
    std::sort(closed.begin(), closed.end());

    // (node, cell, local node) of every node on a contact, node by node
    struct Around {
        Id node, cell, local;
    };
    std::vector<Around> around;
    for (Index c = 0; c < mesh.cell_count(); ++c)
        for (std::size_t i = 0; i < nn; ++i)
            if (on_contact[as_size(mesh.cell(c)[i])]) around.push_back({mesh.cell(c)[i], as_id(c), as_id(i)});
    std::sort(around.begin(), around.end(),
              [](const Around& a, const Around& b) { return a.node != b.node ? a.node < b.node : a.cell < b.cell; });

    std::vector<KeyedSide> open;
    std::vector<std::size_t> root;
    for (std::size_t from = 0; from < around.size();) {
        std::size_t to = from;
        while (to < around.size() && around[to].node == around[from].node) ++to;
        root.resize(to - from);
        for (std::size_t i = 0; i < root.size(); ++i) root[i] = i;
        const auto find = [&root](std::size_t i) {
            while (root[i] != i) i = root[i];
            return i;
        };
        // cells that share a side through this node, the contact sides left out, stay together
        open.clear();
        for (std::size_t i = from; i < to; ++i)
            for (int s = 0; s < kernels.sides; ++s) {
                bool holds = false;
                for (int j = 0; j < kernels.side_nodes; ++j)
                    holds = holds || kernels.side_node(s, j) == around[i].local;
                if (!holds) continue;
                const SideKey key = side_key(mesh, kernels, around[i].cell, s);
                if (!std::binary_search(closed.begin(), closed.end(), key)) open.push_back({key, {as_id(i - from), s}});
            }
        sort_by_key(open);
        for (std::size_t e = 1; e < open.size(); ++e)
            if (open[e].key == open[e - 1].key) {
                const std::size_t a = find(as_size(open[e].side.cell));
                const std::size_t b = find(as_size(open[e - 1].side.cell));
                root[std::max(a, b)] = std::min(a, b);
            }
        // the set of the first cell keeps the node, every other set gets a copy
        std::vector<std::pair<std::size_t, Id>> copy;
        for (std::size_t i = 0; i < root.size(); ++i) {
            const std::size_t set = find(i);
            Id unknown = around[from].node;
            if (set != find(0)) {
                const auto known =
                    std::find_if(copy.begin(), copy.end(), [set](const auto& c) { return c.first == set; });
                if (known == copy.end()) {
                    unknown = as_id(owner.size());
                    owner.push_back(around[from].node);
                    copy.emplace_back(set, unknown);
                } else {
                    unknown = known->second;
                }
            }
            unknowns[as_size(around[from + i].cell) * nn + as_size(around[from + i].local)] = unknown;
        }
        from = to;
    }
    return unknowns;
}

} // namespace tepor::detail
