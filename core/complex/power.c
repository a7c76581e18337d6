/* The graph that joins nodes at hop distance <= r, at each position of a block.
 *
 * At a position the links there are laid out as adjacency lists and a breadth-first search of depth r
 * runs from each node; the pairs found are merged with those of the position before, so that a
 * pair's stay is the run of positions at which it is found. */
#include <stdlib.h>

#include "complex/cells.h"

typedef struct open_pair {
    uint64_t key; /* u slot << 32 | v slot */
    uint32_t first;
} open_pair;

typedef struct power {
    tc_work *work;
    const tc_links *links;
    uint32_t radius, slots;
    uint32_t *node;             /* slot -> node */
    uint32_t *u, *v;            /* slots of the links' ends */
    uint32_t *begin, *to, *fill; /* adjacency at the position */
    uint32_t *seen, *queue, *depth;
    TB_VEC(uint64_t) now;       /* pairs of the position, ascending */
    TB_VEC(open_pair) open[2];  /* pairs of the position before, ascending; and the next */
    TB_VEC(tc_stay) out;
} power;

static int by_number(const void *a, const void *b) {
    const uint32_t *x = a, *y = b;
    return *x < *y ? -1 : *x > *y;
}

static int by_key(const void *a, const void *b) {
    const uint64_t *x = a, *y = b;
    return *x < *y ? -1 : *x > *y;
}

/* (u, v, first) is the order of cells. */
static int by_cell(const void *a, const void *b) {
    const tc_stay *x = a, *y = b;
    if (x->u != y->u)
        return x->u < y->u ? -1 : 1;
    if (x->v != y->v)
        return x->v < y->v ? -1 : 1;
    return x->first < y->first ? -1 : x->first > y->first;
}

/* Number the nodes in their order. node_mark holds the nodes' cells at this stage, so a sorted list is used. */
static bool number_nodes(power *p) {
    tb_arena *arena = p->work->arena;
    uint32_t n = p->links->n;
    p->node = TB_TAKE(arena, uint32_t, 2 * (size_t)n);
    p->u = TB_TAKE(arena, uint32_t, n);
    p->v = TB_TAKE(arena, uint32_t, n);
    if (p->node == NULL || p->u == NULL || p->v == NULL)
        return false;
    for (uint32_t i = 0; i < n; i++) {
        p->node[2 * i] = p->links->at[i].u;
        p->node[2 * i + 1] = p->links->at[i].v;
    }
    qsort(p->node, 2 * (size_t)n, sizeof *p->node, by_number);
    p->slots = 0;
    for (uint32_t i = 0; i < 2 * n; i++)
        if (p->slots == 0 || p->node[p->slots - 1] != p->node[i])
            p->node[p->slots++] = p->node[i];
    for (uint32_t i = 0; i < n; i++) {
        const uint32_t *u = bsearch(&p->links->at[i].u, p->node, p->slots, sizeof *u, by_number);
        const uint32_t *v = bsearch(&p->links->at[i].v, p->node, p->slots, sizeof *v, by_number);
        p->u[i] = (uint32_t)(u - p->node);
        p->v[i] = (uint32_t)(v - p->node);
    }
    p->begin = TB_TAKE(arena, uint32_t, (size_t)p->slots + 1);
    p->fill = TB_TAKE(arena, uint32_t, (size_t)p->slots + 1);
    p->to = TB_TAKE(arena, uint32_t, 2 * (size_t)n);
    p->seen = TB_FILL(arena, uint32_t, p->slots, 0xFF);
    p->queue = TB_TAKE(arena, uint32_t, p->slots);
    p->depth = TB_TAKE(arena, uint32_t, p->slots);
    return p->begin != NULL && p->fill != NULL && p->to != NULL && p->seen != NULL && p->queue != NULL &&
           p->depth != NULL;
}

static void lay_out(power *p, uint32_t position) {
    memset(p->begin, 0, ((size_t)p->slots + 1) * sizeof *p->begin);
    uint32_t n = p->links->n;
    const tc_stay *at = p->links->at;
    for (uint32_t i = 0; i < n; i++)
        if (at[i].first <= position && position <= at[i].last) {
            p->begin[p->u[i] + 1]++;
            p->begin[p->v[i] + 1]++;
        }
    for (uint32_t i = 0; i < p->slots; i++)
        p->begin[i + 1] += p->begin[i];
    memcpy(p->fill, p->begin, ((size_t)p->slots + 1) * sizeof *p->fill);
    for (uint32_t i = 0; i < n; i++)
        if (at[i].first <= position && position <= at[i].last) {
            p->to[p->fill[p->u[i]]++] = p->v[i];
            p->to[p->fill[p->v[i]]++] = p->u[i];
        }
}

/* Nodes above `source` within the radius, as pairs, ascending. */
static bool search_from(power *p, uint32_t source) {
    size_t from = p->now.n;
    uint32_t head = 0, tail = 0;
    p->queue[tail++] = source;
    p->seen[source] = source;
    p->depth[source] = 0;
    while (head < tail) {
        uint32_t x = p->queue[head++];
        if (p->depth[x] == p->radius)
            break;
        for (uint32_t i = p->begin[x]; i < p->begin[x + 1]; i++) {
            uint32_t y = p->to[i];
            if (p->seen[y] == source)
                continue;
            p->seen[y] = source;
            p->depth[y] = p->depth[x] + 1;
            p->queue[tail++] = y;
            if (y > source && !TB_VEC_PUSH(p->work->context->memory, &p->now, (uint64_t)source << 32 | y))
                return false;
        }
    }
    qsort(p->now.at + from, p->now.n - from, sizeof *p->now.at, by_key);
    return true;
}

static bool close_pair(power *p, const open_pair *pair, uint32_t last) {
    tc_stay stay = {p->node[pair->key >> 32], p->node[(uint32_t)pair->key], pair->first, last};
    return p->out.n < UINT32_MAX / 4 && TB_VEC_PUSH(p->work->context->memory, &p->out, stay);
}

/* Pairs that go on, begin, or ended at the position before. */
static bool merge(power *p, uint32_t position) {
    thole_memory *memory = p->work->context->memory;
    size_t i = 0, j = 0;
    p->open[1].n = 0;
    while (i < p->open[0].n || j < p->now.n) {
        uint64_t old = i < p->open[0].n ? p->open[0].at[i].key : UINT64_MAX;
        uint64_t now = j < p->now.n ? p->now.at[j] : UINT64_MAX;
        if (old < now) {
            if (!close_pair(p, &p->open[0].at[i++], position - 1))
                return false;
            continue;
        }
        open_pair pair = {now, old == now ? p->open[0].at[i].first : position};
        i += old == now;
        j++;
        if (!TB_VEC_PUSH(memory, &p->open[1], pair))
            return false;
    }
    open_pair *at = p->open[0].at; /* swap; the two are of one anonymous type */
    size_t n = p->open[0].n, cap = p->open[0].cap;
    p->open[0].at = p->open[1].at, p->open[0].n = p->open[1].n, p->open[0].cap = p->open[1].cap;
    p->open[1].at = at, p->open[1].n = n, p->open[1].cap = cap;
    return true;
}

static thole_status sweep(power *p, uint32_t length) {
    for (uint32_t t = 0; t < length; t++) {
        lay_out(p, t);
        p->now.n = 0;
        if (t > 0)
            memset(p->seen, 0xFF, (size_t)p->slots * sizeof *p->seen);
        for (uint32_t source = 0; source < p->slots; source++) {
            if ((source & 255) == 0 && tb_cancelled(p->work->context))
                return thole_fail(p->work->error, THOLE_CANCELLED, "stopped while measuring distances");
            if (p->begin[source] != p->begin[source + 1] && !search_from(p, source))
                return THOLE_NO_MEMORY;
        }
        if (!merge(p, t))
            return THOLE_NO_MEMORY;
    }
    for (size_t i = 0; i < p->open[0].n; i++)
        if (!close_pair(p, &p->open[0].at[i], length - 1))
            return THOLE_NO_MEMORY;
    return THOLE_OK;
}

thole_status tc_power_links(tc_work *work, tc_links *links, uint32_t radius, uint32_t length) {
    power p = {.work = work, .links = links, .radius = radius};
    thole_memory *memory = work->context->memory;
    thole_status status = number_nodes(&p) ? sweep(&p, length) : THOLE_NO_MEMORY;
    if (status == THOLE_OK) {
        tc_stay *at = TB_TAKE(work->arena, tc_stay, p.out.n);
        if (at == NULL) {
            status = THOLE_NO_MEMORY;
        } else {
            if (p.out.n > 0) {
                qsort(p.out.at, p.out.n, sizeof *p.out.at, by_cell);
                memcpy(at, p.out.at, p.out.n * sizeof *at);
            }
            links->at = at;
        }
    }
    links->n = p.out.n < UINT32_MAX ? (uint32_t)p.out.n : UINT32_MAX; /* told in the error, on failure */
    TB_VEC_CLEAR(memory, &p.now);
    TB_VEC_CLEAR(memory, &p.open[0]);
    TB_VEC_CLEAR(memory, &p.open[1]);
    TB_VEC_CLEAR(memory, &p.out);
    return status;
}
