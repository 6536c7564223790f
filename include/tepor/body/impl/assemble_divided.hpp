#pragma once
// Exact cells whose points cannot follow k or the source: bisected until they can, the inner nodes eliminated at once.

#include <algorithm>
#include <cmath>
#include <tepor/body/impl/assemble_exact.hpp>

namespace tepor::detail {

/// Puts one piece into all lanes of the block and forms it at a temperature of zero. Where k depends on temperature the piece is
/// one of the integral of k, for which k is 1.
inline bool Assembler::form_piece(const RegionPass& pass, double from, double to, const Id* ids) {
    const RegionModel& region = model_.regions[pass.region];
    CellBlock& block = work_.cells;
    for (int c = 0; c < W; ++c) {
        block.x[c] = from;
        block.x[W + c] = to;
        block.y[c] = block.y[W + c] = 0.0;
        block.T[c] = block.T[W + c] = 0.0;
    }
    block.count = 1;
    kernel_.open(block);
    const Points at{static_cast<Index>(kernel_.points) * W, block.point_T, nullptr, block.point_x, block.point_y};
    if (!block.k_uniform && !evaluate(region.k[0], at, work_.coefficient[0], nullptr, ids, 1)) return false;
    if (pass.sources && !volume_terms(pass.region, at, ids)) return false;
    Wanted wanted;
    wanted.residual = wanted.matrix = true;
    kernel_.form(block, wanted);
    return true;
}

/// Forms [from, to] as one piece, or as two when its points cannot follow the coefficients. Pieces that hold next to nothing of the
/// cell's resistance and of its source are taken as they come, and added up in `rough_`.
inline bool Assembler::divide(const RegionPass& pass, double from, double to, int depth, const Id* ids) {
    constexpr int deepest = 50;
    constexpr std::size_t most = 8192;
    CellBlock& block = work_.cells;
    Accounts* const a = pass_.accounts;
    const double generated = a ? a->generated[pass.region] : 0.0;
    const double side_loss = a ? a->side_loss[pass.region] : 0.0;
    const double traffic = pass_.source_traffic;
    if (!form_piece(pass, from, to, ids)) return false;
    Piece piece;
    piece.from = from;
    piece.to = to;
    piece.conductance = -block.matrix[W];
    piece.load[0] = block.residual[0];
    piece.load[1] = block.residual[W];
    double source = 0.0;
    if (block.source)
        for (int q = 0; q < kernel_.points; ++q) source += block.weight[q * W] * std::abs(block.source[q * W]);
    const double resistance = 1.0 / piece.conductance;
    if (block.unresolved >= 0) {
        const bool by_source = block.unresolved_source;
        const double middle = from + 0.5 * (to - from);
        const bool small = source <= 1e-16 * seen_.source && (by_source || resistance <= 1e-16 * seen_.resistance);
        seen_.source = std::max(seen_.source, source);
        seen_.resistance = std::max(seen_.resistance, resistance);
        if (depth < deepest && !small && from < middle && middle < to) {
            if (a) {
                a->generated[pass.region] = generated;
                a->side_loss[pass.region] = side_loss;
            }
            pass_.source_traffic = traffic;
            if (pieces_.size() > most) return unresolved(model_.regions[pass.region], ids);
            return divide(pass, from, middle, depth + 1, ids) && divide(pass, middle, to, depth + 1, ids);
        }
        rough_.source += source;
        if (!by_source) rough_.resistance += resistance;
        rough_.by_source = by_source;
    }
    total_.source += source;
    total_.resistance += resistance;
    if (block.sink >
        0.0) { // at one degree: nothing flows through, and the loss stands beside the load without cancelling
        for (int c = 0; c < 2 * W; ++c) block.T[c] = 1.0;
        Wanted wanted;
        wanted.residual = true;
        kernel_.form(block, wanted);
        for (int i = 0; i < 2; ++i) piece.loss[i] = block.residual[i * W] - piece.load[i];
    }
    pieces_.push_back(piece);
    return true;
}

/// Two pieces as one: what lies to the left and the next one, with the node between them eliminated.
inline Assembler::Piece Assembler::joined(const Piece& left, const Piece& right) noexcept {
    const double pivot = left.conductance + left.loss[1] + right.conductance + right.loss[0];
    const double between = left.load[1] + right.load[0];
    const double to_left = left.conductance / pivot;
    const double to_right = right.conductance / pivot;
    Piece both;
    both.from = left.from;
    both.to = right.to;
    both.conductance = to_left * right.conductance;
    both.loss[0] = left.loss[0] + to_left * (left.loss[1] + right.loss[0]);
    both.loss[1] = right.loss[1] + to_right * (left.loss[1] + right.loss[0]);
    both.load[0] = left.load[0] + to_left * between;
    both.load[1] = right.load[1] + to_right * between;
    return both;
}

/// The whole block cell by cell, each from its pieces.
inline bool Assembler::form_divided(const RegionPass& pass, Wanted wanted, const Id* ids) {
    CellBlock& block = work_.cells;
    const RegionModel& region = model_.regions[pass.region];
    if (block.source_slope) return unresolved(region, ids); // the source inside is not known beforehand
    const CellBlock given = block;
    double x[2][W];
    double T[2][W];
    double k_mean[W];
    double k_end[2][W];
    double zero[2 * W];
    for (int c = 0; c < W; ++c) {
        for (int i = 0; i < 2; ++i) {
            x[i][c] = block.x[i * W + c];
            T[i][c] = block.T ? block.T[i * W + c] : 0.0;
            k_end[i][c] = block.k_mean ? block.k_end[i][c] : 1.0;
        }
        k_mean[c] = block.k_mean ? block.k_mean[c] : 1.0;
    }
    if (pass.own_mean) {
        block.k_uniform = true;
        work_.coefficient[0][0] = 1.0;
    }
    block.k_mean = nullptr;
    block.T = zero;
    pieces_.clear();
    bool fine = true;
    for (int c = 0; c < given.count && fine; ++c) {
        first_piece_[c] = pieces_.size();
        total_ = seen_ = rough_ = {};
        Id cell[W];
        std::fill(cell, cell + W, ids[c]);
        fine = divide(pass, x[0][c], x[1][c], 0, cell);
        if (fine && (rough_.source > 1e-12 * total_.source || rough_.resistance > 1e-12 * total_.resistance)) {
            block.unresolved = 0;
            block.unresolved_source = rough_.by_source;
            fine = unresolved(region, cell);
        }
        first_piece_[c + 1] = pieces_.size();
    }
    block = given;
    block.unresolved = -1;
    for (int c = 0; c < W; ++c)
        for (int i = 0; i < 2; ++i) {
            block.x[i * W + c] = x[i][c];
            block.y[i * W + c] = 0.0;
        }
    if (!fine) return false;
    for (int c = 0; c < W; ++c)
        if (given.k_mean) {
            work_.coefficient[1][c] = k_mean[c];
            work_.coefficient[2][c] = k_end[0][c];
            work_.coefficient[4][c] = k_end[1][c];
        }
    for (int c = 0; c < given.count; ++c) {
        Piece cell = pieces_[first_piece_[c]];
        for (std::size_t p = first_piece_[c] + 1; p < first_piece_[c + 1]; ++p) cell = joined(cell, pieces_[p]);
        const double g = cell.conductance * k_mean[c];
        if (wanted.residual) {
            const double flow = g * (T[0][c] - T[1][c]);
            block.residual[c] = flow + cell.loss[0] * T[0][c] + cell.load[0];
            block.residual[W + c] = -flow + cell.loss[1] * T[1][c] + cell.load[1];
        }
        if (wanted.matrix) {
            block.matrix[c] = g + cell.loss[0];
            block.matrix[W + c] = -g;
            block.matrix[2 * W + c] = g + cell.loss[1];
        }
        if (wanted.slope)
            for (int j = 0; j < 2; ++j) {
                const double by = (j == 0 ? 1.0 : -1.0) * cell.conductance * (k_end[j][c] - k_mean[c]);
                block.slope[j * W + c] = by;
                block.slope[(2 + j) * W + c] = -by;
            }
    }
    block.divided = true;
    return true;
}

/// Integral of T over a divided block, piece by piece: each inner node is a first + b second + c of the cell's two nodes.
inline bool Assembler::add_divided_content(const RegionPass& pass, Id first, const Id* ids) {
    CellBlock& block = work_.cells;
    const Coefficient& k = model_.regions[pass.region].k[0];
    const CellBlock given = block;
    double T[2][W];
    double k_mean[W];
    double k_end[2][W];
    for (int c = 0; c < W; ++c)
        for (int i = 0; i < 2; ++i) {
            T[i][c] = block.T[i * W + c];
            k_mean[c] = pass.own_mean ? block.k_mean[c] : 1.0;
            k_end[i][c] = pass.own_mean ? block.k_end[i][c] : 1.0;
        }
    Accounts* const accounts = pass_.accounts;
    const double traffic = pass_.source_traffic;
    pass_.accounts = nullptr; // they have these sources already
    if (pass.own_mean) {
        block.k_uniform = true;
        work_.coefficient[0][0] = 1.0;
    }
    block.k_mean = nullptr;
    double nodal[2 * W];
    block.T = nodal;
    shape_.resize(as_size(kernel_.points * 2 * W));
    bool fine = true;
    for (int c = 0; c < given.count && fine; ++c) {
        const Piece* piece = pieces_.data() + first_piece_[c];
        const std::size_t n = first_piece_[c + 1] - first_piece_[c];
        // where k depends on temperature: of its integral from the first node on
        const double ends[2] = {pass.own_mean ? 0.0 : T[0][c],
                                pass.own_mean ? k_mean[c] * (T[1][c] - T[0][c]) : T[1][c]};
        std::vector<Piece> left(piece, piece + n);
        for (std::size_t p = 1; p < n; ++p) left[p] = joined(left[p - 1], piece[p]);
        struct Node {
            double by[2];
            double value;
        };
        std::vector<Node> node(n + 1);
        node[0] = {{1.0, 0.0}, ends[0]};
        node[n] = {{0.0, 1.0}, ends[1]};
        for (std::size_t p = n - 1; p > 0; --p) { // node p lies between left[p - 1] and piece[p]
            const Piece& l = left[p - 1];
            const Piece& r = piece[p];
            const double pivot = l.conductance + l.loss[1] + r.conductance + r.loss[0];
            for (int i = 0; i < 2; ++i)
                node[p].by[i] = (l.conductance * node[0].by[i] + r.conductance * node[p + 1].by[i]) / pivot;
            node[p].value =
                (l.conductance * node[0].value + r.conductance * node[p + 1].value - l.load[1] - r.load[0]) / pivot;
        }
        Id cell[W];
        std::fill(cell, cell + W, ids[c]);
        for (std::size_t p = 0; p < n && fine; ++p) {
            fine = form_piece(pass, piece[p].from, piece[p].to, cell);
            if (!fine) break;
            for (int b = 0; b < W; ++b) {
                block.T[b] = node[p].value;
                block.T[W + b] = node[p + 1].value;
            }
            kernel_.profile(block, shape_.data());
            for (int q = 0; q < kernel_.points; ++q) {
                double k_here = 1.0;
                double t = block.point_T[q * W];
                if (pass.own_mean) t = temperature_of(k, T[0][c], t, &k_here);
                pass_.content[pass.region] += block.weight[q * W] * t;
                if (!pass_.content_slope) continue;
                const double* shape = &shape_[as_size(q * 2 * W)];
                for (int i = 0; i < 2; ++i)
                    pass_.content_slope[model_.cell(first + c)[i]] +=
                        block.weight[q * W] * (shape[0] * node[p].by[i] + shape[W] * node[p + 1].by[i]) *
                        (k_end[i][c] / k_here);
            }
        }
    }
    block = given;
    pass_.accounts = accounts;
    pass_.source_traffic = traffic;
    return fine;
}

} // namespace tepor::detail
