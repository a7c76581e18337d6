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
static bool root_trees(tz_work *work, tz_forest *f, const hedge *h, const tz_order *addition, uint32_t nodes) {
    const uint32_t *face = f->block->cells[1].face;
    uint32_t *queue = TB_TAKE(work->arena, uint32_t, nodes);
    if (queue == NULL)
        return false;
    for (uint32_t root = 0; root < nodes; root++) {
        if (f->super[root] != root || f->parent[root] != TC_NONE)
            continue;
        uint32_t head = 0, tail = 0;
        f->parent[root] = root;
        f->depth[root] = 0;
        queue[tail++] = root;
        while (head < tail) {
            uint32_t x = queue[head++];
            for (uint32_t i = h->begin[x]; i < h->begin[x + 1]; i++) {
                const uint32_t *ends = &face[2 * (size_t)h->cell[i]];
                uint32_t a = f->super[ends[0]], y = a == x ? f->super[ends[1]] : a;
                if (f->parent[y] != TC_NONE)
                    continue;
                f->parent[y] = x;
                f->parent_link[y] = addition->dim[1].rank[h->cell[i]];
                f->depth[y] = f->depth[x] + 1;
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
    out->block = block;
    out->super = TB_TAKE(work->arena, uint32_t, nodes);
    out->parent = TB_FILL(work->arena, uint32_t, nodes, 0xFF);
    out->parent_link = TB_TAKE(work->arena, uint32_t, nodes);
    out->depth = TB_TAKE(work->arena, uint32_t, nodes);
    uint32_t *kept = TB_TAKE(work->arena, uint32_t, nodes); /* a forest: fewer links than nodes */
    if (out->super == NULL || out->parent == NULL || out->parent_link == NULL || out->depth == NULL || kept == NULL)
        return false;
    for (uint32_t i = 0; i < nodes; i++)
        out->super[i] = i;
    for (uint32_t r = 0; r < links->n; r++) {
        if (back->dim[1].victim[r] == TC_NONE)
            continue;
        uint32_t cell = back->dim[1].at[r];
        if (addition->dim[1].victim[addition->dim[1].rank[cell]] == TC_NONE) {
            kept[n++] = cell;
            continue;
        }
        const uint32_t *face = &links->face[2 * (size_t)cell];
        out->super[root_of(out->super, face[0])] = root_of(out->super, face[1]);
    }
    for (uint32_t i = 0; i < nodes; i++)
        out->super[i] = root_of(out->super, i);
    hedge h;
    return lay_out(work, out, kept, n, nodes, &h) && root_trees(work, out, &h, addition, nodes);
}

void tz_forest_path(const tz_forest *f, uint32_t link_cell, tz_bits *rows) {
    const uint32_t *face = &f->block->cells[1].face[2 * (size_t)link_cell];
    uint32_t a = f->super[face[0]], b = f->super[face[1]];
    while (a != b) {
        if (f->depth[a] < f->depth[b]) {
            uint32_t c = a;
            a = b;
            b = c;
        }
        tz_bits_toggle(rows, f->parent_link[a]);
        a = f->parent[a];
    }
}
