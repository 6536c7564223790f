#pragma once
// Texts, pictures, files and the self-check.

#include <tepor/c/impl/answers.hpp>
#include <tepor/c/impl/compact.hpp>
#include <tepor/c/impl/fit.hpp>
#include <tepor/check/self_check.hpp>
#include <tepor/output/answers.hpp>
#include <tepor/output/csv.hpp>
#include <tepor/output/file.hpp>
#include <tepor/output/svg.hpp>
#include <tepor/output/text.hpp>
#include <tepor/output/vtu.hpp>

struct tepor_record {
    tepor::Record record;
};
struct tepor_series {
    tepor::VtuSeries series;
};

namespace tepor::c {

inline PictureOptions picture_options_of(const tepor_picture_options* options) {
    tepor_picture_options o = tepor_picture_options_default();
    if (options) take(options, o);
    PictureOptions how;
    if (!(o.width >= 100.0 && o.width <= 1e5 && o.height >= 100.0 && o.height <= 1e5))
        misuse(tepor::detail::text("a picture of ", o.width, " x ", o.height, " px, expected 100 to 100000 each"));
    how.width = o.width;
    how.height = o.height;
    if (o.title) how.title = o.title;
    how.isotherms = o.isotherms;
    how.arrows = o.arrows != 0;
    return how;
}

inline std::vector<Quantity> quantities_of(const tepor_quantity* const* quantities, std::size_t count) {
    std::vector<Quantity> list;
    for (std::size_t i = 0; i < count; ++i) {
        if (!quantities[i]) misuse("a quantity of the list is NULL");
        list.push_back(quantities[i]->quantity);
    }
    return list;
}

} // namespace tepor::c

extern "C" {

const char* tepor_text_data(const tepor_text* text) {
    return text ? text->text.c_str() : "";
}
size_t tepor_text_size(const tepor_text* text) {
    return text ? text->text.size() : 0;
}
tepor_status tepor_text_write(tepor_session* session, const tepor_text* text, const char* path) {
    return tepor::c::run(session, text && path, [&] { tepor::detail::write_file(path, text->text); });
}
void tepor_text_free(tepor_text* text) {
    delete text;
}

tepor_status tepor_body_text(tepor_session* session, const tepor_body* body, tepor_text** out) {
    return tepor::c::run(session, body && out, [&] { *out = new tepor_text{tepor::to_text(body->body)}; });
}
tepor_status tepor_field_text(tepor_session* session, const tepor_field* field, tepor_text** out) {
    return tepor::c::run(session, field && out, [&] { *out = new tepor_text{tepor::to_text(field->field)}; });
}
tepor_status tepor_report(tepor_session* session, const tepor_body* body, const tepor_field* field,
                          const tepor_quantity* const* quantities, size_t count, tepor_text** out) {
    return tepor::c::run(session, body && field && out && (quantities || count == 0), [&] {
        *out = new tepor_text{tepor::report(body->body, field->field, tepor::c::quantities_of(quantities, count))};
    });
}
tepor_status tepor_balance_text(tepor_session* session, const tepor_field* field, tepor_text** out) {
    return tepor::c::run(session, field && out, [&] { *out = new tepor_text{tepor::to_text(field->field.balance())}; });
}
tepor_status tepor_slopes_text(tepor_session* session, const tepor_slopes* slopes, tepor_text** out) {
    return tepor::c::run(session, slopes && out, [&] { *out = new tepor_text{tepor::to_text(slopes->gradient)}; });
}
tepor_status tepor_fitted_text(tepor_session* session, const tepor_fitted* fitted, tepor_text** out) {
    return tepor::c::run(session, fitted && out, [&] { *out = new tepor_text{tepor::to_text(fitted->fitted)}; });
}
tepor_status tepor_model_text(tepor_session* session, const tepor_model* model, tepor_text** out) {
    return tepor::c::run(session, model && out, [&] { *out = new tepor_text{tepor::to_text(model->model)}; });
}

tepor_picture_options tepor_picture_options_default(void) {
    const tepor::PictureOptions usual;
    tepor_picture_options o{};
    o.size = sizeof o;
    o.width = usual.width;
    o.height = usual.height;
    o.isotherms = usual.isotherms;
    o.arrows = usual.arrows ? 1 : 0;
    return o;
}
tepor_status tepor_profile_svg(tepor_session* session, const tepor_field* field, const tepor_picture_options* options,
                               tepor_text** out) {
    return tepor::c::run(session, field && out, [&] {
        *out = new tepor_text{tepor::profile_svg(field->field, tepor::c::picture_options_of(options))};
    });
}
tepor_status tepor_map_svg(tepor_session* session, const tepor_field* field, const tepor_picture_options* options,
                           tepor_text** out) {
    return tepor::c::run(session, field && out, [&] {
        *out = new tepor_text{tepor::map_svg(field->field, tepor::c::picture_options_of(options))};
    });
}
tepor_status tepor_strip_svg(tepor_session* session, const tepor_record* record, const tepor_picture_options* options,
                             tepor_text** out) {
    return tepor::c::run(session, record && out, [&] {
        *out = new tepor_text{tepor::strip_svg(record->record, tepor::c::picture_options_of(options))};
    });
}

tepor_status tepor_field_vtu(tepor_session* session, const tepor_field* field, tepor_text** out) {
    return tepor::c::run(session, field && out, [&] { *out = new tepor_text{tepor::vtu_bytes(field->field)}; });
}
tepor_status tepor_field_csv(tepor_session* session, const tepor_field* field, tepor_text** out) {
    return tepor::c::run(session, field && out, [&] { *out = new tepor_text{tepor::csv_of(field->field)}; });
}

tepor_status tepor_record_create(tepor_session* session, const tepor_quantity* const* quantities, size_t count,
                                 tepor_record** out) {
    return tepor::c::run(session, quantities && out,
                         [&] { *out = new tepor_record{tepor::Record(tepor::c::quantities_of(quantities, count))}; });
}
tepor_status tepor_record_add(tepor_session* session, tepor_record* record, double time, const double* values,
                              size_t entries) {
    return tepor::c::run(session, record && values,
                         [&] { record->record.add(time, std::vector<double>(values, values + entries)); });
}
tepor_status tepor_record_csv(tepor_session* session, const tepor_record* record, tepor_text** out) {
    return tepor::c::run(session, record && out, [&] { *out = new tepor_text{tepor::csv_of(record->record)}; });
}
void tepor_record_free(tepor_record* record) {
    delete record;
}

tepor_status tepor_series_create(tepor_session* session, const char* stem, tepor_series** out) {
    return tepor::c::run(session, stem && out, [&] { *out = new tepor_series{tepor::VtuSeries(stem)}; });
}
tepor_status tepor_series_add(tepor_session* session, tepor_series* series, const tepor_field* field) {
    return tepor::c::run(session, series && field, [&] { series->series.add(field->field); });
}
void tepor_series_free(tepor_series* series) {
    delete series;
}

tepor_status tepor_self_check(tepor_session* session, tepor_self_check_result* result, tepor_text** report) {
    return tepor::c::run(session, result, [&] {
        const tepor::SelfCheck check = tepor::self_check();
        tepor_self_check_result out{};
        out.cases = static_cast<int64_t>(check.cases.size());
        out.rows = check.row_count();
        out.failed = check.failed();
        out.passed = check.passed() ? 1 : 0;
        out.fast_math = check.build.fast_math ? 1 : 0;
        tepor::c::give(out, result);
        if (report) *report = new tepor_text{tepor::to_text(check, tepor::Detail::full)};
    });
}

} // extern "C"
