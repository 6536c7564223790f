// One dimension: the bound is the error itself, in all frames, for any field.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/quadrature/gauss.hpp>

using namespace tepor;
using detail::as_size;

namespace {

/// Two layers with a contact at x = 0.5, cells of order p, conductivity 2 and 0.5, source 3 and -20.
struct Line {
    MeshData mesh;
    FluxProblem problem;
    std::vector<double> t;
    double left, right;

    Line(Frame frame, int order, double a, bool held, double b = 0.9) : left(a), right(b) {
        mesh.dim = 1;
        mesh.order = order;
        mesh.nodes_per_cell = order + 1;
        mesh.sides_per_cell = 2;
        mesh.shape = CellShape::segment;
        mesh.frame = frame;
        const double x[] = {a, a + 0.3 * (0.5 - a), 0.5, 0.55, 0.7, b};
        problem.mesh = &mesh;
        Id dof = 0;
        for (int i = 0; i < 6; ++i) mesh.nodes.push_back({x[i], 0.0});
        for (int c = 0; c < 5; ++c) {
            mesh.cells.insert(mesh.cells.end(), {c, c + 1});
            problem.dof.insert(problem.dof.end(), {c == 0 ? dof++ : c == 2 ? dof++ : dof - order, dof});
            ++dof;
            for (int i = 1; i < order; ++i) {
                mesh.cells.push_back(static_cast<Id>(mesh.nodes.size()));
                mesh.nodes.push_back({x[c] + (x[c + 1] - x[c]) * i / order, 0.0});
                problem.dof.push_back(dof++);
            }
            mesh.region.push_back(c < 2 ? 0 : 1);
            problem.conductivity.push_back(c < 2 ? 2.0 : 0.5);
            problem.source.push_back(c < 2 ? 3.0 : -20.0);
        }
        problem.sides.push_back({{1, 1}, SideKind::contact, 1, -1, 0.0, 4.0, 0.0});
        problem.sides.push_back({{2, 0}, SideKind::contact, 0, -1, 0.0, 4.0, 0.0});
        if (a > 0.0)
            problem.sides.push_back(
                {{0, 0}, held ? SideKind::fixed : SideKind::open, -1, -1, 0.0, held ? 0.0 : 6.0, held ? 0.0 : 30.0});
        problem.sides.push_back({{4, 1}, SideKind::open, -1, -1, 1.5, 9.0, -2.0});
        for (Id i = 0; i < dof; ++i) t.push_back(10.0 + 5.0 * std::sin(1.0 + 2.0 * i));
        if (held) t[0] = 12.0;
    }

    [[nodiscard]] double area(double r) const { return std::pow(r, mesh.frame.power()); }
    /// Integral of r^n f from the left.
    [[nodiscard]] double generated(double r) const {
        const double n = mesh.frame.power() + 1.0;
        const auto primitive = [n](double x) { return std::pow(x, n) / n; };
        return 3.0 * (primitive(std::min(r, 0.5)) - primitive(left)) -
               (r > 0.5 ? 20.0 * (primitive(r) - primitive(0.5)) : 0.0);
    }

    /// Integral over the line of f(r, k), split at the nodes.
    template <class F>
    [[nodiscard]] double integral(F f, double to) const {
        const Rule<1> rule = gauss_legendre(40);
        double sum = 0.0;
        const auto piece = [&](double a, double b, double k) {
            for (Index q = 0; q < rule.size(); ++q)
                sum += rule.weight(q) * (b - a) * f(a + (b - a) * rule.point(q)[0], k);
        };
        for (std::size_t c = 0; c < 5; ++c) {
            const double a = mesh.nodes[c].x, b = std::min(mesh.nodes[c + 1].x, to);
            if (b > a) piece(a, b, problem.conductivity[c]);
        }
        return sum;
    }
};

/// The exact entering heat C and the squared error of the field, from the closed form of the flux.
double squared_error(const Line& line, double& entering) {
    const bool held = line.left > 0.0 && line.problem.sides[2].kind == SideKind::fixed;
    const double jump = line.area(0.5) * 4.0, end = line.area(line.right) * 9.0;
    // T(left) - fluid right = sum of resistances times the heat through each
    const double resistance =
        line.integral([&](double r, double k) { return 1.0 / (k * line.area(r)); }, 1.0) + 1.0 / jump + 1.0 / end;
    const double drop = line.integral([&](double r, double k) { return line.generated(r) / (k * line.area(r)); }, 1.0) +
                        line.generated(0.5) / jump + (line.generated(line.right) - 1.5 * line.area(line.right)) / end;
    const double film = line.area(line.left) * 6.0;
    if (line.left == 0.0)
        entering = 0.0;
    else if (held)
        entering = (12.0 - (-2.0) - drop) / resistance;
    else
        entering = (30.0 - (-2.0) - drop) / (resistance + 1.0 / film);
    const double c = entering;
    const auto slope = [&](double r, double k) { return -(c + line.generated(r)) / (k * line.area(r)); };
    double sum = 0.0;
    const Rule<1> rule = gauss_legendre(40);
    for (std::size_t cell = 0; cell < 5; ++cell) {
        const std::size_t nodes = as_size(line.mesh.nodes_per_cell);
        const double a = line.mesh.nodes[cell].x, b = line.mesh.nodes[cell + 1].x, k = line.problem.conductivity[cell];
        for (Index q = 0; q < rule.size(); ++q) {
            const double r = a + (b - a) * rule.point(q)[0];
            double g = 0.0; // slope of the Lagrange polynomial by its definition
            for (std::size_t i = 0; i < nodes; ++i) {
                const auto x = [&](std::size_t j) {
                    return line.mesh.nodes[as_size(line.mesh.cells[nodes * cell + j])].x;
                };
                double d = 0.0;
                for (std::size_t m = 0; m < nodes; ++m) {
                    if (m == i) continue;
                    double part = 1.0 / (x(i) - x(m));
                    for (std::size_t j = 0; j < nodes; ++j)
                        if (j != i && j != m) part *= (r - x(j)) / (x(i) - x(j));
                    d += part;
                }
                g += d * line.t[as_size(line.problem.dof[nodes * cell + i])];
            }
            const double e = slope(r, k) - g;
            sum += rule.weight(q) * (b - a) * k * line.area(r) * e * e;
        }
    }
    const auto end_value = [&](std::size_t cell, std::size_t side) {
        return line.t[as_size(line.problem.dof[as_size(line.mesh.nodes_per_cell) * cell + side])];
    };
    const double jump_error = (c + line.generated(0.5)) / jump - (end_value(1, 1) - end_value(2, 0));
    sum += jump * jump_error * jump_error;
    const double end_error =
        (c + line.generated(line.right) - 1.5 * line.area(line.right)) / end - 2.0 - end_value(4, 1);
    sum += end * end_error * end_error;
    if (line.left > 0.0 && !held) {
        const double e = 30.0 - c / film - end_value(0, 0);
        sum += film * e * e;
    }
    return sum;
}

} // namespace

TEST_CASE("slab, cylinder and sphere of two layers with a contact and films: the bound equals the error of any field") {
    for (const Frame frame : {Frame(Planar{}), Frame(Cylindrical{}), Frame(Spherical{})})
        for (int order = 1; order <= 3; ++order)
            for (const bool held : {false, true}) {
                CAPTURE(frame.power());
                CAPTURE(order);
                CAPTURE(held);
                const Line line(frame, order, 0.1, held);
                double entering = 0.0;
                const double error = std::sqrt(squared_error(line, entering));
                const Equilibrated flux = equilibrate(line.problem, line.t.data());
                CHECK(std::abs(flux.mixed_total - error) <= 1e-13 * error);
                CHECK(flux.rounding <= 1e-12 * error);
                CHECK(std::abs(-flux.outflow[0] - entering) <= 1e-12 * std::abs(entering));
                CHECK(std::abs(flux.flow.back() - entering - line.generated(0.9)) <= 1e-12 * std::abs(entering));
            }
}

TEST_CASE("a solid cylinder and ball: nothing enters at the centre and the bound equals the error") {
    for (const Frame frame : {Frame(Cylindrical{}), Frame(Spherical{})}) {
        const Line line(frame, 2, 0.0, false);
        double entering = 1.0;
        const double error = std::sqrt(squared_error(line, entering));
        const Equilibrated flux = equilibrate(line.problem, line.t.data());
        CHECK(std::abs(flux.mixed_total - error) <= 1e-13 * error);
        CHECK(flux.outflow[0] == 0.0);
    }
}

TEST_CASE("a fin: the bound with a side film holds and comes down to the error") {
    // k T'' = c (T - T_c) on [0,1], T(0) = 1, T_c = 0, insulated tip: T = cosh(m (1 - x))/cosh(m); |||T|||^2 = k m tanh m
    // (H. S. Carslaw and J. C. Jaeger, Conduction of Heat in Solids, 2nd ed., section 4.5)
    const double k = 2.0, c = 18.0, m = 3.0;
    double index = 0.0;
    for (const int cells : {2, 4, 16}) {
        MeshData mesh;
        mesh.dim = 1, mesh.order = 1, mesh.nodes_per_cell = 2, mesh.sides_per_cell = 2;
        FluxProblem problem;
        problem.mesh = &mesh;
        std::vector<double> t;
        double energy = 0.0;
        for (int i = 0; i <= cells; ++i) {
            const double x = static_cast<double>(i) / cells;
            mesh.nodes.push_back({x, 0.0});
            t.push_back(std::cosh(m * (1 - x)) / std::cosh(m)); // the interpolant: any field will do
        }
        for (int i = 0; i < cells; ++i) {
            mesh.cells.insert(mesh.cells.end(), {i, i + 1});
            mesh.region.push_back(0);
            const double h = 1.0 / cells, a = t[as_size(i)], b = t[as_size(i + 1)];
            energy += k * (b - a) * (b - a) / h + c * h * (a * a + a * b + b * b) / 3.0;
        }
        problem.dof = mesh.cells;
        problem.conductivity.assign(as_size(cells), k);
        problem.source.assign(as_size(cells), 0.0);
        problem.sink.assign(as_size(cells), c);
        problem.sink_temperature.assign(as_size(cells), 0.0);
        problem.sides.push_back({{0, 0}, SideKind::fixed, -1, -1, 0.0, 0.0, 0.0});
        const double error = std::sqrt(energy - k * m * std::tanh(m)); // both are 1 at the base
        index = equilibrate(problem, t.data()).bound() / error;
        CHECK(index >= 1.0);
        CHECK(index <= 1.5);
    }
    CHECK(index <= 1.01);
}

TEST_CASE("heat through a held end of a line is exact from any pair of fields") {
    Line line(Cylindrical{}, 1, 0.1, true);
    Line adjoint = line;
    adjoint.problem.mesh = &adjoint.mesh;
    for (double& f : adjoint.problem.source) f = 0.0;
    adjoint.problem.sides[3].fluid = adjoint.problem.sides[3].flux = 0.0;
    for (double& z : adjoint.t) z = 0.1;
    adjoint.t[0] = 1.0; // the held face of the question
    const Equilibrated flux = equilibrate(line.problem, line.t.data());
    const Equilibrated weight = equilibrate(adjoint.problem, adjoint.t.data());
    const PairBound pair = pair_bound(line.problem, line.t.data(), flux, adjoint.problem, adjoint.t.data(), weight);
    // Q = rho(z) + correction, rho = l(z) - a(T, z) written out for linear cells
    double rho = 0.0;
    for (std::size_t c = 0; c < 5; ++c) {
        const double a = line.mesh.nodes[c].x, b = line.mesh.nodes[c + 1].x, h = b - a, mean = 0.5 * (a + b);
        const auto value = [&](const Line& of, std::size_t i) { return of.t[as_size(of.problem.dof[2 * c + i])]; };
        const double f = line.problem.source[c];
        rho += f * h / 6.0 * ((2 * a + b) * value(adjoint, 0) + (a + 2 * b) * value(adjoint, 1));
        rho -= line.problem.conductivity[c] * mean / h * (value(line, 1) - value(line, 0)) *
               (value(adjoint, 1) - value(adjoint, 0));
    }
    const auto at = [](const Line& of, std::size_t i) { return of.t[as_size(of.problem.dof[i])]; };
    rho -= 0.5 * 4.0 * (at(line, 3) - at(line, 4)) * (at(adjoint, 3) - at(adjoint, 4));
    rho -= 0.9 * (1.5 + 9.0 * (at(line, 9) + 2.0)) * at(adjoint, 9);
    double entering = 0.0;
    static_cast<void>(squared_error(line, entering));
    CHECK(std::abs(rho + pair.correction + entering) <= pair.half_width);
    CHECK(pair.half_width <= 0.6 * flux.bound() * weight.bound());
    CHECK(flux.bound() > 1.0);
}
