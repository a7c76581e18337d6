/* Ordinary persistence pairs of a block's cells in one order: the killer and victim of each.
 *
 * Nodes and links by union-find; higher dimensions by reducing coboundary columns with clearing (de Silva,
 * Morozov and Vejdemo-Johansson, "Dualities in persistent (co)homology", Inverse Problems 27, 2011; the
 * implicit columns and apparent pairs of Bauer, "Ripser", J. Appl. Comput. Topol. 5, 2021). */
#ifndef TZ_PAIRS_H
#define TZ_PAIRS_H

#include "zigzag/order.h"

/* Lists of cells, one for some of the cells of a dimension. */
typedef struct tz_lists {
    uint32_t *start;  /* rank -> where its list begins in `item`, or TC_NONE when it has none */
    uint32_t *length; /* rank -> items */
    TB_VEC(uint32_t) item; /* not the arena's: clear with tz_lists_clear */
    thole_memory *memory;
} tz_lists;

bool tz_lists_make(tz_work *work, uint32_t n, tz_lists *out);
bool tz_lists_add(tz_lists *lists, uint32_t rank, const uint32_t *items, size_t n);
void tz_lists_clear(tz_lists *lists);

/* Which cells of dimension d + 1 have which cell of dimension d as a face. */
typedef struct tz_cofaces {
    uint32_t *begin; /* cells of d, + 1 */
    uint32_t *cell;
} tz_cofaces;
bool tz_cofaces_make(tz_work *work, const tc_block *block, int d, tz_cofaces *out);

/* Nodes and links. older[r], for a node rank r that dies: the rank of the root that its component
 * joined. Links that kill nothing close cycles. */
thole_status tz_pair_links(tz_work *work, tz_order *order, uint32_t **older);

/* Dimensions d - 1 and d, d >= 2: those of d - 2 and d - 1 must be paired. cocycle gets, for each rank
 * of dimension d - 1 that has a killer and whose reduced column is not just its own coboundary, the
 * ranks whose coboundaries make it up (its own among them). */
thole_status tz_pair_up(tz_work *work, tz_order *order, int d, const tz_cofaces *cofaces, tz_lists *cocycle);

#endif
