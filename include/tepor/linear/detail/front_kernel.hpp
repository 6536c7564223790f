// Dense elimination of one front, four columns at a time. Read once per instruction set by impl/front.hpp, which sets
// TEPOR_FRONT_SPACE (the namespace) and TEPOR_FRONT_TARGET (the attribute); alone it defines nothing.
#if defined(TEPOR_FRONT_SPACE)

namespace tepor::detail::TEPOR_FRONT_SPACE {

// A macro, since a function that returns 32 bytes in registers has another calling convention per instruction set.
#define TEPOR_LOAD(p) (*reinterpret_cast<const LooseFour*>(p))
#define TEPOR_STORE(p) (*reinterpret_cast<LooseFour*>(p))

// c(:, 0..3) -= a(:, 0 .. depth-1) b(0..3, 0 .. depth-1)^T for 4, 8 or 12 rows; all column by column. Written out, since
// the sums must stay in registers at every optimisation level.
TEPOR_FRONT_TARGET inline void update_4(const double* a, const double* b, Index depth, Index stride, double* c,
                                        Index c_stride) noexcept {
    double *c0 = c, *c1 = c0 + c_stride, *c2 = c1 + c_stride, *c3 = c2 + c_stride;
    Four s00 = TEPOR_LOAD(c0 + 0), s01 = TEPOR_LOAD(c1 + 0), s02 = TEPOR_LOAD(c2 + 0), s03 = TEPOR_LOAD(c3 + 0);
    for (Index k = 0; k < depth; ++k, a += stride, b += stride) {
        const Four l0 = TEPOR_LOAD(a + 0);
        s00 -= l0 * b[0];
        s01 -= l0 * b[1];
        s02 -= l0 * b[2];
        s03 -= l0 * b[3];
    }
    TEPOR_STORE(c0 + 0) = s00;
    TEPOR_STORE(c1 + 0) = s01;
    TEPOR_STORE(c2 + 0) = s02;
    TEPOR_STORE(c3 + 0) = s03;
}

TEPOR_FRONT_TARGET inline void update_8(const double* a, const double* b, Index depth, Index stride, double* c,
                                        Index c_stride) noexcept {
    double *c0 = c, *c1 = c0 + c_stride, *c2 = c1 + c_stride, *c3 = c2 + c_stride;
    Four s00 = TEPOR_LOAD(c0 + 0), s01 = TEPOR_LOAD(c1 + 0), s02 = TEPOR_LOAD(c2 + 0), s03 = TEPOR_LOAD(c3 + 0);
    Four s10 = TEPOR_LOAD(c0 + 4), s11 = TEPOR_LOAD(c1 + 4), s12 = TEPOR_LOAD(c2 + 4), s13 = TEPOR_LOAD(c3 + 4);
    for (Index k = 0; k < depth; ++k, a += stride, b += stride) {
        const Four l0 = TEPOR_LOAD(a + 0), l1 = TEPOR_LOAD(a + 4);
        s00 -= l0 * b[0];
        s10 -= l1 * b[0];
        s01 -= l0 * b[1];
        s11 -= l1 * b[1];
        s02 -= l0 * b[2];
        s12 -= l1 * b[2];
        s03 -= l0 * b[3];
        s13 -= l1 * b[3];
    }
    TEPOR_STORE(c0 + 0) = s00;
    TEPOR_STORE(c1 + 0) = s01;
    TEPOR_STORE(c2 + 0) = s02;
    TEPOR_STORE(c3 + 0) = s03;
    TEPOR_STORE(c0 + 4) = s10;
    TEPOR_STORE(c1 + 4) = s11;
    TEPOR_STORE(c2 + 4) = s12;
    TEPOR_STORE(c3 + 4) = s13;
}

TEPOR_FRONT_TARGET inline void update_12(const double* a, const double* b, Index depth, Index stride, double* c,
                                         Index c_stride) noexcept {
    double *c0 = c, *c1 = c0 + c_stride, *c2 = c1 + c_stride, *c3 = c2 + c_stride;
    Four s00 = TEPOR_LOAD(c0 + 0), s01 = TEPOR_LOAD(c1 + 0), s02 = TEPOR_LOAD(c2 + 0), s03 = TEPOR_LOAD(c3 + 0);
    Four s10 = TEPOR_LOAD(c0 + 4), s11 = TEPOR_LOAD(c1 + 4), s12 = TEPOR_LOAD(c2 + 4), s13 = TEPOR_LOAD(c3 + 4);
    Four s20 = TEPOR_LOAD(c0 + 8), s21 = TEPOR_LOAD(c1 + 8), s22 = TEPOR_LOAD(c2 + 8), s23 = TEPOR_LOAD(c3 + 8);
    for (Index k = 0; k < depth; ++k, a += stride, b += stride) {
        const Four l0 = TEPOR_LOAD(a + 0), l1 = TEPOR_LOAD(a + 4), l2 = TEPOR_LOAD(a + 8);
        s00 -= l0 * b[0];
        s10 -= l1 * b[0];
        s20 -= l2 * b[0];
        s01 -= l0 * b[1];
        s11 -= l1 * b[1];
        s21 -= l2 * b[1];
        s02 -= l0 * b[2];
        s12 -= l1 * b[2];
        s22 -= l2 * b[2];
        s03 -= l0 * b[3];
        s13 -= l1 * b[3];
        s23 -= l2 * b[3];
    }
    TEPOR_STORE(c0 + 0) = s00;
    TEPOR_STORE(c1 + 0) = s01;
    TEPOR_STORE(c2 + 0) = s02;
    TEPOR_STORE(c3 + 0) = s03;
    TEPOR_STORE(c0 + 4) = s10;
    TEPOR_STORE(c1 + 4) = s11;
    TEPOR_STORE(c2 + 4) = s12;
    TEPOR_STORE(c3 + 4) = s13;
    TEPOR_STORE(c0 + 8) = s20;
    TEPOR_STORE(c1 + 8) = s21;
    TEPOR_STORE(c2 + 8) = s22;
    TEPOR_STORE(c3 + 8) = s23;
}

/// The same for `rows` rows, a multiple of four.
TEPOR_FRONT_TARGET inline void update_columns(const double* a, const double* b, Index depth, Index stride, double* c,
                                              Index c_stride, Index rows) noexcept {
    Index i = 0;
    for (; i + 12 <= rows; i += 12) update_12(a + i, b, depth, stride, c + i, c_stride);
    if (i + 8 <= rows) {
        update_8(a + i, b, depth, stride, c + i, c_stride);
        i += 8;
    }
    if (i < rows) update_4(a + i, b, depth, stride, c + i, c_stride);
}

/// Cholesky of the Width x Width block at the top of `c`, then the same columns of the `rows` rows from `below` on.
/// The diagonal keeps the inverse of each pivot's root. Returns the first bad pivot or -1.
template <Index Width>
TEPOR_FRONT_TARGET inline Index factor_columns(double* c, Index stride, const double* floors, double* below,
                                               Index rows) noexcept {
    constexpr std::size_t count = static_cast<std::size_t>(Width);
    Index bad = -1;
    double inverse[count];
    for (Index j = 0; j < Width; ++j) {
        double pivot = c[j * stride + j];
        if (!(pivot > floors[j])) {
            bad = bad < 0 ? j : bad;
            pivot = 1.0;
        }
        inverse[j] = 1.0 / std::sqrt(pivot);
        c[j * stride + j] = inverse[j];
        for (Index i = j + 1; i < Width; ++i) c[j * stride + i] *= inverse[j];
        for (Index k = j + 1; k < Width; ++k) {
            for (Index i = k; i < Width; ++i) c[k * stride + i] -= c[j * stride + i] * c[j * stride + k];
        }
    }
    if constexpr (Width == 4) {
        const double l10 = c[1], l20 = c[2], l30 = c[3], l21 = c[stride + 2], l31 = c[stride + 3],
                     l32 = c[2 * stride + 3];
        double *b0 = below, *b1 = b0 + stride, *b2 = b1 + stride, *b3 = b2 + stride;
        for (Index i = 0; i < rows; i += 4) {
            const Four x0 = TEPOR_LOAD(b0 + i) * inverse[0];
            const Four x1 = (TEPOR_LOAD(b1 + i) - x0 * l10) * inverse[1];
            const Four x2 = (TEPOR_LOAD(b2 + i) - x0 * l20 - x1 * l21) * inverse[2];
            const Four x3 = (TEPOR_LOAD(b3 + i) - x0 * l30 - x1 * l31 - x2 * l32) * inverse[3];
            TEPOR_STORE(b0 + i) = x0;
            TEPOR_STORE(b1 + i) = x1;
            TEPOR_STORE(b2 + i) = x2;
            TEPOR_STORE(b3 + i) = x3;
        }
        return bad;
    }
    for (Index i = 0; i < rows; i += 4) {
        Four x[count];
        for (Index j = 0; j < Width; ++j) {
            Four value = TEPOR_LOAD(below + j * stride + i);
            for (Index k = 0; k < j; ++k) value -= x[k] * c[k * stride + j];
            x[j] = value * inverse[j];
        }
        for (Index j = 0; j < Width; ++j) TEPOR_STORE(below + j * stride + i) = x[j];
    }
    return bad;
}

/// Eliminates the pivots of a front: `panel` has `pivots` columns, `stride` apart, first pivot at row `pad`, `top` rows
/// down to the rows below. `update` (r x r, r = stride - top) takes the Schur complement. `floors[j]` is the least pivot.
/// Returns the first bad pivot or -1.
TEPOR_FRONT_TARGET inline Index eliminate_front(double* panel, Index pivots, Index pad, Index top, Index stride,
                                                const double* floors, double* update) noexcept {
    // The first block takes the odd columns, so that all others are four wide and start at a multiple of four.
    const Index odd = pivots % 4 == 0 ? 4 : pivots % 4;
    const Index body = stride - (pad + odd);
    Index bad = -1;
    double* below = panel + pad + odd;
    switch (odd) {
    case 1: bad = factor_columns<1>(panel + pad, stride, floors, below, body); break;
    case 2: bad = factor_columns<2>(panel + pad, stride, floors, below, body); break;
    case 3: bad = factor_columns<3>(panel + pad, stride, floors, below, body); break;
    default: bad = factor_columns<4>(panel + pad, stride, floors, below, body); break;
    }
    // Depth in slices, so that the rows of a slice stay in the nearest cache while columns pass over them.
    constexpr Index slice = 96;
    for (Index j = odd; j < pivots; j += 4) {
        double* column = panel + j * stride + pad + j;
        update_columns(panel + pad + j, panel + pad + j, j, stride, column, stride, stride - pad - j);
        const Index here = factor_columns<4>(column, stride, floors + j, column + 4, stride - pad - j - 4);
        if (here >= 0 && bad < 0) bad = j + here;
    }
    const Index rows = stride - top;
    for (Index from = 0; from < pivots; from += slice) {
        const Index depth = pivots - from < slice ? pivots - from : slice;
        const double* part = panel + from * stride + top;
        for (Index j = 0; j < rows; j += 4) {
            update_columns(part + j, part + j, depth, stride, update + j * rows + j, rows, rows - j);
        }
    }
    return bad;
}

/// x := L^-1 x on the pivots, and sum := L(below) x. `sum` holds stride - top values.
TEPOR_FRONT_TARGET inline void forward_front(const double* panel, Index pivots, Index pad, Index top, Index stride,
                                             double* x, double* sum) noexcept {
    const Index rows = stride - top;
    for (Index i = 0; i < rows; ++i) sum[i] = 0.0;
    const Index odd = pivots % 4;
    for (Index j = 0; j < odd; ++j) {
        const double* column = panel + j * stride + pad;
        const double xj = x[j] *= column[j];
        for (Index i = j + 1; i < pivots; ++i) x[i] -= column[i] * xj;
        const double* low = panel + j * stride + top;
        const Four factor = {xj, xj, xj, xj};
        for (Index i = 0; i < rows; i += 4) {
            TEPOR_STORE(sum + i) += TEPOR_LOAD(low + i) * factor;
        }
    }
    for (Index j = odd; j < pivots; j += 4) {
        const double* c0 = panel + j * stride + pad;
        const double* c1 = c0 + stride;
        const double* c2 = c1 + stride;
        const double* c3 = c2 + stride;
        const double x0 = x[j] * c0[j];
        const double x1 = (x[j + 1] - c0[j + 1] * x0) * c1[j + 1];
        const double x2 = (x[j + 2] - c0[j + 2] * x0 - c1[j + 2] * x1) * c2[j + 2];
        const double x3 = (x[j + 3] - c0[j + 3] * x0 - c1[j + 3] * x1 - c2[j + 3] * x2) * c3[j + 3];
        x[j] = x0;
        x[j + 1] = x1;
        x[j + 2] = x2;
        x[j + 3] = x3;
        const Four f0 = {x0, x0, x0, x0}, f1 = {x1, x1, x1, x1}, f2 = {x2, x2, x2, x2}, f3 = {x3, x3, x3, x3};
        for (Index i = j + 4; i < pivots; i += 4) {
            TEPOR_STORE(x + i) -=
                TEPOR_LOAD(c0 + i) * f0 + TEPOR_LOAD(c1 + i) * f1 + TEPOR_LOAD(c2 + i) * f2 + TEPOR_LOAD(c3 + i) * f3;
        }
        const Index shift = top - pad;
        for (Index i = shift; i < shift + rows; i += 4) {
            TEPOR_STORE(sum + i - shift) +=
                TEPOR_LOAD(c0 + i) * f0 + TEPOR_LOAD(c1 + i) * f1 + TEPOR_LOAD(c2 + i) * f2 + TEPOR_LOAD(c3 + i) * f3;
        }
    }
}

TEPOR_FRONT_TARGET inline double total(const Four& v) noexcept {
    return (v[0] + v[2]) + (v[1] + v[3]);
}

/// x := L^-T (x - L(below)^T y) on the pivots; `y` holds stride - top values, zero in the padding.
TEPOR_FRONT_TARGET inline void backward_front(const double* panel, Index pivots, Index pad, Index top, Index stride,
                                              double* x, const double* y) noexcept {
    const Index rows = stride - top;
    const Index shift = top - pad;
    const Index odd = pivots % 4;
    for (Index j = pivots - 4; j >= odd; j -= 4) {
        const double* c0 = panel + j * stride + pad;
        const double* c1 = c0 + stride;
        const double* c2 = c1 + stride;
        const double* c3 = c2 + stride;
        Four s0 = {}, s1 = {}, s2 = {}, s3 = {};
        for (Index i = j + 4; i < pivots; i += 4) {
            const Four v = TEPOR_LOAD(x + i);
            s0 += TEPOR_LOAD(c0 + i) * v;
            s1 += TEPOR_LOAD(c1 + i) * v;
            s2 += TEPOR_LOAD(c2 + i) * v;
            s3 += TEPOR_LOAD(c3 + i) * v;
        }
        for (Index i = 0; i < rows; i += 4) {
            const Four v = TEPOR_LOAD(y + i);
            s0 += TEPOR_LOAD(c0 + shift + i) * v;
            s1 += TEPOR_LOAD(c1 + shift + i) * v;
            s2 += TEPOR_LOAD(c2 + shift + i) * v;
            s3 += TEPOR_LOAD(c3 + shift + i) * v;
        }
        const double x3 = (x[j + 3] - total(s3)) * c3[j + 3];
        const double x2 = (x[j + 2] - total(s2) - c2[j + 3] * x3) * c2[j + 2];
        const double x1 = (x[j + 1] - total(s1) - c1[j + 3] * x3 - c1[j + 2] * x2) * c1[j + 1];
        const double x0 = (x[j] - total(s0) - c0[j + 3] * x3 - c0[j + 2] * x2 - c0[j + 1] * x1) * c0[j];
        x[j] = x0;
        x[j + 1] = x1;
        x[j + 2] = x2;
        x[j + 3] = x3;
    }
    for (Index j = odd - 1; j >= 0; --j) {
        const double* column = panel + j * stride + pad;
        double sum = x[j];
        for (Index i = j + 1; i < pivots; ++i) sum -= column[i] * x[i];
        Four s = {};
        for (Index i = 0; i < rows; i += 4) {
            s += TEPOR_LOAD(column + shift + i) * TEPOR_LOAD(y + i);
        }
        x[j] = (sum - total(s)) * column[j];
    }
}

/// forward_front() for four right-hand sides side by side: row i of x and sum are their four values.
TEPOR_FRONT_TARGET inline void forward_front_four(const double* panel, Index pivots, Index pad, Index top, Index stride,
                                                  double* x, double* sum) noexcept {
    const Index rows = stride - top;
    for (Index i = 0; i < 4 * rows; ++i) sum[i] = 0.0;
    const Index odd = pivots % 4;
    for (Index j = 0; j < odd; ++j) {
        const double* column = panel + j * stride + pad;
        const Four xj = TEPOR_LOAD(x + 4 * j) * column[j];
        TEPOR_STORE(x + 4 * j) = xj;
        for (Index i = j + 1; i < pivots; ++i) TEPOR_STORE(x + 4 * i) -= xj * column[i];
        const double* low = panel + j * stride + top;
        for (Index i = 0; i < rows; ++i) TEPOR_STORE(sum + 4 * i) += xj * low[i];
    }
    for (Index j = odd; j < pivots; j += 4) {
        const double* c0 = panel + j * stride + pad;
        const double* c1 = c0 + stride;
        const double* c2 = c1 + stride;
        const double* c3 = c2 + stride;
        const Four x0 = TEPOR_LOAD(x + 4 * j) * c0[j];
        const Four x1 = (TEPOR_LOAD(x + 4 * j + 4) - x0 * c0[j + 1]) * c1[j + 1];
        const Four x2 = (TEPOR_LOAD(x + 4 * j + 8) - x0 * c0[j + 2] - x1 * c1[j + 2]) * c2[j + 2];
        const Four x3 = (TEPOR_LOAD(x + 4 * j + 12) - x0 * c0[j + 3] - x1 * c1[j + 3] - x2 * c2[j + 3]) * c3[j + 3];
        TEPOR_STORE(x + 4 * j) = x0;
        TEPOR_STORE(x + 4 * j + 4) = x1;
        TEPOR_STORE(x + 4 * j + 8) = x2;
        TEPOR_STORE(x + 4 * j + 12) = x3;
        for (Index i = j + 4; i < pivots; ++i) {
            TEPOR_STORE(x + 4 * i) -= x0 * c0[i] + x1 * c1[i] + x2 * c2[i] + x3 * c3[i];
        }
        const Index shift = top - pad;
        for (Index i = 0; i < rows; ++i) {
            const Index k = i + shift;
            TEPOR_STORE(sum + 4 * i) += x0 * c0[k] + x1 * c1[k] + x2 * c2[k] + x3 * c3[k];
        }
    }
}

/// backward_front() for four right-hand sides side by side.
TEPOR_FRONT_TARGET inline void backward_front_four(const double* panel, Index pivots, Index pad, Index top,
                                                   Index stride, double* x, const double* y) noexcept {
    const Index rows = stride - top;
    const Index shift = top - pad;
    const Index odd = pivots % 4;
    for (Index j = pivots - 4; j >= odd; j -= 4) {
        const double* c0 = panel + j * stride + pad;
        const double* c1 = c0 + stride;
        const double* c2 = c1 + stride;
        const double* c3 = c2 + stride;
        Four s0 = TEPOR_LOAD(x + 4 * j), s1 = TEPOR_LOAD(x + 4 * j + 4), s2 = TEPOR_LOAD(x + 4 * j + 8),
             s3 = TEPOR_LOAD(x + 4 * j + 12);
        for (Index i = j + 4; i < pivots; ++i) {
            const Four v = TEPOR_LOAD(x + 4 * i);
            s0 -= v * c0[i];
            s1 -= v * c1[i];
            s2 -= v * c2[i];
            s3 -= v * c3[i];
        }
        for (Index i = 0; i < rows; ++i) {
            const Four v = TEPOR_LOAD(y + 4 * i);
            s0 -= v * c0[shift + i];
            s1 -= v * c1[shift + i];
            s2 -= v * c2[shift + i];
            s3 -= v * c3[shift + i];
        }
        s3 = s3 * c3[j + 3];
        s2 = (s2 - s3 * c2[j + 3]) * c2[j + 2];
        s1 = (s1 - s3 * c1[j + 3] - s2 * c1[j + 2]) * c1[j + 1];
        s0 = (s0 - s3 * c0[j + 3] - s2 * c0[j + 2] - s1 * c0[j + 1]) * c0[j];
        TEPOR_STORE(x + 4 * j) = s0;
        TEPOR_STORE(x + 4 * j + 4) = s1;
        TEPOR_STORE(x + 4 * j + 8) = s2;
        TEPOR_STORE(x + 4 * j + 12) = s3;
    }
    for (Index j = odd - 1; j >= 0; --j) {
        const double* column = panel + j * stride + pad;
        Four s = TEPOR_LOAD(x + 4 * j);
        for (Index i = j + 1; i < pivots; ++i) s -= TEPOR_LOAD(x + 4 * i) * column[i];
        for (Index i = 0; i < rows; ++i) s -= TEPOR_LOAD(y + 4 * i) * column[shift + i];
        TEPOR_STORE(x + 4 * j) = s * column[j];
    }
}

#undef TEPOR_LOAD
#undef TEPOR_STORE

} // namespace tepor::detail::TEPOR_FRONT_SPACE

#endif
