#pragma once
// What has been said about a body, as said; the Model compiles it.

#include <string>
#include <tepor/describe/conditions.hpp>
#include <vector>

namespace tepor::detail {

template <class Kind>
struct Said {
    Id where = 0; ///< region or face
    Kind what;
    bool also = false; ///< said with `also_on`: another of the same kind on purpose
};

struct SaidContact {
    Id first = 0;
    Id second = 0;
    Contact what;
};

struct SaidLocal {
    Point place;
    LocalHeat what;
};

/// All statements, by kind.
struct Statements {
    std::vector<Said<Material>> materials;
    std::vector<Said<Generation>> generations;
    std::vector<Said<SideFilm>> side_films;
    std::vector<Said<Film>> films;
    std::vector<Said<Radiation>> radiations;
    std::vector<Said<Flux>> fluxes;
    std::vector<Said<FixedTemperature>> fixed;
    std::vector<SaidContact> contacts;
    std::vector<SaidLocal> locals;
};

} // namespace tepor::detail
