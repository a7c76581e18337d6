#include "zigzag/pairs.h"

bool tz_lists_make(tz_work *work, uint32_t n, tz_lists *out) {
    *out = (tz_lists){.memory = work->context->memory};
    out->start = TB_FILL(work->arena, uint32_t, n, 0xFF);
    out->length = TB_TAKE(work->arena, uint32_t, n);
    return out->start != NULL && out->length != NULL;
}

bool tz_lists_add(tz_lists *lists, uint32_t rank, const uint32_t *items, size_t n) {
    if (lists->item.n + n >= UINT32_MAX || !TB_VEC_RESERVE(lists->memory, &lists->item, lists->item.n + n))
        return false;
    lists->start[rank] = (uint32_t)lists->item.n;
    lists->length[rank] = (uint32_t)n;
    memcpy(lists->item.at + lists->item.n, items, n * sizeof *items);
    lists->item.n += n;
    return true;
}

void tz_lists_clear(tz_lists *lists) {
    if (lists->memory != NULL)
        TB_VEC_CLEAR(lists->memory, &lists->item);
}

bool tz_cofaces_make(tz_work *work, const tc_block *block, int d, tz_cofaces *out) {
    const tc_cells *low = &block->cells[d], *high = &block->cells[d + 1];
    uint32_t faces = (uint32_t)d + 2;
    out->begin = TB_FILL(work->arena, uint32_t, (size_t)low->n + 2, 0);
    out->cell = TB_TAKE(work->arena, uint32_t, (size_t)high->n * faces);
    if (out->begin == NULL || out->cell == NULL)
        return false;
    size_t all = (size_t)high->n * faces;
    for (size_t i = 0; i < all; i++)
        out->begin[high->face[i] + 2]++;
    for (uint32_t i = 0; i < low->n; i++)
        out->begin[i + 2] += out->begin[i + 1];
    for (size_t i = 0; i < all; i++)
        out->cell[out->begin[high->face[i] + 1]++] = (uint32_t)(i / faces);
    return true;
}

/* ---- nodes and links ------------------------------------------------------- */

static uint32_t root_of(uint32_t *parent, uint32_t x) {
    while (parent[x] != x) {
        parent[x] = parent[parent[x]];
        x = parent[x];
    }
    return x;
}

thole_status tz_pair_links(tz_work *work, tz_order *order, uint32_t **older) {
    tz_rank *nodes = &order->dim[0], *links = &order->dim[1];
    const tc_cells *cells = &order->block->cells[1];
    uint32_t n = order->block->cells[0].n;
    uint32_t *parent = TB_TAKE(work->arena, uint32_t, n);
    *older = TB_TAKE(work->arena, uint32_t, n);
    if (parent == NULL || *older == NULL)
        return tz_refused(work, order->block);
    for (uint32_t i = 0; i < n; i++)
        parent[i] = i;
    for (uint32_t r = 0; r < cells->n; r++) {
        const uint32_t *face = &cells->face[2 * (size_t)links->at[r]];
        uint32_t a = root_of(parent, nodes->rank[face[0]]), b = root_of(parent, nodes->rank[face[1]]);
        if (a == b)
            continue;
        uint32_t young = a > b ? a : b, old = a > b ? b : a; /* the component whose first node is later dies */
        parent[young] = old;
        (*older)[young] = old;
        nodes->killer[young] = r;
        links->victim[r] = young;
    }
    return THOLE_OK;
}

/* ---- coboundary columns ---------------------------------------------------- */

typedef struct reducer {
    tz_work *work;
    const tc_block *block;
    const tc_cells *high;
    const tz_cofaces *cofaces;
    tz_rank *low_rank, *high_rank;
    uint32_t faces;     /* of a high cell */
    tz_lists *cocycle;
    tz_bits column;     /* ranks of high cells */
    tz_bits sources;    /* ranks of low cells whose coboundaries are in it */
    TB_VEC(uint32_t) scratch;
} reducer;

static void add_coboundary(reducer *x, uint32_t low) {
    uint32_t cell = x->low_rank->at[low];
    for (uint32_t i = x->cofaces->begin[cell]; i < x->cofaces->begin[cell + 1]; i++)
        tz_bits_toggle(&x->column, x->high_rank->rank[x->cofaces->cell[i]]);
    tz_bits_toggle(&x->sources, low);
}

/* The pair (low, its first coface) when low is in turn that coface's last face: no column is needed. */
static bool apparent(reducer *x, uint32_t low) {
    uint32_t cell = x->low_rank->at[low], first = TC_NONE;
    for (uint32_t i = x->cofaces->begin[cell]; i < x->cofaces->begin[cell + 1]; i++) {
        uint32_t r = x->high_rank->rank[x->cofaces->cell[i]];
        first = r < first ? r : first;
    }
    if (first == TC_NONE)
        return true; /* no coface: nothing kills it */
    const uint32_t *face = &x->high->face[(size_t)x->high_rank->at[first] * x->faces];
    for (uint32_t i = 0; i < x->faces; i++)
        if (x->low_rank->rank[face[i]] > low)
            return false;
    x->low_rank->killer[low] = first;
    x->high_rank->victim[first] = low;
    return true;
}

/* Empty the column; keep its sources as the cocycle of `low` when it found a killer. */
static bool settle(reducer *x, uint32_t low, uint32_t killer) {
    for (uint32_t r; (r = tz_bits_lowest(&x->column)) != TZ_EMPTY;)
        tz_bits_toggle(&x->column, r);
    x->scratch.n = 0;
    bool fine = true;
    for (uint32_t r; (r = tz_bits_lowest(&x->sources)) != TZ_EMPTY;) {
        tz_bits_toggle(&x->sources, r);
        fine = fine && (killer == TZ_EMPTY || TB_VEC_PUSH(x->work->context->memory, &x->scratch, r));
    }
    if (!fine || killer == TZ_EMPTY)
        return fine;
    x->low_rank->killer[low] = killer;
    x->high_rank->victim[killer] = low;
    return x->scratch.n <= 1 || tz_lists_add(x->cocycle, low, x->scratch.at, x->scratch.n);
}

static bool reduce(reducer *x, uint32_t low) {
    add_coboundary(x, low);
    uint32_t pivot;
    while ((pivot = tz_bits_lowest(&x->column)) != TZ_EMPTY) {
        uint32_t owner = x->high_rank->victim[pivot];
        if (owner == TC_NONE)
            break;
        uint32_t start = x->cocycle->start[owner];
        if (start == TC_NONE)
            add_coboundary(x, owner);
        else
            for (uint32_t i = 0; i < x->cocycle->length[owner]; i++)
                add_coboundary(x, x->cocycle->item.at[start + i]);
    }
    return settle(x, low, pivot);
}

thole_status tz_pair_up(tz_work *work, tz_order *order, int d, const tz_cofaces *cofaces, tz_lists *cocycle) {
    const tc_block *block = order->block;
    reducer x = {.work = work,
                 .block = block,
                 .high = &block->cells[d],
                 .cofaces = cofaces,
                 .low_rank = &order->dim[d - 1],
                 .high_rank = &order->dim[d],
                 .faces = (uint32_t)d + 1,
                 .cocycle = cocycle};
    uint32_t n = block->cells[d - 1].n;
    bool fine = tz_lists_make(work, n, cocycle) && tz_bits_make(work->arena, block->cells[d].n, &x.column) &&
                tz_bits_make(work->arena, n, &x.sources);
    thole_status status = THOLE_OK;
    for (uint32_t low = n; fine && low-- > 0;) {
        if (x.low_rank->victim[low] != TC_NONE)
            continue; /* it kills, so it is no birth: clearing */
        if ((low & 255) == 0 && tb_cancelled(work->context)) {
            status = thole_fail(work->error, THOLE_CANCELLED, "stopped in the zigzag");
            break;
        }
        fine = apparent(&x, low) || reduce(&x, low);
    }
    TB_VEC_CLEAR(work->context->memory, &x.scratch);
    return status != THOLE_OK ? status : fine ? THOLE_OK : tz_refused(work, block);
}
