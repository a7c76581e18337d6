/* The two orders of a block's cells, and who pairs with whom in each.
 *
 * Addition order: by first position, then the cells' own order. Back order (of deletions, read
 * backwards): by last position, latest first, then the cells' own order. Both are
 * kept per dimension, as ranks: across dimensions faces always come before what they bound,
 * because a face's stay holds the cell's. */
#ifndef TZ_ORDER_H
#define TZ_ORDER_H

#include "complex/cells.h"
#include "zigzag/bits.h"

typedef enum tz_way { TZ_ADDITION, TZ_BACK } tz_way;

/* One dimension in one order. Everything below is in ranks: rank r is cell at[r]. */
typedef struct tz_rank {
    uint32_t *rank;   /* cell -> rank */
    uint32_t *at;     /* rank -> cell */
    uint32_t at_edge; /* ranks below this are there at the block's edge: its first position (addition), its last (back) */
    uint32_t *killer; /* rank of the cell one dimension up that kills this one, or TC_NONE */
    uint32_t *victim; /* rank of the cell one dimension down that this one kills, or TC_NONE */
} tz_rank;

typedef struct tz_order {
    tz_way way;
    const tc_block *block;
    tz_rank dim[TC_TOP + 1];
} tz_order;

/* What the zigzag's steps on one block share. */
typedef struct tz_work {
    thole_context *context;
    tb_arena *arena;
    thole_error *error;
} tz_work;

/* Rank all cells of the block. */
thole_status tz_order_make(tz_work *work, const tc_block *block, tz_way way, tz_order *out);

/* The key that a cell is ordered by: positions from the near edge. */
static inline uint32_t tz_time(const tz_order *order, int dim, uint32_t rank) {
    const tc_cells *cells = &order->block->cells[dim];
    uint32_t cell = order->dim[dim].at[rank];
    return order->way == TZ_ADDITION ? cells->first[cell] : cells->last[cell];
}

/* Refusal of memory inside the zigzag of one block. */
thole_status tz_refused(tz_work *work, const tc_block *block);

#endif
