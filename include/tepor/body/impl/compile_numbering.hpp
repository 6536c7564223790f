#pragma once
// Numbering: cells by region and locality, unknowns by locality with the free ones first, pattern and scatter map.

#include <algorithm>
#include <numeric>
#include <tepor/base/detail/huge_pages.hpp>
#include <tepor/base/text.hpp>
#include <tepor/body/model.hpp>
#include <tepor/body/split.hpp>
#include <tepor/mesh/strip_order.hpp>

namespace tepor::detail {

/// Order of the cells: region by region, within it by their first unknown (2D) or by x (1D). `cell_unknowns` is in the user's order.
/// Cells then meet the unknowns in about the order the matrix has them in, whatever order the mesh came in. Cost O(cells) in 2D.
inline std::vector<Id> order_cells(const MeshData& mesh, const std::vector<Id>& cell_unknowns, Index unknowns) {
    const auto cells = as_size(mesh.cell_count());
    const auto nn = as_size(mesh.nodes_per_cell);
    std::vector<Id> order;
    resize_huge(order, cells);
    if (mesh.dim == 2) {
        std::vector<Id> first;
        std::vector<Id> begin;
        resize_huge(first, cells);
        resize_huge(begin, as_size(unknowns) + 1);
        const Id* id = cell_unknowns.data();
        for (std::size_t c = 0; c < cells; ++c, id += nn) {
            Id least = id[0];
            for (std::size_t i = 1; i < nn; ++i) least = std::min(least, id[i]);
            first[c] = least;
            ++begin[as_size(least) + 1];
        }
        for (std::size_t u = 1; u < begin.size(); ++u) begin[u] += begin[u - 1];
        for (std::size_t c = 0; c < cells; ++c) order[as_size(begin[as_size(first[c])]++)] = as_id(c);
        const std::size_t regions = mesh.region_names.size();
        if (regions < 2) return order;
        std::vector<Id> next(regions + 1, 0);
        for (const Id r : mesh.region) ++next[as_size(r) + 1];
        for (std::size_t r = 1; r < next.size(); ++r) next[r] += next[r - 1];
        std::vector<Id>& sorted = first;
        for (const Id c : order) sorted[as_size(next[as_size(mesh.region[as_size(c)])]++)] = c;
        return std::move(sorted);
    }
    bool sorted = true;
    const auto before = [&](Id a, Id b) {
        const auto sa = as_size(a);
        const auto sb = as_size(b);
        if (mesh.region[sa] != mesh.region[sb]) return mesh.region[sa] < mesh.region[sb];
        return mesh.nodes[as_size(mesh.cells[sa * nn])].x < mesh.nodes[as_size(mesh.cells[sb * nn])].x;
    };
    for (std::size_t c = 0; c < cells; ++c) {
        order[c] = as_id(c);
        if (c > 0 && before(order[c], order[c - 1])) sorted = false;
    }
    if (!sorted) std::sort(order.begin(), order.end(), before);
    return order;
}

/// Ranks of unknowns before they are numbered: in strips in 2D; by x, the cells' copies in place, in 1D. `owner` holds the node of
/// each; empty when every node is one unknown.
inline std::vector<Id> rank_unknowns(const Model& model, const std::vector<Id>& provisional,
                                     const std::vector<Id>& owner) {
    const MeshData& mesh = *model.mesh;
    const std::size_t count = owner.empty() ? mesh.nodes.size() : owner.size();
    if (mesh.dim == 2) {
        if (owner.empty()) return strip_order(mesh.nodes);
        std::vector<Point> place(count);
        for (std::size_t u = 0; u < count; ++u) place[u] = mesh.nodes[as_size(owner[u])];
        return strip_order(place);
    }
    // 1D: walk the cells from left to right, and in each its nodes
    const auto nn = as_size(mesh.nodes_per_cell);
    std::vector<Id> cells(as_size(mesh.cell_count()));
    bool sorted = true;
    const auto left = [&](Id c) { return mesh.nodes[as_size(mesh.cells[as_size(c) * nn])].x; };
    for (std::size_t c = 0; c < cells.size(); ++c) {
        cells[c] = as_id(c);
        if (c > 0 && left(as_id(c)) < left(as_id(c - 1))) sorted = false;
    }
    if (!sorted) std::sort(cells.begin(), cells.end(), [&](Id a, Id b) { return left(a) < left(b); });
    std::vector<int> walk(as_size(mesh.nodes_per_cell)); // local nodes from left to right
    std::iota(walk.begin(), walk.end(), 0);
    std::sort(walk.begin(), walk.end(), [&](int a, int b) {
        double xa[2] = {0.0, 0.0};
        double xb[2] = {0.0, 0.0};
        model.kernels->reference_node(a, xa);
        model.kernels->reference_node(b, xb);
        return xa[0] < xb[0];
    });
    std::vector<unsigned char> seen(count, 0);
    std::vector<Id> order;
    order.reserve(count);
    for (const Id c : cells)
        for (const int i : walk) {
            const Id u = provisional[as_size(c) * nn + as_size(i)];
            if (!seen[as_size(u)]) {
                seen[as_size(u)] = 1;
                order.push_back(u);
            }
        }
    for (std::size_t u = 0; u < count; ++u)
        if (!seen[u]) order.push_back(as_id(u));
    return order;
}

/// `model_cell` tells the model's cell of each of the user's.
inline void fill_side_list(const Model& model, const std::vector<Id>& model_cell,
                           const std::vector<CellSide>& user_sides, SideList& list) {
    const auto m = as_size(model.kernels->side_nodes);
    list.side.reserve(user_sides.size());
    list.unknowns.resize(user_sides.size() * m);
    for (std::size_t s = 0; s < user_sides.size(); ++s) {
        list.side.push_back({model_cell[as_size(user_sides[s].cell)], user_sides[s].side});
        model.side_unknowns(list.side.back(), list.unknowns.data() + s * m);
    }
}

/// Connected parts of the body: unknowns that the pattern couples. Each row takes the part of what stands before it; where several
/// meet they are joined. Cost O(entries) but for the joins.
inline void find_parts(Model& model) {
    const Id* start = model.pattern.start.data();
    const Id* column = model.pattern.column.data();
    std::vector<Id>& part = model.part_of;
    resize_huge(part, as_size(model.unknowns));
    std::vector<Id> root; // of the preliminary parts
    const auto find = [&root](Id p) {
        while (root[as_size(p)] != p) {
            root[as_size(p)] = root[as_size(root[as_size(p)])];
            p = root[as_size(p)];
        }
        return p;
    };
    for (Index u = 0; u < model.unknowns; ++u) {
        const Id first = start[u];
        const Id diagonal = start[u + 1] - 1;
        if (first == diagonal) {
            part[as_size(u)] = as_id(root.size());
            root.push_back(part[as_size(u)]);
            continue;
        }
        const Id own = part[as_size(column[first])];
        part[as_size(u)] = own;
        for (Id p = first + 1; p < diagonal; ++p) {
            const Id other = part[as_size(column[p])];
            if (other == own) continue;
            const Id a = find(own);
            const Id b = find(other);
            root[as_size(std::max(a, b))] = std::min(a, b);
        }
    }
    std::vector<Id> number(root.size(), -1);
    model.parts = 0;
    for (std::size_t p = 0; p < root.size(); ++p) {
        const Id r = find(as_id(p));
        if (r == as_id(p))
            number[p] = as_id(model.parts++);
        else
            number[p] = number[as_size(r)];
    }
    if (model.parts == 1) part = {}; // the usual case takes no memory
    for (Id& p : part) p = number[as_size(p)];
}

inline void number_contacts(Model& model, const std::vector<Id>& model_cell,
                            const std::vector<std::vector<ContactPair>>& pairs,
                            std::vector<std::pair<Id, Id>>& coupled) {
    const int m = model.kernels->side_nodes;
    for (std::size_t k = 0; k < pairs.size(); ++k) {
        ContactModel& contact = model.contacts[k];
        std::vector<CellSide> first;
        std::vector<CellSide> second;
        for (const ContactPair& pair : pairs[k]) {
            first.push_back(pair.first);
            second.push_back(pair.second);
        }
        fill_side_list(model, model_cell, first, contact.first);
        fill_side_list(model, model_cell, second, contact.second);
        for (std::size_t s = 0; s < pairs[k].size(); ++s) {
            Id* ids = contact.second.unknowns.data() + s * as_size(m);
            if (pairs[k][s].reversed) {
                std::swap(ids[0], ids[1]);
                std::reverse(ids + 2, ids + m);
            }
            const Id* other = contact.first.unknowns.data() + s * as_size(m);
            for (int i = 0; i < m; ++i)
                for (int j = 0; j < m; ++j) coupled.emplace_back(other[i], ids[j]);
        }
    }
}

inline void number_unknowns(Model& model, const std::vector<std::vector<ContactPair>>& pairs) {
    const MeshData& mesh = *model.mesh;
    const CellKernels& kernel = *model.kernels;
    const auto nn = as_size(kernel.nodes);
    std::vector<ContactPair> all;
    for (const auto& list : pairs) all.insert(all.end(), list.begin(), list.end());
    std::vector<Id> owner; // node of each unknown, where contacts give a node several; empty else
    std::vector<Id> copied;
    if (!all.empty()) copied = split_nodes(mesh, kernel, all, owner);
    const std::vector<Id>& provisional = all.empty() ? mesh.cells : copied;
    const std::size_t count = all.empty() ? mesh.nodes.size() : owner.size();
    model.split = count > mesh.nodes.size();

    // prescribed unknowns, and whether every node is used
    std::vector<unsigned char> state(count, 0); // 1 used, 2 prescribed
    for (const Id u : provisional) state[as_size(u)] = 1;
    for (std::size_t f = 0; f < model.faces.size(); ++f)
        if (model.faces[f].fixed.given())
            for (const CellSide side : mesh.faces[f].sides)
                for (int j = 0; j < kernel.side_nodes; ++j)
                    state[as_size(provisional[as_size(side.cell) * nn + as_size(kernel.side_node(side.side, j))])] = 2;

    std::vector<Id> number;
    reserve_huge(number, count);
    number.assign(count, -1);
    {
        const std::vector<Id> rank = rank_unknowns(model, provisional, owner);
        resize_huge(model.node_of, count);
        resize_huge(model.places, count);
        Id next = 0;
        const auto take = [&](unsigned char wanted) {
            for (const Id u : rank) {
                if (state[as_size(u)] != wanted) continue;
                const Id node = owner.empty() ? u : owner[as_size(u)];
                model.node_of[as_size(next)] = node;
                model.places[as_size(next)] = mesh.nodes[as_size(node)];
                number[as_size(u)] = next++;
            }
        };
        take(1);
        model.free = next;
        take(2);
        model.unknowns = next;
        model.node_of.resize(as_size(next));
        model.places.resize(as_size(next));
    }

    std::vector<Id> user; // unknowns of each cell in the user's order
    resize_huge(user, provisional.size());
    for (std::size_t e = 0; e < user.size(); ++e) user[e] = number[as_size(provisional[e])];
    copied = {};
    if (owner.empty()) {
        model.unknown_of = std::move(number);
    } else {
        model.unknown_of.assign(mesh.nodes.size(), -1);
        for (std::size_t u = count; u-- > 0;) // the first copy stays
            if (number[u] >= 0) model.unknown_of[as_size(owner[u])] = number[u];
    }
    model.user_cell = order_cells(mesh, user, model.unknowns);
    const std::size_t cells = model.user_cell.size();
    std::vector<Id> model_cell;
    resize_huge(model_cell, cells);
    resize_huge(model.cell_unknowns, cells * nn);
    for (std::size_t c = 0; c < cells; ++c) {
        const auto from = as_size(model.user_cell[c]);
        model_cell[from] = as_id(c);
        for (std::size_t i = 0; i < nn; ++i) model.cell_unknowns[c * nn + i] = user[from * nn + i];
    }
    user = {};
    for (const Id r : mesh.region) ++model.regions[as_size(r)].last_cell; // their number, for now
    Id next_cell = 0;
    for (RegionModel& region : model.regions) {
        region.first_cell = next_cell;
        next_cell = region.last_cell += next_cell;
    }

    for (std::size_t f = 0; f < model.faces.size(); ++f)
        fill_side_list(model, model_cell, mesh.faces[f].sides, model.faces[f].sides);
    std::vector<std::pair<Id, Id>> coupled;
    number_contacts(model, model_cell, pairs, coupled);

    // which faces prescribe each unknown
    std::vector<std::pair<Id, Id>> fixed; // (unknown, face)
    for (std::size_t f = 0; f < model.faces.size(); ++f)
        if (model.faces[f].fixed.given())
            for (const Id u : model.faces[f].sides.unknowns) fixed.emplace_back(u, as_id(f));
    std::sort(fixed.begin(), fixed.end());
    fixed.erase(std::unique(fixed.begin(), fixed.end()), fixed.end());
    model.fixed_start.assign(as_size(model.unknowns - model.free) + 1, 0);
    for (const auto& [u, face] : fixed) {
        model.fixed_face.push_back(face);
        ++model.fixed_start[as_size(u - model.free) + 1];
    }
    for (std::size_t j = 1; j < model.fixed_start.size(); ++j) model.fixed_start[j] += model.fixed_start[j - 1];

    Scatter scatter = build_pattern(model.unknowns, kernel.nodes, model.cell_unknowns, coupled, model.pattern);
    model.scatter = std::move(scatter.cells);
    std::size_t at = 0;
    for (ContactModel& contact : model.contacts) {
        const std::size_t entries = as_size(contact.first.count()) * as_size(kernel.side_nodes * kernel.side_nodes);
        contact.cross.assign(scatter.extra.begin() + static_cast<Index>(at),
                             scatter.extra.begin() + static_cast<Index>(at + entries));
        at += entries;
    }
    find_parts(model);
}

} // namespace tepor::detail
