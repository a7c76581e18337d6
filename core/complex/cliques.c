/* Cells of dimension 3 and more: each from two cells that share all nodes but the last,
 * with the remaining faces looked up by their nodes. */
#include "complex/cells.h"

/* A table from node lists to the first of the cells that have them. */
typedef struct index {
    const tc_cells *cells;
    uint32_t nodes; /* a cell */
    uint32_t *slot; /* cell + 1 */
    size_t slots;
} index_of;

static size_t hash_nodes(const uint32_t *node, uint32_t n, uint32_t skip) {
    uint64_t h = 0x9E3779B97F4A7C15u;
    for (uint32_t i = 0; i < n; i++)
        if (i != skip) {
            h = (h ^ node[i]) * 0xD6E8FEB86659FD93u;
            h ^= h >> 32;
        }
    return (size_t)(h >> 7);
}

/* Whether cell's nodes are node[0..n] without node[skip]. */
static bool has_nodes(const index_of *x, uint32_t cell, const uint32_t *node, uint32_t skip) {
    const uint32_t *mine = &x->cells->node[(size_t)cell * x->nodes];
    for (uint32_t i = 0; i < x->nodes; i++)
        if (mine[i] != node[i + (i >= skip)])
            return false;
    return true;
}

static bool same_simplex(const tc_cells *cells, uint32_t nodes, uint32_t a, uint32_t b) {
    return memcmp(&cells->node[(size_t)a * nodes], &cells->node[(size_t)b * nodes], nodes * sizeof(uint32_t)) == 0;
}

static bool index_make(tb_arena *arena, const tc_cells *cells, uint32_t nodes, index_of *out) {
    *out = (index_of){.cells = cells, .nodes = nodes, .slots = 16};
    while (out->slots < 2 * (size_t)cells->n)
        out->slots *= 2;
    out->slot = TB_FILL(arena, uint32_t, out->slots, 0);
    if (out->slot == NULL)
        return false;
    for (uint32_t i = 0; i < cells->n; i++) {
        if (i > 0 && same_simplex(cells, nodes, i - 1, i))
            continue;
        size_t at = hash_nodes(&cells->node[(size_t)i * nodes], nodes, TC_NONE) & (out->slots - 1);
        while (out->slot[at] != 0)
            at = (at + 1) & (out->slots - 1);
        out->slot[at] = i + 1;
    }
    return true;
}

static uint32_t index_find(const index_of *x, const uint32_t *node, uint32_t skip) {
    size_t at = hash_nodes(node, x->nodes + 1, skip) & (x->slots - 1);
    for (; x->slot[at] != 0; at = (at + 1) & (x->slots - 1))
        if (has_nodes(x, x->slot[at] - 1, node, skip))
            return x->slot[at] - 1;
    return TC_NONE;
}

typedef struct growth {
    tc_work *work;
    const tc_cells *from;
    uint32_t d, nodes; /* nodes of a face = d */
    index_of index;
    TB_VEC(uint32_t) first;
    TB_VEC(uint32_t) last;
    TB_VEC(uint32_t) face; /* d + 1 a cell: face i lacks node i */
    TB_VEC(uint32_t) node; /* d + 1 a cell */
} growth;

/* Last cell of the same simplex, plus one. */
static uint32_t simplex_end(const growth *g, uint32_t cell) {
    uint32_t end = cell + 1;
    while (end < g->from->n && same_simplex(g->from, g->nodes, cell, end))
        end++;
    return end;
}

static bool emit(growth *g, uint32_t lo, uint32_t hi, const uint32_t *face, const uint32_t *node) {
    thole_memory *memory = g->work->context->memory;
    if (!TB_VEC_PUSH(memory, &g->first, lo) || !TB_VEC_PUSH(memory, &g->last, hi))
        return false;
    for (uint32_t i = 0; i <= g->d; i++)
        if (!TB_VEC_PUSH(memory, &g->face, face[i]) || !TB_VEC_PUSH(memory, &g->node, node[i]))
            return false;
    return true;
}

/* The common parts of the stays of the d + 1 faces of the simplex node[0..d]. */
static bool meet(growth *g, const uint32_t *node) {
    uint32_t at[TC_TOP + 1], end[TC_TOP + 1];
    for (uint32_t i = 0; i <= g->d; i++) {
        at[i] = index_find(&g->index, node, i);
        if (at[i] == TC_NONE)
            return true;
        end[i] = simplex_end(g, at[i]);
    }
    for (;;) {
        uint32_t lo = 0, hi = TC_NONE, ends_first = 0;
        for (uint32_t i = 0; i <= g->d; i++) {
            if (at[i] == end[i])
                return true;
            if (g->from->first[at[i]] > lo)
                lo = g->from->first[at[i]];
            if (g->from->last[at[i]] < hi) {
                hi = g->from->last[at[i]];
                ends_first = i;
            }
        }
        if (lo <= hi && !emit(g, lo, hi, at, node))
            return false;
        at[ends_first]++;
    }
}

/* All simplices whose first d nodes but one are those of `cell`: its mates in the run [cell, run_end). */
static bool extend(growth *g, uint32_t cell, uint32_t run_end) {
    uint32_t node[TC_TOP + 1];
    memcpy(node, &g->from->node[(size_t)cell * g->nodes], g->nodes * sizeof *node);
    for (uint32_t b = simplex_end(g, cell); b < run_end; b = simplex_end(g, b)) {
        node[g->d] = g->from->node[(size_t)b * g->nodes + g->nodes - 1];
        if (!meet(g, node))
            return false;
    }
    return true;
}

/* The vectors become the cells' arrays as they are: they can be most of the memory there is. */
static bool keep(growth *g, tc_cells *out) {
    tb_arena *arena = g->work->arena;
    *out = (tc_cells){(uint32_t)g->first.n, g->first.at, g->last.at, g->face.at, g->node.at};
    return TB_ADOPT(arena, &g->first) && TB_ADOPT(arena, &g->last) && TB_ADOPT(arena, &g->face) && TB_ADOPT(arena, &g->node);
}

thole_status tc_cliques(tc_work *work, tc_block *block, int d) {
    growth g = {.work = work, .from = &block->cells[d - 1], .d = (uint32_t)d, .nodes = (uint32_t)d};
    thole_memory *memory = work->context->memory;
    thole_status status = THOLE_OK;
    bool fine = index_make(work->arena, g.from, g.nodes, &g.index);
    size_t shared = (g.nodes - 1) * sizeof(uint32_t);
    uint32_t n = g.from->n;
    for (uint32_t run = 0; fine && status == THOLE_OK && run < n;) {
        uint32_t end = run;
        while (end < n && memcmp(&g.from->node[(size_t)run * g.nodes], &g.from->node[(size_t)end * g.nodes], shared) == 0)
            end++;
        for (uint32_t a = run; fine && a < end; a = simplex_end(&g, a))
            fine = extend(&g, a, end) && g.first.n < UINT32_MAX / 16;
        run = end;
        if (tb_cancelled(work->context))
            status = thole_fail(work->error, THOLE_CANCELLED, "stopped while finding cliques");
    }
    if (status == THOLE_OK && !(fine && keep(&g, &block->cells[d])))
        status = tc_cells_refused(work, block, d, g.first.n);
    TB_VEC_CLEAR(memory, &g.first);
    TB_VEC_CLEAR(memory, &g.last);
    TB_VEC_CLEAR(memory, &g.face);
    TB_VEC_CLEAR(memory, &g.node);
    return status;
}
