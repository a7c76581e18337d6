/* Triangles of a block: cliques of three links with the common part of their stays.
 *
 * For each pair of neighbours u < v the common higher neighbours are found from the
 * shorter of two lists, so that the cost is bounded by the sum over links of the smaller
 * degree (the arboricity bound of Chiba and Nishizeki, SIAM J. Comput. 14, 1985), hubs included. */
#include "complex/cells.h"

/* Distinct pairs: pair i joins `low` to node[i], its stays are cells start[i] .. start[i + 1] - 1. */
typedef struct pairs {
    uint32_t n;
    uint32_t *high;  /* n: slot of the higher node */
    uint32_t *start; /* n + 1: link cells */
    uint32_t *begin; /* slots + 1: pairs whose lower node is a slot, by higher slot */
    uint32_t slots;  /* distinct nodes that have links, in the order of their numbers */
} pairs;

/* Number the nodes 0 .. slots-1 in their order and list the pairs. node_mark is used and restored. */
static bool list_pairs(tc_work *work, const tc_cells *nodes, const tc_cells *links, pairs *out) {
    out->high = TB_TAKE(work->arena, uint32_t, links->n);
    out->start = TB_TAKE(work->arena, uint32_t, (size_t)links->n + 1);
    out->begin = TB_FILL(work->arena, uint32_t, (size_t)nodes->n + 2, 0);
    if (out->high == NULL || out->start == NULL || out->begin == NULL)
        return false;
    out->slots = out->n = 0;
    for (uint32_t i = 0; i < nodes->n; i++) /* the cells of one node are neighbours */
        if (work->node_mark[nodes->node[i]] == TC_NONE)
            work->node_mark[nodes->node[i]] = out->slots++;
    for (uint32_t i = 0; i < links->n; i++) {
        const uint32_t *ends = &links->node[2 * (size_t)i];
        if (i > 0 && ends[0] == ends[-2] && ends[1] == ends[-1])
            continue;
        out->high[out->n] = work->node_mark[ends[1]];
        out->start[out->n++] = i;
        out->begin[work->node_mark[ends[0]] + 1]++;
    }
    out->start[out->n] = links->n;
    for (uint32_t i = 0; i < out->slots; i++)
        out->begin[i + 1] += out->begin[i];
    for (uint32_t i = 0; i < nodes->n; i++)
        work->node_mark[nodes->node[i]] = TC_NONE;
    return true;
}

typedef struct search {
    tc_work *work;
    const tc_block *block;
    const tc_cells *links;
    pairs pairs;
    TB_VEC(uint32_t) first;
    TB_VEC(uint32_t) last;
    TB_VEC(uint32_t) face; /* three a triangle */
    bool count_only;       /* a look ahead: nothing is kept */
    uint64_t counted;
} search;

static bool emit(search *s, uint32_t lo, uint32_t hi, uint32_t i, uint32_t j, uint32_t k) {
    if (s->count_only) {
        s->counted++;
        return true;
    }
    thole_memory *memory = s->work->context->memory;
    size_t n = s->first.n;
    if (!TB_VEC_RESERVE(memory, &s->first, n + 1) || !TB_VEC_RESERVE(memory, &s->last, n + 1) ||
        !TB_VEC_RESERVE(memory, &s->face, 3 * (n + 1)))
        return false;
    s->first.at[n] = lo;
    s->last.at[n] = hi;
    s->face.at[3 * n] = i;
    s->face.at[3 * n + 1] = j;
    s->face.at[3 * n + 2] = k;
    s->first.n = s->last.n = n + 1;
    s->face.n = 3 * (n + 1);
    return true;
}

/* The common part of the stays of three pairs: all three lists ascend and do not overlap themselves. */
static bool meet(search *s, uint32_t p, uint32_t q, uint32_t r) {
    const uint32_t *first = s->links->first, *last = s->links->last, *start = s->pairs.start;
    uint32_t i = start[p], j = start[q], k = start[r];
    while (i < start[p + 1] && j < start[q + 1] && k < start[r + 1]) {
        uint32_t lo = first[i] > first[j] ? first[i] : first[j], hi = last[i] < last[j] ? last[i] : last[j];
        lo = first[k] > lo ? first[k] : lo;
        hi = last[k] < hi ? last[k] : hi;
        if (lo <= hi && !emit(s, lo, hi, i, j, k))
            return false;
        if (last[i] == hi)
            i++;
        else if (last[j] == hi)
            j++;
        else if (last[k] == hi)
            k++;
        else if (last[i] <= last[j] && last[i] <= last[k]) /* hi < lo: move the one that ends first */
            i++;
        else if (last[j] <= last[k])
            j++;
        else
            k++;
    }
    return true;
}

/* The pair (low slot's list from..to) whose higher slot is `high`, or TC_NONE. */
static uint32_t find_pair(const pairs *g, uint32_t from, uint32_t to, uint32_t high) {
    uint32_t end = to;
    while (from < to) {
        uint32_t middle = from + (to - from) / 2;
        if (g->high[middle] < high)
            from = middle + 1;
        else
            to = middle;
    }
    return from < end && g->high[from] == high ? from : TC_NONE;
}

/* The triangles over pair p of slot u; mark[] maps the higher slots of u to their pairs + 1. */
static bool triangles_over(search *s, uint32_t p, uint32_t to, const uint32_t *mark) {
    const pairs *g = &s->pairs;
    uint32_t v = g->high[p], vfrom = g->begin[v], vto = g->begin[v + 1];
    bool fine = true;
    if (vto - vfrom <= to - p) {
        for (uint32_t r = vfrom; fine && r < vto; r++)
            fine = mark[g->high[r]] == 0 || meet(s, p, mark[g->high[r]] - 1, r);
    } else {
        for (uint32_t q = p + 1; fine && q < to; q++) {
            uint32_t r = find_pair(g, vfrom, vto, g->high[q]);
            fine = r == TC_NONE || meet(s, p, q, r);
        }
    }
    return fine;
}

static void set_marks(const pairs *g, uint32_t u, uint32_t *mark, bool on) {
    for (uint32_t p = g->begin[u]; p < g->begin[u + 1]; p++)
        mark[g->high[p]] = on ? p + 1 : 0;
}

/* All triangles whose lowest node is slot u. */
static bool triangles_at(search *s, uint32_t u, uint32_t *mark) {
    const pairs *g = &s->pairs;
    uint32_t to = g->begin[u + 1];
    bool fine = true;
    set_marks(g, u, mark, true);
    for (uint32_t p = g->begin[u]; fine && p < to; p++)
        fine = triangles_over(s, p, to, mark);
    set_marks(g, u, mark, false);
    return fine;
}

enum { LOOKS = 2048 };

/* About how many triangles there are, from pairs at even distances: so that a hopeless request is refused before
 * it has filled the memory. */
static uint64_t look_ahead(search *s, uint32_t *mark) {
    const pairs *g = &s->pairs;
    if (g->n < 4 * LOOKS)
        return 0; /* few enough to go and see */
    s->count_only = true;
    s->counted = 0;
    uint32_t u = 0, looked = 0, step = g->n / LOOKS;
    for (uint32_t p = step / 2; p < g->n; p += step, looked++) {
        while (g->begin[u + 1] <= p)
            u++;
        set_marks(g, u, mark, true);
        (void)triangles_over(s, p, g->begin[u + 1], mark); /* counting needs no memory */
        set_marks(g, u, mark, false);
    }
    s->count_only = false;
    return s->counted / looked * g->n;
}

/* The vectors become the cells' arrays; nodes are only needed where cliques are made of triangles. */
static bool keep_found(search *s, tc_cells *out, bool with_nodes) {
    tb_arena *arena = s->work->arena;
    *out = (tc_cells){(uint32_t)s->first.n, s->first.at, s->last.at, s->face.at, NULL};
    if (with_nodes && (out->node = TB_TAKE(arena, uint32_t, 3 * (size_t)out->n)) == NULL)
        return false;
    for (size_t i = 0; with_nodes && i < out->n; i++) {
        const uint32_t *face = &out->face[3 * i], *node = s->links->node;
        out->node[3 * i] = node[2 * (size_t)face[0]];
        out->node[3 * i + 1] = node[2 * (size_t)face[0] + 1];
        out->node[3 * i + 2] = node[2 * (size_t)face[1] + 1];
    }
    return TB_ADOPT(arena, &s->first) && TB_ADOPT(arena, &s->last) && TB_ADOPT(arena, &s->face);
}

thole_status tc_triangles(tc_work *work, tc_block *block) {
    search s = {.work = work, .block = block, .links = &block->cells[1]};
    thole_memory *memory = work->context->memory;
    uint32_t *mark = NULL;
    bool fine = list_pairs(work, &block->cells[0], s.links, &s.pairs);
    fine = fine && (mark = TB_FILL(work->arena, uint32_t, s.pairs.slots, 0)) != NULL;
    thole_status status = fine ? tc_check_estimate(work, block, 2, look_ahead(&s, mark)) : THOLE_OK;
    for (uint32_t u = 0; fine && status == THOLE_OK && u < s.pairs.slots; u++) {
        if ((u & 63) == 0 && tb_cancelled(work->context)) {
            status = thole_fail(work->error, THOLE_CANCELLED, "stopped while finding triangles");
            break;
        }
        fine = triangles_at(&s, u, mark) && s.first.n < UINT32_MAX / 4;
    }
    if (status == THOLE_OK && !(fine = fine && keep_found(&s, &block->cells[2], block->top > 2)))
        status = tc_cells_refused(work, block, 2, s.first.n);
    TB_VEC_CLEAR(memory, &s.first);
    TB_VEC_CLEAR(memory, &s.last);
    TB_VEC_CLEAR(memory, &s.face);
    return status;
}
