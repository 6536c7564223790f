// The steady gradient against a dense solve in complex numbers, for every kind of statement and for node positions.

#include <doctest/doctest.h>
#include <tepor/answers/gradient.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/solve/steady.hpp>
#include <tests/support/everything.hpp>

using namespace tepor;
using namespace tepor::test::everything;
using test::Complex;

namespace {

template <class E>
void compare(Frame frame) {
    const Mesh<E> mesh = mesh_of<E>(frame);
    const Body body = body_of<E>(mesh);
    const Field field = steady(body, {.tolerance = 1e-14});
    std::vector<Complex> p;
    for (const Parameter& parameter : data()) p.emplace_back(parameter.value());
    test::ComplexBody<E> reference(mesh);
    describe(reference, p);
    reference.solve();
    const std::vector<Complex> base = answers(reference, p);
    std::vector<Gradient> slopes;
    for (std::size_t q = 0; q < base.size(); ++q) {
        CAPTURE(asked()[q].name);
        slopes.push_back(gradient(field, asked()[q].quantity));
        CHECK(std::abs(slopes[q].value() - base[q].real()) <= 1e-10 * (1.0 + std::abs(base[q].real())));
        CHECK(slopes[q].exact());
    }
    constexpr double h = 1e-40;
    for (std::size_t j = 0; j < p.size(); ++j) {
        if (E::dim == 1 && (j == k_across || j == film || j == fluid || j == into || j == spot)) continue;
        CAPTURE(data()[j].name());
        std::vector<Complex> moved = p;
        moved[j] += Complex(0.0, h);
        test::ComplexBody<E> other(mesh);
        describe(other, moved);
        other.solve();
        const std::vector<Complex> result = answers(other, moved);
        for (std::size_t q = 0; q < base.size(); ++q) {
            CAPTURE(asked()[q].name);
            const double exact = result[q].imag() / h;
            CHECK(std::abs(slopes[q][data()[j]] - exact) <= 1e-10 * (1.0 + std::abs(exact)));
        }
    }
    for (const std::size_t n : {std::size_t(0), mesh.nodes.size() / 2, mesh.nodes.size() - 1})
        for (std::size_t d = 0; d < static_cast<std::size_t>(E::dim); ++d) {
            CAPTURE(n);
            CAPTURE(d);
            test::ComplexBody<E> other(mesh);
            other.places[n][d] += Complex(0.0, h);
            describe(other, p);
            other.solve();
            const std::vector<Complex> result = answers(other, p);
            for (std::size_t q = 0; q < base.size(); ++q) {
                CAPTURE(asked()[q].name);
                const double exact = result[q].imag() / h;
                const Point by_node = slopes[q].nodes()[n];
                CHECK(std::abs((d == 0 ? by_node.x : by_node.y) - exact) <= 1e-10 * (1.0 + std::abs(exact)));
            }
        }
}

} // namespace

TEST_CASE_TEMPLATE("the gradient agrees with the complex step for every datum and node position", E, Triangle<1>,
                   Triangle<2>, Triangle<3>, Quadrilateral<2>) {
    compare<E>(Planar{.depth = 0.7});
    compare<E>(Cylindrical{});
}

TEST_CASE_TEMPLATE("the gradient agrees with the complex step in every frame of one dimension", E, Segment<1>,
                   Segment<2>, Segment<3>) {
    compare<E>(Planar{.area = 0.7});
    compare<E>(Cylindrical{.length = 1.3});
    compare<E>(Spherical{});
}
