#pragma once
// Small models for control.

#include <tepor/c/impl/march.hpp>

struct tepor_model {
    tepor::StateSpace model;
};

namespace tepor::c {

inline const std::vector<double>& part_of(const StateSpace& model, tepor_model_part part) {
    switch (part) {
    case TEPOR_MODEL_A: return model.A;
    case TEPOR_MODEL_B: return model.B;
    case TEPOR_MODEL_C: return model.C;
    case TEPOR_MODEL_D: return model.D;
    case TEPOR_MODEL_U0: return model.u0;
    case TEPOR_MODEL_Y0: return model.y0;
    case TEPOR_MODEL_CONTINUOUS_A: return model.Ac;
    case TEPOR_MODEL_CONTINUOUS_B: return model.Bc;
    case TEPOR_MODEL_STATE: return model.state();
    default: misuse("the part of the model is no tepor_model_part");
    }
}

inline void expect_channel(const StateSpace& model, int64_t output, int64_t input) {
    if (output < 0 || output >= model.outputs || input < 0 || input >= model.inputs)
        misuse(tepor::detail::text("output ", output, ", input ", input, " of a model with ", model.outputs,
                                   " outputs and ", model.inputs, " inputs; they are counted from 0"));
}

} // namespace tepor::c

extern "C" {

tepor_compact_options tepor_compact_options_default(void) {
    const tepor::CompactOptions usual;
    tepor_compact_options o{};
    o.size = sizeof o;
    o.tolerance = usual.tolerance;
    return o;
}
tepor_status tepor_compact(tepor_session* session, const tepor_body* body, const tepor_compact_options* options,
                           tepor_model** out) {
    return tepor::c::run(session, body && options && out, [&] {
        tepor_compact_options o = tepor_compact_options_default();
        tepor::c::take(options, o);
        tepor::CompactOptions how;
        for (size_t i = 0; i < o.input_count; ++i) {
            if (!o.inputs || !o.inputs[i]) tepor::c::misuse("an input of the model is NULL");
            how.inputs.push_back(o.inputs[i]->parameter);
        }
        for (size_t i = 0; i < o.output_count; ++i) {
            if (!o.outputs || !o.outputs[i]) tepor::c::misuse("an output of the model is NULL");
            how.outputs.push_back(o.outputs[i]->quantity);
        }
        how.sample_time = o.sample_time;
        how.tolerance = o.tolerance;
        how.highest_frequency = o.highest_frequency;
        if (o.input_scale) how.input_scale.assign(o.input_scale, o.input_scale + o.input_count);
        if (o.output_scale) how.output_scale.assign(o.output_scale, o.output_scale + o.output_count);
        how.order = static_cast<tepor::Index>(o.order);
        how.passive = o.passive != 0;
        how.capacity = tepor::c::capacity_of(o.capacity);
        *out = new tepor_model{tepor::compact(body->body, how)};
    });
}
void tepor_model_free(tepor_model* model) {
    delete model;
}
tepor_status tepor_model_facts_of(tepor_session* session, const tepor_model* model, tepor_model_facts* facts) {
    return tepor::c::run(session, model && facts, [&] {
        const tepor::StateSpace& m = model->model;
        tepor_model_facts out{};
        out.order = m.order;
        out.inputs = m.inputs;
        out.outputs = m.outputs;
        out.sample_time = m.sample_time;
        out.peak_gain = m.peak_gain;
        out.error_bound = m.error_bound;
        out.basis_error = m.basis_error;
        out.basis_size = m.basis_size;
        out.factorisations = m.factorisations;
        out.linearised = m.linearised ? 1 : 0;
        tepor::c::give(out, facts);
    });
}
tepor_status tepor_model_numbers(tepor_session* session, const tepor_model* model, tepor_model_part part,
                                 double* numbers, size_t entries) {
    return tepor::c::run(session, model && numbers,
                         [&] { tepor::c::copy_out(tepor::c::part_of(model->model, part), numbers, entries); });
}
void tepor_model_advance(tepor_model* model, const double* u, double* y) {
    if (model && u && y) model->model.advance(u, y);
}
void tepor_model_reset(tepor_model* model) {
    if (model) model->model.reset();
}
tepor_status tepor_model_steady_gain(tepor_session* session, const tepor_model* model, int64_t output, int64_t input,
                                     double* gain) {
    return tepor::c::run(session, model && gain, [&] {
        tepor::c::expect_channel(model->model, output, input);
        *gain = model->model.steady_gain(static_cast<tepor::Index>(output), static_cast<tepor::Index>(input));
    });
}
tepor_status tepor_model_gain(tepor_session* session, const tepor_model* model, int64_t output, int64_t input, double w,
                              double* re, double* im) {
    return tepor::c::run(session, model && re && im, [&] {
        tepor::c::expect_channel(model->model, output, input);
        const tepor::StateSpace::Gain gain =
            model->model.gain(static_cast<tepor::Index>(output), static_cast<tepor::Index>(input), w);
        *re = gain.re;
        *im = gain.im;
    });
}
tepor_status tepor_model_c_source(tepor_session* session, const tepor_model* model, const char* name,
                                  tepor_text** out) {
    return tepor::c::run(session, model && name && out, [&] { *out = new tepor_text{model->model.c_source(name)}; });
}
tepor_status tepor_model_csv(tepor_session* session, const tepor_model* model, tepor_text** out) {
    return tepor::c::run(session, model && out, [&] { *out = new tepor_text{model->model.csv()}; });
}

} // extern "C"
