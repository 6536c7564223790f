#pragma once
// Tables of the symmetric rules on the triangle, and the collapsed rule.

#include <array>
#include <span>
#include <tepor/base/numbers.hpp>
#include <tepor/quadrature/gauss.hpp>
#include <tepor/quadrature/triangle_rules.hpp>

namespace tepor {

namespace detail {

/// The points that go over into each other by the six symmetries of the triangle: area coordinates (a, b, 1 - a - b) in
/// every order. All equal: one point; two equal: three points (then a == b here); else six.
struct TriangleOrbit {
    double weight; ///< of each point; the weights of a rule sum to 1
    double a;
    double b;
};

constexpr TriangleOrbit triangle_centre(double weight) {
    return {weight, 1.0 / 3.0, 1.0 / 3.0};
}
constexpr TriangleOrbit three_points(double weight, double twice) {
    return {weight, twice, twice};
}

inline constexpr std::array triangle_degree_1{triangle_centre(1.0)};
inline constexpr std::array triangle_degree_2{three_points(1.0 / 3.0, 1.0 / 6.0)};
inline constexpr std::array triangle_degree_4{three_points(0.2233815896780114657, 0.44594849091596488632),
                                              three_points(0.10995174365532186764, 0.09157621350977074346)};
inline constexpr std::array triangle_degree_5{triangle_centre(0.225),
                                              three_points(0.13239415278850618074, 0.47014206410511508977),
                                              three_points(0.1259391805448271526, 0.1012865073234563388)};
inline constexpr std::array triangle_degree_6{
    three_points(0.11678627572637936603, 0.24928674517091042129),
    three_points(0.050844906370206816921, 0.06308901449150222834),
    TriangleOrbit{0.082851075618373575194, 0.053145049844816947353, 0.31035245103378440542}};
inline constexpr std::array triangle_degree_8{
    triangle_centre(0.14431560767778716825), three_points(0.095091634267284624794, 0.45929258829272315603),
    three_points(0.10321737053471825028, 0.17056930775176020662),
    three_points(0.032458497623198080311, 0.050547228317030975458),
    TriangleOrbit{0.027230314174434994265, 0.0083947774099576053372, 0.26311282963463811342}};
inline constexpr std::array triangle_degree_9{
    triangle_centre(0.097135796282798833819),
    three_points(0.031334700227139070537, 0.48968251919873762778),
    three_points(0.077827541004774279317, 0.43708959149293663727),
    three_points(0.079647738927210253033, 0.18820353561903273024),
    three_points(0.025577675658698031262, 0.044729513394452709865),
    TriangleOrbit{0.043283539377289377289, 0.036838412054736283635, 0.22196298916076569568}};
inline constexpr std::array triangle_degree_10{
    triangle_centre(0.090817990382753580095),
    three_points(0.036725957756466704717, 0.48557763338365737737),
    three_points(0.045321059435527934783, 0.1094815754850370548),
    TriangleOrbit{0.072757916845420108604, 0.14170721941487995476, 0.30793983876412095017},
    TriangleOrbit{0.028327242531057484837, 0.025003534762686386074, 0.24667256063990269392},
    TriangleOrbit{0.0094216669637328234599, 0.0095408154002994575802, 0.066803251012200265774}};
inline constexpr std::array triangle_degree_12{
    three_points(0.025731066440455335418, 0.48821738977380488256),
    three_points(0.043692544538038402135, 0.43972439229446027298),
    three_points(0.062858224217885100354, 0.27121038501211592235),
    three_points(0.034796112930708942989, 0.12757614554158592467),
    three_points(0.0061662610515590172339, 0.021317350453210370247),
    TriangleOrbit{0.040371557766380929518, 0.11534349453469799917, 0.27571326968551419397},
    TriangleOrbit{0.022356773202303445712, 0.02283833222225702961, 0.28132558098993954825},
    TriangleOrbit{0.017316231108658892372, 0.025734050548330228168, 0.11625191590759714124}};

/// All points of a symmetric rule.
inline Rule<2> unfold(int degree, std::span<const TriangleOrbit> orbits) {
    Rule<2> rule(degree, 6 * static_cast<Index>(orbits.size()));
    for (const auto [weight, a, b] : orbits) {
        const double c = 1.0 - a - b;
        const double w = 0.5 * weight;
        rule.add({a, b}, w);
        if (a == 1.0 / 3.0) continue;
        rule.add({b, c}, w);
        rule.add({c, a}, w);
        if (a == b) continue;
        rule.add({b, a}, w);
        rule.add({a, c}, w);
        rule.add({c, b}, w);
    }
    return rule;
}

} // namespace detail

TEPOR_INLINE Rule<2> triangle_rule(int degree) {
    using namespace detail;
    if (degree <= 1) return unfold(1, triangle_degree_1);
    if (degree <= 2) return unfold(2, triangle_degree_2);
    if (degree <= 4) return unfold(4, triangle_degree_4);
    if (degree <= 5) return unfold(5, triangle_degree_5);
    if (degree <= 6) return unfold(6, triangle_degree_6);
    if (degree <= 8) return unfold(8, triangle_degree_8);
    if (degree <= 9) return unfold(9, triangle_degree_9);
    if (degree <= 10) return unfold(10, triangle_degree_10);
    if (degree <= 12) return unfold(12, triangle_degree_12);
    return collapsed_triangle_rule(degree);
}

TEPOR_INLINE Rule<2> collapsed_triangle_rule(int degree) {
    const int n = degree < 0 ? 1 : degree / 2 + 1;
    const auto u = gauss_jacobi(n); // carries the factor 1 - u of the fold
    const auto v = gauss_legendre(n);
    Rule<2> rule(2 * n - 1, n * n);
    for (Index i = 0; i < u.size(); ++i)
        for (Index j = 0; j < v.size(); ++j) {
            const double x = u.point(i)[0];
            rule.add({x, (1.0 - x) * v.point(j)[0]}, u.weight(i) * v.weight(j));
        }
    return rule;
}

} // namespace tepor
