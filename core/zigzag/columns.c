#include "zigzag/columns.h"

/* The boundary of a cell on births. */
static void add_boundary(const tz_columns *c, uint32_t column, tz_bits *rows) {
    const tz_rank *low = &c->order->dim[c->d - 1];
    uint32_t faces = (uint32_t)c->d + 1;
    const uint32_t *face = &c->order->block->cells[c->d].face[(size_t)c->order->dim[c->d].at[column] * faces];
    for (uint32_t i = 0; i < faces; i++) {
        uint32_t r = low->rank[face[i]];
        if (low->victim[r] == TC_NONE)
            tz_bits_toggle(rows, r);
    }
}

void tz_columns_add(const tz_columns *c, uint32_t column, tz_bits *rows, tz_bits *chain) {
    uint32_t start = c->rows.start[column];
    if (start == TC_NONE) {
        add_boundary(c, column, rows);
        if (chain != NULL)
            tz_bits_toggle(chain, column);
        return;
    }
    for (uint32_t i = 0; i < c->rows.length[column]; i++)
        tz_bits_toggle(rows, c->rows.item.at[start + i]);
    if (chain != NULL)
        for (uint32_t i = 0, from = c->made_of.start[column]; i < c->made_of.length[column]; i++)
            tz_bits_toggle(chain, c->made_of.item.at[from + i]);
}

/* Take all members out of a set, lowest first, into a vector's end. */
static bool drain(thole_memory *memory, tz_bits *bits, tz_lists *lists, uint32_t rank) {
    size_t from = lists->item.n;
    for (uint32_t r; (r = tz_bits_lowest(bits)) != TZ_EMPTY;) {
        tz_bits_toggle(bits, r);
        if (lists->item.n >= UINT32_MAX - 1 || !TB_VEC_PUSH(memory, &lists->item, r))
            return false;
    }
    lists->start[rank] = (uint32_t)from;
    lists->length[rank] = (uint32_t)(lists->item.n - from);
    return true;
}

thole_status tz_columns_make(tz_work *work, const tz_order *order, int d, bool chains, tz_columns *out) {
    const tc_block *block = order->block;
    *out = (tz_columns){.order = order, .d = d, .chains = chains};
    const tz_rank *low = &order->dim[d - 1], *high = &order->dim[d];
    uint32_t n = block->cells[d].n;
    tz_bits rows, chain;
    bool fine = tz_lists_make(work, n, &out->rows) && tz_bits_make(work->arena, block->cells[d - 1].n, &rows) &&
                (!chains || (tz_lists_make(work, n, &out->made_of) && tz_bits_make(work->arena, n, &chain)));
    for (uint32_t column = 0; fine && column < n; column++) {
        uint32_t victim = high->victim[column];
        if (victim == TC_NONE)
            continue;
        if ((column & 255) == 0 && tb_cancelled(work->context))
            return thole_fail(work->error, THOLE_CANCELLED, "stopped in the zigzag");
        tz_columns_add(out, column, &rows, chains ? &chain : NULL);
        bool own = true; /* its pivot is right as it stands */
        for (uint32_t pivot; (pivot = tz_bits_highest(&rows)) != victim; own = false)
            tz_columns_add(out, low->killer[pivot], &rows, chains ? &chain : NULL);
        if (own) {
            for (uint32_t r; (r = tz_bits_lowest(&rows)) != TZ_EMPTY;)
                tz_bits_toggle(&rows, r);
            if (chains)
                tz_bits_toggle(&chain, column);
            continue;
        }
        fine = drain(work->context->memory, &rows, &out->rows, column) &&
               (!chains || drain(work->context->memory, &chain, &out->made_of, column));
    }
    return fine ? THOLE_OK : tz_refused(work, block);
}

void tz_columns_clear(tz_columns *columns) {
    tz_lists_clear(&columns->rows);
    tz_lists_clear(&columns->made_of);
}
