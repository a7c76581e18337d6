#include "zigzag/value.h"

bool tz_end_open(thole_memory *memory, tz_end *end, tz_touch touch) {
    if (end->start.n == 0 && !TB_VEC_PUSH(memory, &end->start, 0))
        return false;
    return TB_VEC_PUSH(memory, &end->bar, touch) && TB_VEC_PUSH(memory, &end->start, end->item.n);
}

bool tz_end_item(thole_memory *memory, tz_end *end, uint32_t item) {
    if (!TB_VEC_PUSH(memory, &end->item, item))
        return false;
    end->start.at[end->bar.n] = end->item.n;
    return true;
}

bool tz_span_bar(thole_memory *memory, tz_span *span, int dim, uint32_t first, tz_how birth, uint32_t last, tz_how death) {
    if (first > last)
        return true;
    bool open_start = birth == TZ_BY_DELETION, open_end = death == TZ_BY_ADDITION;
    thole_bar_kind kind = open_start ? (open_end ? THOLE_OPEN_OPEN : THOLE_OPEN_CLOSED)
                                     : (open_end ? THOLE_CLOSED_OPEN : THOLE_CLOSED_CLOSED);
    return TB_VEC_PUSH(memory, &span->bars, ((thole_bar){first, last, (uint8_t)dim, (uint8_t)kind}));
}

static void clear_end(thole_memory *memory, tz_end *end) {
    TB_VEC_CLEAR(memory, &end->bar);
    TB_VEC_CLEAR(memory, &end->start);
    TB_VEC_CLEAR(memory, &end->item);
}

bool tz_value_seal_left(tz_value *value) {
    for (int p = 0; p < value->dims; p++) {
        tz_span *span = &value->dim[p];
        for (size_t i = 0; i < span->left.bar.n; i++) {
            const tz_touch *t = &span->left.bar.at[i];
            if (t->how != TZ_REACHES &&
                !tz_span_bar(value->memory, span, p, value->first, TZ_BY_ADDITION, t->at, t->how))
                return false;
        }
        clear_end(value->memory, &span->left);
        for (size_t i = 0; i < span->right.bar.n; i++)
            if (span->right.bar.at[i].how == TZ_REACHES)
                span->right.bar.at[i] = (tz_touch){value->first, TC_NONE, TZ_REACHES};
    }
    return true;
}

bool tz_value_seal_right(tz_value *value) {
    for (int p = 0; p < value->dims; p++) {
        tz_span *span = &value->dim[p];
        for (size_t i = 0; i < span->right.bar.n; i++) {
            const tz_touch *t = &span->right.bar.at[i];
            bool reaches = t->how == TZ_REACHES;
            if (!tz_span_bar(value->memory, span, p, reaches ? value->first : t->at, reaches ? TZ_BY_ADDITION : t->how,
                             value->last, TZ_BY_DELETION))
                return false;
        }
        clear_end(value->memory, &span->right);
    }
    return true;
}

void tz_value_clear(tz_value *value) {
    for (int p = 0; p < value->dims; p++) {
        TB_VEC_CLEAR(value->memory, &value->dim[p].bars);
        clear_end(value->memory, &value->dim[p].left);
        clear_end(value->memory, &value->dim[p].right);
    }
    value->dims = 0;
}
