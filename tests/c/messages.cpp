// What the library refuses it refuses in C with the same words, code and offender as in C++: the common mistakes, both ways.

#include <cstdio>
#include <string>
#include <tepor/c/tepor.h>
#include <tepor/tepor.hpp>

using namespace tepor;

namespace {

int failures = 0;
int compared = 0;

struct Refusal {
    int code = 0;
    std::string message;
    std::string offender;
};

template <class Call>
Refusal refused(Call call) {
    try {
        call();
    } catch (const Error& error) {
        return {static_cast<int>(error.code()), error.what(), error.offender()};
    }
    return {0, "it was accepted", ""};
}

void same(const char* mistake, const Refusal& cpp, tepor_session* session, tepor_status status) {
    ++compared;
    if (status == cpp.code && status != TEPOR_OK && tepor_session_message(session) == cpp.message &&
        tepor_session_offender(session) == cpp.offender)
        return;
    ++failures;
    std::printf("%s\n  C++ %d: %s\n  C   %d: %s\n", mistake, cpp.code, cpp.message.c_str(), static_cast<int>(status),
                tepor_session_message(session));
}

} // namespace

int main() {
    tepor_session* s = tepor_session_create();
    tepor_mesh* mesh = nullptr;
    tepor_body* body = nullptr;
    tepor_field* field = nullptr;
    tepor_function* function = nullptr;
    tepor_parameter* stray = nullptr;
    const tepor_layer stack[2] = {{"brick", tepor_number(0.2), 2, 0.0}, {"felt", tepor_number(0.1), 2, 0.0}};
    if (tepor_layers_create(s, TEPOR_SEGMENT_2, stack, 2, tepor_planar(1.0), tepor_nothing(), &mesh) != TEPOR_OK ||
        tepor_body_create(s, mesh, 0, &body) != TEPOR_OK)
        return 1;
    Body wall{layers<Segment<2>>(
        {{.region = "brick", .thickness = 0.2, .cells = 2}, {.region = "felt", .thickness = 0.1, .cells = 2}})};

    same("a thickness of zero",
         refused([] { (void)layers<Segment<2>>({{.region = "brick", .thickness = 0.0, .cells = 2}}); }), s, [&] {
             const tepor_layer thin[1] = {{"brick", tepor_number(0.0), 2, 0.0}};
             tepor_mesh* none = nullptr;
             return tepor_layers_create(s, TEPOR_SEGMENT_2, thin, 1, tepor_planar(1.0), tepor_nothing(), &none);
         }());
    same("a region misspelt", refused([&] { wall.in("brik", Material{.conductivity = 1.0}); }), s,
         tepor_body_in_material(s, body, "brik", tepor_number(1.0), tepor_nothing(), tepor_nothing()));
    same("a face misspelt", refused([&] { wall.on("outter", Film{.coefficient = 8.0, .fluid = 25.0}); }), s,
         tepor_body_on_film(s, body, "outter", tepor_number(8.0), tepor_number(25.0)));
    same("no conductivity", refused([&] { (void)steady(wall); }), s, tepor_steady(s, body, &field));

    wall.in("brick", Material{.conductivity = 1.2}).in("felt", Material{.conductivity = 0.1});
    (void)tepor_body_in_material(s, body, "brick", tepor_number(1.2), tepor_nothing(), tepor_nothing());
    (void)tepor_body_in_material(s, body, "felt", tepor_number(0.1), tepor_nothing(), tepor_nothing());
    same("a second material", refused([&] { wall.in("felt", Material{.conductivity = 0.1}); }), s,
         tepor_body_in_material(s, body, "felt", tepor_number(0.1), tepor_nothing(), tepor_nothing()));
    same("nothing sets the level", refused([&] { (void)steady(wall); }), s, tepor_steady(s, body, &field));

    wall.on("outer", Film{.coefficient = 8.0, .fluid = 25.0});
    (void)tepor_body_on_film(s, body, "outer", tepor_number(8.0), tepor_number(25.0));
    same("a second film", refused([&] { wall.on("outer", Film{.coefficient = 8.0, .fluid = 25.0}); }), s,
         tepor_body_on_film(s, body, "outer", tepor_number(8.0), tepor_number(25.0)));
    const Parameter stranger{"stranger", 1.0};
    (void)tepor_parameter_create(s, "stranger", 1.0, &stray);
    same("a parameter nobody uses", refused([&] { wall.set(stranger, 2.0); }), s, tepor_body_set(s, body, stray, 2.0));
    same("a march without density", refused([&] { (void)March(wall, initial(20.0), Theta{.step = 10.0}); }), s, [&] {
        tepor_march_options options = tepor_march_options_default();
        options.step = 10.0;
        tepor_march* march = nullptr;
        return tepor_march_create(s, body, 20.0, &options, &march);
    }());
    same("theta beyond 1", refused([&] { (void)March(wall, initial(20.0), Theta{.theta = 1.4, .step = 10.0}); }), s,
         [&] {
             tepor_march_options options = tepor_march_options_default();
             options.step = 10.0;
             options.theta = 1.4;
             tepor_march* march = nullptr;
             return tepor_march_create(s, body, 20.0, &options, &march);
         }());
    same("a table that falls back", refused([] {
             (void)table({{100.0, 1.0}, {50.0, 2.0}});
         }),
         s, [&] {
             const double at[2] = {100.0, 50.0};
             const double value[2] = {1.0, 2.0};
             return tepor_table_create(s, at, value, 2, 0, &function);
         }());
    wall.on("inner", Film{.coefficient = 90.0, .fluid = 1250.0});
    (void)tepor_body_on_film(s, body, "inner", tepor_number(90.0), tepor_number(1250.0));
    wall.replace("felt", Material{.conductivity = table({{20, 0.08}, {300, 0.12}})});
    {
        const double at[2] = {20.0, 300.0};
        const double value[2] = {0.08, 0.12};
        (void)tepor_table_create(s, at, value, 2, 0, &function);
        (void)tepor_body_replace_in_material(s, body, "felt", tepor_by(function), tepor_nothing(), tepor_nothing());
    }
    same("hotter than the table", refused([&] { (void)steady(wall); }), s, tepor_steady(s, body, &field));
    wall.replace("felt", Material{.conductivity = 0.1});
    (void)tepor_body_replace_in_material(s, body, "felt", tepor_number(0.1), tepor_nothing(), tepor_nothing());
    (void)tepor_steady(s, body, &field);
    double value = 0.0;
    same("a place outside", refused([&] { (void)steady(wall).at(0.5); }), s,
         tepor_field_at(s, field, 0.5, 0.0, "", &value));

    tepor_field_free(field);
    tepor_function_free(function);
    tepor_parameter_free(stray);
    tepor_body_free(body);
    tepor_mesh_free(mesh);
    tepor_session_free(s);
    std::printf("%d refusals compared, %d differ\n", compared, failures);
    return failures == 0 && compared == 13 ? 0 : 1;
}
