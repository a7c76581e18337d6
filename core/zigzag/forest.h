/* The cycles that links close in the back order's spanning forest, seen on the births of the addition order. */
#ifndef TZ_FOREST_H
#define TZ_FOREST_H

#include "zigzag/order.h"

/* Links that join components in both orders are contracted: they are on no birth row. What is left of the
 * back forest are the links that join in the back order and close a cycle in the addition order. */
typedef struct tz_forest {
    const tc_block *block;
    uint32_t *super;       /* node cell -> its contracted node */
    uint32_t *parent;      /* contracted node -> its parent, or itself */
    uint32_t *parent_link; /* the addition rank of the link to the parent */
    uint32_t *depth;
} tz_forest;

/* Both orders must have their links paired. */
bool tz_forest_make(tz_work *work, const tz_order *addition, const tz_order *back, tz_forest *out);

/* Toggle into `rows` the addition ranks of the births on the forest path between the ends of a link cell. */
void tz_forest_path(const tz_forest *forest, uint32_t link_cell, tz_bits *rows);

#endif
