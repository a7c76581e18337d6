/* Two stretches glued at their shared position.
 *
 * The left stretch's bars that reach the boundary, in the order of their births, and the right one's
 * that leave it, in the order of their deaths, are two bases of the same homology space. Writing the
 * first in the second and reducing from low to high births, with the pivot at the highest death,
 * matches each left bar with the right bar that continues it (the right filtration of Carlsson and
 * de Silva, "Zigzag persistence", Found. Comput. Math. 10, 2010). Births from low to high: by
 * deletion, the latest first; those that come from before the stretch; by addition, the latest last.
 * Deaths: by addition, the nearest first; those that go beyond the stretch; by deletion, the nearest last. */
#include <stdlib.h>

#include "base/arena.h"
#include "zigzag/bits.h"
#include "zigzag/value.h"

/* Columns over Z/2, some not yet there. */
typedef struct matrix {
    size_t *start; /* column -> place in item; length beside it */
    uint32_t *length;
    TB_VEC(uint32_t) item;
} matrix;

typedef struct seam {
    thole_context *context;
    thole_memory *memory;
    tb_arena arena;
    const tz_span *a, *b;
    uint32_t n;        /* dimension of the shared space */
    uint32_t *place;   /* coordinate -> its number among those that occur, below n, or TC_NONE */
    size_t bound;      /* coordinates lie below this */
    uint32_t *a_order; /* left bars, low births first */
    uint32_t *b_order; /* right bars, low deaths first */
    matrix b_columns;  /* by place in b_order: columns with distinct highest coordinates */
    matrix b_made_of;  /* the places of reaching right bars that make it up */
    uint32_t *b_owner; /* coordinate -> place in b_order whose column has it highest */
    matrix m_columns;  /* by place in a_order: reduced, as places in b_order */
    matrix m_made_of;  /* the places in a_order of reaching left bars that make it up */
    uint32_t *m_owner; /* place in b_order -> place in a_order that ends there */
    tz_bits work, with, image;
} seam;

static bool matrix_make(seam *s, uint32_t n, matrix *m) {
    m->start = TB_TAKE(&s->arena, size_t, n);
    m->length = TB_FILL(&s->arena, uint32_t, n, 0);
    return m->start != NULL && m->length != NULL;
}

/* Move a set into column i. */
static bool matrix_store(seam *s, matrix *m, uint32_t i, tz_bits *set) {
    m->start[i] = m->item.n;
    for (uint32_t r; (r = tz_bits_lowest(set)) != TZ_EMPTY;) {
        tz_bits_toggle(set, r);
        if (!TB_VEC_PUSH(s->memory, &m->item, r))
            return false;
    }
    m->length[i] = (uint32_t)(m->item.n - m->start[i]);
    return true;
}

static void matrix_add(const matrix *m, uint32_t i, tz_bits *set) {
    for (uint32_t k = 0; k < m->length[i]; k++)
        tz_bits_toggle(set, m->item.at[m->start[i] + k]);
}

/* Orders as sortable keys: group, then position up or down, then number. */
typedef struct place {
    uint32_t group, key, bar;
} place;

static int by_place(const void *x, const void *y) {
    const place *a = x, *b = y;
    if (a->group != b->group)
        return a->group < b->group ? -1 : 1;
    if (a->key != b->key)
        return a->key < b->key ? -1 : 1;
    return a->bar < b->bar ? -1 : a->bar > b->bar;
}

/* `low` is the way of ending that comes lowest: deletion for births, addition for deaths. */
static uint32_t *order_of(seam *s, const tz_end *end, tz_how low) {
    uint32_t n = (uint32_t)end->bar.n;
    place *places = TB_TAKE(&s->arena, place, n);
    uint32_t *order = TB_TAKE(&s->arena, uint32_t, n);
    if (places == NULL || order == NULL)
        return NULL;
    /* Births: deletion downwards, addition upwards. Deaths: addition upwards, deletion downwards. */
    for (uint32_t i = 0; i < n; i++) {
        const tz_touch *t = &end->bar.at[i];
        uint32_t group = t->how == TZ_REACHES ? 1 : t->how == low ? 0 : 2;
        uint32_t key = t->how == TZ_REACHES ? 0 : t->how == TZ_BY_ADDITION ? t->at : UINT32_MAX - t->at;
        places[i] = (place){group, key, i};
    }
    qsort(places, n, sizeof *places, by_place);
    for (uint32_t i = 0; i < n; i++)
        order[i] = places[i].bar;
    return order;
}

/* Coordinates of an end lie below this. */
static size_t bound_of(const tz_end *end) {
    uint32_t most = 0;
    for (size_t i = 0; i < end->item.n; i++)
        most = end->item.at[i] > most ? end->item.at[i] : most;
    return (size_t)most + 1;
}

/* The distinct coordinates of an end, numbered in their order; `many` gets how many there are. */
static bool number_coordinates(seam *s, const tz_end *end, uint32_t *many) {
    s->bound = bound_of(end);
    s->place = TB_FILL(&s->arena, uint32_t, s->bound, 0xFF);
    if (s->place == NULL)
        return false;
    for (size_t i = 0; i < end->item.n; i++)
        s->place[end->item.at[i]] = 0;
    *many = 0;
    for (size_t i = 0; i < s->bound; i++)
        if (s->place[i] == 0)
            s->place[i] = (*many)++;
    return true;
}

/* Toggle an end's column into `set`, as places among the coordinates; false for a coordinate that is not there. */
static bool add_end_column(seam *s, const tz_end *end, uint32_t bar, tz_bits *set) {
    for (size_t i = end->start.at[bar]; i < end->start.at[bar + 1]; i++) {
        uint32_t item = end->item.at[i];
        if (item >= s->bound || s->place[item] == TC_NONE)
            return false;
        tz_bits_toggle(set, s->place[item]);
    }
    return true;
}

/* What two stretches that do not belong together look like: a fault of ours, never of the data. */
static thole_status mismatch(thole_error *error) {
    return thole_fail(error, THOLE_ARGUMENT, "two stretches do not share their boundary: please report this as a fault of Thole");
}

/* Right bars, low deaths first: columns made to have distinct highest coordinates by adding lower ones. */
static thole_status triangular(seam *s, thole_error *error) {
    for (uint32_t j = 0; j < s->n; j++) {
        uint32_t bar = s->b_order[j];
        if (!add_end_column(s, &s->b->left, bar, &s->work))
            return mismatch(error);
        if (s->b->left.bar.at[bar].how == TZ_REACHES)
            tz_bits_toggle(&s->with, j);
        uint32_t high;
        while ((high = tz_bits_highest(&s->work)) != TZ_EMPTY && s->b_owner[high] != TC_NONE) {
            matrix_add(&s->b_columns, s->b_owner[high], &s->work);
            matrix_add(&s->b_made_of, s->b_owner[high], &s->with);
        }
        if (high == TZ_EMPTY)
            return mismatch(error);
        s->b_owner[high] = j;
        if (!matrix_store(s, &s->b_columns, j, &s->work) || !matrix_store(s, &s->b_made_of, j, &s->with))
            return tb_refused(s->memory, error, "gluing blocks of time");
    }
    return THOLE_OK;
}

/* Left bars, low births first: each written in the right columns and reduced to a pivot of its own. */
static thole_status match(seam *s, thole_error *error) {
    for (uint32_t i = 0; i < s->n; i++) {
        uint32_t bar = s->a_order[i];
        if (!add_end_column(s, &s->a->right, bar, &s->work))
            return mismatch(error);
        const tz_touch *touch = &s->a->right.bar.at[bar];
        if (touch->how == TZ_REACHES && touch->mate != TC_NONE)
            tz_bits_toggle(&s->with, i);
        for (uint32_t high; (high = tz_bits_highest(&s->work)) != TZ_EMPTY;) {
            tz_bits_toggle(&s->image, s->b_owner[high]);
            matrix_add(&s->b_columns, s->b_owner[high], &s->work);
        }
        uint32_t pivot;
        while ((pivot = tz_bits_highest(&s->image)) != TZ_EMPTY && s->m_owner[pivot] != TC_NONE) {
            matrix_add(&s->m_columns, s->m_owner[pivot], &s->image);
            matrix_add(&s->m_made_of, s->m_owner[pivot], &s->with);
        }
        if (pivot == TZ_EMPTY)
            return mismatch(error);
        s->m_owner[pivot] = i;
        if (!matrix_store(s, &s->m_columns, i, &s->image) || !matrix_store(s, &s->m_made_of, i, &s->with))
            return tb_refused(s->memory, error, "gluing blocks of time");
    }
    return THOLE_OK;
}

/* A sum of columns of `end`, as coordinates there, into `out`. `sums` lists places in `order`, whose bars reach that end
 * through `through`. */
static bool sum_columns(seam *s, const tz_end *through, const uint32_t *order, const uint32_t *sums, uint32_t n,
                        const tz_end *end, tz_bits *set, tz_end *out) {
    for (uint32_t k = 0; k < n; k++) {
        uint32_t mate = through->bar.at[order[sums[k]]].mate;
        for (size_t i = end->start.at[mate]; i < end->start.at[mate + 1]; i++)
            tz_bits_toggle(set, end->item.at[i]);
    }
    for (uint32_t r; (r = tz_bits_lowest(set)) != TZ_EMPTY;) {
        tz_bits_toggle(set, r);
        if (!tz_end_item(s->memory, out, r))
            return false;
    }
    return true;
}

/* Column i of m, with the right bars' own makings spelled out, into `with`: places of reaching right bars. */
static void right_makings(seam *s, uint32_t i) {
    for (uint32_t k = 0; k < s->m_columns.length[i]; k++)
        matrix_add(&s->b_made_of, s->m_columns.item.at[s->m_columns.start[i] + k], &s->with);
}

/* The glued bars. */
static bool write_bars(seam *s, int p, tz_span *out) {
    tz_bits left, right;
    if (!tz_bits_make(&s->arena, bound_of(&s->a->left), &left) || !tz_bits_make(&s->arena, bound_of(&s->b->right), &right))
        return false;
    uint32_t *sums = TB_TAKE(&s->arena, uint32_t, s->n);
    if (sums == NULL)
        return false;
    for (uint32_t i = 0; i < s->n; i++) {
        uint32_t end = s->m_columns.item.at[s->m_columns.start[i] + s->m_columns.length[i] - 1];
        const tz_touch *birth = &s->a->right.bar.at[s->a_order[i]], *death = &s->b->left.bar.at[s->b_order[end]];
        bool from_before = birth->how == TZ_REACHES, goes_on = death->how == TZ_REACHES;
        bool on_left = from_before && birth->mate != TC_NONE;
        if (!from_before && !goes_on) {
            if (!tz_span_bar(s->memory, out, p, birth->at, birth->how, death->at, death->how))
                return false;
            continue;
        }
        if (from_before && !on_left && !goes_on) { /* the left end is sealed: born at the very start */
            if (!tz_span_bar(s->memory, out, p, birth->at, TZ_BY_ADDITION, death->at, death->how))
                return false;
            continue;
        }
        uint32_t left_number = (uint32_t)out->left.bar.n, right_number = (uint32_t)out->right.bar.n;
        if (on_left) {
            tz_touch touch = {death->at, goes_on ? right_number : TC_NONE, death->how};
            if (!tz_end_open(s->memory, &out->left, touch) ||
                !sum_columns(s, &s->a->right, s->a_order, s->m_made_of.item.at + s->m_made_of.start[i],
                             s->m_made_of.length[i], &s->a->left, &left, &out->left))
                return false;
        }
        if (goes_on) {
            tz_touch touch = {birth->at, on_left ? left_number : TC_NONE, birth->how};
            uint32_t n = 0;
            right_makings(s, i);
            for (uint32_t r; (r = tz_bits_lowest(&s->with)) != TZ_EMPTY; sums[n++] = r)
                tz_bits_toggle(&s->with, r);
            if (!tz_end_open(s->memory, &out->right, touch) ||
                !sum_columns(s, &s->b->left, s->b_order, sums, n, &s->b->right, &right, &out->right))
                return false;
        }
    }
    return true;
}

/* Bars of one side that do not touch the seam. */
static bool pass_through(thole_memory *memory, const tz_end *from, tz_end *to) {
    for (uint32_t i = 0; i < from->bar.n; i++) {
        if (from->bar.at[i].how == TZ_REACHES)
            continue;
        if (!tz_end_open(memory, to, from->bar.at[i]))
            return false;
        for (size_t k = from->start.at[i]; k < from->start.at[i + 1]; k++)
            if (!tz_end_item(memory, to, from->item.at[k]))
                return false;
    }
    return true;
}

static bool pass_bars(thole_memory *memory, const tz_span *from, tz_span *to) {
    if (!TB_VEC_RESERVE(memory, &to->bars, to->bars.n + from->bars.n))
        return false;
    if (from->bars.n > 0)
        memcpy(to->bars.at + to->bars.n, from->bars.at, from->bars.n * sizeof *from->bars.at);
    to->bars.n += from->bars.n;
    return true;
}

/* Both bases in the same coordinates, the left one matched with the right. */
static thole_status match_bases(seam *s, thole_error *error) {
    s->n = (uint32_t)s->a->right.bar.n;
    if (s->n != s->b->left.bar.n)
        return mismatch(error);
    if (s->n == 0)
        return THOLE_OK;
    s->a_order = order_of(s, &s->a->right, TZ_BY_DELETION);
    s->b_order = order_of(s, &s->b->left, TZ_BY_ADDITION);
    s->b_owner = TB_FILL(&s->arena, uint32_t, s->n, 0xFF);
    s->m_owner = TB_FILL(&s->arena, uint32_t, s->n, 0xFF);
    uint32_t many;
    if (s->a_order == NULL || s->b_order == NULL || s->b_owner == NULL || s->m_owner == NULL ||
        !matrix_make(s, s->n, &s->b_columns) || !matrix_make(s, s->n, &s->b_made_of) ||
        !matrix_make(s, s->n, &s->m_columns) || !matrix_make(s, s->n, &s->m_made_of) ||
        !tz_bits_make(&s->arena, s->n, &s->work) || !tz_bits_make(&s->arena, s->n, &s->with) ||
        !tz_bits_make(&s->arena, s->n, &s->image) || !number_coordinates(s, &s->b->left, &many))
        return tb_refused(s->memory, error, "gluing blocks of time");
    if (many != s->n)
        return mismatch(error);
    thole_status status = triangular(s, error);
    return status == THOLE_OK ? match(s, error) : status;
}

static void seam_clear(seam *s) {
    TB_VEC_CLEAR(s->memory, &s->b_columns.item);
    TB_VEC_CLEAR(s->memory, &s->b_made_of.item);
    TB_VEC_CLEAR(s->memory, &s->m_columns.item);
    TB_VEC_CLEAR(s->memory, &s->m_made_of.item);
    tb_arena_clear(&s->arena);
}

static seam seam_of(thole_context *context, const tz_value *left, const tz_value *right, int p) {
    seam s = {.context = context, .memory = context->memory, .a = &left->dim[p], .b = &right->dim[p]};
    s.arena.memory = context->memory;
    return s;
}

static thole_status glue_dimension(seam *s, int p, tz_span *out, thole_error *error) {
    bool fine = pass_bars(s->memory, s->a, out) && pass_bars(s->memory, s->b, out) &&
                pass_through(s->memory, &s->a->left, &out->left) && pass_through(s->memory, &s->b->right, &out->right);
    thole_status status = fine ? match_bases(s, error) : THOLE_OK;
    if (status == THOLE_OK && !(fine && (s->n == 0 || write_bars(s, p, out))))
        status = tb_refused(s->memory, error, "gluing blocks of time");
    return status;
}

/* Class i of the matched basis, as coordinates, ascending. */
static bool write_class(seam *s, uint32_t i, const uint32_t *coordinate, tz_classes *out) {
    for (uint32_t k = 0; k < s->m_columns.length[i]; k++)
        matrix_add(&s->b_columns, s->m_columns.item.at[s->m_columns.start[i] + k], &s->work);
    uint32_t end = s->m_columns.item.at[s->m_columns.start[i] + s->m_columns.length[i] - 1];
    tz_class class = {s->a->right.bar.at[s->a_order[i]], s->b->left.bar.at[s->b_order[end]], out->item.n, 0};
    for (uint32_t r; (r = tz_bits_lowest(&s->work)) != TZ_EMPTY; class.length++) {
        tz_bits_toggle(&s->work, r);
        if (!TB_VEC_PUSH(s->memory, &out->item, coordinate[r]))
            return false;
    }
    return TB_VEC_PUSH(s->memory, &out->list, class);
}

thole_status tz_match(thole_context *context, const tz_value *left, const tz_value *right, int p, tz_classes *out,
                      thole_error *error) {
    *out = (tz_classes){.memory = context->memory};
    if (left->last != right->first || p >= left->dims || p >= right->dims)
        return mismatch(error);
    seam s = seam_of(context, left, right, p);
    thole_status status = match_bases(&s, error);
    uint32_t *coordinate = status == THOLE_OK ? TB_TAKE(&s.arena, uint32_t, s.n) : NULL;
    bool fine = coordinate != NULL;
    for (size_t i = 0; fine && s.n > 0 && i < s.bound; i++)
        if (s.place[i] != TC_NONE)
            coordinate[s.place[i]] = (uint32_t)i;
    for (uint32_t i = 0; fine && i < s.n; i++)
        fine = write_class(&s, i, coordinate, out);
    if (status == THOLE_OK && !fine)
        status = tb_refused(context->memory, error, "the bars of a position");
    seam_clear(&s);
    return status;
}

void tz_classes_clear(tz_classes *classes) {
    if (classes->memory == NULL)
        return;
    TB_VEC_CLEAR(classes->memory, &classes->list);
    TB_VEC_CLEAR(classes->memory, &classes->item);
}

thole_status tz_glue(thole_context *context, const tz_value *left, const tz_value *right, tz_value *out, thole_error *error) {
    if (left->last != right->first || left->dims != right->dims)
        return mismatch(error);
    *out = (tz_value){.memory = context->memory, .first = left->first, .last = right->last, .dims = left->dims};
    for (int d = 0; d <= TC_TOP; d++)
        out->cells[d] = left->cells[d] + right->cells[d];
    thole_status status = THOLE_OK;
    for (int p = 0; status == THOLE_OK && p < left->dims; p++) {
        seam s = seam_of(context, left, right, p);
        status = glue_dimension(&s, p, &out->dim[p], error);
        seam_clear(&s);
    }
    if (status != THOLE_OK)
        tz_value_clear(out);
    return status;
}
