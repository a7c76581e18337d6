#include "complex/cells.h"

#include <stdio.h>

#include "base/sort.h"

/* Bytes that a cell takes in the block and its reduction, about: for the estimate only. */
enum { BYTES_A_CELL = 64 };

const char *tc_where(const tc_block *block, char out[TC_WHERE]) {
    unsigned first = block->first / 2 + 1, last = (block->last + 1) / 2 + 1;
    if (first == last)
        snprintf(out, TC_WHERE, "window %u", first);
    else
        snprintf(out, TC_WHERE, "windows %u to %u", first, last);
    return out;
}

thole_status tc_cells_refused(tc_work *work, const tc_block *block, int d, uint64_t cells) {
    thole_memory *memory = work->context->memory;
    static const char *const names[] = {"nodes", "links", "triangles", "tetrahedra"};
    char what[64];
    if (d <= 3)
        snprintf(what, sizeof what, "%s", names[d]);
    else
        snprintf(what, sizeof what, "cells of dimension %d", d);
    char where[TC_WHERE];
    if (!atomic_load(&memory->hit_ceiling))
        return thole_fail(work->error, THOLE_NO_MEMORY, "out of memory for %llu %s of %s", (unsigned long long)cells, what,
                          tc_where(block, where));
    return thole_fail(work->error, THOLE_LIMIT,
                      "about %llu %s or more in %s do not fit under the memory ceiling of %zu MB: lower the radius or the "
                      "dimensions, shorten the windows, or raise max_memory",
                      (unsigned long long)cells, what, tc_where(block, where), memory->ceiling / 1000000);
}

thole_status tc_check_estimate(tc_work *work, const tc_block *block, int d, uint64_t cells) {
    thole_memory *memory = work->context->memory;
    if (memory->ceiling == 0)
        return THOLE_OK;
    size_t used = atomic_load(&memory->used);
    uint64_t room = used < memory->ceiling ? memory->ceiling - used : 0;
    return cells > room / BYTES_A_CELL ? (atomic_store(&memory->hit_ceiling, true), tc_cells_refused(work, block, d, cells))
                                       : THOLE_OK;
}

static bool take_links(tc_work *work, const tc_stays *stays, const tc_blocks *blocks, size_t k, tc_links *out) {
    uint64_t from = blocks->start[k], n = blocks->start[k + 1] - from;
    uint32_t s = blocks->cut.at[k], e = blocks->cut.at[k + 1];
    out->n = (uint32_t)n;
    out->at = TB_TAKE(work->arena, tc_stay, (size_t)n);
    if (out->at == NULL)
        return false;
    for (uint32_t i = 0; i < out->n; i++) {
        tc_stay stay = stays->list.at[blocks->stay[from + i]];
        stay.first = (stay.first > s ? stay.first : s) - s;
        stay.last = (stay.last < e ? stay.last : e) - s;
        out->at[i] = stay;
    }
    return true;
}

/* Links in the order of their first position: a counting sort over the block's positions. */
static uint32_t *by_first(tc_work *work, const tc_links *links, uint32_t length) {
    uint32_t *order = TB_TAKE(work->arena, uint32_t, links->n);
    uint32_t *count = TB_FILL(work->arena, uint32_t, (size_t)length + 1, 0);
    if (order == NULL || count == NULL)
        return NULL;
    for (uint32_t i = 0; i < links->n; i++)
        count[links->at[i].first + 1]++;
    for (uint32_t t = 0; t < length; t++)
        count[t + 1] += count[t];
    for (uint32_t i = 0; i < links->n; i++)
        order[count[links->at[i].first]++] = i;
    return order;
}

/* One stay of one node, chained to the node's next. */
typedef struct node_stay {
    uint32_t node, first, last, next;
} node_stay;

/* Node cells from the links: a node is there while one of its links is. node_mark[v] is left holding v's
 * first cell; the caller clears it. head and tail are per distinct node. */
static thole_status node_cells(tc_work *work, const tc_links *links, uint32_t length, tc_cells *out) {
    uint32_t *order = by_first(work, links, length);
    uint32_t most = 2 * links->n; /* stays of nodes; distinct nodes are no more */
    node_stay *stay = TB_TAKE(work->arena, node_stay, most);
    uint32_t *node = TB_TAKE(work->arena, uint32_t, most);
    uint32_t *tail = TB_TAKE(work->arena, uint32_t, most);
    uint32_t *head = TB_TAKE(work->arena, uint32_t, most);
    if (order == NULL || stay == NULL || node == NULL || tail == NULL || head == NULL)
        return THOLE_NO_MEMORY;
    uint32_t stays = 0, nodes = 0;
    for (uint32_t i = 0; i < links->n; i++) {
        const tc_stay *link = &links->at[order[i]];
        for (int side = 0; side < 2; side++) {
            uint32_t v = side == 0 ? link->u : link->v, slot = work->node_mark[v];
            if (slot == TC_NONE) {
                slot = work->node_mark[v] = nodes;
                node[nodes] = v;
                head[nodes++] = tail[slot] = stays;
            } else if (link->first <= stay[tail[slot]].last + 1) {
                if (link->last > stay[tail[slot]].last)
                    stay[tail[slot]].last = link->last;
                continue;
            } else {
                stay[tail[slot]].next = stays;
                tail[slot] = stays;
            }
            stay[stays++] = (node_stay){v, link->first, link->last, TC_NONE};
        }
    }
    out->n = stays;
    out->first = TB_TAKE(work->arena, uint32_t, stays);
    out->last = TB_TAKE(work->arena, uint32_t, stays);
    out->node = TB_TAKE(work->arena, uint32_t, stays);
    bool fine = out->first != NULL && out->last != NULL && out->node != NULL;
    tb_sort_by_u32(node, tail, nodes, sizeof *node, 0); /* tail is done with */
    for (uint32_t i = 0, n = 0; i < nodes; i++) {
        uint32_t slot = work->node_mark[node[i]];
        work->node_mark[node[i]] = fine ? n : TC_NONE;
        for (uint32_t at = head[slot]; fine && at != TC_NONE; at = stay[at].next, n++) {
            out->node[n] = node[i];
            out->first[n] = stay[at].first;
            out->last[n] = stay[at].last;
        }
    }
    return fine ? THOLE_OK : THOLE_NO_MEMORY;
}

/* With all nodes kept: one cell a node, for the whole block. */
static thole_status all_node_cells(tc_work *work, const tc_stays *stays, uint32_t length, tc_cells *out) {
    out->n = (uint32_t)stays->kept.n;
    out->first = TB_FILL(work->arena, uint32_t, out->n, 0);
    out->last = TB_TAKE(work->arena, uint32_t, out->n);
    out->node = TB_TAKE(work->arena, uint32_t, out->n);
    if (out->first == NULL || out->last == NULL || out->node == NULL)
        return THOLE_NO_MEMORY;
    for (uint32_t i = 0; i < out->n; i++) {
        out->last[i] = length - 1;
        out->node[i] = stays->kept.at[i];
        work->node_mark[out->node[i]] = i;
    }
    return THOLE_OK;
}

/* The cell of node v that is there at `position`, from the first of its cells. */
static uint32_t node_cell_at(const tc_cells *nodes, uint32_t first_cell, uint32_t position) {
    uint32_t i = first_cell;
    while (nodes->last[i] < position)
        i++;
    return i;
}

static thole_status link_cells(tc_work *work, const tc_links *links, const tc_cells *nodes, tc_cells *out) {
    out->n = links->n;
    out->first = TB_TAKE(work->arena, uint32_t, links->n);
    out->last = TB_TAKE(work->arena, uint32_t, links->n);
    out->face = TB_TAKE(work->arena, uint32_t, 2 * (size_t)links->n);
    out->node = TB_TAKE(work->arena, uint32_t, 2 * (size_t)links->n);
    if (out->first == NULL || out->last == NULL || out->face == NULL || out->node == NULL)
        return THOLE_NO_MEMORY;
    for (uint32_t i = 0; i < links->n; i++) {
        const tc_stay *link = &links->at[i];
        out->first[i] = link->first;
        out->last[i] = link->last;
        out->node[2 * i] = link->u;
        out->node[2 * i + 1] = link->v;
        out->face[2 * i] = node_cell_at(nodes, work->node_mark[link->u], link->first);
        out->face[2 * i + 1] = node_cell_at(nodes, work->node_mark[link->v], link->first);
    }
    return THOLE_OK;
}

thole_status tc_block_make(tc_work *work, const tc_stays *stays, const tc_blocks *blocks, size_t k,
                           const thole_zigzag_options *options, int top, tc_block *out) {
    *out = (tc_block){.first = blocks->cut.at[k], .last = blocks->cut.at[k + 1], .top = top};
    uint32_t length = out->last - out->first + 1;
    uint64_t inherited = blocks->start[k + 1] - blocks->start[k];
    if (inherited > UINT32_MAX / 4)
        return thole_fail(work->error, THOLE_LIMIT, "%llu link stays in one block are more than 2^30: shorten the windows or set block",
                          (unsigned long long)inherited);
    thole_status status = tc_check_estimate(work, out, 1, inherited);
    if (status != THOLE_OK)
        return status;
    tc_links links;
    if (!take_links(work, stays, blocks, k, &links))
        return tc_cells_refused(work, out, 1, inherited);
    tc_cells *nodes = &out->cells[0];
    status = options->all_nodes ? all_node_cells(work, stays, length, nodes) : node_cells(work, &links, length, nodes);
    if (status == THOLE_OK && top >= 1 && options->radius_kind == THOLE_RADIUS_HOPS && options->radius >= 2) {
        status = tc_power_links(work, &links, options->radius, length);
        if (status != THOLE_OK && status != THOLE_NO_MEMORY)
            goto done; /* the error is told */
    }
    if (status == THOLE_OK && top >= 1)
        status = link_cells(work, &links, nodes, &out->cells[1]);
done:
    for (uint32_t i = 0; i < nodes->n && nodes->node != NULL; i++)
        work->node_mark[nodes->node[i]] = TC_NONE;
    if (status == THOLE_NO_MEMORY)
        return tc_cells_refused(work, out, 1, links.n);
    for (int d = 2; status == THOLE_OK && d <= top; d++)
        status = d == 2 ? tc_triangles(work, out) : tc_cliques(work, out, d);
    return status;
}
