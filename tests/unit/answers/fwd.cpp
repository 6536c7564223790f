// The forward declarations name types that exist, with the right kind, before anything else of the library is read.
#include <tepor/fwd.hpp>

namespace user { // an interface of a program that has read nothing else

tepor::Body furnace(const tepor::Parameter& gas, const tepor::Mesh<tepor::Triangle<2>>& mesh);
double loss(const tepor::Field& field, const tepor::Quantity& quantity);
bool keeps_going(const tepor::March& march, tepor::Verdict verdict);

struct Plant {
    tepor::March* march;
    const tepor::StateSpace* model;
    tepor::Probe* probes;
};

} // namespace user

#include <doctest/doctest.h>
#include <tepor/tepor.hpp>

using namespace tepor;

namespace {

template <class... Types>
constexpr int complete() {
    static_assert(((sizeof(Types) > 0) && ...));
    return static_cast<int>(sizeof...(Types));
}

} // namespace

namespace user {

double loss(const tepor::Field& field, const tepor::Quantity& quantity) {
    return field[quantity];
}

} // namespace user

TEST_CASE("what is declared ahead is what the headers define") {
    CHECK(complete<ErrorCode, Error, Point, Planar, Cylindrical, Spherical, Frame, Segment<1>, Triangle<2>,
                   Quadrilateral<1>, ExactSegment>() == 11);
    CHECK(complete<TemperatureScale, Parameter, Value, Table, Schedule, Law, LawFunction, Latent, Material, Film,
                   Radiation, Flux, FixedTemperature, Contact, Generation, SideFilm, LocalHeat, Quantity>() == 18);
    CHECK(complete<MeshData, Mesh<Triangle<1>>, Layer, LayersOptions, Tiles, TilesOptions, Shape, Section, Meshing,
                   MeshArrays, MeshReport, Location>() == 12);
    CHECK(complete<Body, BodyOptions, Model, Values, Field, SolvePass, Balance, FaceHeat, RegionHeat>() == 9);
    CHECK(complete<SteadyOptions, Engine, March, Theta, Adaptive, Initial, Step, Verdict, Probe, Input, Integral, Peak,
                   Moment, Checkpoint, Periodic>() == 15);
    CHECK(complete<SparseMatrix, AnySolver, SparseCholesky, MultigridOptions, Multigrid, MultigridSolver,
                   IterationLimits, IterationReport>() == 8);
    CHECK(
        complete<Gradient, PeakGradient, BracketOptions, Bracket, EstimateOptions, Estimate, Target, SizeOptions, Sized,
                 SizedTogether, Reading, TimedReading, Prior, FitOptions, Fitted, CompactOptions, StateSpace>() == 17);
    Body wall{layers<Segment<1>>({{.region = "brick", .thickness = 0.2, .cells = 2}})};
    wall.in("brick", Material{.conductivity = 1.0});
    wall.on("inner", FixedTemperature{100.0});
    wall.on("outer", FixedTemperature{0.0});
    CHECK(std::abs(user::loss(steady(wall), heat_out_through("outer")) - 500.0) <= 1e-9); // k A dT / L
}
