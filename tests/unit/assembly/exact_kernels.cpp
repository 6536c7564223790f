// The cell law of ExactSegment: its closed forms, its capacity, and when it says that its points do not follow.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/assembly/cell_law.hpp>
#include <vector>

using namespace tepor;

namespace {

constexpr int W = block_width;

/// One cell [a, b] with T = (1, 0), a conductivity and a source of place.
struct OneCell {
    OneCell(Frame frame, double a, double b) : kernels(frame), work(kernels.workspace()), block(work.cells) {
        block.count = 1;
        block.T = work.nodal_T;
        for (int c = 0; c < W; ++c) {
            block.x[c] = a;
            block.x[W + c] = b;
            block.T[c] = 1.0;
            block.T[W + c] = 0.0;
        }
        kernels.open(block);
        block.conductivities = 1;
    }

    template <class K, class S>
    void form(K k, S heat_taken) {
        for (int at = 0; at < kernels.points * W; ++at) {
            work.coefficient[0][at] = k(block.point_x[at]);
            work.coefficient[6][at] = heat_taken(block.point_x[at]);
        }
        block.k[0] = work.coefficient[0];
        block.source = work.coefficient[6];
        kernels.form(block, Wanted{.residual = true, .matrix = true});
    }

    /// Load of node i: the residual less matrix times T.
    [[nodiscard]] double load(int i) const { return block.residual[i * W] - block.matrix[(i == 0 ? 0 : 1) * W]; }

    Kernels<ExactSegment> kernels;
    Workspace work;
    CellBlock& block;
};

constexpr auto one = [](double) { return 1.0; };

} // namespace

TEST_CASE("for constant data matrix and loads of the exact cell have their closed forms in every frame") {
    // derived in DEVELOPERS.md, "The exact cell"
    const double k = 1.7;
    const double s = 300.0;
    const auto conductivity = [k](double) { return k; };
    const auto source = [s](double) { return s; };
    for (const auto& ends : {std::pair{0.2, 0.5}, std::pair{1.0, 1.3}, std::pair{0.01, 2.0}}) {
        const double a = ends.first;
        const double b = ends.second;
        CAPTURE(a);
        OneCell slab(Planar{.area = 2.0}, a, b);
        slab.form(conductivity, source);
        CHECK(std::abs(slab.block.matrix[0] - 2.0 * k / (b - a)) <= 1e-14 * 2.0 * k / (b - a));
        CHECK(std::abs(slab.load(0) - s * (b - a)) <= 1e-13 * s);

        const double ln = std::log(b / a);
        OneCell pipe(Cylindrical{}, a, b);
        pipe.form(conductivity, source);
        const double all = s * (b * b - a * a) / 2.0;
        const double outer = s * (b * b / 2.0 - (b * b - a * a) / (4.0 * ln));
        CHECK(std::abs(pipe.block.matrix[0] - 2.0 * pi * k / ln) <= 2e-14 * 2.0 * pi * k / ln);
        CHECK(std::abs(pipe.load(1) - 2.0 * pi * outer) <= 1e-12 * 2.0 * pi * all);
        CHECK(std::abs(pipe.load(0) - 2.0 * pi * (all - outer)) <= 1e-12 * 2.0 * pi * all);

        OneCell shell(Spherical{}, a, b);
        shell.form(conductivity, source);
        const double volume = s * (b * b * b - a * a * a) / 3.0;
        const double outside = s * b / (b - a) * ((b * b * b - a * a * a) / 3.0 - a * (b * b - a * a) / 2.0);
        const double g = 4.0 * pi * k / (1.0 / a - 1.0 / b);
        CHECK(std::abs(shell.block.matrix[0] - g) <= 1e-13 * g);
        CHECK(std::abs(shell.load(1) - 4.0 * pi * outside) <= 1e-12 * 4.0 * pi * volume);
        CHECK(std::abs(shell.load(0) - 4.0 * pi * (volume - outside)) <= 1e-12 * 4.0 * pi * volume);
        CHECK(shell.block.unresolved == -1);
    }
}

TEST_CASE("around a solid centre the cell is positive, well scaled, and gives the centre its exact rise") {
    const double b = 0.3;
    const double k = 2.0;
    for (const int n : {1, 2}) {
        CAPTURE(n);
        OneCell ball(n == 1 ? Frame(Cylindrical{}) : Frame(Spherical{}), 0.0, b);
        ball.form([k](double) { return k; }, [](double r) { return -(50.0 + 400.0 * r); });
        const double factor = n == 1 ? 2.0 * pi : 4.0 * pi;
        const double d = 4.0 * k * factor * std::pow(b, n - 1) / (n + 3.0);
        CHECK(std::abs(ball.block.matrix[0] - d) <= 1e-13 * d);
        CHECK(std::abs(ball.block.matrix[W] + d) <= 1e-13 * d);
        // the rise of the centre: integral of F / (k w) = 50 b^2 / (2 (n + 1) k) + 400 b^3 / (3 (n + 2) k)
        const double rise = 50.0 * b * b / (2.0 * (n + 1) * k) + 400.0 * b * b * b / (3.0 * (n + 2) * k);
        CHECK(std::abs(ball.load(0) + d * rise) <= 1e-13 * d * rise);
        const double all = factor * (50.0 * std::pow(b, n + 1) / (n + 1) + 400.0 * std::pow(b, n + 2) / (n + 2));
        CHECK(std::abs(ball.load(0) + ball.load(1) + all) <= 1e-13 * all);
    }
}

TEST_CASE("the capacity of an exact cell holds all its heat, consistent or lumped, with its own functions") {
    for (const double a : {0.2, 0.0}) {
        CAPTURE(a);
        OneCell cell(Cylindrical{}, a, 0.5);
        cell.form([](double r) { return std::exp(2.0 * r); }, one);
        std::vector<double> c(detail::as_size(cell.kernels.points * W), 1000.0);
        const double all = 1000.0 * pi * (0.25 - a * a);
        cell.kernels.form_capacity(cell.block, c.data(), false);
        const double m[3] = {cell.block.matrix[0], cell.block.matrix[W], cell.block.matrix[2 * W]};
        CHECK(std::abs(m[0] + 2.0 * m[1] + m[2] - all) <= 1e-12 * all);
        CHECK(m[0] * m[2] > m[1] * m[1]);
        cell.kernels.form_capacity(cell.block, c.data(), true);
        CHECK(std::abs(cell.block.matrix[0] - (m[0] + m[1])) <= 1e-13 * all);
        CHECK(cell.block.matrix[W] == 0.0);
        CHECK(std::abs(cell.block.matrix[2 * W] - (m[1] + m[2])) <= 1e-13 * all);
        // the share of the first node against psi by hand, for the plain cell: integral of (1 - psi) c 2 pi r dr
        if (a == 0.0) continue;
        double total = 0.0;
        const int steps = 20000;
        const double h = (0.5 - a) / steps;
        for (int i = 0; i < steps; ++i) {
            const double r = a + (i + 0.5) * h;
            total += h / (std::exp(2.0 * r) * r);
        }
        double before = 0.0;
        double share = 0.0;
        for (int i = 0; i < steps; ++i) {
            const double r = a + (i + 0.5) * h;
            const double piece = h / (std::exp(2.0 * r) * r);
            share += h * 1000.0 * 2.0 * pi * r * (1.0 - (before + 0.5 * piece) / total);
            before += piece;
        }
        CHECK(std::abs(cell.block.matrix[0] - share) <= 1e-7 * share);
    }
}

TEST_CASE("a cell whose points cannot follow k or the source is named, a steep one they can follow is not") {
    OneCell cell(Planar{}, 0.0, 1.0);
    cell.form([](double x) { return std::exp(-12.0 * x); }, one);
    CHECK(cell.block.unresolved == -1);
    CHECK(std::abs(cell.block.matrix[0] - 12.0 / std::expm1(12.0)) <= 1e-12 * 12.0 / std::expm1(12.0));
    cell.form([](double x) { return x < 0.4 ? 1.0 : 1.5; }, one);
    CHECK(cell.block.unresolved == 0);
    CHECK(!cell.block.unresolved_source);
    cell.form([](double x) { return 1.0 + std::abs(x - 0.3); }, one);
    CHECK(cell.block.unresolved == 0);
    // beyond the outermost of the points that carry weight
    cell.form([](double x) { return x < 0.999 ? 1.0 : 1.5; }, one);
    CHECK(cell.block.unresolved == 0);
    cell.form(one, [](double x) { return x < 1e-3 ? 1.0 : 1.5; });
    CHECK(cell.block.unresolved == 0);
    CHECK(cell.block.unresolved_source);
    cell.form([](double x) { return x < 1.0 ? 1.0 : 1.5; }, one); // right at the end: the next cell's
    CHECK(cell.block.unresolved == -1);
    cell.form(one, [](double x) { return std::exp(-500.0 * x); });
    CHECK(cell.block.unresolved == 0);
    CHECK(cell.block.unresolved_source);
    cell.form(one, one);
    CHECK(cell.block.unresolved == -1);
}
