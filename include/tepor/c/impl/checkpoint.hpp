#pragma once
// Checkpoints of marches, and periodic states.

#include <tepor/c/impl/march.hpp>
#include <tepor/output/checkpoint_file.hpp>

struct tepor_periodic {
    tepor::Periodic periodic;
};

extern "C" {

tepor_status tepor_march_checkpoint(tepor_session* session, const tepor_march* march, tepor_checkpoint** out) {
    return tepor::c::run(session, march && out, [&] { *out = new tepor_checkpoint{march->march.checkpoint()}; });
}
tepor_status tepor_checkpoint_from_bytes(tepor_session* session, const unsigned char* bytes, size_t count,
                                         tepor_checkpoint** out) {
    return tepor::c::run(session, bytes && out, [&] {
        *out = new tepor_checkpoint{tepor::Checkpoint(std::vector<unsigned char>(bytes, bytes + count))};
    });
}
tepor_status tepor_checkpoint_load(tepor_session* session, const char* path, tepor_checkpoint** out) {
    return tepor::c::run(session, path && out, [&] { *out = new tepor_checkpoint{tepor::load_checkpoint(path)}; });
}
tepor_status tepor_checkpoint_save(tepor_session* session, const tepor_checkpoint* checkpoint, const char* path) {
    return tepor::c::run(session, checkpoint && path, [&] { tepor::save(checkpoint->checkpoint, path); });
}
const unsigned char* tepor_checkpoint_bytes(const tepor_checkpoint* checkpoint) {
    return checkpoint ? checkpoint->checkpoint.bytes().data() : nullptr;
}
size_t tepor_checkpoint_size(const tepor_checkpoint* checkpoint) {
    return checkpoint ? checkpoint->checkpoint.bytes().size() : 0;
}
void tepor_checkpoint_free(tepor_checkpoint* checkpoint) {
    delete checkpoint;
}

tepor_status tepor_periodic_steady(tepor_session* session, const tepor_body* body, double period,
                                   const tepor_march_options* options, tepor_periodic** out) {
    return tepor::c::run(session, body && options && out, [&] {
        *out = new tepor_periodic{
            tepor::periodic_steady(body->body, period, tepor::c::theta_of(tepor::c::options_of(options)))};
    });
}
tepor_status tepor_periodic_swing(tepor_session* session, tepor_periodic* periodic, const tepor_quantity* quantity,
                                  tepor_swing* swing) {
    return tepor::c::run(session, periodic && quantity && swing, [&] {
        const tepor::Swing found = periodic->periodic.swing(quantity->quantity);
        tepor_swing out{};
        out.low = found.low.value;
        out.low_time = found.low.time;
        out.high = found.high.value;
        out.high_time = found.high.time;
        out.mean = found.mean;
        tepor::c::give(out, swing);
    });
}
tepor_status tepor_periodic_field(tepor_session* session, const tepor_periodic* periodic, tepor_field** out) {
    return tepor::c::run(session, periodic && out, [&] { *out = new tepor_field{periodic->periodic.march.field()}; });
}
void tepor_periodic_free(tepor_periodic* periodic) {
    delete periodic;
}

} // extern "C"
