#pragma once
// The table.

#include <tepor/check/cases.hpp>
#include <tepor/check/impl/exact_cells.hpp>
#include <tepor/check/impl/iso_10211.hpp>
#include <tepor/check/impl/round.hpp>
#include <tepor/check/impl/sections.hpp>
#include <tepor/check/impl/slabs.hpp>
#include <tepor/check/impl/transient.hpp>

namespace tepor {

TEPOR_INLINE std::vector<CheckCase> verified_cases() {
    using namespace detail;
    return {
        {"S1D-01", "slab with uniform generation",
         "Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, ch. 3 (plane wall with generation)",
         slab_with_generation},
        {"S1D-02", "slab with a source falling exponentially",
         "the equation integrated twice; Incropera & DeWitt, ch. 3", slab_with_exponential_source},
        {"S1D-03", "three-layer wall with a contact", "resistances in series; Incropera & DeWitt, ch. 3",
         wall_with_contact},
        {"S1D-04", "hollow cylinder with generation",
         "-q r^2 / 4 k + C1 ln r + C2; Incropera & DeWitt, ch. 3 and app. C", hollow_cylinder},
        {"S1D-05", "two-layer cold sphere with films", "resistances in series; Incropera & DeWitt, ch. 3", cold_sphere},
        {"S1D-06", "pipe insulation about its critical radius", "Incropera & DeWitt, ch. 3 (critical radius)",
         critical_radius},
        {"S1D-07", "slab with conductivity linear in temperature",
         "Kirchhoff transformation; Carslaw & Jaeger, Conduction of Heat in Solids, 2nd ed., ch. I",
         slab_with_conductivity_of_temperature},
        {"S1D-08", "generating solid cylinder, k = 1 / (A + B T)", "Kirchhoff transformation; Carslaw & Jaeger, ch. I",
         generating_cylinder},
        {"S1D-09", "straight fin, convecting tip", "Incropera & DeWitt, table 3.4, case A", straight_fin},
        {"S1D-10", "annular fin, both tips", "modified Bessel functions; Incropera & DeWitt, sec. 3.6", annular_fin},
        {"S1D-E1", "slabs by exact cells, one per layer", "the sources of S1D-01, S1D-02, S1D-03 and S1D-07",
         slabs_by_exact_cells},
        {"S1D-E2", "cylinders, sphere and fin by exact cells, one per layer",
         "the sources of S1D-04, S1D-05, S1D-06, S1D-08 and S1D-09", round_by_exact_cells},
        {"T1D-11", "slab after a step of its surface temperature", "Fourier series; Carslaw & Jaeger, sec. 3.3",
         stepped_slab},
        {"T1D-12.14", "slab, cylinder and sphere cooling, Bi = 1",
         "series; Incropera & DeWitt, sec. 5.5 and 5.6; Carslaw & Jaeger, sec. 3.11, 7.7, 9.4", cooling_solids},
        {"T1D-15", "semi-infinite solid, step of its surface temperature", "erfc; Carslaw & Jaeger, sec. 2.4",
         semi_infinite},
        {"T1D-18", "thin slab, Bi = 0.001", "series; Incropera & DeWitt, sec. 5.1 to 5.5", thin_slab},
        {"S2D-19", "rectangle with one hot side", "sine-sinh series; Carslaw & Jaeger, sec. 5.3",
         rectangle_with_hot_side},
        {"S2D-20", "square with generation, cold sides",
         "series; Timoshenko & Goodier, torsion of the square bar (the same function)", square_with_generation},
        {"S2D-21", "insulation between concentric squares",
         "Bowman 1935 (closed form, from memory), confirmed by a Schwarz-Christoffel map", concentric_squares},
        {"S2D-22", "eccentric annulus", "bipolar coordinates; Carslaw & Jaeger, ch. XVI; Incropera & DeWitt, table 4.1",
         eccentric_annulus},
        {"S2D-23", "re-entrant corner", "r^(2/3) sin(2 angle / 3); Motz 1947", l_shape},
        {"S2D-24", "heated strip on a slab (spreading resistance)",
         "cosine modes; after Yovanovich, Muzychka & Culham (attribution from memory)", strip_on_slab},
        {"S2D-25.1", "ISO 10211 case 1, square column", "EN ISO 10211, Annex A, case 1 (from memory); sine-sinh series",
         iso_10211_column},
        {"S2D-25.2", "ISO 10211 case 2, metal profile",
         "EN ISO 10211, Annex A, case 2 (from memory); independent control volumes", iso_10211_profile},
        {"S2D-26.T2", "radiating bar", "The Standard NAFEMS Benchmarks, 1990, T2 (from memory); quartic root",
         nafems_t2},
        {"S2D-26.T3", "bar under a sine of temperature",
         "The Standard NAFEMS Benchmarks, 1990, T3 (from memory); eigenfunctions with Duhamel's integral", nafems_t3},
        {"S2D-26.T4", "plate with films",
         "The Standard NAFEMS Benchmarks, 1990, T4 (from memory); series of convective roots", nafems_t4},
        {"T2D-27", "rectangular bar cooling",
         "product of slabs; Incropera & DeWitt, sec. 5.8; Carslaw & Jaeger, sec. 5.6", cooling_bar},
        {"T2D-28", "finite cylinder cooling", "product of cylinder and slab; Carslaw & Jaeger, sec. 8.4",
         cooling_finite_cylinder},
    };
}

} // namespace tepor
