#include "zigzag/forest.h"

static uint32_t root_of(uint32_t *parent, uint32_t x) {
    while (parent[x] != x) {
        parent[x] = parent[parent[x]];
        x = parent[x];
    }
    return x;
}

/* Adjacency of the contracted forest: links `cell` in lists by contracted node. */
typedef struct hedge {
    uint32_t *begin, *cell;
} hedge;

static bool lay_out(tz_work *work, const tz_forest *f, const uint32_t *links, uint32_t n, uint32_t nodes, hedge *out) {
    const uint32_t *face = f->block->cells[1].face;
    out->begin = TB_FILL(work->arena, uint32_t, (size_t)nodes + 2, 0);
    out->cell = TB_TAKE(work->arena, uint32_t, 2 * (size_t)n);
    if (out->begin == NULL || out->cell == NULL)
        return false;
    for (uint32_t i = 0; i < n; i++)
        for (int side = 0; side < 2; side++)
            out->begin[f->super[face[2 * (size_t)links[i] + (size_t)side]] + 2]++;
    for (uint32_t i = 0; i < nodes; i++) /* begin[i + 1] is where list i is filled from, and ends up as its end */
        out->begin[i + 1] += out->begin[i];
    for (uint32_t i = 0; i < n; i++)
        for (int side = 0; side < 2; side++)
            out->cell[out->begin[f->super[face[2 * (size_t)links[i] + (size_t)side]] + 1]++] = links[i];
    return true;
}

/* Root every tree by a search from each node not yet reached. */
static bool root_trees(tz_work *work, tz_forest *f, const hedge *h, uint32_t nodes) {
    const uint32_t *face = f->block->cells[1].face;
    uint32_t *queue = TB_TAKE(work->arena, uint32_t, nodes);
    if (queue == NULL)
        return false;
    for (uint32_t root = 0; root < nodes; root++) {
        if (f->super[root] != root || f->parent[root] != TC_NONE)
            continue;
        uint32_t head = 0, tail = 0;
        f->parent[root] = root;
        queue[tail++] = root;
        while (head < tail) {
            uint32_t x = queue[head++];
            for (uint32_t i = h->begin[x]; i < h->begin[x + 1]; i++) {
                const uint32_t *ends = &face[2 * (size_t)h->cell[i]];
                uint32_t a = f->super[ends[0]], y = a == x ? f->super[ends[1]] : a;
                if (f->parent[y] != TC_NONE)
                    continue;
                f->parent[y] = x;
                f->link[y] = h->cell[i];
                queue[tail++] = y;
            }
        }
    }
    return true;
}

bool tz_forest_make(tz_work *work, const tz_order *addition, const tz_order *back, tz_forest *out) {
    const tc_block *block = addition->block;
    const tc_cells *links = &block->cells[1];
    uint32_t nodes = block->cells[0].n, n = 0;
    *out = (tz_forest){.block = block, .rank = addition->dim[1].rank, .memory = work->context->memory};
    out->super = TB_TAKE(work->arena, uint32_t, nodes);
    out->parent = TB_FILL(work->arena, uint32_t, nodes, 0xFF);
    out->link = TB_TAKE(work->arena, uint32_t, nodes);
    out->stamp = TB_FILL(work->arena, uint32_t, nodes, 0);
    uint32_t *kept = TB_TAKE(work->arena, uint32_t, nodes); /* a forest: fewer links than nodes */
    if (out->super == NULL || out->parent == NULL || out->link == NULL || out->stamp == NULL || kept == NULL)
        return false;
    for (uint32_t i = 0; i < nodes; i++)
        out->super[i] = i;
    for (uint32_t r = 0; r < links->n; r++) {
        if (back->dim[1].victim[r] == TC_NONE)
            continue;
        uint32_t cell = back->dim[1].at[r];
        if (addition->dim[1].victim[out->rank[cell]] == TC_NONE) {
            kept[n++] = cell;
            continue;
        }
        const uint32_t *face = &links->face[2 * (size_t)cell];
        out->super[root_of(out->super, face[0])] = root_of(out->super, face[1]);
    }
    for (uint32_t i = 0; i < nodes; i++)
        out->super[i] = root_of(out->super, i);
    hedge h;
    return lay_out(work, out, kept, n, nodes, &h) && root_trees(work, out, &h, nodes);
}

void tz_forest_clear(tz_forest *forest) {
    if (forest->memory == NULL)
        return;
    TB_VEC_CLEAR(forest->memory, &forest->side[0]);
    TB_VEC_CLEAR(forest->memory, &forest->side[1]);
}

/* Climb from both ends by turns until one meets what the other has seen. side[k] then holds the nodes whose
 * links to their parents lie between end k and the meeting point. */
static bool climb(tz_forest *f, uint32_t a, uint32_t b) {
    uint32_t at[2] = {a, b}, search = ++f->searches;
    bool top[2] = {false, false};
    f->side[0].n = f->side[1].n = 0;
    if (a == b)
        return true;
    f->stamp[a] = f->stamp[b] = search;
    for (int k = 0;; k ^= top[k ^ 1] ? 0 : 1) {
        uint32_t x = at[k], up = f->parent[x];
        if (up == x) {
            top[k] = true;
            if (top[k ^ 1])
                return false; /* two trees: cannot happen for a link that closes a cycle */
            continue;
        }
        if (!TB_VEC_PUSH(f->memory, &f->side[k], x))
            return false;
        at[k] = up;
        if (f->stamp[up] == search) { /* where the other end's climb passed, or began */
            uint32_t other = k == 0 ? b : a;
            size_t n = 0;
            for (; other != up; other = f->parent[other])
                n++;
            f->side[k ^ 1].n = n;
            return true;
        }
        f->stamp[up] = search;
    }
}

/* Hang the tree below the cut from `end` instead: the parents of side[0 .. last] are turned round. */
static void turn_round(tz_forest *f, const uint32_t *side, size_t last, uint32_t parent, uint32_t link) {
    for (size_t i = 0; i <= last; i++) {
        uint32_t x = side[i], old_link = f->link[x];
        f->parent[x] = parent;
        f->link[x] = link;
        parent = x;
        link = old_link;
    }
}

bool tz_forest_exchange(tz_forest *f, uint32_t link_cell, uint32_t *cycle, size_t *n, uint32_t *out) {
    const uint32_t *face = &f->block->cells[1].face[2 * (size_t)link_cell];
    uint32_t a = f->super[face[0]], b = f->super[face[1]];
    if (!climb(f, a, b))
        return false;
    uint32_t last = link_cell;
    int cut_side = -1;
    size_t cut = 0, count = 0;
    cycle[count++] = link_cell;
    for (int k = 0; k < 2; k++)
        for (size_t i = 0; i < f->side[k].n; i++) {
            uint32_t cell = f->link[f->side[k].at[i]];
            cycle[count++] = cell;
            if (f->rank[cell] > f->rank[last]) {
                last = cell;
                cut_side = k;
                cut = i;
            }
        }
    if (cut_side >= 0)
        turn_round(f, f->side[cut_side].at, cut, cut_side == 0 ? b : a, link_cell);
    *n = count;
    *out = last;
    return true;
}
