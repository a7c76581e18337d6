/* Blocks of time: the positions cut into stretches that share their boundary
 * position with the next, and which stays each stretch sees. */
#ifndef TC_BLOCKS_H
#define TC_BLOCKS_H

#include "complex/stays.h"

typedef struct tc_blocks {
    thole_memory *memory;
    TB_VEC(uint32_t) cut; /* n + 1 positions for n blocks: block k spans cut[k] .. cut[k + 1]; one position: cut = {0, 0} */
    uint64_t *start;      /* n + 1: where block k's stays begin in `stay` */
    uint32_t *stay;       /* indices into stays->list, ascending within a block */
    uint64_t stay_count;
} tc_blocks;

/* length: arrows a block spans, or 0 to choose by `density` (cells of dimension 2 and up for each link at a
 * position): a block is closed when the stays that begin in it outnumber those it inherits, since inherited ones
 * are work done again, and the sooner the denser the complex; a very dense one gets a block for each join, in which no
 * cell comes after another has gone. also: a position to cut at besides, or UINT32_MAX. */
thole_status tc_blocks_of(const tc_stays *stays, thole_join join, uint32_t length, double density, uint32_t also,
                          tc_blocks *out, thole_error *error);
void tc_blocks_clear(tc_blocks *blocks);
static inline size_t tc_blocks_count(const tc_blocks *blocks) { return blocks->cut.n - 1; }

#endif
