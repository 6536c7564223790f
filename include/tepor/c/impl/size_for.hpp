#pragma once
// Sizes: one parameter, bodies made one after the other, several parameters.

#include <tepor/c/impl/field.hpp>
#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

inline SizeOptions size_options_of(const tepor_size_options* options) {
    tepor_size_options o = tepor_size_options_default();
    if (options) take(options, o);
    SizeOptions how;
    how.from = given(o.from);
    how.to = given(o.to);
    how.tolerance = o.tolerance;
    how.scan = o.scan != 0;
    how.certified_side = o.certified_side != 0;
    how.certified_width = o.certified_width;
    how.most_solves = static_cast<Index>(o.most_solves);
    return how;
}

inline Target target_of(int32_t kind, double target) {
    switch (kind) {
    case TEPOR_EQUAL_TO: return target;
    case TEPOR_AT_MOST: return at_most(target);
    case TEPOR_AT_LEAST: return at_least(target);
    default: misuse("the kind of target is no tepor_target_kind");
    }
}

inline void give_sized(tepor_session* session, Sized found, tepor_sized* result, tepor_field** field) {
    tepor_sized out{};
    out.value = found.value;
    out.reached = found.reached;
    out.failed_at = found.failed_at;
    out.solves = found.solves;
    out.reason = static_cast<int32_t>(found.reason);
    out.lower = found.lower;
    out.upper = found.upper;
    out.answer_count = static_cast<int32_t>(found.answers.size());
    std::copy_n(found.answers.begin(), std::min<std::size_t>(found.answers.size(), 8), out.answers);
    give(out, result);
    remark(session, found.message);
    if (field) *field = new tepor_field{std::move(found.field)};
}

/// Bodies made by a C program.
class MakerByCallback final : public BodyMaker {
  public:
    MakerByCallback(tepor_body_maker callback, void* user_data) : make_(callback), user_data_(user_data) {}
    [[nodiscard]] Body make(double value) const override {
        const std::unique_ptr<tepor_body> made(make_(value, user_data_));
        if (!made)
            throw Error(ErrorCode::cancelled, "body maker",
                        tepor::detail::text("the maker of bodies gave NULL for the value ", value));
        return std::move(made->body);
    }

  private:
    tepor_body_maker make_;
    void* user_data_;
};

} // namespace tepor::c

static_assert(static_cast<int>(tepor::SizeReason::found) == TEPOR_SIZE_FOUND);
static_assert(static_cast<int>(tepor::SizeReason::always_met) == TEPOR_SIZE_ALWAYS_MET);
static_assert(static_cast<int>(tepor::SizeReason::several) == TEPOR_SIZE_SEVERAL);
static_assert(static_cast<int>(tepor::SizeReason::unreachable) == TEPOR_SIZE_UNREACHABLE);
static_assert(static_cast<int>(tepor::SizeReason::runaway) == TEPOR_SIZE_RUNAWAY);
static_assert(static_cast<int>(tepor::SizeReason::failed) == TEPOR_SIZE_FAILED);

extern "C" {

tepor_size_options tepor_size_options_default(void) {
    const tepor::SizeOptions usual;
    tepor_size_options o{};
    o.size = sizeof o;
    o.from = tepor::c::not_given;
    o.to = tepor::c::not_given;
    o.tolerance = usual.tolerance;
    o.certified_width = usual.certified_width;
    o.most_solves = usual.most_solves;
    return o;
}
tepor_status tepor_size_for(tepor_session* session, const tepor_body* body, const tepor_parameter* parameter,
                            const tepor_quantity* quantity, tepor_target_kind kind, double target,
                            const tepor_size_options* options, tepor_sized* result, tepor_field** field) {
    return tepor::c::run(session, body && parameter && quantity && result, [&] {
        tepor::c::give_sized(session,
                             tepor::size_for(body->body, parameter->parameter, quantity->quantity,
                                             tepor::c::target_of(kind, target), tepor::c::size_options_of(options)),
                             result, field);
    });
}
tepor_status tepor_size_for_bodies(tepor_session* session, tepor_body_maker make, void* user_data,
                                   const tepor_quantity* quantity, tepor_target_kind kind, double target,
                                   const tepor_size_options* options, tepor_sized* result, tepor_field** field) {
    return tepor::c::run(session, make && quantity && result, [&] {
        const tepor::c::MakerByCallback maker(make, user_data);
        const tepor::BodyMaker& bodies = maker;
        tepor::c::give_sized(session,
                             tepor::size_for(bodies, quantity->quantity, tepor::c::target_of(kind, target),
                                             tepor::c::size_options_of(options)),
                             result, field);
    });
}
tepor_status tepor_size_for_several(tepor_session* session, const tepor_body* body, const tepor_size_by* by,
                                    const tepor_size_to* to, size_t count, const tepor_size_options* options,
                                    double* values, double* reached, int32_t* reason, tepor_field** field) {
    return tepor::c::run(session, body && by && to && values && reached, [&] {
        std::vector<tepor::SizeBy> parameters;
        std::vector<tepor::SizeTo> targets;
        for (size_t i = 0; i < count; ++i) {
            if (!by[i].parameter || !to[i].quantity) tepor::c::misuse("a parameter or quantity of the sizing is NULL");
            parameters.push_back({by[i].parameter->parameter, tepor::c::given(by[i].from), tepor::c::given(by[i].to)});
            targets.push_back({to[i].quantity->quantity, tepor::c::target_of(to[i].kind, to[i].target)});
        }
        tepor::SizedTogether found =
            tepor::size_for(body->body, parameters, targets, tepor::c::size_options_of(options));
        std::copy(found.values.begin(), found.values.end(), values);
        std::copy(found.reached.begin(), found.reached.end(), reached);
        if (reason) *reason = static_cast<int32_t>(found.reason);
        tepor::c::remark(session, found.message);
        if (field) *field = new tepor_field{std::move(found.field)};
    });
}

} // extern "C"
