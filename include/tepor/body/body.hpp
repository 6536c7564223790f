#pragma once
// Body: a solid with a mesh, its materials, and what acts on it.

#include <memory>
#include <mutex>
#include <string>
#include <string_view>
#include <tepor/assembly/make_kernels.hpp>
#include <tepor/body/model.hpp>
#include <tepor/body/statements.hpp>
#include <tepor/describe/conditions.hpp>
#include <tepor/linear/plane_solver.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/mesh.hpp>
#include <utility>
#include <vector>

namespace tepor {

/// Choices made once for a body.
struct BodyOptions {
    TemperatureScale scale = TemperatureScale::celsius;
    int extra_degree =
        0; ///< raises the degree of the quadrature rules: for sources or conductivities that vary a lot in a cell
    bool lumped_faces =
        false; ///< film, flux and radiation terms act at the nodes of a face: keeps the maximum principle in marching
};

/// A solid with a mesh, its materials, and what acts on it, described with four prepositions:
/// `in` a region, `on` a face, `between` two regions, `at` a point.
///
/// An ordinary value: copies are independent. A const Body may be used from many threads at once; describing and setting
/// need the body for oneself. Every statement is checked when it is made; what only the whole can show is checked by the
/// first verb (`steady`, `March` ...).
class Body {
  public:
    template <class E>
    Body(Mesh<E> mesh, BodyOptions options = {}) // NOLINT: a mesh is a body nothing has been said about
        : Body(static_cast<MeshData&&>(mesh), detail::cell_kind<E>(), plane_solver_maker<E>(), options) {
        kernels_ = detail::make_kernels<E>(mesh_->frame, options.extra_degree);
    }
    template <class E>
    Body(Mesh<E> mesh, TemperatureScale scale) : Body(std::move(mesh), BodyOptions{.scale = scale}) {}

    /// A body on cell integrals of one's own.
    TEPOR_INLINE Body(std::shared_ptr<const MeshData> mesh, std::shared_ptr<const CellKernels> kernels,
                      const detail::CellKind& kind, BodyOptions options = {});

    TEPOR_INLINE Body(const Body& other);
    TEPOR_INLINE Body(Body&& other) noexcept;
    TEPOR_INLINE Body& operator=(const Body& other);
    TEPOR_INLINE Body& operator=(Body&& other) noexcept;
    TEPOR_INLINE ~Body();

    // ---- in a region
    /// What a region is made of; once per region.
    /// @throws Error bad_name (no such region), contradiction (it has a Material already)
    TEPOR_INLINE Body& in(std::string_view region, Material material);
    /// Heat generated in a region. Once per region; more with also_in.
    TEPOR_INLINE Body& in(std::string_view region, Generation generation);
    /// Loss from the sides of a fin or thin plate.
    TEPOR_INLINE Body& in(std::string_view region, SideFilm film);
    /// Another of the same kind on purpose; they add up.
    TEPOR_INLINE Body& also_in(std::string_view region, Generation generation);
    TEPOR_INLINE Body& also_in(std::string_view region, SideFilm film);

    // ---- on a face: different kinds add up, the same kind twice is refused
    TEPOR_INLINE Body& on(std::string_view face, Film film);
    TEPOR_INLINE Body& on(std::string_view face, Radiation radiation);
    TEPOR_INLINE Body& on(std::string_view face, Flux flux);
    TEPOR_INLINE Body& on(std::string_view face, FixedTemperature fixed);
    /// Another of the same kind on purpose; they add up.
    TEPOR_INLINE Body& also_on(std::string_view face, Film film);
    TEPOR_INLINE Body& also_on(std::string_view face, Radiation radiation);
    TEPOR_INLINE Body& also_on(std::string_view face, Flux flux);

    // ---- between two regions
    /// A temperature jump at every interface of the two regions.
    TEPOR_INLINE Body& between(std::string_view region, std::string_view other, Contact contact);

    // ---- at a point
    TEPOR_INLINE Body& at(Point place, LocalHeat heat);
    TEPOR_INLINE Body& at(double x, LocalHeat heat) { return at(Point{x, 0.0}, std::move(heat)); }

    // ---- replacing what was said
    /// Takes back all statements of that kind on the region or face and makes this one.
    /// @throws Error missing  nothing of the kind was said there
    TEPOR_INLINE Body& replace(std::string_view region, Material material);
    TEPOR_INLINE Body& replace(std::string_view region, Generation generation);
    TEPOR_INLINE Body& replace(std::string_view region, SideFilm film);
    TEPOR_INLINE Body& replace(std::string_view face, Film film);
    TEPOR_INLINE Body& replace(std::string_view face, Radiation radiation);
    TEPOR_INLINE Body& replace(std::string_view face, Flux flux);
    TEPOR_INLINE Body& replace(std::string_view face, FixedTemperature fixed);
    TEPOR_INLINE Body& replace(std::string_view region, std::string_view other, Contact contact);

    // ---- parameters
    /// Gives a parameter a new value in this body; nothing is rebuilt that need not be.
    /// @throws Error unused (no statement uses it), bad_value
    TEPOR_INLINE Body& set(const Parameter& parameter, double value);
    /// The present value of a parameter in this body.
    [[nodiscard]] TEPOR_INLINE double value(const Parameter& parameter) const;
    /// All parameters the statements use.
    [[nodiscard]] const std::vector<Parameter>& parameters() const { return model()->parameters; }

    // ---- what it is
    [[nodiscard]] const MeshData& mesh() const noexcept { return *mesh_; }
    [[nodiscard]] std::shared_ptr<const MeshData> shared_mesh() const noexcept { return mesh_; }
    [[nodiscard]] const BodyOptions& options() const noexcept { return options_; }
    [[nodiscard]] const detail::Statements& statements() const noexcept { return said_; }

    /// The compiled body; made at the first call after a statement.
    /// @throws Error whatever the description gets wrong as a whole
    [[nodiscard]] TEPOR_INLINE const std::shared_ptr<const Model>& model() const;
    /// The present values.
    [[nodiscard]] TEPOR_INLINE const Values& values() const;

    /// The same statements and parameter values on another mesh with the same region and face names.
    template <class E>
    [[nodiscard]] Body on_mesh(Mesh<E> mesh) const {
        Body other(std::move(mesh), options_);
        other.adopt(*this);
        return other;
    }

    /// The same on a shared mesh of this body's element type, for verbs that refine.
    [[nodiscard]] TEPOR_INLINE Body on_mesh(std::shared_ptr<const MeshData> mesh) const;

    /// Room for what verbs keep between calls on this body (factors); shared by copies that were described alike.
    struct Store {
        Store() = default;
        Store(const Store&) = delete;
        Store& operator=(const Store&) = delete;
        virtual ~Store() = default;
    };
    template <class Kept>
    [[nodiscard]] Kept& kept() const {
        return *shared_kept<Kept>();
    }
    /// The same for those who may outlive the body.
    template <class Kept>
    [[nodiscard]] std::shared_ptr<Kept> shared_kept() const {
        const std::lock_guard<std::mutex> lock(cache_->guard);
        if (!cache_->store) cache_->store = std::make_shared<Kept>();
        return std::static_pointer_cast<Kept>(cache_->store);
    }

  private:
    struct Cache {
        std::mutex guard;
        std::shared_ptr<const Model> model;
        std::shared_ptr<Store> store;
    };
    struct Setting {
        Parameter parameter;
        double value;
    };

    TEPOR_INLINE Body(MeshData&& mesh, const detail::CellKind& kind, PlaneSolverMaker maker, BodyOptions options);
    TEPOR_INLINE Body(std::shared_ptr<const MeshData> mesh, std::shared_ptr<const CellKernels> kernels,
                      const detail::CellKind& kind, PlaneSolverMaker maker, BodyOptions options);

    // Named only where the element is two-dimensional: what nobody names is not compiled.
    template <class E>
    static constexpr PlaneSolverMaker plane_solver_maker() noexcept {
        if constexpr (E::dim == 2) return &make_plane_solver;
        return nullptr;
    }

    [[nodiscard]] TEPOR_INLINE Id region(std::string_view name) const;
    [[nodiscard]] TEPOR_INLINE Id face(std::string_view name) const;
    TEPOR_INLINE void changed();
    TEPOR_INLINE void adopt(const Body& other);

    std::shared_ptr<const MeshData> mesh_;
    std::shared_ptr<const CellKernels> kernels_;
    const detail::CellKind* kind_;
    PlaneSolverMaker make_plane_solver_;
    BodyOptions options_;
    detail::Statements said_;
    std::vector<Setting> settings_;
    std::shared_ptr<Cache> cache_;
    mutable std::shared_ptr<const Values> values_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/body.hpp>
#endif
