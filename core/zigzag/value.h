/* What a stretch of positions contributes to the barcode: finished bars, and the bars that touch
 * either end with their representatives there.
 *
 * At a boundary position m, homology classes of dimension p are written in the coordinates of the
 * complex K_m itself: the p-cells of K_m, numbered in their order, that are births of K_m's own boundary
 * matrix in that order and are not killed in it. Both neighbours of m reduce the same matrix, so they
 * use the same coordinates, and a stretch can be stored, sent and glued to whatever
 * begins or ends at m. */
#ifndef TZ_VALUE_H
#define TZ_VALUE_H

#include "complex/cells.h"
#include "zigzag/zigzag.h"

/* How a bar begins or ends. */
typedef enum tz_how { TZ_BY_ADDITION, TZ_BY_DELETION, TZ_REACHES /* it goes on beyond the other end of the stretch */ } tz_how;

/* A bar that touches one end of the stretch: what happens at its other end. */
typedef struct tz_touch {
    uint32_t at;   /* its other end's position; of no meaning for TZ_REACHES */
    uint32_t mate; /* TZ_REACHES: its number at the other end, or TC_NONE when that end is sealed */
    tz_how how;
} tz_touch;

/* One end: touching bars i, each with a column of coordinates item[start[i] .. start[i + 1] - 1]; the columns are
 * a basis of the homology of the end's complex. */
typedef struct tz_end {
    TB_VEC(tz_touch) bar;
    TB_VEC(size_t) start; /* one more than bars, or none when there are no bars */
    TB_VEC(uint32_t) item;
} tz_end;

typedef struct tz_span {
    TB_VEC(thole_bar) bars; /* finished */
    tz_end left, right;
} tz_span;

typedef struct tz_value {
    thole_memory *memory;
    uint32_t first, last; /* positions */
    int dims;             /* homology dimensions 0 .. dims - 1 */
    tz_span dim[THOLE_MOST_DIMENSION + 1];
    uint64_t cells[TC_TOP + 1]; /* cells that begin after `first` */
} tz_value;

/* Append a bar that touches an end, with its column to follow by tz_end_item. False when refused. */
bool tz_end_open(thole_memory *memory, tz_end *end, tz_touch touch);
bool tz_end_item(thole_memory *memory, tz_end *end, uint32_t item);

/* Append a finished bar; one with first > last is none and is passed over. */
bool tz_span_bar(thole_memory *memory, tz_span *span, int dim, uint32_t first, tz_how birth, uint32_t last, tz_how death);

/* Nothing more will come on the left: bars that touch it are born there, closed. */
bool tz_value_seal_left(tz_value *value);
/* Nothing more will come on the right, the left being sealed: bars that reach it are finished, closed. */
bool tz_value_seal_right(tz_value *value);

/* Glue `right` to `left`, which ends where it begins. *out is a new value (its own memory); the two
 * are untouched. */
thole_status tz_glue(thole_context *context, const tz_value *left, const tz_value *right, tz_value *out, thole_error *error);

void tz_value_clear(tz_value *value);

/* One bar that lives at the shared position of two stretches: how it began and ends, and its class there, as
 * coordinates. The classes of all such bars are a basis that fits both sides. */
typedef struct tz_class {
    tz_touch birth, death;
    size_t start; /* into item */
    size_t length;
} tz_class;

typedef struct tz_classes {
    thole_memory *memory;
    TB_VEC(tz_class) list;
    TB_VEC(uint32_t) item;
} tz_classes;

/* The bars of dimension p at the shared position. Clear *out with tz_classes_clear, after a failure too. */
thole_status tz_match(thole_context *context, const tz_value *left, const tz_value *right, int p, tz_classes *out,
                      thole_error *error);
void tz_classes_clear(tz_classes *classes);

#endif
