/* One block: two ordinary reductions of its cells (in addition order and in back order) and one mixed
 * part, which pairs the births that neither kills.
 *
 * This is the coned filtration of Dey and Hou, "Fast computation of zigzag persistence" (ESA 2022), taken apart:
 * a pair (s, t) in addition order is a closed-open bar, a pair in back order an open-closed one. A birth t
 * of the back order that nothing kills closes a cycle; reduced in addition order, that cycle ends at a
 * birth s: a closed-closed bar from s's first to t's last position or, when t is gone before s comes, an open-open bar one
 * dimension down in between. */
#include "zigzag/decompose.h"

#include "zigzag/columns.h"
#include "zigzag/mixed.h"

/* What the steps on one block share. */
typedef struct parts {
    tz_work *work;
    const tc_block *block;
    tz_order addition, back;
    uint32_t *older[2]; /* by tz_way: for nodes that die, the root that they joined */
    tz_lists cocycles[2][TC_TOP + 1]; /* by way and dimension of the cell that dies */
    tz_columns columns[2][TC_TOP + 1];
    tz_value *out;
    uint32_t wanted;
    uint32_t length;
} parts;

static tz_order *order_of(parts *x, tz_way way) { return way == TZ_ADDITION ? &x->addition : &x->back; }

static bool wants(const parts *x, int p) { return p < x->out->dims && (x->wanted >> p & 1) != 0; }

/* The killer and victim of every cell, in both orders. */
static thole_status pair_all(parts *x) {
    thole_status status = THOLE_OK;
    for (int way = 0; status == THOLE_OK && way < 2 && x->block->top >= 1; way++)
        status = tz_pair_links(x->work, order_of(x, (tz_way)way), &x->older[way]);
    for (int d = 2; status == THOLE_OK && d <= x->block->top; d++) {
        tz_cofaces cofaces;
        if (!tz_cofaces_make(x->work, x->block, d - 1, &cofaces))
            return tz_refused(x->work, x->block);
        for (int way = 0; status == THOLE_OK && way < 2; way++)
            status = tz_pair_up(x->work, order_of(x, (tz_way)way), d, &cofaces, &x->cocycles[way][d]);
        if (status == THOLE_OK && d == x->block->top)
            status = tz_mixed_top(x->work, &x->addition, &x->back, &cofaces, &x->cocycles[TZ_BACK][d], x->out);
    }
    return status;
}

/* Columns of dimensions 2 and up that kill; the back order's are needed with their making where cycles
 * of their dimension are drawn from them. */
static thole_status reduce_all(parts *x) {
    thole_status status = THOLE_OK;
    for (int d = 2; status == THOLE_OK && d <= x->block->top; d++)
        for (int way = 0; status == THOLE_OK && way < 2; way++)
            status = tz_columns_make(x->work, order_of(x, (tz_way)way), d, way == TZ_BACK && d < x->block->top,
                                     &x->columns[way][d]);
    return status;
}

/* Bars of ordinary pairs (p-cell, (p + 1)-cell) in one order; those born at the edge touch an end of the block. */
static bool ordinary_bars(parts *x, tz_way way, int p, tz_bits *rows) {
    tz_order *order = order_of(x, way);
    tz_rank *low = &order->dim[p];
    tz_span *span = &x->out->dim[p];
    thole_memory *memory = x->work->context->memory;
    uint32_t base = x->block->first;
    tz_end *end = way == TZ_ADDITION ? &span->left : &span->right;
    for (uint32_t r = 0; r < x->block->cells[p].n; r++) {
        if (low->killer[r] == TC_NONE)
            continue;
        uint32_t near = tz_time(order, p, r), far = tz_time(order, p + 1, low->killer[r]);
        if (near == far)
            continue;
        if (r >= low->at_edge) {
            bool fine = way == TZ_ADDITION
                            ? tz_span_bar(memory, span, p, base + near, TZ_BY_ADDITION, base + far - 1, TZ_BY_ADDITION)
                            : tz_span_bar(memory, span, p, base + far + 1, TZ_BY_DELETION, base + near, TZ_BY_DELETION);
            if (!fine)
                return false;
            continue;
        }
        tz_touch touch = way == TZ_ADDITION ? (tz_touch){base + far - 1, TC_NONE, TZ_BY_ADDITION}
                                            : (tz_touch){base + far + 1, TC_NONE, TZ_BY_DELETION};
        if (!tz_end_open(memory, end, touch))
            return false;
        if (p == 0) {
            if (!tz_end_item(memory, end, x->older[way][r]) || !tz_end_item(memory, end, r))
                return false;
            continue;
        }
        tz_columns_add(&x->columns[way][p + 1], low->killer[r], rows, NULL);
        if (!tz_edge_coordinates(memory, &x->columns[way][p + 1], rows, end))
            return false;
    }
    return true;
}

/* Components of the whole block: one closed-closed bar each. */
static bool component_bars(parts *x) {
    tz_rank *add = &x->addition.dim[0], *back = &x->back.dim[0];
    uint32_t n = x->block->cells[0].n;
    const tc_cells *links = &x->block->cells[1];
    /* The root of each component in addition order, found again by its node in the back order. */
    uint32_t *parent = TB_TAKE(x->work->arena, uint32_t, n);
    uint32_t *root = TB_FILL(x->work->arena, uint32_t, n, 0xFF);
    if (parent == NULL || root == NULL)
        return false;
    for (uint32_t i = 0; i < n; i++)
        parent[i] = i;
    uint32_t m = x->block->top >= 1 ? links->n : 0;
    for (uint32_t i = 0; i < m; i++) {
        uint32_t a = links->face[2 * (size_t)i], b = links->face[2 * (size_t)i + 1];
        while (parent[a] != a)
            a = parent[a] = parent[parent[a]];
        while (parent[b] != b)
            b = parent[b] = parent[parent[b]];
        parent[a] = b;
    }
#define FIND(a)                                                                                              \
    while (parent[a] != a)                                                                                   \
    a = parent[a] = parent[parent[a]]
    for (uint32_t r = 0; r < n; r++) {
        if (add->killer[r] != TC_NONE)
            continue;
        uint32_t a = add->at[r];
        FIND(a);
        root[a] = r;
    }
    for (uint32_t t = 0; t < n; t++) {
        if (back->killer[t] != TC_NONE)
            continue;
        uint32_t a = back->at[t];
        FIND(a);
        tz_span *span = &x->out->dim[0];
        if (!tz_closed_bar(x->work, &x->addition, &x->back, 0, root[a], t, x->out) ||
            (root[a] < add->at_edge && !tz_end_item(x->out->memory, &span->left, root[a])) ||
            (t < back->at_edge && !tz_end_item(x->out->memory, &span->right, t)))
            return false;
    }
#undef FIND
    return true;
}

static void count_cells(parts *x) {
    for (int d = 0; d <= x->block->top; d++) {
        const tc_cells *cells = &x->block->cells[d];
        x->out->cells[d] = cells->n - x->addition.dim[d].at_edge;
    }
}

static thole_status all_bars(parts *x) {
    thole_status status = THOLE_OK;
    if (wants(x, 0) && !component_bars(x))
        return tz_refused(x->work, x->block);
    for (int p = 0; p < x->out->dims && p < x->block->top; p++) {
        tz_bits rows;
        if (!wants(x, p))
            continue;
        if (!tz_bits_make(x->work->arena, x->block->cells[p].n, &rows))
            return tz_refused(x->work, x->block);
        for (int way = 0; way < 2; way++)
            if (!ordinary_bars(x, (tz_way)way, p, &rows))
                return tz_refused(x->work, x->block);
    }
    for (int p = 1; status == THOLE_OK && p <= x->block->top; p++) {
        if (p == x->block->top && p >= 2)
            break; /* done with the coboundaries */
        bool top = p == x->block->top;
        status = tz_mixed(x->work, &x->addition, &x->back, p, top ? NULL : &x->columns[TZ_ADDITION][p + 1],
                          p >= 2 ? &x->columns[TZ_BACK][p] : NULL, top ? NULL : &x->columns[TZ_BACK][p + 1], x->wanted,
                          x->out);
    }
    return status;
}

thole_status tz_decompose(tz_work *work, const tc_block *block, int dims, uint32_t wanted, tz_value *out) {
    parts x = {.work = work, .block = block, .out = out, .wanted = wanted, .length = block->last - block->first + 1};
    *out = (tz_value){.memory = work->context->memory, .first = block->first, .last = block->last, .dims = dims};
    thole_status status = tz_order_make(work, block, TZ_ADDITION, &x.addition);
    if (status == THOLE_OK)
        status = tz_order_make(work, block, TZ_BACK, &x.back);
    if (status == THOLE_OK) {
        count_cells(&x);
        status = pair_all(&x);
    }
    if (status == THOLE_OK)
        status = reduce_all(&x);
    if (status == THOLE_OK)
        status = all_bars(&x);
    for (int way = 0; way < 2; way++)
        for (int d = 0; d <= TC_TOP; d++) {
            tz_lists_clear(&x.cocycles[way][d]);
            tz_columns_clear(&x.columns[way][d]);
        }
    return status;
}
