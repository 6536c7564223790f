#pragma once
// One level of multigrid: the matrix scaled to a unit diagonal in single precision, and the way to the next level.

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

/// Entries of the strictly lower triangle of D^-1/2 A D^-1/2. Rows come in blocks; entries inside a block lie by rows,
/// padded to a multiple of `padding` (so that short rows of uneven length do not defeat branch prediction); entries
/// between blocks are kept apart. Blocks make sweeps independent of each other: two run interleaved, or in threads.
struct MultigridLevel {
    Index rows = 0;
    Index padding = 1;
    std::vector<Index> block; ///< first row of each block, and the end
    Buffer<Id> start;
    Buffer<Id> column;
    Buffer<float> value;
    std::vector<Id> cross_row, cross_column; ///< between blocks, by rows
    std::vector<float> cross_value;
    Prolongation prolongation; ///< scaled on both sides; rows of this level, columns of the next
    Buffer<float> x, right, residual;
};

} // namespace tepor::detail
