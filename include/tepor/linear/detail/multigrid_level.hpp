#pragma once
// One level of multigrid as its sweeps read it: a stream of entries.

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
};

/// A level with matrix I + L + L^T (scaled to a unit diagonal) and prolongation P, which is not kept itself.
///
/// With x solving (I + L) x = r, one forward Gauss-Seidel sweep from zero, the residual is -L^T x, so its restriction is
/// -(L P)^T x. After adding the correction P e, the backward sweep solves (I + L^T) y = r - L (x + P e) = x - (L P) e. So
/// L and Q = L P are all that a cycle needs, each read once on the way down and once on the way up, and x is overwritten
/// in place. Rows come in blocks that are swept independently, two interleaved or in threads; entries between blocks are
/// kept apart, and Q counts them on both sides.
///
/// Between blocks only the results of the sweeps meet, which fails where such entries outweigh the diagonal (a tight contact
/// astride a border). There the sweeps take a diagonal that is larger by s (Baker et al., "Multigrid smoothers for
/// ultraparallel computing", 2011), -s stands on the diagonal of the entries between blocks, and the scale knows of s.
///
/// Number: float where the level is large; double on the small levels that are visited twice, since the second visit starts from
/// a residual that cancels.
template <class Number>
struct MultigridLevel {
    using Real = Number;
    struct Entry {
        Id column;
        Real value;
    };
    struct Apart {
        Id row, column;
        Real value;
    };
    Index rows = 0;
    Index columns = 0;        ///< rows of the next level, 0 where there is none
    Index padding = 1;        ///< entries of L per row are padded to a multiple of this (even rows suit branch
                              ///< prediction), those of Q to an even number
    std::vector<Index> block; ///< first row of each block, and the end
    Buffer<Id> start; ///< row i of block b: entries of L from start[2 i + b], of Q from the next on, to the next
    Buffer<Entry> entry;
    std::vector<Apart> cross;        ///< entries of L between blocks, and the -s
    std::vector<Apart> coarse_cross; ///< entries of Q whose column belongs to another block
    Buffer<Real> cross_product;      ///< work for `cross`
    Buffer<Real> x;                  ///< right-hand side, then solution
    Buffer<Real> right, first;       ///< for a second visit: the right-hand side and the first solution
};

} // namespace tepor::detail
