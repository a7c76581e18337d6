/* Cycles of links, by exchange in a spanning forest.
 *
 * The forest begins as that of the back order. Each link that closes a cycle there is put in, in back
 * order, and the link of its cycle that comes last in addition order is taken out (after Dey and Hou,
 * "Computing zigzag persistence on graphs in near-linear time", SoCG 2021). Links that join components in
 * both orders never leave, so their ends are contracted from the start, which keeps paths short. */
#ifndef TZ_FOREST_H
#define TZ_FOREST_H

#include "zigzag/order.h"

typedef struct tz_forest {
    const tc_block *block;
    const uint32_t *rank; /* link cell -> place in addition order */
    uint32_t *super;      /* node cell -> its contracted node */
    uint32_t *parent;     /* contracted node -> its parent, or itself */
    uint32_t *link;       /* contracted node -> the link cell to its parent */
    uint32_t *stamp;      /* contracted node -> the last search that saw it */
    uint32_t searches;
    thole_memory *memory;
    TB_VEC(uint32_t) side[2]; /* nodes climbed through from either end */
} tz_forest;

/* Both orders must have their links paired. Clear with tz_forest_clear, after a failure too. */
bool tz_forest_make(tz_work *work, const tz_order *addition, const tz_order *back, tz_forest *out);
void tz_forest_clear(tz_forest *forest);

/* Put in a link that closes a cycle and take out the cycle's last in addition order, which is returned
 * in *out. cycle[0 .. *n - 1] gets the link cells of the cycle, that link included, those of
 * contracted links left out; it has room for all contracted nodes and one more. False when memory is refused. */
bool tz_forest_exchange(tz_forest *forest, uint32_t link_cell, uint32_t *cycle, size_t *n, uint32_t *out);

#endif
