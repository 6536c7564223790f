#pragma once
// One level of multigrid as its sweeps read it: a stream of entries in single precision.

#include <tepor/linear/detail/buffer.hpp>
#include <vector>

namespace tepor::detail {

/// Sparse rectangular matrix by rows, in single precision.
struct Prolongation {
    Index rows = 0;
    Index columns = 0;
    Buffer<Id> start;
    Buffer<Id> column;
    Buffer<float> value;
    Buffer<Id> mark;     ///< work
    Buffer<float> total; ///< work
};

/// A level with matrix I + L + L^T (scaled to a unit diagonal) and prolongation P, which is not kept itself.
///
/// With x solving (I + L) x = r, one forward Gauss-Seidel sweep from zero, the residual is -L^T x, so its restriction is
/// -(L P)^T x. After adding the correction P e, the backward sweep solves (I + L^T) y = r - L (x + P e) = x - (L P) e. So
/// L and Q = L P are all that a cycle needs, each read once on the way down and once on the way up, and x is overwritten
/// in place. Rows come in blocks that are swept independently, two interleaved or in threads; entries between blocks are
/// kept apart, and Q counts them on both sides.
struct MultigridLevel {
    struct Entry {
        Id column;
        float value;
    };
    struct Apart {
        Id row, column;
        float value;
    };
    Index rows = 0;
    Index columns = 0;        ///< rows of the next level, 0 where there is none
    Index padding = 1;        ///< entries of L per row are padded to a multiple of this (even rows suit branch
                              ///< prediction), those of Q to an even number
    std::vector<Index> block; ///< first row of each block, and the end
    Buffer<Id> start;         ///< row i: entries of L from start[2 i], of Q from start[2 i + 1]
    Buffer<Entry> entry;
    std::vector<Apart> cross;        ///< entries of L between blocks
    std::vector<Apart> coarse_cross; ///< entries of Q whose column belongs to another block
    Buffer<float> cross_product;     ///< work for `cross`
    Buffer<float> x;                 ///< right-hand side, then solution
    Buffer<float> right, first;      ///< for a second visit: the right-hand side and the first solution
};

} // namespace tepor::detail
