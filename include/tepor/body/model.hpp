#pragma once
// Model: the immutable compile of a Body, and Values: the present value of everything that can be set.

#include <memory>
#include <mutex>
#include <string>
#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/base/config.hpp>
#include <tepor/body/coefficient.hpp>
#include <tepor/body/pattern.hpp>
#include <tepor/body/statements.hpp>
#include <tepor/linear/plane_solver.hpp>
#include <tepor/mesh/locate.hpp>
#include <tepor/mesh/mesh.hpp>
#include <vector>

namespace tepor {

class Body;

/// What a slot enters, which tells what `set` has to redo.
struct SlotRole {
    bool load = false;       ///< right-hand side only: powers, fluxes, fluid temperatures
    bool matrix = false;     ///< conduction, films, contacts, anything of a law
    bool capacity = false;   ///< density, specific heat, latent heat
    bool prescribed = false; ///< temperatures held
    bool place = false;      ///< thickness of a 1D layer
};

/// Present values: one per slot, and what follows from them about the geometry. Each Field, March and answer owns a copy.
struct Values {
    std::vector<double> slots;
    std::vector<Point> places;         ///< of the unknowns; empty unless a thickness is a Parameter
    std::vector<double> region_volume; ///< [m3] of the frame's size
};

/// A term that acts per volume of a region.
struct VolumeTerm {
    enum class Kind { per_volume, total, side_film };
    Kind kind = Kind::per_volume;
    Coefficient amount; ///< W/m3, W, or the film coefficient
    Coefficient fluid;  ///< side film
    Coefficient extent; ///< side film: wetted perimeter or thickness
    double wet = 0.0;   ///< side film: with a perimeter 1 / area of the frame, with a thickness the wet sides
    bool by_thickness = false;
};

/// A region: a contiguous range of cells, its material and what acts in it.
struct RegionModel {
    std::string name;
    Id first_cell = 0; ///< in the model's numbering
    Id last_cell = 0;  ///< one past
    int conductivities = 0;
    Coefficient k[3];
    Coefficient density, specific_heat;
    Coefficient latent, solidus, liquidus;
    std::vector<VolumeTerm> volume;
};

/// A list of cell sides with the unknowns on them.
struct SideList {
    std::vector<CellSide> side; ///< cell in the model's numbering
    std::vector<Id> unknowns;   ///< side_nodes per side
    [[nodiscard]] Index count() const noexcept { return static_cast<Index>(side.size()); }
};

/// A term that acts per area of a face.
struct FaceTerm {
    enum class Kind { film, radiation, flux };
    Kind kind = Kind::film;
    Coefficient amount;  ///< film coefficient, emissivity, or flux
    Coefficient outside; ///< temperature of fluid or surroundings
    double sign = 1.0;   ///< flux: +1 when given out of the body, -1 into it
};

/// A face and what acts on it.
struct FaceModel {
    std::string name;
    SideList sides;
    std::vector<FaceTerm> terms;
    Coefficient fixed; ///< prescribed temperature, when given
};

/// A contact: matched sides of two regions; side node j of `first` lies on side node j of `second`.
struct ContactModel {
    Id first_region = 0;
    Id second_region = 0;
    Coefficient amount; ///< conductance or resistance
    bool resistance = false;
    SideList first;
    SideList second;       ///< unknowns already in the order of `first`
    std::vector<Id> cross; ///< per side, side_nodes^2: position of (first i, second j) in the matrix
};

/// Heat at one place, with the share of each unknown.
struct LocalModel {
    Coefficient total;
    Point place;
    double radius = 0.0;
    Id region = 0;
    std::vector<Id> unknowns;
    std::vector<double> share;
};

/// The compiled body. Unknowns are renumbered for locality, the free ones first; cells are ordered by region.
class Model {
  public:
    std::shared_ptr<const MeshData> mesh;
    std::shared_ptr<const CellKernels> kernels;
    const detail::CellKind* kind = nullptr;       ///< the element type for the mesh room
    PlaneSolverMaker make_plane_solver = nullptr; ///< in 2D
    TemperatureScale scale = TemperatureScale::celsius;
    bool lumped_faces = false;
    double frame_area = 1.0; ///< the frame's size that a wetted perimeter refers to

    Index unknowns = 0;            ///< all
    Index free = 0;                ///< the first `free` ones are solved for, the rest prescribed
    std::vector<Point> places;     ///< [m] of each unknown, at the values the parameters were made with
    std::vector<Id> node_of;       ///< mesh node of each unknown
    std::vector<Id> unknown_of;    ///< an unknown of each mesh node (the first copy), -1 for unused nodes
    std::vector<Id> cell_unknowns; ///< kernels->nodes per cell
    std::vector<Id> user_cell;     ///< the cell in the user's numbering
    std::vector<Id> part_of;       ///< per unknown: connected part of the body it belongs to; empty when there is one
    Index parts = 0;
    bool split = false; ///< a contact has given some node more than one unknown

    SparseMatrix pattern; ///< lower triangle over all unknowns, without values
    std::vector<Id> scatter;

    std::vector<RegionModel> regions;
    std::vector<FaceModel> faces;
    std::vector<ContactModel> contacts;
    std::vector<LocalModel> locals;

    /// Faces that prescribe the temperature of unknown `free + j`: entries fixed_start[j] .. fixed_start[j + 1] - 1.
    std::vector<Id> fixed_start;
    std::vector<Id> fixed_face;

    std::vector<Parameter> parameters; ///< one per slot
    std::vector<SlotRole> roles;
    /// Where each slot stands as a plain parameter: the label and the range it must keep.
    struct SlotUse {
        std::string label;
        Range range = Range::any;
    };
    std::vector<std::vector<SlotUse>> uses;

    bool nonlinear = false;      ///< something depends on temperature
    bool slope = false;          ///< conductivity does: the derivative is unsymmetric
    bool time_dependent = false; ///< a schedule, a function of time or a law that may use the time is among the data
    bool scheduled = false;      ///< a schedule or a function of time alone is
    bool moving = false;         ///< a thickness is a Parameter

    /// Slot of a parameter, -1 when the body does not use it.
    [[nodiscard]] Index slot_of(const Parameter& parameter) const noexcept {
        for (std::size_t s = 0; s < parameters.size(); ++s)
            if (parameters[s] == parameter) return static_cast<Index>(s);
        return -1;
    }

    /// 273.15 in a celsius body: added to a temperature it is absolute [K].
    [[nodiscard]] double absolute_offset() const noexcept {
        return scale == TemperatureScale::celsius ? zero_celsius : 0.0;
    }

    [[nodiscard]] const Point* places_of(const Values& values) const noexcept {
        return moving ? values.places.data() : places.data();
    }

    /// Values with every parameter as it was made.
    [[nodiscard]] Values initial_values() const { return values_for(initial_slots()); }
    [[nodiscard]] TEPOR_INLINE std::vector<double> initial_slots() const;
    [[nodiscard]] TEPOR_INLINE Values values_for(std::vector<double> slots) const;
    /// Brings places and volumes in line with the slots, after a thickness changed.
    TEPOR_INLINE void update_geometry(Values& values) const;

    /// Refuses a value its uses do not allow. @throws Error bad_value
    TEPOR_INLINE void check_slot(Index slot, double value) const;

    /// Prescribed temperatures into T[free .. unknowns). @throws Error bad_value, bad_law
    void prescribe(const Values& values, TimeSpan time, double* T) const {
        if (const Fault fault = try_prescribe(values, time, T)) raise(fault);
    }
    /// The same, with what cannot be used as plain data.
    [[nodiscard]] TEPOR_INLINE Fault try_prescribe(const Values& values, TimeSpan time, double* T) const;

    /// Region of a cell of the model's numbering. Cost O(log regions).
    [[nodiscard]] Id region_of_cell(Index c) const noexcept {
        std::size_t low = 0, high = regions.size();
        while (high - low > 1) {
            const std::size_t middle = (low + high) / 2;
            (regions[middle].first_cell <= c ? low : high) = middle;
        }
        return static_cast<Id>(low);
    }
    /// Connected part of the body an unknown belongs to.
    [[nodiscard]] Id part(Index unknown) const noexcept {
        return part_of.empty() ? 0 : part_of[detail::as_size(unknown)];
    }
    /// The model's cell of one of the user's; the table is built at the first use.
    [[nodiscard]] TEPOR_INLINE Id model_cell(Index user) const;

    [[nodiscard]] const Id* cell(Index c) const noexcept { return cell_unknowns.data() + c * kernels->nodes; }

    /// Finds places in the mesh; built at the first use. Places are those the mesh was made with.
    [[nodiscard]] TEPOR_INLINE const Locator& locator() const;

    /// Side node ids of a model cell.
    void side_unknowns(CellSide side, Id* out) const {
        for (int j = 0; j < kernels->side_nodes; ++j) out[j] = cell(side.cell)[kernels->side_node(side.side, j)];
    }

  private:
    mutable std::once_flag locator_made_;
    mutable std::unique_ptr<Locator> locator_;
    mutable std::once_flag cells_made_;
    mutable std::vector<Id> model_cell_;
};

/// Compiles statements on a mesh.
/// @throws Error for everything a description can get wrong: missing, contradiction, bad_contact, bad_value ...
[[nodiscard]] TEPOR_INLINE std::shared_ptr<const Model>
compile(std::shared_ptr<const MeshData> mesh, std::shared_ptr<const CellKernels> kernels, const detail::CellKind& kind,
        PlaneSolverMaker make_plane_solver, const detail::Statements& said, TemperatureScale scale, bool lumped_faces);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/compile.hpp>
#include <tepor/body/impl/model.hpp>
#endif
