/* Types of attribute columns. */
#include "ingest/attributes.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "clock/decimal.h"

/* Up to this, integers are reals too. */
static const int64_t EXACT = INT64_C(1) << 53;

thole_value ti_value_of(const char *text, size_t length) {
    thole_value value = {.type = THOLE_TEXT, .present = true, .text = text, .length = length};
    size_t i = length > 0 && text[0] == '-', first = i;
    uint64_t whole = 0;
    while (i < length && i - first < 19 && tk_is_digit(text[i]))
        whole = whole * 10 + (uint64_t)(text[i++] - '0');
    size_t digits = i - first;
    if (digits == 0 || (digits > 1 && text[first] == '0'))
        return value;
    if (i == length) {
        if (whole > (uint64_t)INT64_MAX || (first == 1 && whole == 0)) /* -0 is no integer */
            return value;
        value.type = THOLE_INTEGER;
        value.integer = first == 1 ? -(int64_t)whole : (int64_t)whole;
        return value;
    }
    tk_number number;
    if ((text[i] != '.' && text[i] != 'e' && text[i] != 'E') ||
        tk_number_scan(text, length, &number) != length || (number.point && number.fraction == 0))
        return value;
    value.real = tk_number_real(&number);
    if (isfinite(value.real))
        value.type = THOLE_REAL;
    return value;
}

static thole_status promote(ti_attribute *a, thole_builder *builder, thole_type type, uint64_t line,
                            thole_error *error) {
    thole_status status = thole_builder_promote(builder, a->column, type, error);
    if (status == THOLE_LIMIT && type == THOLE_REAL &&
        thole_builder_column_type(builder, a->column) == THOLE_INTEGER) {
        type = THOLE_TEXT; /* it holds integers that no real holds */
        status = thole_builder_promote(builder, a->column, type, error);
    }
    if (status != THOLE_OK)
        return status;
    a->type = type;
    if (!a->any)
        return THOLE_OK;
    char what[sizeof((thole_tally *)0)->what];
    size_t n = strlen(a->name), room = sizeof what - sizeof "integers of column \"\" became decimals";
    for (n = n < room ? n : room; n > 0 && ((unsigned char)a->name[n] & 0xC0u) == 0x80u; n--) {
    } /* not inside a character */
    snprintf(what, sizeof what, "%s of column \"%.*s\" became %s",
             type == THOLE_REAL ? "integers" : "numbers", (int)n, a->name,
             type == THOLE_REAL ? "decimals" : "text");
    return thole_builder_remark(builder, what, line, error);
}

thole_status ti_attribute_set(ti_attribute *a, thole_builder *builder, const char *text, size_t length,
                              uint64_t line, thole_error *error) {
    if (length == 0)
        return THOLE_OK;
    thole_value value = {.type = THOLE_TEXT, .present = true, .text = text, .length = length};
    if (a->type != THOLE_TEXT) {
        value = ti_value_of(text, length);
        if (value.type == THOLE_INTEGER && a->type == THOLE_REAL) {
            bool exact = value.integer <= EXACT && value.integer >= -EXACT;
            value.real = (double)value.integer;
            value.type = exact ? THOLE_REAL : THOLE_TEXT;
        }
        if (value.type != a->type) {
            thole_status status = promote(a, builder, value.type, line, error);
            if (status != THOLE_OK)
                return status;
            value.type = a->type; /* perhaps text instead of real */
        }
    }
    a->any = true;
    return thole_builder_set(builder, a->column, &value, error);
}
