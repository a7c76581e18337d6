/* Inside the core: attribute columns, typed as their values come. */
#ifndef TI_ATTRIBUTES_H
#define TI_ATTRIBUTES_H

#include "network/network.h"

typedef struct ti_attribute {
    const char *name;
    size_t field;    /* column of the file, from 0 */
    uint32_t column; /* of the builder */
    thole_type type;
    bool any; /* whether a value is stored */
} ti_attribute;

/* What a text is: THOLE_INTEGER only as Thole would write it ("7", not "007" or "+7") and above INT64_MIN,
 * THOLE_REAL likewise for decimals that are finite ("1.50", "-2e9"), else THOLE_TEXT. */
thole_value ti_value_of(const char *text, size_t length);

/* Give the event added last the value of `text` (empty: none). A value of another type than the column's so
 * far turns the column from integer to real to text; a remark at `line` tells when values were stored before.
 */
thole_status ti_attribute_set(ti_attribute *attribute, thole_builder *builder, const char *text,
                              size_t length, uint64_t line, thole_error *error);

#endif
