/* Stays: where along the zigzag each link of a network is present.
 *
 * A link is present in window i when one of its events is active at some instant of the
 * window, and at a join by the join's rule. One maximal run of positions is a stay. */
#ifndef TC_STAYS_H
#define TC_STAYS_H

#include "base/memory.h"
#include "complex/complex.h"
#include "network/network.h"
#include "network/windows.h"

typedef struct tc_stay {
    uint32_t u, v;        /* nodes, u < v */
    uint32_t first, last; /* positions */
} tc_stay;

typedef struct tc_stays {
    thole_memory *memory;
    TB_VEC(tc_stay) list;  /* by (u, v, first); stays of one link are apart by at least one position */
    uint32_t positions;    /* 2W - 1 */
    uint32_t nodes;        /* nodes are numbered below this */
    TB_VEC(uint32_t) kept; /* with all_nodes: the nodes of the view, ascending */
    uint64_t outside;      /* events that are in no window */
} tc_stays;

/* Stays of all links of the view. More than 2^31 windows or 2^32 - 2 stays are THOLE_LIMIT.
 * Clear with tc_stays_clear, after a failure too. */
thole_status tc_stays_of(thole_context *context, const thole_network *network, const thole_windows *windows,
                         thole_join join, bool all_nodes, tc_stays *out, thole_error *error);
void tc_stays_clear(tc_stays *stays);

#endif
