/* Faulty rows. */
#include "ingest/row_faults.h"

#include <stdio.h>
#include <string.h>

static thole_status count(ti_faults *f, const char *reason, thole_error *error) {
    if (f->builder != NULL)
        return thole_builder_skip(f->builder, reason, f->rows->line, error);
    size_t i = 0;
    while (i < f->early_n && strcmp(f->early[i].what, reason) != 0)
        i++;
    if (i == f->early_n) { /* there are fewer reasons than places */
        snprintf(f->early[i].what, sizeof f->early[i].what, "%s", reason);
        f->early[i].first_line = f->rows->line;
        f->early[i].count = 0;
        f->early_n++;
    }
    f->early[i].count++;
    return THOLE_OK;
}

thole_status ti_faults_attach(ti_faults *f, thole_builder *builder, thole_error *error) {
    f->builder = builder;
    for (size_t i = 0; i < f->early_n; i++)
        for (uint64_t n = 0; n < f->early[i].count; n++) {
            thole_status status =
                thole_builder_skip(builder, f->early[i].what, f->early[i].first_line, error);
            if (status != THOLE_OK)
                return status;
        }
    f->early_n = 0;
    return THOLE_OK;
}

thole_status ti_fault(ti_faults *f, size_t from, const char *reason, const char *before,
                      const ti_field *value, const char *after, thole_error *error) {
    if (f->skip)
        return count(f, reason, error);
    char quoted[TI_QUOTED_SIZE] = "";
    if (value != NULL)
        ti_quote(value->at, value->length, quoted);
    uint64_t line, column;
    ti_rows_place(f->rows, from, &line, &column);
    return thole_fail(error, THOLE_INPUT, "%s:%llu:%llu: %s%s%s", f->name, (unsigned long long)line,
                      (unsigned long long)column, before, quoted, after);
}

thole_status ti_fault_flaw(ti_faults *f, size_t columns, thole_error *error) {
    const ti_field *field = &f->rows->field[f->rows->n - 1];
    char text[200];
    switch (f->rows->flaw) {
    case TI_SOUND: break;
    case TI_NUL:
        return ti_fault(f, field->from, "NUL byte", "field ", field,
                        " holds a NUL byte: give delimited text in UTF-8", error);
    case TI_NOT_UTF8:
        return ti_fault(f, field->from, "not UTF-8", "field ", field, " is not UTF-8: save the file as UTF-8",
                        error);
    case TI_UNCLOSED:
        return ti_fault(
            f, field->from, "quote not closed", "field ", field,
            " opens a quote that is never closed: close it, or double a quote that is meant as such", error);
    case TI_AFTER_QUOTE:
        return ti_fault(f, field->from, "text after a closing quote", "field ", field,
                        " goes on after its closing quote: double the quotes inside a quoted field", error);
    case TI_LONG_FIELD:
        return ti_fault(f, field->from, "field longer than 1 MiB", "field ", field,
                        " is longer than 1 MiB: look for a quote that is not closed, or a wrong separator",
                        error);
    case TI_LONG_ROW:
        return ti_fault(f, 0, "row longer than 16 MiB", "row ", field,
                        " is longer than 16 MiB: look for a quote that is not closed, or a wrong separator",
                        error);
    case TI_MANY:
        snprintf(text, sizeof text,
                 " is one column too many: expected %zu, put a field that holds the separator in quotes",
                 columns);
        return ti_fault(f, field->from, "too many columns", "field ", field, text, error);
    }
    return THOLE_OK;
}
