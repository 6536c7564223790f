#pragma once
// Numbering: cells by region and locality, unknowns by locality with the free ones first, pattern and scatter map.

#include <algorithm>
#include <numeric>
#include <tepor/base/text.hpp>
#include <tepor/body/model.hpp>
#include <tepor/body/split.hpp>
#include <tepor/mesh/strip_order.hpp>

namespace tepor::detail {

/// Order of the cells: region by region, within it in strips (2D) or by x (1D).
inline std::vector<Id> order_cells(const MeshData& mesh) {
    const auto cells = as_size(mesh.cell_count());
    const auto nn = as_size(mesh.nodes_per_cell);
    if (mesh.dim == 2) {
        std::vector<Point> middle(cells);
        const std::size_t vertices = as_size(mesh.sides_per_cell);
        for (std::size_t c = 0; c < cells; ++c) {
            Point sum;
            for (std::size_t v = 0; v < vertices; ++v) sum = sum + mesh.nodes[as_size(mesh.cells[c * nn + v])];
            middle[c] = sum;
        }
        const std::vector<Id> near = strip_order(middle);
        std::vector<Id> begin(mesh.region_names.size() + 1, 0);
        for (const Id r : mesh.region) ++begin[as_size(r) + 1];
        for (std::size_t r = 1; r < begin.size(); ++r) begin[r] += begin[r - 1];
        std::vector<Id> order(cells);
        for (const Id c : near) order[as_size(begin[as_size(mesh.region[as_size(c)])]++)] = c;
        return order;
    }
    std::vector<Id> order(cells);
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

/// Rank of each provisional unknown: in strips in 2D; by x, the cells' copies in place, in 1D.
inline std::vector<Id> rank_unknowns(const Model& model, const std::vector<Id>& provisional,
                                     const std::vector<Id>& owner) {
    const MeshData& mesh = *model.mesh;
    std::vector<Id> order;
    if (mesh.dim == 2) {
        std::vector<Point> place(owner.size());
        for (std::size_t u = 0; u < owner.size(); ++u) place[u] = mesh.nodes[as_size(owner[u])];
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
    std::vector<unsigned char> seen(owner.size(), 0);
    order.reserve(owner.size());
    for (const Id c : cells)
        for (const int i : walk) {
            const Id u = provisional[as_size(c) * nn + as_size(i)];
            if (!seen[as_size(u)]) {
                seen[as_size(u)] = 1;
                order.push_back(u);
            }
        }
    for (std::size_t u = 0; u < owner.size(); ++u)
        if (!seen[u]) order.push_back(as_id(u));
    return order;
}

inline void fill_side_list(const Model& model, const std::vector<CellSide>& user_sides, SideList& list) {
    const auto m = as_size(model.kernels->side_nodes);
    list.side.reserve(user_sides.size());
    list.unknowns.resize(user_sides.size() * m);
    for (std::size_t s = 0; s < user_sides.size(); ++s) {
        list.side.push_back({model.model_cell[as_size(user_sides[s].cell)], user_sides[s].side});
        model.side_unknowns(list.side.back(), list.unknowns.data() + s * m);
    }
}

/// Connected parts of the body: unknowns joined by cells and contacts.
inline void find_parts(Model& model) {
    std::vector<Id> root(as_size(model.unknowns));
    for (std::size_t u = 0; u < root.size(); ++u) root[u] = as_id(u);
    const auto find = [&root](Id u) {
        while (root[as_size(u)] != u) {
            root[as_size(u)] = root[as_size(root[as_size(u)])];
            u = root[as_size(u)];
        }
        return u;
    };
    const auto join = [&](Id a, Id b) {
        const Id ra = find(a);
        const Id rb = find(b);
        root[as_size(std::max(ra, rb))] = std::min(ra, rb);
    };
    const auto nn = as_size(model.kernels->nodes);
    for (std::size_t e = 0; e < model.cell_unknowns.size(); e += nn)
        for (std::size_t i = 1; i < nn; ++i) join(model.cell_unknowns[e], model.cell_unknowns[e + i]);
    for (const ContactModel& c : model.contacts)
        for (std::size_t i = 0; i < c.first.unknowns.size(); ++i) join(c.first.unknowns[i], c.second.unknowns[i]);
    model.part_of.assign(root.size(), -1);
    model.parts = 0;
    for (std::size_t u = 0; u < root.size(); ++u) {
        const Id r = find(as_id(u));
        if (model.part_of[as_size(r)] < 0) model.part_of[as_size(r)] = as_id(model.parts++);
        model.part_of[u] = model.part_of[as_size(r)];
    }
}

inline void number_contacts(Model& model, const std::vector<std::vector<ContactPair>>& pairs,
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
        fill_side_list(model, first, contact.first);
        fill_side_list(model, second, contact.second);
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
    std::vector<Id> owner;
    std::vector<Id> provisional = split_nodes(mesh, kernel, all, owner);
    model.split = owner.size() > mesh.nodes.size();

    // prescribed unknowns, and whether every node is used
    std::vector<unsigned char> state(owner.size(), 0); // 1 used, 2 prescribed
    for (const Id u : provisional) state[as_size(u)] = 1;
    for (std::size_t f = 0; f < model.faces.size(); ++f)
        if (model.faces[f].fixed.given())
            for (const CellSide side : mesh.faces[f].sides)
                for (int j = 0; j < kernel.side_nodes; ++j)
                    state[as_size(provisional[as_size(side.cell) * nn + as_size(kernel.side_node(side.side, j))])] = 2;

    const std::vector<Id> rank = rank_unknowns(model, provisional, owner);
    std::vector<Id> number(owner.size(), -1);
    Id next = 0;
    for (const Id u : rank)
        if (state[as_size(u)] == 1) number[as_size(u)] = next++;
    model.free = next;
    for (const Id u : rank)
        if (state[as_size(u)] == 2) number[as_size(u)] = next++;
    model.unknowns = next;

    model.places.resize(as_size(next));
    model.node_of.resize(as_size(next));
    model.unknown_of.assign(mesh.nodes.size(), -1);
    for (std::size_t u = owner.size(); u-- > 0;) {
        if (number[u] < 0) continue;
        model.places[as_size(number[u])] = mesh.nodes[as_size(owner[u])];
        model.node_of[as_size(number[u])] = owner[u];
        model.unknown_of[as_size(owner[u])] = number[u];
    }

    model.user_cell = order_cells(mesh);
    const std::size_t cells = model.user_cell.size();
    model.model_cell.resize(cells);
    model.region_of_cell.resize(cells);
    model.cell_unknowns.resize(cells * nn);
    for (std::size_t c = 0; c < cells; ++c) {
        const auto user = as_size(model.user_cell[c]);
        model.model_cell[user] = as_id(c);
        model.region_of_cell[c] = mesh.region[user];
        for (std::size_t i = 0; i < nn; ++i)
            model.cell_unknowns[c * nn + i] = number[as_size(provisional[user * nn + i])];
    }
    for (std::size_t c = cells; c-- > 0;) {
        RegionModel& region = model.regions[as_size(model.region_of_cell[c])];
        region.first_cell = as_id(c);
        if (region.last_cell == 0) region.last_cell = as_id(c + 1);
    }

    for (std::size_t f = 0; f < model.faces.size(); ++f)
        fill_side_list(model, mesh.faces[f].sides, model.faces[f].sides);
    std::vector<std::pair<Id, Id>> coupled;
    number_contacts(model, pairs, coupled);

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
        const std::size_t count = as_size(contact.first.count()) * as_size(kernel.side_nodes * kernel.side_nodes);
        contact.cross.assign(scatter.extra.begin() + static_cast<Index>(at),
                             scatter.extra.begin() + static_cast<Index>(at + count));
        at += count;
    }
    find_parts(model);
}

} // namespace tepor::detail
