#include "zigzag/mixed.h"

#include "zigzag/forest.h"

bool tz_edge_coordinates(thole_memory *memory, const tz_columns *columns, tz_bits *rows, tz_end *end) {
    const tz_rank *low = &columns->order->dim[columns->d - 1], *high = &columns->order->dim[columns->d];
    for (uint32_t r; (r = tz_bits_highest(rows)) != TZ_EMPTY;) {
        uint32_t killer = low->killer[r];
        if (killer != TC_NONE && killer < high->at_edge) { /* killed in the edge's own complex */
            tz_columns_add(columns, killer, rows, NULL);
            continue;
        }
        tz_bits_toggle(rows, r);
        if (!tz_end_item(memory, end, r))
            return false;
    }
    return true;
}

bool tz_closed_bar(tz_work *work, const tz_order *addition, const tz_order *back, int p, uint32_t s, uint32_t t,
                   tz_value *out) {
    thole_memory *memory = work->context->memory;
    tz_span *span = &out->dim[p];
    bool left = s < addition->dim[p].at_edge, right = t < back->dim[p].at_edge;
    uint32_t first = out->first + tz_time(addition, p, s), last = out->first + tz_time(back, p, t);
    if (!left && !right)
        return tz_span_bar(memory, span, p, first, TZ_BY_ADDITION, last, TZ_BY_DELETION);
    uint32_t left_number = (uint32_t)span->left.bar.n, right_number = (uint32_t)span->right.bar.n;
    tz_touch at_left = {last, right ? right_number : TC_NONE, right ? TZ_REACHES : TZ_BY_DELETION};
    tz_touch at_right = {first, left ? left_number : TC_NONE, left ? TZ_REACHES : TZ_BY_ADDITION};
    return (!left || tz_end_open(memory, &span->left, at_left)) && (!right || tz_end_open(memory, &span->right, at_right));
}

/* ---- cycles, reduced in addition order -------------------------------------- */

typedef struct mixer {
    tz_work *work;
    const tz_order *addition, *back;
    int p;
    const tz_columns *killers, *cycles, *back_killers;
    tz_forest forest;        /* links: their cycles come from here */
    uint32_t *path;          /* room for one of them */
    tz_bits rows;     /* addition ranks of births */
    tz_bits sums;     /* back ranks: the births whose cycles were added up */
    tz_bits chain, boundary; /* for p >= 2: drawing a cycle */
    uint32_t *claim;  /* addition rank -> the back rank whose cycle ends there, or TC_NONE */
    tz_lists cycle;   /* addition rank -> the reduced cycle's rows, when they are more than that one */
    tz_lists made_of; /* addition rank -> the back ranks added up, for cycles at the right edge */
    bool bars, gaps;  /* whether closed-closed bars of p, open-open ones of p - 1 are wanted */
    tz_value *out;
    TB_VEC(uint32_t) r;
    TB_VEC(uint32_t) c;
} mixer;

/* The cycle that back birth t closes, on addition births, for p >= 2: its boundary, killed by the columns of
 * the back order, and what those are made of. */
static void draw_cycle(mixer *m, uint32_t t) {
    const tz_rank *add = &m->addition->dim[m->p], *back = &m->back->dim[m->p], *low = &m->back->dim[m->p - 1];
    uint32_t faces = (uint32_t)m->p + 1;
    const uint32_t *face = &m->back->block->cells[m->p].face[(size_t)back->at[t] * faces];
    for (uint32_t i = 0; i < faces; i++)
        if (low->victim[low->rank[face[i]]] == TC_NONE)
            tz_bits_toggle(&m->boundary, low->rank[face[i]]);
    tz_bits_toggle(&m->chain, t);
    for (uint32_t high; (high = tz_bits_highest(&m->boundary)) != TZ_EMPTY;)
        tz_columns_add(m->cycles, low->killer[high], &m->boundary, &m->chain);
    for (uint32_t x; (x = tz_bits_lowest(&m->chain)) != TZ_EMPTY;) {
        tz_bits_toggle(&m->chain, x);
        uint32_t r = add->rank[back->at[x]];
        if (add->victim[r] == TC_NONE)
            tz_bits_toggle(&m->rows, r);
    }
}

/* Add to rows the cycle that ends at `high`, and to `sums` what it is made of when `at_edge`. */
static void add_claimed(mixer *m, uint32_t high, bool at_edge) {
    uint32_t start = m->cycle.start[high];
    if (start == TC_NONE)
        tz_bits_toggle(&m->rows, high);
    else
        for (uint32_t i = 0; i < m->cycle.length[high]; i++)
            tz_bits_toggle(&m->rows, m->cycle.item.at[start + i]);
    if (!at_edge)
        return;
    start = m->made_of.start[high]; /* there: cycles at the edge come first */
    for (uint32_t i = 0; i < m->made_of.length[high]; i++)
        tz_bits_toggle(&m->sums, m->made_of.item.at[start + i]);
}

/* Reduce rows until no entry is killed or claimed, into m->r, highest first. Reducing past the pivot
 * keeps cycles as short as paths in a forest: stopping at it lets them fill in. */
static bool reduce(mixer *m, bool at_edge) {
    const tz_rank *add = &m->addition->dim[m->p];
    m->r.n = 0;
    for (uint32_t high; (high = tz_bits_highest(&m->rows)) != TZ_EMPTY;) {
        if (add->killer[high] != TC_NONE) {
            tz_columns_add(m->killers, add->killer[high], &m->rows, NULL);
        } else if (m->claim[high] != TC_NONE) {
            add_claimed(m, high, at_edge);
        } else {
            tz_bits_toggle(&m->rows, high);
            if (!TB_VEC_PUSH(m->work->context->memory, &m->r, high))
                return false;
        }
    }
    return true;
}

#define DRAIN(m, bits, vector)                                                                               \
    do {                                                                                                     \
        (vector)->n = 0;                                                                                     \
        for (uint32_t r_; (r_ = tz_bits_lowest(bits)) != TZ_EMPTY;) {                                        \
            tz_bits_toggle((bits), r_);                                                                      \
            if (!TB_VEC_PUSH((m)->work->context->memory, (vector), r_))                                      \
                return false;                                                                                \
        }                                                                                                    \
    } while (0)

/* The class of a cycle at one edge, as the items of the bar opened last there. */
static bool write_class(mixer *m, const tz_columns *killers, const uint32_t *items, size_t n, tz_bits *set, tz_end *end) {
    for (size_t i = 0; i < n; i++)
        if (killers == NULL) {
            if (!tz_end_item(m->work->context->memory, end, items[i]))
                return false;
        } else {
            tz_bits_toggle(set, items[i]);
        }
    return killers == NULL || tz_edge_coordinates(m->work->context->memory, killers, set, end);
}

/* The bar of s and t, whose cycle's births are r in addition order and c in back order. */
static bool write_bar(mixer *m, uint32_t s, uint32_t t) {
    uint32_t base = m->out->first, first = tz_time(m->addition, m->p, s), last = tz_time(m->back, m->p, t);
    if (first > last)
        return !m->gaps || tz_span_bar(m->work->context->memory, &m->out->dim[m->p - 1], m->p - 1, base + last + 1,
                                       TZ_BY_DELETION, base + first - 1, TZ_BY_ADDITION);
    if (!m->bars)
        return true;
    tz_span *span = &m->out->dim[m->p];
    if (!tz_closed_bar(m->work, m->addition, m->back, m->p, s, t, m->out))
        return false;
    bool left = s < m->addition->dim[m->p].at_edge, right = t < m->back->dim[m->p].at_edge;
    return (!left || write_class(m, m->killers, m->r.at, m->r.n, &m->rows, &span->left)) &&
           (!right || write_class(m, m->back_killers, m->c.at, m->c.n, &m->sums, &span->right));
}

/* Keep the cycle in r and c under its pivot s, for t, and write the bar. */
static bool claim_cycle(mixer *m, uint32_t s, uint32_t t) {
    m->claim[s] = t;
    return (m->r.n == 1 || tz_lists_add(&m->cycle, s, m->r.at, m->r.n)) &&
           (m->c.n == 0 || tz_lists_add(&m->made_of, s, m->c.at, m->c.n)) && write_bar(m, s, t);
}

/* Reduce the cycle in rows, claim its pivot for t, and write the bar. */
static bool mix_one(mixer *m, uint32_t t, bool at_edge, thole_status *status) {
    if (!reduce(m, at_edge))
        return false;
    if (m->r.n == 0) {
        char where[TC_WHERE];
        *status = thole_fail(m->work->error, THOLE_ARGUMENT, "a cycle was lost in %s: please report this as a fault of Thole",
                             tc_where(m->addition->block, where));
        return true;
    }
    DRAIN(m, &m->sums, &m->c);
    return claim_cycle(m, m->r.at[0], t);
}

/* One back birth of dimension >= 2 that nothing kills. */
static bool mix_cell(mixer *m, uint32_t t, thole_status *status) {
    draw_cycle(m, t);
    bool at_edge = t < m->back->dim[m->p].at_edge;
    if (at_edge)
        tz_bits_toggle(&m->sums, t);
    return mix_one(m, t, at_edge, status);
}

/* Only an optimisation: whether the forest's cycle of n links, with this pivot, needs no column at all; m->r then
 * holds its births and m->c is empty. */
static bool cycle_is_reduced(mixer *m, size_t n, uint32_t pivot) {
    const tz_rank *add = &m->addition->dim[1];
    m->r.n = m->c.n = 0;
    if (m->claim[pivot] != TC_NONE || !TB_VEC_RESERVE(m->work->context->memory, &m->r, n))
        return false;
    for (size_t i = 0; i < n; i++) {
        uint32_t r = add->rank[m->path[i]];
        if (add->victim[r] != TC_NONE)
            continue;
        if (add->killer[r] != TC_NONE)
            return false;
        m->r.at[m->r.n++] = r;
    }
    return true;
}

/* One link that closes a cycle in the back order. The cycle that the forest gives is already reduced by those
 * before it: its last link in addition order is a pivot of its own, and its part on births of the back order says
 * what it is made of. Only triangles are left to be reckoned with. */
static bool mix_link(mixer *m, uint32_t t, thole_status *status) {
    const tz_rank *add = &m->addition->dim[1], *back = &m->back->dim[1];
    bool at_edge = t < back->at_edge;
    size_t n;
    uint32_t pivot;
    if (!tz_forest_exchange(&m->forest, back->at[t], m->path, &n, &pivot))
        return false;
    if (back->killer[t] != TC_NONE)
        return true; /* a triangle kills it: no bar, but the forest must go on from here */
    if (m->killers == NULL) {
        uint32_t s = add->rank[pivot];
        m->r.n = m->c.n = 0;
        for (size_t i = 0; i < n; i++) {
            uint32_t r = add->rank[m->path[i]], c = back->rank[m->path[i]];
            if (s < add->at_edge && add->victim[r] == TC_NONE && !TB_VEC_PUSH(m->work->context->memory, &m->r, r))
                return false;
            if (at_edge && back->victim[c] == TC_NONE && !TB_VEC_PUSH(m->work->context->memory, &m->c, c))
                return false;
        }
        return write_bar(m, s, t);
    }
    if (!at_edge && cycle_is_reduced(m, n, add->rank[pivot]))
        return claim_cycle(m, add->rank[pivot], t);
    for (size_t i = 0; i < n; i++) {
        uint32_t r = add->rank[m->path[i]], c = back->rank[m->path[i]];
        if (add->victim[r] == TC_NONE)
            tz_bits_toggle(&m->rows, r);
        if (at_edge && back->victim[c] == TC_NONE)
            tz_bits_toggle(&m->sums, c);
    }
    return mix_one(m, t, at_edge, status);
}

static bool mixer_make(mixer *m) {
    tb_arena *arena = m->work->arena;
    const tc_block *block = m->addition->block;
    uint32_t n = block->cells[m->p].n;
    if (m->p == 1) {
        m->path = TB_TAKE(arena, uint32_t, (size_t)block->cells[0].n + 1);
        if (m->path == NULL || !tz_forest_make(m->work, m->addition, m->back, &m->forest))
            return false;
        if (m->killers == NULL)
            return true;
    }
    m->claim = TB_FILL(arena, uint32_t, n, 0xFF);
    return m->claim != NULL && tz_bits_make(arena, n, &m->rows) && tz_bits_make(arena, n, &m->sums) &&
           tz_lists_make(m->work, n, &m->cycle) && tz_lists_make(m->work, n, &m->made_of) &&
           (m->p == 1 ||
            (tz_bits_make(arena, n, &m->chain) && tz_bits_make(arena, block->cells[m->p - 1].n, &m->boundary)));
}

thole_status tz_mixed(tz_work *work, const tz_order *addition, const tz_order *back, int p, const tz_columns *killers,
                      const tz_columns *cycles, const tz_columns *back_killers, uint32_t wanted, tz_value *out) {
    mixer m = {.work = work, .addition = addition, .back = back, .p = p, .killers = killers, .cycles = cycles,
               .back_killers = back_killers, .out = out};
    m.bars = p < out->dims && (wanted >> p & 1) != 0;
    m.gaps = (wanted >> (p - 1) & 1) != 0;
    if (!m.bars && !m.gaps)
        return THOLE_OK;
    thole_status status = THOLE_OK;
    const tz_rank *births = &back->dim[p];
    uint32_t n = addition->block->cells[p].n;
    bool fine = mixer_make(&m);
    for (uint32_t t = 0; fine && status == THOLE_OK && t < n; t++) {
        if (births->victim[t] != TC_NONE || (p > 1 && births->killer[t] != TC_NONE))
            continue;
        if ((t & 63) == 0 && tb_cancelled(work->context))
            status = thole_fail(work->error, THOLE_CANCELLED, "stopped in the zigzag");
        else
            fine = p == 1 ? mix_link(&m, t, &status) : mix_cell(&m, t, &status);
    }
    tz_lists_clear(&m.cycle);
    tz_lists_clear(&m.made_of);
    tz_forest_clear(&m.forest);
    TB_VEC_CLEAR(work->context->memory, &m.r);
    TB_VEC_CLEAR(work->context->memory, &m.c);
    return status != THOLE_OK ? status : fine ? THOLE_OK : tz_refused(work, addition->block);
}

/* ---- the top dimension, by coboundaries -------------------------------------- */

/* In the coned filtration the coboundary of a top cell is its own cone, that of the cone of a cell below
 * are the cones of its cofaces. The latter are already reduced (the back order's cocycles), so only top
 * cells whose own cone is taken need a column. */
typedef struct top {
    tz_work *work;
    const tz_order *addition, *back;
    const tz_cofaces *cofaces;
    const tz_lists *cocycles;
    int d;
    uint32_t *claim; /* back rank of a top cell -> the addition rank that its cone kills */
    tz_lists column; /* addition rank -> back ranks, when more than the pivot */
    tz_bits work_column;
    TB_VEC(uint32_t) scratch;
    tz_value *out;
} top;

static void add_cones(top *x, uint32_t low) {
    const tz_rank *rank = &x->back->dim[x->d - 1];
    uint32_t cell = rank->at[low];
    for (uint32_t i = x->cofaces->begin[cell]; i < x->cofaces->begin[cell + 1]; i++)
        tz_bits_toggle(&x->work_column, x->back->dim[x->d].rank[x->cofaces->cell[i]]);
}

static bool top_one(top *x, uint32_t s) {
    const tz_rank *add = &x->addition->dim[x->d], *back = &x->back->dim[x->d];
    uint32_t t = back->rank[add->at[s]];
    if (back->victim[t] == TC_NONE && x->claim[t] == TC_NONE) { /* its own cone is free */
        x->claim[t] = s;
        return true; /* lasts from its first to its last position: not of the dimension below */
    }
    tz_bits_toggle(&x->work_column, t);
    while ((t = tz_bits_lowest(&x->work_column)) != TZ_EMPTY) {
        uint32_t low = back->victim[t];
        if (low != TC_NONE) {
            uint32_t start = x->cocycles->start[low];
            if (start == TC_NONE)
                add_cones(x, low);
            else
                for (uint32_t i = 0; i < x->cocycles->length[low]; i++)
                    add_cones(x, x->cocycles->item.at[start + i]);
        } else if (x->claim[t] != TC_NONE) {
            uint32_t other = x->claim[t], start = x->column.start[other];
            if (start == TC_NONE)
                tz_bits_toggle(&x->work_column, t);
            else
                for (uint32_t i = 0; i < x->column.length[other]; i++)
                    tz_bits_toggle(&x->work_column, x->column.item.at[start + i]);
        } else {
            break;
        }
    }
    if (t == TZ_EMPTY)
        return false;
    x->claim[t] = s;
    DRAIN(x, &x->work_column, &x->scratch);
    if (x->scratch.n > 1 && !tz_lists_add(&x->column, s, x->scratch.at, x->scratch.n))
        return false;
    uint32_t first = tz_time(x->addition, x->d, s), last = tz_time(x->back, x->d, t);
    return first <= last || tz_span_bar(x->work->context->memory, &x->out->dim[x->d - 1], x->d - 1,
                                        x->out->first + last + 1, TZ_BY_DELETION, x->out->first + first - 1, TZ_BY_ADDITION);
}

/* Only an optimisation: an open-open bar needs a cell that comes after another has gone. In a block from one window
 * to the next (or from one intersection to the next) there is none. */
static bool none_after_another(const tc_cells *cells) {
    uint32_t latest_first = 0, earliest_last = TC_NONE;
    for (uint32_t i = 0; i < cells->n; i++) {
        latest_first = cells->first[i] > latest_first ? cells->first[i] : latest_first;
        earliest_last = cells->last[i] < earliest_last ? cells->last[i] : earliest_last;
    }
    return latest_first <= earliest_last;
}

thole_status tz_mixed_top(tz_work *work, const tz_order *addition, const tz_order *back, const tz_cofaces *cofaces,
                          const tz_lists *cocycles, tz_value *out) {
    const tc_block *block = addition->block;
    top x = {.work = work, .addition = addition, .back = back, .cofaces = cofaces, .cocycles = cocycles, .d = block->top, .out = out};
    uint32_t n = block->cells[x.d].n;
    if (none_after_another(&block->cells[x.d]))
        return THOLE_OK;
    x.claim = TB_FILL(work->arena, uint32_t, n, 0xFF);
    bool fine = x.claim != NULL && tz_lists_make(work, n, &x.column) && tz_bits_make(work->arena, n, &x.work_column);
    thole_status status = THOLE_OK;
    for (uint32_t s = n; fine && s-- > 0;) {
        if (addition->dim[x.d].victim[s] != TC_NONE)
            continue;
        if ((s & 255) == 0 && tb_cancelled(work->context)) {
            status = thole_fail(work->error, THOLE_CANCELLED, "stopped in the zigzag");
            break;
        }
        fine = top_one(&x, s);
    }
    tz_lists_clear(&x.column);
    TB_VEC_CLEAR(work->context->memory, &x.scratch);
    return status != THOLE_OK ? status : fine ? THOLE_OK : tz_refused(work, block);
}
