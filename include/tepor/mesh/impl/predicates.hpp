#pragma once
// Expansion arithmetic and the exact stages of the predicates.

#include <cmath>
#include <tepor/base/numbers.hpp>
#include <tepor/mesh/predicates.hpp>

namespace tepor::detail {

/// A sum of `size` doubles that do not overlap, smallest first, without zeros; the exact value of some expression.
template <int Capacity>
struct Expansion {
    double part[as_size(Capacity)] = {};
    int size = 0;

    void push(double x) {
        if (x != 0.0) part[size++] = x;
    }
    /// The sign of the whole is that of the largest part.
    [[nodiscard]] double sign() const { return size == 0 ? 0.0 : part[size - 1]; }
    [[nodiscard]] double estimate() const {
        double sum = 0.0;
        for (int i = 0; i < size; ++i) sum += part[i];
        return sum;
    }
};

/// a + b = sum + error, exactly.
inline double two_sum(double a, double b, double& error) {
    const double sum = a + b;
    const double bv = sum - a;
    error = (a - (sum - bv)) + (b - bv);
    return sum;
}

/// a * b = product + error, exactly.
inline double two_product(double a, double b, double& error) {
    const double product = a * b;
#if defined(__FMA__) || defined(__ARM_FEATURE_FMA) || defined(__aarch64__)
    error = std::fma(a, b, -product);
#else
    constexpr double splitter = 134217729.0; // 2^27 + 1: halves of 26 bits whose products are exact
    const double ac = splitter * a;
    const double ah = ac - (ac - a);
    const double al = a - ah;
    const double bc = splitter * b;
    const double bh = bc - (bc - b);
    const double bl = b - bh;
    error = ((ah * bh - product) + ah * bl + al * bh) + al * bl;
#endif
    return product;
}

/// a - b as an expansion.
inline Expansion<2> difference(double a, double b) {
    Expansion<2> d;
    double error = 0.0;
    const double high = two_sum(a, -b, error);
    d.push(error);
    d.push(high);
    return d;
}

/// h = e + f. Merges by magnitude, then carries upwards (Shewchuk 1997, theorem 13; zeros dropped).
template <int A, int B, int C>
void add(const Expansion<A>& e, const Expansion<B>& f, Expansion<C>& h) {
    static_assert(A + B <= C);
    h.size = 0;
    int i = 0;
    int j = 0;
    double carry = 0.0;
    bool first = true;
    while (i < e.size || j < f.size) {
        const bool take_e = j >= f.size || (i < e.size && std::abs(e.part[i]) < std::abs(f.part[j]));
        const double next = take_e ? e.part[i++] : f.part[j++];
        if (first) {
            carry = next;
            first = false;
            continue;
        }
        double error = 0.0;
        carry = two_sum(carry, next, error);
        h.push(error);
    }
    h.push(carry);
}

/// h = e * b (Shewchuk 1997, theorem 19; zeros dropped).
template <int A, int C>
void scale(const Expansion<A>& e, double b, Expansion<C>& h) {
    static_assert(2 * A <= C);
    h.size = 0;
    if (e.size == 0 || b == 0.0) return;
    double error = 0.0;
    double carry = two_product(e.part[0], b, error);
    h.push(error);
    for (int i = 1; i < e.size; ++i) {
        double low = 0.0;
        const double high = two_product(e.part[i], b, low);
        const double sum = two_sum(carry, low, error);
        h.push(error);
        carry = two_sum(high, sum, error);
        h.push(error);
    }
    h.push(carry);
}

/// The product of two expansions.
template <int A, int B>
Expansion<2 * A * B> multiply(const Expansion<A>& e, const Expansion<B>& f) {
    Expansion<2 * A * B> sum;
    Expansion<2 * A> term;
    for (int j = 0; j < f.size; ++j) {
        scale(e, f.part[j], term);
        Expansion<2 * A * B + 2 * A> next;
        add(sum, term, next);
        sum.size = next.size;
        for (int i = 0; i < next.size; ++i) sum.part[i] = next.part[i];
    }
    return sum;
}

/// e - f.
template <int A, int B>
Expansion<A + B> subtract(const Expansion<A>& e, Expansion<B> f) {
    for (int i = 0; i < f.size; ++i) f.part[i] = -f.part[i];
    Expansion<A + B> h;
    add(e, f, h);
    return h;
}

template <int A, int B>
Expansion<A + B> plus(const Expansion<A>& e, const Expansion<B>& f) {
    Expansion<A + B> h;
    add(e, f, h);
    return h;
}

TEPOR_INLINE double orient_exact(Point a, Point b, Point c) {
    const auto left = multiply(difference(a.x, c.x), difference(b.y, c.y));
    const auto right = multiply(difference(a.y, c.y), difference(b.x, c.x));
    return subtract(left, right).sign();
}

/// The in-circle determinant of expansions of N parts each: sum of |a|^2 (b x c), cyclic.
template <int N>
auto in_circle_terms(const Expansion<N>& ax, const Expansion<N>& ay, const Expansion<N>& bx, const Expansion<N>& by,
                     const Expansion<N>& cx, const Expansion<N>& cy) {
    const auto term = [](const Expansion<N>& px, const Expansion<N>& py, const Expansion<N>& qx, const Expansion<N>& qy,
                         const Expansion<N>& rx, const Expansion<N>& ry) {
        return multiply(plus(multiply(px, px), multiply(py, py)), subtract(multiply(qx, ry), multiply(rx, qy)));
    };
    return plus(plus(term(ax, ay, bx, by, cx, cy), term(bx, by, cx, cy, ax, ay)), term(cx, cy, ax, ay, bx, by));
}

TEPOR_INLINE double in_circle_exact(Point a, Point b, Point c, Point d, double permanent) {
    const Expansion<2> ax = difference(a.x, d.x);
    const Expansion<2> ay = difference(a.y, d.y);
    const Expansion<2> bx = difference(b.x, d.x);
    const Expansion<2> by = difference(b.y, d.y);
    const Expansion<2> cx = difference(c.x, d.x);
    const Expansion<2> cy = difference(c.y, d.y);

    // The rounded differences, exactly evaluated; right as it stands when the differences had no rounding error.
    const auto head = [](const Expansion<2>& e) {
        Expansion<1> h;
        if (e.size > 0) h.push(e.part[e.size - 1]);
        return h;
    };
    const auto tail = [](const Expansion<2>& e) { return e.size > 1 ? e.part[0] : 0.0; };
    const auto rounded = in_circle_terms<1>(head(ax), head(ay), head(bx), head(by), head(cx), head(cy));
    const double axt = tail(ax);
    const double ayt = tail(ay);
    const double bxt = tail(bx);
    const double byt = tail(by);
    const double cxt = tail(cx);
    const double cyt = tail(cy);
    if (axt == 0.0 && ayt == 0.0 && bxt == 0.0 && byt == 0.0 && cxt == 0.0 && cyt == 0.0) return rounded.sign();

    // First-order effect of the rounding errors of the differences.
    double det = rounded.estimate();
    const double axh = a.x - d.x;
    const double ayh = a.y - d.y;
    const double bxh = b.x - d.x;
    const double byh = b.y - d.y;
    const double cxh = c.x - d.x;
    const double cyh = c.y - d.y;
    const double bound =
        (44.0 + 576.0 * half_ulp) * half_ulp * half_ulp * permanent + (3.0 + 8.0 * half_ulp) * half_ulp * std::abs(det);
    det += ((axh * axh + ayh * ayh) * ((bxh * cyt + cyh * bxt) - (byh * cxt + cxh * byt)) +
            2.0 * (axh * axt + ayh * ayt) * (bxh * cyh - byh * cxh)) +
           ((bxh * bxh + byh * byh) * ((cxh * ayt + ayh * cxt) - (cyh * axt + axh * cyt)) +
            2.0 * (bxh * bxt + byh * byt) * (cxh * ayh - cyh * axh)) +
           ((cxh * cxh + cyh * cyh) * ((axh * byt + byh * axt) - (ayh * bxt + bxh * ayt)) +
            2.0 * (cxh * cxt + cyh * cyt) * (axh * byh - ayh * bxh));
    if (std::abs(det) > bound) return det;

    return in_circle_terms<2>(ax, ay, bx, by, cx, cy).sign();
}

} // namespace tepor::detail
